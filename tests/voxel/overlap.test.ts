import fc from 'fast-check';
import { expect, test } from 'vitest';
import { overlapsOf, resamplePlane } from '#src/voxel/overlap.ts';

test('the shares of a covered cell add up to one, and the cells of a whole multiple or part lie under it exactly', () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 5 }), fc.boolean(), fc.integer({ min: 0, max: 7 }), (ratio, finer, shift) => {
      const from = { n: 40, pitch: 1e-6, centre: 0.5e-6 };
      const pitch = finer ? 1e-6 / ratio : 1e-6 * ratio;
      const to = { n: 8, pitch, centre: shift * 1e-6 + pitch / 2 };
      const { count, share, most } = overlapsOf(to, from);
      for (let k = 0; k < to.n; k++) {
        if ((shift * 1e-6 + (k + 1) * pitch) * 1e6 > 40) continue;
        expect(count[k]).toBe(finer ? 1 : ratio);
        const sum = share.subarray(k * most, (k + 1) * most).reduce((total, own) => total + own, 0);
        expect(Math.abs(sum - 1)).toBeLessThan(1e-9);
      }
    }),
    { seed: 3, numRuns: 60 },
  );
});

test('resampling keeps the integral of a field that lies inside the new grid, whatever the pitches', () => {
  fc.assert(
    fc.property(
      fc.double({ min: 0.3, max: 3, noNaN: true }),
      fc.double({ min: -1, max: 1, noNaN: true }),
      (ratio, shift) => {
        const from = { x: { n: 9, pitch: 1, centre: 0 }, y: { n: 7, pitch: 1, centre: 0 } };
        const n = Math.ceil(14 / ratio);
        const to = {
          x: { n, pitch: ratio, centre: -2.5 + shift },
          y: { n, pitch: ratio, centre: -2.5 - shift },
        };
        const values = Float64Array.from({ length: 63 }, (_, k) => Math.sin(k) + 2);
        const out = resamplePlane(values, from, to);
        const sum = (field: Float64Array, cell: number) =>
          field.reduce((total, value) => total + value * cell * cell, 0);
        // shares below a millionth of a cell are dropped
        expect(Math.abs(sum(out, ratio) / sum(values, 1) - 1)).toBeLessThan(1e-5);
      },
    ),
    { seed: 4, numRuns: 60 },
  );
});
