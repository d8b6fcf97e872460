import { describe, expect, test } from 'vitest';
import { resolvedWith } from './short-job.ts';

describe('what is not known exactly', () => {
  test("is the library's range, the job's own where it gives one, and nothing for a plain number", () => {
    const { ranges } = resolvedWith((j) =>
      Object.assign(j.workpiece, { hardnessGPa: { nominal: 6, min: 5.5, max: 6.2 }, densityKgM3: 2230 }),
    );
    expect(ranges.work.hardness).toEqual({ low: 5.5e9, nominal: 6e9, high: expect.closeTo(6.2e9, 0) });
    expect(ranges.work.density).toBeUndefined();
    expect(Object.keys(ranges.work)).toHaveLength(5);
  });

  // F320 by photosedimentometer: 29.2 +- 1.5 um, 3 % above 49 um.
  test('of a graded lot are its median, its width and its largest grain', () => {
    const { ranges } = resolvedWith(() => undefined);
    expect(ranges.gritMedian).toEqual({ low: 27.7 * 1e-6, nominal: 29.2 * 1e-6, high: 30.7 * 1e-6 });
    expect(ranges.gritSpread?.high).toBeCloseTo(Math.log(49 / 27.7) / 1.8808, 6);
    const { low = 0, nominal = 0, high = 0 } = ranges.gritLargest ?? {};
    expect(low / nominal).toBeCloseTo(1.1 / 1.3, 9);
    expect(high / nominal).toBeCloseTo(1.5 / 1.3, 9);
  });

  test('holds the nominal value, whatever the grade', () => {
    for (const grit of ['F60', 'F220', 'F320', 'F1200', '#400', '#8000']) {
      const { ranges } = resolvedWith((j) => {
        Object.assign(j, {
          slurry: { abrasive: 'diamond', grit },
          cavity: { outline: { kind: 'circle', diameterMm: 30 }, depthMm: 5 },
        });
        Object.assign(j.workpiece, { thicknessMm: 30 });
      });
      for (const range of [
        ...Object.values(ranges.work),
        ranges.gritMedian,
        ranges.gritSpread,
        ranges.gritLargest,
        ranges.crushStrength,
        ranges.toolHardness,
        ranges.chipWidthRatio,
      ]) {
        if (!range) throw new Error(`${grit}: no range`);
        expect(range.low).toBeLessThanOrEqual(range.nominal);
        expect(range.nominal).toBeLessThanOrEqual(range.high);
        expect(range.low).toBeGreaterThan(0);
      }
    }
  });
});
