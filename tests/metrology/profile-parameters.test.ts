import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { normalQuantile } from '#src/base/math.ts';
import {
  heightParameters,
  meanElementWidth,
  rootMeanSquareSlope,
  sectionParameters,
} from '#src/metrology/profile-parameters.ts';
import { sampled } from './random.ts';

const TWO_PI = 2 * Math.PI;

/** Less its mean, as a mean line would leave it. */
function centred(z: Float64Array): Float64Array {
  const mean = z.reduce((sum, height) => sum + height, 0) / z.length;
  return z.map((height) => height - mean);
}

const triangle = (t: number) => 1 - 4 * Math.abs(t - 0.5);
const rectangle = (duty: number) => (t: number) => (t < duty ? 1 : -1);
const N = 4000;

// Ra, Rq, Rsk, Rku of unit profiles, integrals worked out by hand (computed; definitions of ISO 21920-2, from memory).
// Middles of 4000 cells: the error of smooth pieces is (2 pi/4000)^2/24 = 1e-7, of kinks and corners no more than 1e-6.
const shapes: readonly [string, Float64Array, readonly [number, number, number, number]][] = [
  ['sine', sampled(N, (t) => Math.sin(TWO_PI * t)), [2 / Math.PI, Math.SQRT1_2, 0, 1.5]],
  ['triangle', sampled(N, triangle), [0.5, 1 / Math.sqrt(3), 0, 1.8]],
  ['sawtooth', sampled(N, (t) => 2 * t - 1), [0.5, 1 / Math.sqrt(3), 0, 1.8]],
  ['square', sampled(N, rectangle(0.5)), [1, 1, 0, 1]],
  ['rectangle of duty 0.25', sampled(N, rectangle(0.25)), [0.75, 0.866025, 1.154701, 2.333333]],
  ['rectangle of duty 0.1', sampled(N, rectangle(0.1)), [0.36, 0.6, 2.666667, 8.111111]],
  ['rectified sine', sampled(N, (t) => Math.sin(Math.PI * t)), [0.26803432, 0.307758453, -0.497159953, 1.931534837]],
  ['rounded grooves', sampled(N, (t) => -Math.sin(Math.PI * t)), [0.26803432, 0.307758453, 0.497159953, 1.931534837]],
  ['parabolic grooves', sampled(N, (t) => (2 * t - 1) ** 2), [0.25660012, 0.298142397, 0.638876565, 2.142857143]],
  [
    'two sines',
    sampled(N, (t) => Math.sin(TWO_PI * t) + 0.5 * Math.sin(3 * TWO_PI * t)),
    [7 / (3 * Math.PI), Math.sqrt(0.625), 0, 1.34],
  ],
];

describe('height parameters (ISO 21920-2)', () => {
  it.each(shapes)('of a %s are those of its integrals', (_, z, [ra, rq, rsk, rku]) => {
    const found = heightParameters(centred(z));
    expect(Math.abs(found.ra - ra)).toBeLessThan(2e-6);
    expect(Math.abs(found.rq - rq)).toBeLessThan(2e-6);
    expect(Math.abs(found.rsk - rsk)).toBeLessThan(5e-6);
    expect(Math.abs(found.rku - rku)).toBeLessThan(5e-6);
  });

  it.each([
    [0.25, [4 * 0.25 * 0.75, 2 * Math.sqrt(0.25 * 0.75), 0.5 / Math.sqrt(0.25 * 0.75), 1 / (0.25 * 0.75) - 3]],
    [0.1, [4 * 0.1 * 0.9, 2 * Math.sqrt(0.1 * 0.9), 0.8 / Math.sqrt(0.1 * 0.9), 1 / (0.1 * 0.9) - 3]],
  ])('of a rectangle of duty %f hold to rounding', (duty, [ra, rq, rsk, rku]) => {
    const found = heightParameters(centred(sampled(N, rectangle(duty))));
    expect(found.ra).toBeCloseTo(ra, 12);
    expect(found.rq).toBeCloseTo(rq, 12);
    expect(found.rsk).toBeCloseTo(rsk, 11);
    expect(found.rku).toBeCloseTo(rku, 11);
  });

  // Quantiles stand for the law; what the last of a million cells hides of the fourth moment is of the order
  // (largest height)^4/10^6: 6e-4 for the normal law, 0.04 for the exponential ones.
  it.each([
    ['normal', (p: number) => normalQuantile(p), Math.sqrt(2 / Math.PI), 0, 3, 1e-3],
    ['exponential', (p: number) => -Math.log(1 - p) - 1, 2 / Math.E, 2, 9, 4e-2],
    ['mirrored exponential', (p: number) => Math.log(1 - p) + 1, 2 / Math.E, -2, 9, 4e-2],
    ['Laplace', (p: number) => (p < 0.5 ? Math.log(2 * p) : -Math.log(2 - 2 * p)), Math.SQRT1_2, 0, 6, 4e-2],
  ])('of %s heights are those of the law', (_, quantile, ratio, rsk, rku, tolerance) => {
    const found = heightParameters(centred(sampled(1_000_000, quantile)));
    expect(Math.abs(found.ra / found.rq - ratio)).toBeLessThan(1e-4);
    expect(Math.abs(found.rsk - rsk)).toBeLessThan(tolerance / 4);
    expect(Math.abs(found.rku - rku)).toBeLessThan(tolerance);
  });

  it('give Rq = Pt/(2 sqrt 2) = 0.353553 um for a sine of 1 um total height', () => {
    const z = sampled(N, (t) => 0.5e-6 * Math.sin(TWO_PI * t));
    expect(heightParameters(z).rq * 1e6).toBeCloseTo(0.353553, 6);
  });

  it('reach the maximum 1.07582871 of sin x + 0.5 sin 3x', () => {
    const z = sampled(N, (t) => Math.sin(TWO_PI * t) + 0.5 * Math.sin(3 * TWO_PI * t));
    // half a cell off a maximum of curvature below 6: (pi/4000)^2 x 3 = 2e-6
    expect(Math.abs(heightParameters(z).rt / 2 - 1.07582871)).toBeLessThan(2e-6);
  });

  it('have no skewness and no kurtosis where there is no height', () => {
    const found = heightParameters(new Float64Array(9));
    expect([found.ra, found.rq, found.rt]).toEqual([0, 0, 0]);
    expect(found.rsk).toBeNaN();
    expect(found.rku).toBeNaN();
    expect(() => heightParameters(new Float64Array(0))).toThrow(RangeError);
  });
});

describe('section parameters', () => {
  it('of a sine are Rp = Rv = A and Rz = Rzx = 2 A in every section', () => {
    const z = Float64Array.from({ length: 5000 }, (_, i) => 3 * Math.sin((TWO_PI * i) / 100));
    const found = sectionParameters(z, 5);
    expect(found.rp).toBeCloseTo(3, 12);
    expect(found.rv).toBeCloseTo(3, 12);
    expect(found.rz).toBeCloseTo(6, 12);
    expect(found.rzx).toBeCloseTo(6, 12);
    expect(found.heights.length).toBe(5);
  });

  it('average over the sections while Rzx takes the largest', () => {
    const z = Float64Array.of(0, 1, 0, -1, 0, 3, 0, -1);
    const found = sectionParameters(z, 2);
    expect([found.rp, found.rv, found.rz, found.rzx]).toEqual([(1 + 3) / 2, (1 + 1) / 2, (2 + 4) / 2, 4]);
    expect(() => sectionParameters(z, 9)).toThrow(RangeError);
  });
});

describe('for any profile', () => {
  const profiles = fc
    .array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 20, maxLength: 200 })
    .map((z) => Float64Array.from(z));
  const settings = { seed: 21920, numRuns: 200 };

  it('Ra is at most Rq, and Rt at least Rzx at least Rz', () => {
    fc.assert(
      fc.property(profiles, fc.integer({ min: 1, max: 5 }), (z, sections) => {
        const heights = heightParameters(z);
        const found = sectionParameters(z, sections);
        expect(heights.ra).toBeLessThanOrEqual(heights.rq * (1 + 1e-14));
        expect(heights.rt).toBeGreaterThanOrEqual(found.rzx);
        expect(found.rzx).toBeGreaterThanOrEqual(found.rz * (1 - 1e-14));
        expect(found.rz).toBeCloseTo(found.rp + found.rv, 12);
      }),
      settings,
    );
  });

  it('the mirror image has the opposite Rsk and swaps Rp and Rv', () => {
    fc.assert(
      fc.property(profiles, (z) => {
        const mirrored = z.map((height) => -height);
        const [up, down] = [heightParameters(z), heightParameters(mirrored)];
        expect(down.rsk + up.rsk || 0).toBe(0);
        expect(down.rku).toEqual(up.rku);
        expect(sectionParameters(mirrored, 4).rp).toBe(sectionParameters(z, 4).rv);
      }),
      settings,
    );
  });

  it('scaling the heights by a power of two scales lengths exactly and leaves Rsk, Rku and RSm', () => {
    fc.assert(
      fc.property(profiles, (z) => {
        fc.pre(heightParameters(z).rq > 1e-3);
        const doubled = z.map((height) => 2 * height);
        const [one, two] = [heightParameters(z), heightParameters(doubled)];
        expect([two.ra, two.rq, two.rt]).toEqual([2 * one.ra, 2 * one.rq, 2 * one.rt]);
        expect([two.rsk, two.rku]).toEqual([one.rsk, one.rku]);
        expect(rootMeanSquareSlope(doubled, 1)).toBe(2 * rootMeanSquareSlope(z, 1));
        const width = meanElementWidth(z, 1, sectionParameters(z, 1));
        expect(meanElementWidth(doubled, 1, sectionParameters(doubled, 1))).toEqual(width);
      }),
      settings,
    );
  });

  it('RSm does not depend on the direction of travel', () => {
    fc.assert(
      fc.property(profiles, (z) => {
        const limits = sectionParameters(z, 1);
        const there = meanElementWidth(z, 1, limits);
        const back = meanElementWidth(z.toReversed(), 1, limits);
        expect(Number.isNaN(there) ? Number.isNaN(back) : Math.abs(there - back) < 1e-12 * there).toBe(true);
      }),
      settings,
    );
  });
});

describe('spacing and slope', () => {
  it('of a sine are RSm = wavelength and Rdq = k A / sqrt 2', () => {
    const spacing = 0.5e-6;
    const wavelength = 100e-6;
    const z = new Float64Array(2000).map((_, i) => 1e-6 * Math.sin((TWO_PI * i * spacing) / wavelength + 0.3));
    // crossings are placed linearly: their errors are alike and cancel in the difference
    expect(meanElementWidth(z, spacing, { rp: 1e-6, rv: 1e-6 }) / wavelength).toBeCloseTo(1, 9);
    // the stencil is sixth order: (k dx)^6/140 = 7e-12; six of 2000 points left out weigh 1e-3 of the oscillating half
    const exact = ((TWO_PI / wavelength) * 1e-6) / Math.SQRT2;
    expect(Math.abs(rootMeanSquareSlope(z, spacing) / exact - 1)).toBeLessThan(2e-3);
  });

  it('do not count ripple below a tenth of Rp and Rv', () => {
    const z = new Float64Array(1000).map(
      (_, i) => Math.sin((TWO_PI * i) / 100) + 0.05 * Math.sin((TWO_PI * i) / 7 + 1),
    );
    // ten waves, each crossing shifted by the ripple by at most 0.05 x 100/(2 pi)
    expect(Math.abs(meanElementWidth(z, 1, sectionParameters(z, 1)) - 100)).toBeLessThan(0.5);
  });

  it('are exact for a straight line: Rdq is its slope', () => {
    const z = new Float64Array(50).map((_, i) => 0.25 * i);
    expect(rootMeanSquareSlope(z, 0.5)).toBeCloseTo(0.5, 14);
    expect(rootMeanSquareSlope(z.slice(0, 6), 0.5)).toBeNaN();
  });

  it('find no element in a profile that has none', () => {
    expect(meanElementWidth(new Float64Array(50), 1, { rp: 0, rv: 0 })).toBeNaN();
    expect(meanElementWidth(Float64Array.of(-1, -1, 1, 1), 1, { rp: 1, rv: 1 })).toBeNaN();
  });
});
