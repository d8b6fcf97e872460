import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { checkJob, readJob } from '#src/formats/job/read.ts';
import { formatProblems } from '#src/formats/problems.ts';

const whole = {
  spallwright: 1,
  title: 'x',
  workpiece: { material: 'quartz', lengthMm: 20, widthMm: 20, thicknessMm: 6 },
  cavity: {
    outline: { kind: 'rectangle', lengthMm: 6, widthMm: 6, cornerRadiusMm: 0.4 },
    depthMm: 1.5,
    limits: { taperDeg: 1, entrySizeUpperMm: 0.1 },
  },
  tool: { outline: { kind: 'rectangle', lengthMm: 5.9, widthMm: 5.9, cornerRadiusMm: 0.35 }, material: 'copper' },
  machine: { amplitudeUm: 10, staticLoadN: 4 },
  slurry: { abrasive: 'b4c', grit: 'F320' },
  cut: { voxelUm: 10, seed: 4 },
};

const many = {
  ...whole,
  cavity: {
    outline: {
      kind: 'polygon',
      pointsMm: [
        [0, 0],
        [6, 0],
        [6, 4],
        [0, 4],
      ],
      holesMm: [
        [
          [2, 1],
          [3, 1],
          [3, 2],
        ],
      ],
    },
    through: true,
  },
  workpiece: {
    ...whole.workpiece,
    backing: 'bonded',
    neighbours: [{ outline: { kind: 'circle', diameterMm: 1 }, xMm: 7, yMm: 0, depthMm: 1 }],
  },
  tool: {
    material: 'copper',
    bores: [{ xMm: -1, yMm: 0, diameterMm: 0.5 }],
    face: { kind: 'cone', angleDeg: 170 },
    lengthMm: 10,
    wearLengthMm: 3,
  },
  machine: {
    transducerAmplitudeUm: 5,
    horn: { shape: 'conical', largeDiameterMm: 30, smallDiameterMm: 12, tuned: true },
    exitLoadShare: 0.5,
  },
  slurry: {
    abrasive: 'b4c',
    grit: 'F320',
    delivery: 'suction',
    deliveryPressureKPa: 30,
    renewal: 'recirculated',
    sumpLitres: 3,
  },
  passes: [
    { title: 'a', stockUm: 150, tool: { face: { kind: 'flat' } }, slurry: { grit: 'F220' } },
    {
      title: 'b',
      depthMm: 6,
      tool: { outline: { kind: 'path', svgPath: 'M.1-.1H5.9V-3.9H.1Z' } },
      machine: { amplitudeUm: 9 },
    },
  ],
};

/** Every path of a value down to its fields. */
function pathsOf(value: unknown, path: string[] = []): string[][] {
  if (typeof value !== 'object' || value === null) return [path];
  return [
    ...(path.length > 0 ? [path] : []),
    ...Object.entries(value).flatMap(([key, v]) => pathsOf(v, [...path, key])),
  ];
}

function replaced(value: unknown, path: string[], by: unknown): unknown {
  const [key, ...rest] = path;
  if (key === undefined) return by;
  if (Array.isArray(value)) return value.map((item, k) => (String(k) === key ? replaced(item, rest, by) : item));
  return { ...(value as object), [key]: replaced((value as Record<string, unknown>)[key], rest, by) };
}

const prototypeKeys = Reflect.ownKeys(Object.prototype).length;

function judged(text: string) {
  const read = readJob(text);
  const problems = read.problems ?? read.warnings;
  expect(read.job === undefined).toBe(problems.some((problem) => problem.severity === 'refuse'));
  for (const { message, path, severity } of problems) {
    expect(message).toMatch(/\S/);
    expect(typeof path).toBe('string');
    expect(['refuse', 'warn']).toContain(severity);
  }
  expect(formatProblems(problems, 'job')).toMatch(/^job: /);
  expect(Reflect.ownKeys(Object.prototype)).toHaveLength(prototypeKeys);
  return read;
}

const wild = fc.oneof(
  fc.jsonValue(),
  fc.double(),
  fc.constantFrom<unknown>(null, true, [], {}, '', -0, 0, -1, 1e300, 5e-324, '__proto__', { __proto__: null, a: 1 }, [
    [[]],
  ]),
);

describe('reading a job never throws and always explains itself', () => {
  test('whatever the text', () => {
    fc.assert(
      fc.property(fc.oneof(fc.string({ unit: 'binary' }), fc.string({ unit: 'grapheme' })), (text) => {
        expect(judged(text).job).toBeUndefined();
      }),
      { seed: 11, numRuns: 300 },
    );
  });

  test('whatever the JSON', () => {
    fc.assert(
      fc.property(fc.json(), (text) => {
        expect(judged(text).job).toBeUndefined();
      }),
      { seed: 12, numRuns: 300 },
    );
  });

  test('whatever stands in place of any one field, or of two', () => {
    const path = fc.constantFrom(...pathsOf(whole));
    fc.assert(
      fc.property(path, wild, path, wild, (a, x, b, y) => {
        const once = replaced(whole, a, x);
        judged(JSON.stringify(once));
        const b0 = b.slice(0, 1);
        judged(JSON.stringify(replaced(once, b0, y)));
      }),
      { seed: 13, numRuns: 150 },
    );
  });

  test('whatever stands in place of any one field of a job with everything in it', () => {
    fc.assert(
      fc.property(fc.constantFrom(...pathsOf(many)), wild, (path, by) => {
        judged(JSON.stringify(replaced(many, path, by)));
      }),
      { seed: 16, numRuns: 150, endOnFailure: true },
    );
  });

  test('wherever the text is cut short or one character is changed', () => {
    const text = JSON.stringify(whole, null, 1);
    fc.assert(
      fc.property(fc.nat(text.length - 1), fc.string({ minLength: 1, maxLength: 2 }), (at, by) => {
        expect(judged(text.slice(0, at)).job).toBeUndefined();
        judged(text.slice(0, at) + by + text.slice(at + 1));
      }),
      { seed: 14, numRuns: 150 },
    );
  });

  test('whatever field is added with the name of a part of the language', () => {
    for (const name of ['__proto__', 'constructor', 'prototype', 'toString', 'hasOwnProperty', '']) {
      for (const at of ['', 'machine', 'slurry']) {
        const part = `${JSON.stringify(name)}: {"polluted": 1, "amplitudeUm": 1},`;
        const text = JSON.stringify(whole);
        const spoilt = at === '' ? text.replace('{', `{${part}`) : text.replace(`"${at}":{`, `"${at}":{${part}`);
        const { problems } = judged(spoilt);
        expect(problems).toHaveLength(1);
        expect(Object.hasOwn(Object.prototype, 'polluted')).toBe(false);
      }
    }
  });

  test('however deep the nesting or long the file', () => {
    expect(judged('['.repeat(100000)).problems?.[0]?.message).toMatch(/nested/);
    expect(judged(`{"spallwright":`.repeat(5000)).problems?.[0]?.message).toMatch(/nested/);
    expect(judged(' '.repeat(16_000_001)).problems?.[0]?.message).toMatch(/too long/);
  });

  test('however many fields there are that no job has', () => {
    const many = Object.fromEntries(Array.from({ length: 20000 }, (_, k) => [`field${k}`, k]));
    const { problems } = judged(JSON.stringify({ ...whole, machine: { ...whole.machine, ...many } }));
    // thirty explained, the rest counted
    expect(problems).toHaveLength(30 + 1);
    expect(problems?.at(-1)?.message).toMatch(/19970 fields here, from this one on/);
  });

  test('when a value is judged that is no text at all', () => {
    fc.assert(
      fc.property(fc.anything(), (value) => {
        expect(checkJob(value).problems?.length).toBeGreaterThan(0);
      }),
      { seed: 15, numRuns: 300 },
    );
  });
});
