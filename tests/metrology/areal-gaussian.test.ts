import { describe, expect, it } from 'vitest';
import type { HeightField } from '#src/base/field.ts';
import { arealHighPass, arealMean } from '#src/metrology/areal-gaussian.ts';
import { gaussianWeight } from '#src/metrology/gaussian.ts';
import { fitPlane, planeAt } from '#src/metrology/plane.ts';
import { normalSource } from './random.ts';

function makeField(nx: number, ny: number, f: (x: number, y: number) => number, dx = 1, dy = 1): HeightField {
  const z = new Float64Array(nx * ny).map((_, k) => f((k % nx) * dx, Math.floor(k / nx) * dy));
  return { nx, ny, dx, dy, x0: 0, y0: 0, z };
}

describe('the areal Gaussian filter (ISO 16610-61)', () => {
  it('keeps 2^-(cutoff/wavelength)^2 of a wave in any direction', () => {
    const cutoff = 40;
    const n = 2 * 60 + 1;
    for (const [kx, ky] of [
      [1, 0],
      [0, 1],
      [0.6, 0.8],
    ]) {
      const wave = 2 * Math.PI * (1 / 50);
      const field = makeField(n, n, (x, y) => Math.cos(wave * (kx * (x - 60) + ky * (y - 60))));
      const found = arealMean(field, cutoff).z[60 * n + 60];
      // reach 50 cells, so the middle sees a whole kernel; cut weight 2.5e-11, and the plane taken off is not a plane of
      // the cosine's even part: none
      expect(Math.abs(found - 2 ** -((cutoff / 50) ** 2))).toBeLessThan(1e-9);
    }
  });

  it('equals the weighted mean written out, holes and borders included', () => {
    const normal = normalSource(7);
    const field = makeField(17, 13, (x, y) => ((x * 7 + y * 3) % 5 === 0 ? Number.NaN : normal()), 1, 1.5);
    const plane = fitPlane(field);
    const cutoff = 6;
    const found = arealMean(field, cutoff).z;
    for (let k = 0; k < 17 * 13; k++) {
      const [x, y] = [k % 17, Math.floor(k / 17) * 1.5];
      let above = 0;
      let below = 0;
      field.z.forEach((height, m) => {
        const [u, v] = [m % 17, Math.floor(m / 17) * 1.5];
        // the filter stops at 1.25 cutoffs, 8 and 5 cells
        if (Number.isNaN(height) || Math.abs(u - x) > 8 || Math.abs(v - y) > 7.5) return;
        const weight = gaussianWeight(u - x, cutoff) * gaussianWeight(v - y, cutoff);
        above += weight * (height - planeAt(plane, u, v));
        below += weight;
      });
      if (Number.isNaN(field.z[k])) expect(found[k]).toBeNaN();
      else expect(Math.abs(found[k] - above / below - planeAt(plane, x, y))).toBeLessThan(1e-12);
    }
  });

  it('lets a plane with holes pass unchanged to its border', () => {
    const field = makeField(40, 30, (x, y) => (x > 10 && x < 14 && y > 5 ? Number.NaN : 1e-3 * x - 2e-3 * y + 0.5));
    const rest = arealHighPass(field, 12).z.filter((height) => !Number.isNaN(height));
    expect(rest.length).toBe(40 * 30 - 3 * 24);
    for (const height of rest) expect(Math.abs(height)).toBeLessThan(1e-15);
  });

  it('refuses a cutoff that is none and a field without a plane', () => {
    const field = makeField(4, 4, (x) => x);
    expect(() => arealMean(field, 0)).toThrow(RangeError);
    expect(() =>
      arealMean(
        makeField(4, 1, (x) => x),
        2,
      ),
    ).toThrow(RangeError);
    expect(() =>
      arealMean(
        makeField(4, 4, () => Number.NaN),
        2,
      ),
    ).toThrow(RangeError);
  });
});
