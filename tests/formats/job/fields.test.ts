import { describe, expect, test } from 'vitest';
import { checkJob, readJob, writeJob } from '#src/formats/job/read.ts';
import { jobSchema } from '#src/formats/job/schema.ts';
import { z } from '#src/formats/zod.ts';
import { type Base, base, only, problemsWith } from './short-job.ts';

describe('a job file', () => {
  test('of ten lines is a whole job', () => {
    const text = `{
      "spallwright": 1,
      "workpiece": { "material": "soda_lime" },
      "cavity": {
        "outline": { "kind": "circle", "diameterMm": 3 },
        "depthMm": 1
      },
      "machine": { "amplitudeUm": 18 },
      "slurry": { "abrasive": "b4c", "grit": "F320" }
    }`;
    expect(text.split('\n')).toHaveLength(10);
    expect(readJob(text)).toMatchObject({ job: { spallwright: 1 }, warnings: [] });
  });

  test('written and read back is the same job, and written again the same text', () => {
    const { job } = readJob(JSON.stringify(base()));
    if (!job) throw new Error('refused');
    const text = writeJob(job);
    expect(readJob(text).job).toEqual(job);
    expect(writeJob(readJob(text).job ?? job)).toBe(text);
    expect(job).toEqual(base());
  });

  test('that is a value already is judged like its text', () => {
    expect(checkJob(base()).job).toEqual(base());
    expect(checkJob({ ...base(), more: 1 }).problems?.map((problem) => problem.path)).toEqual(['more']);
  });
});

describe('fields alone', () => {
  test.each<[string, (job: Base) => void, { path: string; value: unknown; allowed: RegExp; message: RegExp }]>([
    [
      'a missing depth',
      (j) => Reflect.deleteProperty(j.cavity, 'depthMm'),
      { path: 'cavity.depthMm', value: undefined, allowed: /0\.005 to 200 mm/, message: /missing\. Add/ },
    ],
    [
      'a missing section',
      (j) => Reflect.deleteProperty(j, 'slurry'),
      { path: 'slurry', value: undefined, allowed: /abrasive/, message: /missing/ },
    ],
    [
      'a missing version',
      (j) => Reflect.deleteProperty(j, 'spallwright'),
      { path: 'spallwright', value: undefined, allowed: /^1$/, message: /missing/ },
    ],
    [
      'another version',
      (j) => Object.assign(j, { spallwright: 2 }),
      { path: 'spallwright', value: 2, allowed: /^1$/, message: /this program reads 1/ },
    ],
    [
      'an unknown field',
      (j) => Object.assign(j.machine, { amplitude: 9 }),
      { path: 'machine.amplitude', value: 9, allowed: /amplitudeUm/, message: /Did you mean amplitudeUm/ },
    ],
    [
      'a field in the wrong section',
      (j) => Object.assign(j, { amplitudeUm: 9 }),
      { path: 'amplitudeUm', value: 9, allowed: /machine/, message: /belongs at machine\.amplitudeUm/ },
    ],
    [
      'a text for a number',
      (j) => Object.assign(j.cavity, { depthMm: '1' }),
      { path: 'cavity.depthMm', value: '1', allowed: /200 mm/, message: /cannot be a text/ },
    ],
    [
      'null for a number',
      (j) => Object.assign(j.cavity, { depthMm: null }),
      { path: 'cavity.depthMm', value: null, allowed: /200 mm/, message: /cannot be null/ },
    ],
    [
      'a list for a section',
      (j) => Object.assign(j, { cut: [] }),
      { path: 'cut', value: [], allowed: /seed/, message: /cannot be a list/ },
    ],
    [
      'a negative depth',
      (j) => Object.assign(j.cavity, { depthMm: -1 }),
      { path: 'cavity.depthMm', value: -1, allowed: /0\.005 to 200 mm/, message: /below 0\.005/ },
    ],
    [
      'a depth of zero',
      (j) => Object.assign(j.cavity, { depthMm: 0 }),
      { path: 'cavity.depthMm', value: 0, allowed: /0\.005 to 200 mm/, message: /below 0\.005/ },
    ],
    [
      'an absurd depth',
      (j) => Object.assign(j.cavity, { depthMm: 1e12 }),
      { path: 'cavity.depthMm', value: 1e12, allowed: /200 mm/, message: /above 200/ },
    ],
    [
      'a seed with a fraction',
      (j) => Object.assign(j.cut, { seed: 1.5 }),
      { path: 'cut.seed', value: 1.5, allowed: /whole numbers, 0 to 4294967295/, message: /whole number/ },
    ],
    [
      'a quality there is not',
      (j) => Object.assign(j.cut, { quality: 'standart' }),
      { path: 'cut.quality', value: 'standart', allowed: /preview, standard, fine/, message: /did you mean standard/ },
    ],
    [
      'an outline there is not',
      (j) => Object.assign(j.cavity, { outline: { kind: 'cirle' } }),
      {
        path: 'cavity.outline.kind',
        value: 'cirle',
        allowed: /circle, rectangle, slot/,
        message: /did you mean circle/,
      },
    ],
    [
      'a field of another outline',
      (j) => Object.assign(j.cavity, { outline: { kind: 'circle', diameterMm: 3, widthMm: 2 } }),
      { path: 'cavity.outline.widthMm', value: 2, allowed: /diameterMm/, message: /no field of this name/ },
    ],
    [
      'a bad nominal of an own property',
      (j) => Object.assign(j.workpiece, { hardnessGPa: { nominal: -5 } }),
      { path: 'workpiece.hardnessGPa.nominal', value: -5, allowed: /0\.2 to 100 GPa/, message: /below 0\.2/ },
    ],
  ])('%s is refused with path, value, allowed range and what to do', (_, spoil, expected) => {
    const problem = only(problemsWith(spoil), expected.path);
    expect(problem.severity).toBe('refuse');
    expect(problem.value).toEqual(expected.value);
    expect(problem.allowed).toMatch(expected.allowed);
    expect(problem.message).toMatch(expected.message);
  });

  test('one wrong field gives one problem and no echoes of it', () => {
    for (const spoil of [
      (j: Base) => Object.assign(j.workpiece, { material: 5 }),
      (j: Base) => Object.assign(j.slurry, { grit: 320 }),
      (j: Base) => Reflect.deleteProperty(j, 'workpiece'),
      (j: Base) => Object.assign(j.slurry, { abrasive: null }),
    ]) {
      expect(problemsWith(spoil)).toHaveLength(1);
    }
  });

  test('a number beyond all numbers is refused as not finite', () => {
    const read = readJob(JSON.stringify(base()).replace('"depthMm":1', '"depthMm":1e999'));
    expect(only(read.problems ?? [], 'cavity.depthMm')).toMatchObject({
      value: Infinity,
      message: expect.stringMatching(/finite/),
    });
  });

  test('a field given twice is refused, at the line of the second', () => {
    const text = JSON.stringify(base(), null, 2).replace('"depthMm": 1,', '"depthMm": 1,\n    "depthMm": 2,');
    const { value, place } = only(readJob(text).problems ?? [], 'cavity.depthMm');
    expect(value).toBe(2);
    expect(place?.line).toBe(text.split('\n').findIndex((line) => line.includes('"depthMm": 2')) + 1);
  });

  test('names of the language itself are unknown fields and touch no prototype', () => {
    const text = JSON.stringify(base()).replace(
      '"cut":{}',
      '"cut":{"__proto__":{"seed":7},"constructor":{"prototype":{"polluted":1}}}',
    );
    const { problems } = readJob(text);
    expect(problems?.map((problem) => problem.path)).toEqual(['cut.__proto__', 'cut.constructor']);
    expect(Object.hasOwn(Object.prototype, 'seed') || Object.hasOwn(Object.prototype, 'polluted')).toBe(false);
  });

  test('thousands of wrong items are told two hundred at a time', () => {
    const pointsMm = Array.from({ length: 1500 }, () => ['a', 1]);
    const problems = problemsWith((j) => Object.assign(j.cavity, { outline: { kind: 'polygon', pointsMm } }));
    expect(problems).toHaveLength(201);
    expect(problems[0]).toMatchObject({ path: 'cavity.outline.pointsMm[0][0]', value: 'a' });
    expect(problems.at(-1)?.message).toMatch(/1300 problems more/);
  });

  test('every field says its title, what it is and its unit', () => {
    const bare: string[] = [];
    const walk = (schema: z.core.JSONSchema.JSONSchema, path: string) => {
      for (const [name, field] of Object.entries(schema.properties ?? {})) {
        if (typeof field === 'boolean') continue;
        const at = `${path}.${name}`;
        if (!field.title || !field.description || typeof field.unit !== 'string') bare.push(at);
        const inside = [field.oneOf, field.anyOf, field.items, field.prefixItems].flatMap((part) => part ?? []);
        for (const inner of [field, ...(inside as (typeof field)[])]) walk(inner, at);
      }
    };
    walk(z.toJSONSchema(jobSchema), 'job');
    expect(bare).toEqual([]);
  });
});
