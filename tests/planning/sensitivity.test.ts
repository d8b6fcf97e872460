import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { pointOf, sobolSample } from '#src/planning/sampling.ts';
import {
  elasticities,
  firstOrderIndices,
  rankRegression,
  ranksOf,
  type SensitivitySample,
  sensitivities,
} from '#src/planning/sensitivity.ts';
import { seededUniform } from '../support/random.ts';

/** A designed sample of `f` on the unit cube. */
function sampled(f: (u: ArrayLike<number>) => number, inputs: number, count: number, seed = 1): SensitivitySample {
  const unit = sobolSample({ count, dimensions: inputs, seed });
  return { unit, inputs, outputs: Float64Array.from({ length: count }, (_, i) => f(pointOf(unit, inputs, i))) };
}

const A = 7;
const B = 0.1;
const ishigami = (u: ArrayLike<number>) => {
  const [x, y, z] = Array.from(u, (v) => Math.PI * (2 * v - 1)) as [number, number, number];
  return Math.sin(x) + A * Math.sin(y) ** 2 + B * z ** 4 * Math.sin(x);
};

describe('first-order indices', () => {
  it('of the Ishigami function are 0.3139, 0.4424 and 0 (Ishigami and Homma 1990)', () => {
    const variance = A ** 2 / 8 + (B * Math.PI ** 4) / 5 + (B ** 2 * Math.PI ** 8) / 18 + 1 / 2;
    const published = [(1 + (B * Math.PI ** 4) / 5) ** 2 / 2 / variance, A ** 2 / 8 / variance, 0];
    expect(published[0]).toBeCloseTo(0.3139, 4);
    expect(published[1]).toBeCloseTo(0.4424, 4);
    for (const [count, tolerance] of [
      [512, 0.05],
      [4096, 0.01],
    ] as const) {
      firstOrderIndices(sampled(ishigami, 3, count)).forEach((index, d) => {
        expect(Math.abs(index - (published[d] as number))).toBeLessThan(tolerance);
      });
    }
  });

  it('of a sum are the shares of its variances', () => {
    const weights = [4, 2, 1, 0];
    const total = weights.reduce((s, w) => s + w * w, 0);
    const sample = sampled((u) => weights.reduce((s, w, d) => s + w * (u[d] as number), 0), 4, 1024);
    firstOrderIndices(sample).forEach((index, d) => {
      expect(Math.abs(index - (weights[d] as number) ** 2 / total)).toBeLessThan(0.015);
    });
  });

  it('of a pure interaction are all zero: (u - 1/2)(v - 1/2)', () => {
    for (const index of firstOrderIndices(
      sampled((u) => ((u[0] as number) - 0.5) * ((u[1] as number) - 0.5), 2, 1024),
    )) {
      expect(Math.abs(index)).toBeLessThan(0.015);
    }
  });

  it('of noise are zero on average: chance is taken off', () => {
    const uniform = seededUniform(31);
    let sum = 0;
    const repeats = 60;
    for (let r = 0; r < repeats; r++) {
      const indices = firstOrderIndices(sampled(uniform, 4, 128, r));
      sum += indices.reduce((s, v) => s + v, 0) / indices.length / repeats;
    }
    // one index scatters by sqrt(2 J) / n = 0.031; 240 of them
    expect(Math.abs(sum)).toBeLessThan((4 * Math.sqrt(16)) / 128 / Math.sqrt(240));
  });

  it('of a constant are zero', () => {
    expect(firstOrderIndices(sampled(() => 3, 2, 64))).toEqual([0, 0]);
  });
});

describe('rank regression', () => {
  it('of a linear model gives weights over their root of squares, and explains nearly all', () => {
    const { coefficients, explained } = rankRegression(
      sampled((u) => 3 * (u[0] as number) - (u[1] as number) + 0 * (u[2] as number), 3, 1024),
    );
    // of values 3/sqrt(10) and -1/sqrt(10); ranks of the sum bend them by about two per cent
    expect(Math.abs((coefficients[0] as number) - 3 / Math.sqrt(10))).toBeLessThan(0.02);
    expect(Math.abs((coefficients[1] as number) + 1 / Math.sqrt(10))).toBeLessThan(0.03);
    expect(Math.abs(coefficients[2] as number)).toBeLessThan(0.01);
    expect(explained).toBeGreaterThan(0.97);
  });

  it('sees only order: any rising function of the output gives the same coefficients', () => {
    const linear = (u: ArrayLike<number>) => 2 * (u[0] as number) + (u[1] as number);
    const bent = (u: ArrayLike<number>) => Math.exp(5 * linear(u));
    expect(rankRegression(sampled(bent, 2, 256))).toEqual(rankRegression(sampled(linear, 2, 256)));
  });

  it('of one monotone input is plus or minus one', () => {
    const { coefficients, explained } = rankRegression(sampled((u) => -((u[1] as number) ** 3), 2, 256));
    expect(coefficients[1]).toBeCloseTo(-1, 10);
    expect(coefficients[0]).toBeCloseTo(0, 10);
    expect(explained).toBeCloseTo(1, 10);
  });

  it('is not fooled into trust by the Ishigami function', () => {
    expect(rankRegression(sampled(ishigami, 3, 1024)).explained).toBeLessThan(0.3);
  });

  it('keeps infinite outputs at the top rank and leaves failed ones out', () => {
    const stall = (u: ArrayLike<number>) => ((u[0] as number) > 0.9 ? Number.POSITIVE_INFINITY : (u[0] as number));
    expect(rankRegression(sampled(stall, 2, 256)).coefficients[0] as number).toBeGreaterThan(0.99);
    const broken = (u: ArrayLike<number>) => ((u[1] as number) > 0.8 ? Number.NaN : (u[0] as number));
    expect(rankRegression(sampled(broken, 2, 256)).coefficients[0]).toBeCloseTo(1, 6);
  });

  it('gives a constant input and a constant output zero', () => {
    const sample = sampled((u) => u[0] as number, 2, 64);
    const fixed = sample.unit.map((v, i) => (i % 2 === 1 ? 0.5 : v));
    expect(rankRegression({ ...sample, unit: fixed }).coefficients[1]).toBe(0);
    expect(rankRegression(sampled(() => 1, 2, 64)).coefficients).toEqual([0, 0]);
  });

  it('refuses too few rows, wrong shapes and repeated inputs', () => {
    const sample = sampled((u) => u[0] as number, 2, 64);
    expect(() => rankRegression({ ...sample, outputs: [1, 2, 3] })).toThrow(RangeError);
    expect(() => rankRegression(sampled((u) => u[0] as number, 3, 4))).toThrow(RangeError);
    const twice = sample.unit.map((_, i) => sample.unit[i - (i % 2)] as number);
    expect(() => rankRegression({ ...sample, unit: twice })).toThrow(RangeError);
  });

  it('ranks add up to n (n + 1) / 2 with any ties', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0, max: 5 }), { minLength: 1, maxLength: 50 }), (values) => {
        const sum = ranksOf(values).reduce((s, r) => s + r, 0);
        expect(sum).toBe((values.length * (values.length + 1)) / 2);
      }),
      { seed: 111 },
    );
    expect(Array.from(ranksOf([30, 10, 10, 20]))).toEqual([4, 1.5, 1.5, 3]);
  });
});

describe('which input moves which figure', () => {
  const inputs = ['toughness', 'hardness', 'lot'];
  const unit = sobolSample({ count: 512, dimensions: 3, seed: 6 });
  const rows = Array.from({ length: 512 }, (_, i) => pointOf(unit, 3, i));

  it('orders by the coefficients where they explain the figure and by first-order indices where not', () => {
    const [rate, hump] = sensitivities(
      { unit, inputs },
      {
        rate: rows.map((u) => -5 * (u[0] as number) + 2 * (u[2] as number) + (u[1] as number)),
        hump: rows.map((u) => ((u[1] as number) - 0.5) ** 2 + 0.05 * (u[0] as number)),
      },
    );
    expect(rate?.orderedBy).toBe('coefficient');
    expect(rate?.influences.map(({ input }) => input)).toEqual(['toughness', 'lot', 'hardness']);
    expect(rate?.influences[0]?.coefficient as number).toBeLessThan(0);
    expect(hump?.orderedBy).toBe('first-order');
    expect(hump?.influences[0]?.input).toBe('hardness');
  });
});

describe('elasticities', () => {
  it('of a power law are its exponents, exactly', () => {
    const rate = ([a, f, d]: readonly number[]) => (a as number) ** 1.5 * (f as number) * (d as number) ** -0.5;
    const rows = elasticities((x) => [rate(x), 7], [20e-6, 300, 0.03], [0.01, 0.05, 0.2]);
    [1.5, 1, -0.5].forEach((exponent, d) => {
      expect(rows[d]?.[0]).toBeCloseTo(exponent, 10);
      expect(rows[d]?.[1]).toBe(0);
    });
  });

  it('of a sum are the shares of its terms, to second order in the step', () => {
    const error = (step: number) =>
      (elasticities(([x]) => [1 + (x as number) ** 2], [2], step)[0]?.[0] as number) - 8 / 5;
    expect(Math.abs(error(0.01))).toBeLessThan(1e-4);
    // a quarter for half the step
    expect(error(0.1) / error(0.05)).toBeCloseTo(4, 1);
  });

  it('are not a number where input or figure is not positive', () => {
    expect(elasticities(([x]) => [x as number], [0])[0]?.[0]).toBeNaN();
    expect(elasticities(() => [-1], [2])[0]?.[0]).toBeNaN();
    expect(() => elasticities((x) => x, [1], 0)).toThrow(RangeError);
  });
});
