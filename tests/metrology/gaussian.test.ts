import { describe, expect, it } from 'vitest';
import {
  bandPass,
  directSums,
  GAUSSIAN_ALPHA,
  gaussianTaps,
  gaussianTransmission,
  gaussianWeight,
  highPass,
  meanLine,
  transformSums,
} from '#src/metrology/gaussian.ts';
import { robustMeanLine } from '#src/metrology/robust-gaussian.ts';
import { normalSource } from './random.ts';

/** 2 int_T^3 s(x) dx by Simpson's rule, cutoff 1. */
function weightBeyond(reach: number): number {
  const n = 2000;
  const h = (3 - reach) / n;
  let sum = 0;
  for (let i = 0; i <= n; i++) sum += (i === 0 || i === n ? 1 : i % 2 ? 4 : 2) * gaussianWeight(reach + i * h, 1);
  return (2 * sum * h) / 3;
}

describe('the Gaussian profile filter (ISO 16610-21)', () => {
  it('has alpha = sqrt(ln 2 / pi)', () => {
    expect(GAUSSIAN_ALPHA).toBeCloseTo(Math.sqrt(Math.LN2 / Math.PI), 15);
  });

  it.each([
    [0.5, 0.7625],
    [0.6, 0.1365],
    [0.7, 0.0187],
    [0.8, 0.002],
    [1.0, 9.5e-8],
  ])('loses the tabulated weight in per cent when cut at %f of the cutoff', (reach, percent) => {
    // half a unit of the last tabulated digit; the last row is tabulated as a share of 100 %
    const found = 100 * weightBeyond(reach);
    const tolerance = reach === 1 ? 0.05e-6 * 100 : 0.00005;
    const expected = reach === 1 ? 100 * percent : percent;
    expect(Math.abs(found - expected)).toBeLessThan(tolerance);
  });

  it.each([
    [0.25, 1.5259e-5],
    [0.3, 4.5209e-4],
    [0.5, 0.0625],
    [1, 0.5],
    [2, 0.840896],
    [2.5, 0.895025],
    [3, 0.925875],
    [4, 0.957603],
    [5, 0.972655],
    [8, 0.989228],
    [10, 0.993092],
  ])('keeps of a wave of %f cutoffs the tabulated share', (ratio, share) => {
    const cutoff = 800;
    const middle = 1000;
    const z = new Float64Array(2 * middle + 1).map((_, i) => Math.cos((2 * Math.PI * (i - middle)) / (ratio * cutoff)));
    const found = meanLine({ spacing: 1, z }, cutoff).z[middle];
    const exact = 2 ** -(ratio ** -2);
    // weight beyond the reach 2.5e-11, transform rounding 1e-15
    expect(Math.abs(found - exact)).toBeLessThan(1e-10);
    expect(gaussianTransmission(ratio, 1)).toBeCloseTo(exact, 14);
    // six digits are tabulated, five of the two smallest
    expect(Math.abs(found - share)).toBeLessThan(
      Math.max(5e-7 * (share > 1e-3 ? 1 : 0), 1e-4 * share * (share < 1e-3 ? 1 : 0)),
    );
  });

  it('keeps 0.997692177 of the wave in the geometric middle of a band of 300 to 1', () => {
    const shortest = 2.5e-6;
    const longest = 300 * shortest;
    const wavelength = Math.sqrt(shortest * longest);
    const spacing = shortest / 5;
    const n = 6001;
    const z = new Float64Array(n).map((_, i) => Math.cos((2 * Math.PI * (i - 3000) * spacing) / wavelength));
    const found = bandPass({ spacing, z }, shortest, longest).z[3000];
    // five points per shortest wave alias exp(-2 (pi 0.187 5)^2) = 3e-8 of the kernel
    expect(Math.abs(found - 0.997692177)).toBeLessThan(1e-7);
    expect(0.997692177).toBeCloseTo(2 ** (-1 / 300) * (1 - 2 ** -300), 9);
  });

  it('gives the same sums term by term and by the convolution theorem', () => {
    const normal = normalSource(3);
    const z = new Float64Array(300).map(() => normal());
    for (const reach of [1, 7, 60, 299]) {
      const taps = gaussianTaps(1, reach / 1.25, 299);
      const direct = directSums(z, taps);
      const transformed = transformSums(z, taps);
      // 600 terms of order one
      for (let i = 0; i < 300; i++) {
        expect(Math.abs(direct.t0[i] - transformed.t0[i])).toBeLessThan(1e-12);
        expect(Math.abs(direct.t1[i] - transformed.t1[i])).toBeLessThan(1e-12);
      }
    }
  });

  it('takes a straight profile for its own mean line to the very ends, even when the cutoff exceeds it', () => {
    const z = new Float64Array(500).map((_, i) => 3e-3 + 2e-5 * i);
    for (const cutoff of [20, 100, 5000]) {
      const rest = highPass({ spacing: 1, z }, cutoff).z;
      for (const height of rest) expect(Math.abs(height)).toBeLessThan(1e-16);
    }
  });

  it('does not see poison: a height that is not finite is refused, and so are cutoffs and spacings that are none', () => {
    const z = new Float64Array(10);
    const poisoned = z.with(4, Number.NaN);
    expect(() => meanLine({ spacing: 1, z: poisoned }, 3)).toThrow(/point 4/);
    expect(() => meanLine({ spacing: 0, z }, 3)).toThrow(RangeError);
    expect(() => meanLine({ spacing: 1, z }, Number.NaN)).toThrow(RangeError);
    expect(() => meanLine({ spacing: 1, z: z.slice(0, 2) }, 3)).toThrow(RangeError);
    expect(() => bandPass({ spacing: 1, z }, 4, 3)).toThrow(RangeError);
    expect(() => robustMeanLine({ spacing: 1, z: poisoned }, 3)).toThrow(RangeError);
    expect(() => robustMeanLine({ spacing: 1, z }, 0)).toThrow(RangeError);
  });

  it('shifts and scales with the profile', () => {
    const normal = normalSource(4);
    const z = new Float64Array(400).map(() => normal());
    const line = meanLine({ spacing: 1, z }, 50).z;
    const moved = meanLine({ spacing: 1, z: z.map((height) => 3 * height + 10) }, 50).z;
    for (let i = 0; i < 400; i++) expect(Math.abs(moved[i] - 3 * line[i] - 10)).toBeLessThan(1e-13);
  });
});

describe('the robust Gaussian regression (ISO 16610-31, from memory)', () => {
  it('follows a parabola: second order', () => {
    const normal = normalSource(16);
    const rough = new Float64Array(1000).map(() => 1e-6 * normal());
    const parabola = rough.map((_, i) => 1e-9 * (i - 300) ** 2);
    const line = robustMeanLine({ spacing: 1, z: rough }, 800).z;
    const bent = robustMeanLine({ spacing: 1, z: rough.map((height, i) => height + parabola[i]) }, 800).z;
    // blocks of 12 points pool the parabola at their middles: 1e-9 x 12^2/12 = 1.2e-8, some 2e-8 more between the end nodes, and weights
    for (let i = 0; i < 1000; i++) expect(Math.abs(bent[i] - line[i] - parabola[i])).toBeLessThan(6e-8);
  });

  it('keeps half of a wave as long as the cutoff in its first, linear round', () => {
    const middle = 2400;
    const z = new Float64Array(2 * middle + 1).map((_, i) => Math.cos((2 * Math.PI * (i - middle)) / 800));
    const line = robustMeanLine({ spacing: 1, z }, 800, 1).z;
    // pooling into 64 blocks per cutoff widens the kernel by 1.2e-4; the weight cut off beyond 1.5 cutoffs is 2e-6
    expect(Math.abs(line[middle] - 0.5)).toBeLessThan(3e-4);
  });

  it('rides on the plateau over deep grooves that pull the Gaussian line down', () => {
    const normal = normalSource(5);
    const depth = 10;
    const z = new Float64Array(4000).map((_, i) => 0.1 * normal() - (i % 200 < 20 ? depth : 0));
    const robust = robustMeanLine({ spacing: 1, z }, 800).z.slice(800, 3200);
    const plain = meanLine({ spacing: 1, z }, 800).z.slice(800, 3200);
    // a tenth of the length lies a depth down: the plain line sinks by depth/10; the robust one drops all of it
    for (let i = 0; i < robust.length; i++) {
      expect(Math.abs(robust[i])).toBeLessThan(0.05);
      expect(Math.abs(plain[i] + depth / 10)).toBeLessThan(0.2);
    }
  });

  it('equals the shifted and scaled line of the shifted and scaled profile', () => {
    const normal = normalSource(6);
    const z = new Float64Array(700).map(() => normal());
    const line = robustMeanLine({ spacing: 1, z }, 60).z;
    const moved = robustMeanLine({ spacing: 1, z: z.map((height) => 4 * height + 8) }, 60).z;
    for (let i = 0; i < 700; i++) expect(Math.abs(moved[i] - 4 * line[i] - 8)).toBeLessThan(1e-12);
  });
});
