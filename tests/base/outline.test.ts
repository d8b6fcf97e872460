import fc from 'fast-check';
import { expect, test } from 'vitest';
import { makeOutline, nearest, nominalSizes, type OutlineSpec, offsetSpec, pointAt } from '#src/base/outline.ts';

const specs: OutlineSpec[] = [
  { kind: 'circle', diameter: 3e-3 },
  { kind: 'rectangle', length: 4e-3, width: 2.5e-3, cornerRadius: 0 },
  { kind: 'rectangle', length: 4e-3, width: 2.5e-3, cornerRadius: 0.4e-3 },
  { kind: 'slot', length: 5e-3, width: 1.2e-3 },
  { kind: 'regularPolygon', sides: 6, acrossFlats: 4e-3, cornerRadius: 0.2e-3 },
  { kind: 'ring', outerDiameter: 6e-3, innerDiameter: 3.6e-3 },
];
const pi = Math.PI;

test('area and perimeter are those of plane geometry', () => {
  const expected = [
    [(pi / 4) * 9e-6, pi * 3e-3],
    [10e-6, 13e-3],
    [10e-6 - (4 - pi) * 0.16e-6, 13e-3 - (8 - 2 * pi) * 0.4e-3],
    [3.8e-3 * 1.2e-3 + (pi / 4) * 1.44e-6, 2 * 3.8e-3 + pi * 1.2e-3],
    // regular hexagon: area 2 sqrt(3) r^2, perimeter 4 sqrt(3) r, r the inradius; each corner's rounding by rho takes
    // (6 tan(30 deg) - pi) rho^2 and 2 (6 tan(30 deg) - pi) rho in all
    [
      2 * Math.sqrt(3) * 4e-6 - (6 / Math.sqrt(3) - pi) * 0.04e-6,
      4 * Math.sqrt(3) * 2e-3 - 2 * (6 / Math.sqrt(3) - pi) * 0.2e-3,
    ],
    [(pi / 4) * (36e-6 - 12.96e-6), pi * 9.6e-3],
  ];
  specs.forEach((spec, k) => {
    const outline = makeOutline(spec);
    // sums of a dozen terms in double precision
    expect(outline.area).toBeCloseTo((expected[k] as number[])[0] as number, 16);
    expect(outline.perimeter).toBeCloseTo((expected[k] as number[])[1] as number, 13);
  });
});

test('a point moved along the outward normal is that far outside, at the same arc length', () => {
  fc.assert(
    fc.property(fc.integer({ min: 0, max: 5 }), fc.double({ min: 0, max: 1, noNaN: true }), (which, t) => {
      const outline = makeOutline(specs[which] as OutlineSpec);
      const s = t * outline.perimeter * 0.999999;
      const p = pointAt(outline, s);
      for (const off of [-50e-6, 30e-6, 100e-6]) {
        const near = nearest(outline, p.x + off * p.nx, p.y + off * p.ny);
        expect(Math.abs(near.distance)).toBeLessThanOrEqual(Math.abs(off) + 1e-12);
        if (near.distance !== 0) expect(Math.sign(near.distance)).toBe(Math.sign(off));
        // inside a sharp corner another side may be nearer; outside nothing is
        if (off > 0) expect(near.distance).toBeCloseTo(off, 12);
      }
    }),
    { seed: 7, numRuns: 600 },
  );
});

test('the far side of a sharp corner is outside and its centre inside', () => {
  const outline = makeOutline({ kind: 'rectangle', length: 2e-3, width: 2e-3, cornerRadius: 0 });
  const diagonal = nearest(outline, 1.3e-3, 1.4e-3);
  expect(diagonal.distance).toBeCloseTo(Math.sqrt(0.3 ** 2 + 0.4 ** 2) * 1e-3, 12);
  expect(nearest(outline, 0, 0).distance).toBeCloseTo(-1e-3, 12);
  const ring = makeOutline(specs[5] as OutlineSpec);
  expect(nearest(ring, 0, 0).distance).toBeCloseTo(1.8e-3, 12);
  expect(nearest(ring, 2.4e-3, 0).distance).toBeLessThan(0);
});

test('moving an outline outward grows each size by twice the offset, and a hole shrinks', () => {
  for (const spec of specs) {
    const before = nominalSizes(spec);
    const after = nominalSizes(offsetSpec(spec, 40e-6));
    before.forEach((size, k) => {
      const sign = spec.kind === 'ring' && k === 1 ? -1 : 1;
      expect(after[k]).toBeCloseTo(size + sign * 80e-6, 12);
    });
  }
  expect(() => offsetSpec({ kind: 'circle', diameter: 1e-4 }, -60e-6)).toThrow(RangeError);
});

test('the boundary of a moved outline lies at the offset from the first', () => {
  for (const spec of specs) {
    const outline = makeOutline(spec);
    const moved = makeOutline(offsetSpec(spec, -30e-6));
    for (let k = 0; k < 200; k++) {
      const p = pointAt(moved, (k / 200) * moved.perimeter);
      expect(nearest(outline, p.x, p.y).distance).toBeCloseTo(-30e-6, 9);
    }
  }
});
