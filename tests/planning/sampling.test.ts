import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  checkLaw,
  type InputLaw,
  logNormalBetween,
  momentsOf,
  pointOf,
  quantileOf,
  SAMPLE_DIMENSIONS,
  sampleLaws,
  sobolSample,
} from '#src/planning/sampling.ts';

const WORD = 2 ** 32;
const seeds = fc.integer({ min: 0, max: 0xffffffff });

describe('the published sequence', () => {
  const sample = sobolSample({ count: 1024, dimensions: 24 });
  const words = (i: number) => Array.from(pointOf(sample, 24, i), (v) => Math.floor(v * WORD));

  it('starts as printed: 0, 1/2, then 3/4 1/4, 1/4 3/4 ... (Joe and Kuo 2008, Gray-code order)', () => {
    const eighths = [0, 1, 2, 3, 4, 5, 6, 7].map((i) =>
      words(i)
        .slice(0, 6)
        .map((w) => w / 2 ** 29),
    );
    expect(eighths).toEqual([
      [0, 0, 0, 0, 0, 0],
      [4, 4, 4, 4, 4, 4],
      [6, 2, 2, 2, 6, 6],
      [2, 6, 6, 6, 2, 2],
      [3, 3, 5, 7, 3, 1],
      [7, 7, 1, 3, 7, 5],
      [5, 1, 7, 5, 5, 7],
      [1, 5, 3, 1, 1, 3],
    ]);
  });

  it('has the 1000th point of an independent implementation in all 24 dimensions (32 bits)', () => {
    expect(words(1000)).toEqual([
      943718400, 415236096, 2227175424, 2906652672, 1203765248, 3896508416, 197132288, 3862953984, 2151677952,
      297795584, 364904448, 1094713344, 692060160, 1648361472, 616562688, 1589641216, 3091202048, 1480589312,
      4257218560, 3116367872, 2243952640, 2361393152, 4081057792, 2319450112,
    ]);
  });

  it('is named by its length only up to that length: a longer sample begins with the shorter one', () => {
    expect(sobolSample({ count: 100, dimensions: 7, seed: 9 })).toEqual(
      sobolSample({ count: 300, dimensions: 7, seed: 9 }).subarray(0, 700),
    );
    expect(sobolSample({ count: 0, dimensions: 3 })).toHaveLength(0);
  });
});

describe('a shifted sample', () => {
  it('puts exactly one of 2^m points into each of 2^m equal intervals of every input, for any seed', () => {
    fc.assert(
      fc.property(seeds, fc.integer({ min: 0, max: 9 }), (seed, m) => {
        const count = 2 ** m;
        const sample = sobolSample({ count, dimensions: SAMPLE_DIMENSIONS, seed });
        for (let d = 0; d < SAMPLE_DIMENSIONS; d++) {
          const cells = new Set<number>();
          for (let i = 0; i < count; i++) cells.add(Math.floor((sample[i * SAMPLE_DIMENSIONS + d] as number) * count));
          expect(cells.size).toBe(count);
        }
      }),
      { seed: 91, numRuns: 40 },
    );
  });

  it('is a (0, m, 2) net in its first two inputs: one point in each elementary rectangle (Sobol 1967)', () => {
    const m = 8;
    const sample = sobolSample({ count: 2 ** m, dimensions: 2, seed: 5 });
    for (let a = 0; a <= m; a++) {
      const cells = new Set<number>();
      for (let i = 0; i < 2 ** m; i++) {
        const column = Math.floor((sample[2 * i] as number) * 2 ** a);
        const row = Math.floor((sample[2 * i + 1] as number) * 2 ** (m - a));
        cells.add(column * 2 ** (m - a) + row);
      }
      expect(cells.size).toBe(2 ** m);
    }
  });

  it('lies strictly inside the unit cube, is the same for the same seed and another for another', () => {
    const a = sobolSample({ count: 512, dimensions: 24, seed: 1 });
    expect(a.every((v) => v > 0 && v < 1)).toBe(true);
    expect(sobolSample({ count: 512, dimensions: 24, seed: 1 })).toEqual(a);
    const b = sobolSample({ count: 512, dimensions: 24, seed: 2 });
    expect(a.some((v, i) => v === b[i])).toBe(false);
  });

  it('spreads its first point uniformly over seeds', () => {
    const n = 4000;
    for (const d of [0, 5, 23]) {
      const first = Array.from(
        { length: n },
        (_, seed) => sobolSample({ count: 1, dimensions: 24, seed })[d] as number,
      );
      const mean = first.reduce((s, v) => s + v, 0) / n;
      // four standard errors of a uniform mean
      expect(Math.abs(mean - 0.5)).toBeLessThan(4 / Math.sqrt(12 * n));
    }
  });

  it('integrates the product of |4 u - 2| over twelve inputs to 1 far better than chance (Saltelli and Sobol 1995)', () => {
    const count = 4096;
    let sum = 0;
    const sample = sobolSample({ count, dimensions: 12, seed: 3 });
    for (let i = 0; i < count; i++) {
      // weights a_d = d^2 tame the later inputs: (|4u - 2| + a) / (1 + a)
      sum += pointOf(sample, 12, i).reduce((p, u, d) => (p * (Math.abs(4 * u - 2) + d * d)) / (1 + d * d), 1);
    }
    // chance: the variance of the product is prod(1 + 1 / (3 (1 + a)^2)) - 1 = 0.50, so 0.011 at 4096 points
    expect(Math.abs(sum / count - 1)).toBeLessThan(0.0011);
  });

  it('refuses what it cannot serve', () => {
    expect(() => sobolSample({ count: 8, dimensions: 25 })).toThrow(RangeError);
    expect(() => sobolSample({ count: 8, dimensions: 0 })).toThrow(RangeError);
    expect(() => sobolSample({ count: 1.5, dimensions: 2 })).toThrow(RangeError);
    expect(() => sobolSample({ count: Number.NaN, dimensions: 2 })).toThrow(RangeError);
  });
});

const triangular = fc
  .tuple(...[0, 1, 2].map(() => fc.double({ min: 0.1, max: 1000, noNaN: true })))
  .map((ends): InputLaw => {
    const [min, nominal, max] = ends.sort((a, b) => a - b) as [number, number, number];
    return { kind: 'triangular', min, nominal, max };
  });

describe('laws of the inputs', () => {
  it('the triangular inverse undoes the triangular distribution', () => {
    fc.assert(
      fc.property(triangular, fc.double({ min: 0, max: 1, noNaN: true }), (law, p) => {
        if (law.kind !== 'triangular' || law.max - law.min < 1e-3) return;
        const { min, nominal, max } = law;
        const x = quantileOf(law, p);
        const below = (x - min) ** 2 / ((max - min) * (nominal - min));
        const above = 1 - (max - x) ** 2 / ((max - min) * (max - nominal));
        expect(x).toBeGreaterThanOrEqual(min);
        expect(x).toBeLessThanOrEqual(max);
        // x is known to about 1e-13, the slope of the law is at most 2 / range
        const back = x < nominal ? below : x > nominal ? above : p;
        expect(Math.abs(back - p)).toBeLessThan(1e-9);
      }),
      { seed: 92 },
    );
  });

  it('ends and mode are met exactly: p = 0, (m - a)/(b - a), 1', () => {
    const law: InputLaw = { kind: 'triangular', min: 1, nominal: 2, max: 5 };
    expect([0, 0.25, 1].map((p) => quantileOf(law, p))).toEqual([1, 2, 5]);
    for (const nominal of [1, 5]) {
      const skew: InputLaw = { kind: 'triangular', min: 1, nominal, max: 5 };
      expect([quantileOf(skew, 0), quantileOf(skew, 1)]).toEqual([1, 5]);
    }
    expect(quantileOf({ kind: 'triangular', min: 3, nominal: 3, max: 3 }, 0.3)).toBe(3);
  });

  it.each<InputLaw>([
    { kind: 'triangular', min: 1, nominal: 2, max: 5 },
    { kind: 'triangular', min: 60, nominal: 60, max: 90 },
    { kind: 'uniform', min: -1, max: 3 },
    { kind: 'log-normal', median: 2, spread: 0.3 },
  ])('a sample has the moments of its law: $kind', (law) => {
    const n = 2 ** 14;
    const { values } = sampleLaws([law], n, 4);
    const { mean, variance } = momentsOf(law);
    const sampled = values.reduce((s, v) => s + v, 0) / n;
    const spread = values.reduce((s, v) => s + (v - sampled) ** 2, 0) / n;
    // stratified in n cells, the error is of the order of range / n; the log-normal tail costs more
    const tolerance = law.kind === 'log-normal' ? 2e-3 : 2e-4;
    expect(Math.abs(sampled - mean)).toBeLessThan(tolerance * Math.sqrt(variance));
    expect(Math.abs(spread / variance - 1)).toBeLessThan(3 * tolerance);
  });

  it('triangular moments are (a + m + b)/3 and (a^2 + m^2 + b^2 - am - ab - mb)/18', () => {
    const { mean, variance } = momentsOf({ kind: 'triangular', min: 1, nominal: 2, max: 5 });
    expect(mean).toBeCloseTo(8 / 3, 14);
    expect(variance).toBeCloseTo((1 + 4 + 25 - 2 - 5 - 10) / 18, 14);
  });

  it('the log-normal between two values has its central 90 % there', () => {
    const law = logNormalBetween(2, 8);
    expect(quantileOf(law, 0.05)).toBeCloseTo(2, 12);
    expect(quantileOf(law, 0.5)).toBeCloseTo(4, 12);
    expect(quantileOf(law, 0.95)).toBeCloseTo(8, 12);
  });

  it('samples every input by its own law, in the order of the points', () => {
    const laws: InputLaw[] = [
      { kind: 'uniform', min: 0, max: 1 },
      { kind: 'triangular', min: 10, nominal: 11, max: 12 },
    ];
    const { unit, values } = sampleLaws(laws, 64, 7);
    expect(values.filter((_, i) => i % 2 === 0)).toEqual(unit.filter((_, i) => i % 2 === 0));
    expect(values.filter((_, i) => i % 2 === 1).every((v) => v > 10 && v < 12)).toBe(true);
  });

  it('refuses laws out of order', () => {
    const wrong: InputLaw[] = [
      { kind: 'triangular', min: 1, nominal: 0.5, max: 2 },
      { kind: 'triangular', min: 1, nominal: Number.NaN, max: 2 },
      { kind: 'uniform', min: 2, max: 1 },
      { kind: 'log-normal', median: 0, spread: 0.1 },
      { kind: 'log-normal', median: 1, spread: -0.1 },
    ];
    for (const law of wrong) expect(() => checkLaw(law)).toThrow(RangeError);
  });
});
