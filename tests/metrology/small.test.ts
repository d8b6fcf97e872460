import { describe, expect, it } from 'vitest';
import { forward, fourierPlan, inverse } from '#src/metrology/fft.ts';
import { fitLine, solveLinear, withoutLine } from '#src/metrology/linear.ts';
import { median, selectSmallest, weightedQuantile } from '#src/metrology/order.ts';
import { uniformSource } from './random.ts';

describe('the transform', () => {
  it('turns a cyclic convolution into a product of spectra', () => {
    const uniform = uniformSource(1);
    const n = 16;
    const a = new Float64Array(n).map(() => uniform());
    const b = new Float64Array(n).map(() => uniform());
    const expected = a.map((_, i) => a.reduce((sum, value, j) => sum + value * b[(i - j + n) % n], 0));
    const plan = fourierPlan(n);
    const [ar, ai, br, bi] = [a.slice(), new Float64Array(n), b.slice(), new Float64Array(n)];
    forward(plan, ar, ai);
    forward(plan, br, bi);
    const re = ar.map((value, k) => value * br[k] - ai[k] * bi[k]);
    const im = ar.map((value, k) => value * bi[k] + ai[k] * br[k]);
    inverse(plan, re, im);
    // sums of 16 products of order one: rounding below 1e-14
    for (let i = 0; i < n; i++) {
      expect(Math.abs(re[i] / n - expected[i])).toBeLessThan(1e-14);
      expect(Math.abs(im[i])).toBeLessThan(1e-13);
    }
  });

  it('refuses a length that is no power of two', () => {
    expect(() => fourierPlan(12)).toThrow(RangeError);
  });
});

describe('small linear algebra', () => {
  it('solves a system whose first pivot is zero', () => {
    // 2 y = 4, x + y = 5
    expect(solveLinear(Float64Array.of(0, 2, 1, 1), Float64Array.of(4, 5))).toEqual(Float64Array.of(5 - 2, 4 / 2));
  });

  it('says that a singular system has no solution', () => {
    expect(solveLinear(Float64Array.of(1, 2, 2, 4), Float64Array.of(1, 2))).toBeUndefined();
  });

  it('fits a straight line exactly and refuses a single place', () => {
    expect(fitLine([0, 1, 2], [1, 3, 5])).toEqual({ level: 3, slope: 2, at: 1 });
    expect(() => fitLine([1, 1], [0, 1])).toThrow(RangeError);
  });

  it('leaves exact zeros of a constant', () => {
    expect(withoutLine(new Float64Array(7).fill(0.1))).toEqual(new Float64Array(7));
  });
});

describe('order statistics', () => {
  it('select the same value as a full sort, with many ties', () => {
    const uniform = uniformSource(2);
    const values = new Float64Array(301).map(() => Math.floor(uniform() * 20));
    const sorted = values.toSorted();
    for (const k of [0, 1, 150, 299, 300]) expect(selectSmallest(values.slice(), k)).toBe(sorted[k]);
    expect(median(values.slice())).toBe(sorted[150]);
    expect(median(values.slice(0, 4))).toBe((values.slice(0, 4).sort()[1] + values.slice(0, 4).sort()[2]) / 2);
    expect(median(new Float64Array(0))).toBeNaN();
  });

  it('weigh a quantile by length and pass over what has no weight', () => {
    const values = Float64Array.of(3, Number.NaN, 1, 2);
    expect(weightedQuantile(values, Float64Array.of(1, 0, 1, 8), 0.5)).toBe(2);
    expect(weightedQuantile(values, Float64Array.of(1, 0, 1, 8), 0.95)).toBe(3);
    expect(weightedQuantile(values, Float64Array.of(1, 0, 1, 8), 0)).toBe(1);
    expect(weightedQuantile(values, new Float64Array(4), 0.5)).toBeNaN();
  });
});
