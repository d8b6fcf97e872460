import { describe, expect, it } from 'vitest';
import type { HeightField } from '#src/base/field.ts';
import { arealParameters, developedAreaRatio, rootMeanSquareGradient } from '#src/metrology/areal-parameters.ts';
import { fitPlane } from '#src/metrology/plane.ts';
import { normalSource } from './random.ts';

const TWO_PI = 2 * Math.PI;

/** A field of unit wavelength, `perWave` cells per wave, `waves` of them each way. */
function wavy(perWave: number, waves: number, f: (x: number, y: number) => number, rows?: number): HeightField {
  const nx = perWave * waves;
  const ny = rows ?? nx;
  const d = 1 / perWave;
  const z = new Float64Array(nx * ny).map((_, k) => f(((k % nx) + 0.5) * d, (Math.floor(k / nx) + 0.5) * d));
  return { nx, ny, dx: d, dy: d, x0: d / 2, y0: d / 2, z };
}

describe('areal parameters (ISO 25178-2; integrals computed)', () => {
  it('of A (sin kx + sin ky) are Sa = 8/pi^2, Sq = 1, Ssk = 0, Sku = 2.25', () => {
    // cosines, so that no plane hides in the waves: over whole periods their plane is level
    const found = arealParameters(wavy(200, 2, (x, y) => Math.cos(TWO_PI * x) + Math.cos(TWO_PI * y)));
    // kinks of |z| along lines: (2 pi/200)^2/12 = 8e-5 of the mean at most
    expect(Math.abs(found.sa - 8 / Math.PI ** 2)).toBeLessThan(1e-4);
    expect(found.sq).toBeCloseTo(1, 12);
    expect(found.ssk).toBeCloseTo(0, 12);
    expect(found.sku).toBeCloseTo(2.25, 12);
    expect(found.sz).toBe(found.sp + found.sv);
    expect(found.cells).toBe(400 * 400);
  });

  it('of A cos kx cos ky are Sa = 4/pi^2, Sq = 1/2, Sku = 2.25, Sdq = kA/sqrt 2', () => {
    const amplitude = 0.1 / TWO_PI;
    const found = arealParameters(wavy(200, 2, (x, y) => amplitude * Math.cos(TWO_PI * x) * Math.cos(TWO_PI * y)));
    expect(Math.abs(found.sa / amplitude - 4 / Math.PI ** 2)).toBeLessThan(1e-4);
    expect(found.sq / amplitude).toBeCloseTo(0.5, 12);
    expect(found.sku).toBeCloseTo(2.25, 12);
    // the centred stencil loses (k dx)^2/6 = 1.6e-4, the border left out moves the mean by some 1e-3
    expect(Math.abs(found.sdq / (0.1 / Math.SQRT2) - 1)).toBeLessThan(2e-3);
  });

  it.each([
    [0.1, 0.002496107],
    [1, 0.220405667],
  ])('of A sin kx sin ky with kA = %f have the computed Sdr, approached to second order', (slope, sdr) => {
    const error = (perWave: number) => {
      // one cell more than a period, so that the squares cover it once
      const n = perWave + 1;
      const z = new Float64Array(n * n).map(
        (_, k) =>
          (slope / TWO_PI) * Math.sin((TWO_PI * (k % n)) / perWave) * Math.sin((TWO_PI * Math.floor(k / n)) / perWave),
      );
      const d = 1 / perWave;
      return Math.abs(developedAreaRatio({ nx: n, ny: n, dx: d, dy: d, x0: 0, y0: 0, z }) / sdr - 1);
    };
    // chords lose (k dx)^2/12 of the slope squared: 4e-4 x order one at 100 cells per wave
    expect(error(100)).toBeLessThan(2e-3);
    expect(error(400)).toBeLessThan(error(100) / 12);
  });

  it.each([
    [0.01, 2.49995313e-5],
    [0.1, 0.002495332],
    [1, 0.216006723],
    [5, 2.404938597],
  ])('of a ridged sine with kA = %f have Sdr = (2/pi) E(-(kA)^2) - 1', (slope, sdr) => {
    const n = 4001;
    const d = 1 / 4000;
    const z = new Float64Array(3 * n).map((_, k) => (slope / TWO_PI) * Math.sin((TWO_PI * (k % n)) / 4000));
    const found = developedAreaRatio({ nx: n, ny: 3, dx: d, dy: d, x0: 0, y0: 0, z });
    // (2 pi/4000)^2/12 = 2e-7, and ten digits are tabulated
    expect(Math.abs(found / sdr - 1)).toBeLessThan(4e-7);
  });

  it('of a ridged sine are those of the profile', () => {
    const found = arealParameters(wavy(1000, 1, (x) => Math.cos(TWO_PI * x), 5));
    // kinks: (2 pi/1000)^2/12
    expect(Math.abs(found.sa - 2 / Math.PI)).toBeLessThan(1e-5);
    expect(found.sq).toBeCloseTo(Math.SQRT1_2, 12);
    expect(found.sku).toBeCloseTo(1.5, 12);
  });

  it('of a tilted plane are Sdq = t and Sdr = sqrt(1 + t^2) - 1, 0.414214 at 45 degrees, and nothing once levelled', () => {
    for (const t of [1e-3, 0.5, 1]) {
      const plane = wavy(20, 1, (x, y) => t * (0.6 * x + 0.8 * y));
      expect(rootMeanSquareGradient(plane)).toBeCloseTo(t, 12);
      expect(developedAreaRatio(plane)).toBeCloseTo(Math.sqrt(1 + t * t) - 1, 12);
      const levelled = arealParameters(plane);
      expect([levelled.sa, levelled.sq, levelled.sz]).toEqual([0, 0, 0]);
      expect(levelled.ssk).toBeNaN();
      expect(levelled.sdq).toBeLessThan(1e-13);
    }
    expect(Math.SQRT2 - 1).toBeCloseTo(0.414214, 6);
  });

  it('do not change when a plane is added, and are taken off tilted and shifted as found', () => {
    const normal = normalSource(13);
    const rough = wavy(30, 1, () => 1e-3 * normal());
    const tilted = { ...rough, z: rough.z.map((height, k) => height + 0.2 * (k % 30) - 0.1 * Math.floor(k / 30) + 7) };
    const [a, b] = [arealParameters(rough), arealParameters(tilted)];
    for (const name of ['sa', 'sq', 'ssk', 'sku', 'sp', 'sv', 'sdq', 'sdr'] as const)
      expect(Math.abs(a[name] - b[name]), name).toBeLessThan(1e-9 * (1 + Math.abs(a[name])));
    expect(b.plane.slopeX - a.plane.slopeX).toBeCloseTo(0.2 * 30, 9);
  });

  it('are the same for the mirror image of the surface', () => {
    const normal = normalSource(14);
    const rough = wavy(25, 1, () => 0.02 * normal());
    const mirrored = { ...rough, z: rough.z.map((_, k) => rough.z[k - (k % 25) + 24 - (k % 25)]) };
    expect(arealParameters(mirrored).sdr).toBeCloseTo(arealParameters(rough).sdr, 12);
  });

  it('leave out cells without a surface, as if the field were cut smaller', () => {
    const normal = normalSource(15);
    const inner = wavy(20, 1, () => normal());
    const wide = { ...inner, nx: 23, z: new Float64Array(23 * 20).fill(Number.NaN) };
    for (let j = 0; j < 20; j++) wide.z.set(inner.z.subarray(20 * j, 20 * (j + 1)), 23 * j + 2);
    const [a, b] = [arealParameters(inner), arealParameters(wide)];
    for (const name of ['sa', 'sq', 'ssk', 'sku', 'sz', 'sdq', 'sdr', 'cells'] as const)
      expect(b[name], name).toBeCloseTo(a[name], 11);
  });

  it('need three cells off one line', () => {
    const row = wavy(5, 1, (x) => x, 1);
    expect(() => arealParameters(row)).toThrow(RangeError);
    expect(() => fitPlane({ ...wavy(3, 1, () => 0), z: new Float64Array(9).fill(Number.NaN) })).toThrow(RangeError);
    expect(developedAreaRatio(row)).toBeNaN();
    expect(rootMeanSquareGradient(row)).toBeNaN();
  });
});
