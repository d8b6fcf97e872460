import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { type Result, readResult, roundedResult, writeResult } from '#src/formats/result.ts';
import { FIGURE_NAMES, type Figure, type Figures, plainFigure } from '#src/planning/figures.ts';

const everyFigure = (of: (index: number) => Figure): Figures =>
  Object.fromEntries(FIGURE_NAMES.map((name, index) => [name, of(index)])) as unknown as Figures;

const result: Result = {
  spallwright: 1,
  job: {
    spallwright: 1,
    workpiece: { material: 'quartz' },
    cavity: { outline: { kind: 'circle', diameterMm: 3 }, depthMm: 1 },
    slurry: { abrasive: 'b4c', grit: 'F320' },
  },
  figures: {
    ...everyFigure((index) => plainFigure(index / 7)),
    entrySizeMm: plainFigure([4.0012345678, 2.5]),
    stallMargin: plainFigure(null, 'no stall load is known'),
  },
  passes: [
    {
      title: 'roughing',
      figures: everyFigure((index) => ({ value: index, low: index - 1, high: index + 1, covers: 'all' })),
    },
  ],
  verdict: {
    overall: 'at risk',
    limits: [
      { id: 'taperDeg', limit: { lower: null, upper: 0.5 }, state: 'at risk', margin: 1 / 3 },
      { id: 'entrySizeMm', limit: { lower: [3.99, null], upper: [4.05, 2.55] }, state: 'meets', margin: null },
    ],
    help: 'Taper is the limiting figure.',
  },
  influences: [
    { figure: 'taperDeg', inputs: [{ name: 'toughness of the work', coefficient: -0.61, firstOrder: 0.3 }] },
  ],
  modelError: 'Within a factor of two.',
  warnings: [{ path: 'machine.amplitudeUm', message: 'High.' }],
  version: '0.1.0',
  seed: 1,
  voxelUm: 2.75,
  magnification: 4,
};

const problemsOf = (value: unknown) =>
  (readResult(JSON.stringify(value)).problems ?? []).map((problem) => [problem.path, problem.message] as const);

describe('a result file', () => {
  test('read back is the result, rounded to six digits', () => {
    expect(readResult(writeResult(result))).toEqual({ result: roundedResult(result) });
  });

  test('written twice is the same bytes, and written again after reading too', () => {
    const text = writeResult(result);
    expect(writeResult(result)).toBe(text);
    const { result: again } = readResult(text);
    expect(again && writeResult(again)).toBe(text);
    expect(text).toContain('"value": 0.142857,');
  });

  test('is not written with a figure that is no finite number', () => {
    const figures = { ...result.figures, floorRaUm: plainFigure(NaN) };
    expect(() => writeResult({ ...result, figures })).toThrow();
  });

  test('that is spoilt names every fault in one go', () => {
    const { floorRaUm: _, ...figures } = result.figures;
    const spoilt = {
      ...result,
      figures: { ...figures, timeMin: { value: 'x', low: null, high: null, covers: 'all' } },
      verdict: { overall: 'fine', limits: [], help: null },
      seed: -1,
      extra: 1,
      job: { ...result.job, cavity: { ...result.job.cavity, depthMm: 0 } },
    };
    expect(
      problemsOf(spoilt)
        .map(([path]) => path)
        .toSorted(),
    ).toEqual(['extra', 'figures.floorRaUm', 'figures.timeMin.value', 'job.cavity.depthMm', 'seed', 'verdict.overall']);
  });

  test('of another version says which version is read', () => {
    expect(problemsOf({ ...result, spallwright: 9 })).toEqual([
      ['spallwright', expect.stringMatching(/this program reads 1/)],
    ]);
  });

  test('of whatever text never throws', () => {
    fc.assert(
      fc.property(fc.oneof(fc.string(), fc.json()), (text) => {
        expect(readResult(text).problems?.length).toBeGreaterThan(0);
      }),
      { seed: 31, numRuns: 300 },
    );
  });
});
