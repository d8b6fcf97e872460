import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { makeOutline, nominalSizes, type OutlineSpec, offsetSpec, pointAt } from '#src/base/outline.ts';
import { fitCircle, type PlanePoints } from '#src/metrology/circle.ts';
import { sizesAtDepth } from '#src/metrology/size.ts';
import { entrySizeDepth, floorSizeDepth, sizeSigns, taperOf, tapers } from '#src/metrology/taper.ts';
import { normalSource } from './random.ts';

const MM = 1e-3;
const UM = 1e-6;

interface Placement {
  readonly x?: number;
  readonly y?: number;
  readonly turn?: number;
}

/** Points along an outline, shifted and turned. */
function contour(spec: OutlineSpec, count: number, { x = 0, y = 0, turn = 0 }: Placement = {}): PlanePoints {
  const outline = makeOutline(spec);
  const points = { x: new Float64Array(count), y: new Float64Array(count) };
  for (let i = 0; i < count; i++) {
    const p = pointAt(outline, ((i + 0.5) / count) * outline.perimeter);
    points.x[i] = x + Math.cos(turn) * p.x - Math.sin(turn) * p.y;
    points.y[i] = y + Math.sin(turn) * p.x + Math.cos(turn) * p.y;
  }
  return points;
}

const specs: readonly OutlineSpec[] = [
  { kind: 'circle', diameter: 5 * MM },
  { kind: 'ring', outerDiameter: 8 * MM, innerDiameter: 5 * MM },
  { kind: 'rectangle', length: 10 * MM, width: 4 * MM, cornerRadius: 0.5 * MM },
  { kind: 'rectangle', length: 3 * MM, width: 6 * MM, cornerRadius: 0 },
  { kind: 'slot', length: 12 * MM, width: 3 * MM },
  { kind: 'regularPolygon', sides: 3, acrossFlats: 4 * MM, cornerRadius: 0.2 * MM },
  { kind: 'regularPolygon', sides: 5, acrossFlats: 4 * MM, cornerRadius: 0 },
  { kind: 'regularPolygon', sides: 6, acrossFlats: 6 * MM, cornerRadius: 0.3 * MM },
];

describe('the least-squares circle', () => {
  it('through points of any circle or of an arc of it is that circle', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1, max: 1, noNaN: true }),
        fc.double({ min: 0.1, max: 5, noNaN: true }),
        fc.double({ min: 0.3, max: 6, noNaN: true }),
        (cx, radius, span) => {
          const angles = Float64Array.from({ length: 30 }, (_, i) => 1 + (span * i) / 30);
          const circle = fitCircle({
            x: angles.map((angle) => cx + radius * Math.cos(angle)),
            y: angles.map((angle) => -cx + radius * Math.sin(angle)),
          });
          // an arc of 0.3 rad has a sagitta of 1 %; its square conditions the radius
          expect(Math.abs(circle.radius / radius - 1)).toBeLessThan(1e-9);
          expect(Math.abs(circle.x - cx)).toBeLessThan(1e-8);
          expect(circle.residual).toBeLessThan(1e-12);
        },
      ),
      { seed: 14405, numRuns: 100 },
    );
  });

  it('of noisy points leaves residuals square to every parameter', () => {
    const normal = normalSource(20);
    const angles = Float64Array.from({ length: 200 }, (_, i) => (i / 200) * 4);
    const radii = angles.map(() => 1 + 0.1 * normal());
    const points = { x: angles.map((a, i) => radii[i] * Math.cos(a)), y: angles.map((a, i) => radii[i] * Math.sin(a)) };
    const circle = fitCircle(points);
    const sums = [0, 0, 0];
    points.x.forEach((x, i) => {
      const r = Math.hypot(x - circle.x, points.y[i] - circle.y);
      const off = r - circle.radius;
      sums[0] += off;
      sums[1] += (off * (x - circle.x)) / r;
      sums[2] += (off * (points.y[i] - circle.y)) / r;
    });
    // stationary to the step at which the iteration stops, square root of rounding in the sum
    for (const sum of sums) expect(Math.abs(sum)).toBeLessThan(1e-6);
  });

  it('states a standard error of the radius that is the scatter of its radii over many samples', () => {
    const normal = normalSource(22);
    const angles = Float64Array.from({ length: 40 }, (_, i) => (i / 40) * 1.5);
    let square = 0;
    let stated = 0;
    const samples = 400;
    for (let sample = 0; sample < samples; sample++) {
      const radii = angles.map(() => 1 + 0.002 * normal());
      const circle = fitCircle({
        x: angles.map((a, i) => radii[i] * Math.cos(a)),
        y: angles.map((a, i) => radii[i] * Math.sin(a)),
      });
      square += (circle.radius - 1) ** 2 / samples;
      stated += circle.radiusError / samples;
    }
    // a standard deviation from 400 samples is known to 1/sqrt(800) = 3.5 %; four of those
    expect(Math.abs(Math.sqrt(square) / stated - 1)).toBeLessThan(0.14);
  });

  it('needs three points off one line', () => {
    const line = Float64Array.of(0, 1, 2, 3);
    expect(() => fitCircle({ x: line, y: line })).toThrow(RangeError);
    expect(() => fitCircle({ x: line.slice(0, 2), y: line.slice(0, 2) })).toThrow(RangeError);
    expect(() => fitCircle({ x: new Float64Array(5), y: new Float64Array(5) })).toThrow(RangeError);
  });
});

describe('sizes of a contour', () => {
  it.each(specs)('of an overcut, shifted and turned $kind are the nominal sizes plus the overcut', (spec) => {
    const overcut = 40 * UM;
    const wall = offsetSpec(spec, overcut);
    for (const place of [{}, { x: 20 * UM, y: -30 * UM }, { x: 10 * UM, turn: 0.01 }]) {
      const sizes = sizesAtDepth(contour(wall, 4000, place), spec);
      const expected = nominalSizes(wall);
      expect(sizes.length).toBe(expected.length);
      // exact but for the rounding of the arcs: nothing is fitted to noise here
      for (const [k, size] of sizes.entries()) expect(Math.abs(size / expected[k] - 1)).toBeLessThan(1e-10);
    }
  });

  it.each(specs)('of a noisy $kind scatter by the noise over the root of the points, not by the largest', (spec) => {
    const normal = normalSource(21);
    const points = contour(spec, 4000);
    points.x.forEach((_, i) => {
      points.x[i] += 2 * UM * normal();
      points.y[i] += 2 * UM * normal();
    });
    // at least 50 points on the smallest feature: four standard errors of a width, 4 x 2 um x sqrt(2/50) = 1.6 um; the arcs
    // of a slot's ends count double
    for (const [k, size] of sizesAtDepth(points, spec).entries())
      expect(Math.abs(size - nominalSizes(spec)[k])).toBeLessThan(2 * UM);
  });

  it('of a rectangle do not see its corners', () => {
    const spec = specs[2] as Extract<OutlineSpec, { kind: 'rectangle' }>;
    const points = contour(spec, 4000);
    points.x.forEach((x, i) => {
      const inCorner = Math.abs(x) > spec.length / 2 - 0.5 * MM && Math.abs(points.y[i]) > spec.width / 2 - 0.5 * MM;
      if (inCorner) points.x[i] = x * 1.2;
    });
    const sizes = sizesAtDepth(points, spec);
    expect(sizes[0]).toBeCloseTo(spec.length, 12);
    expect(sizes[1]).toBeCloseTo(spec.width, 12);
  });

  it('are NaN, one by one, where there are too few points', () => {
    const spec = specs[2] as OutlineSpec;
    const all = contour(spec, 4000);
    const keep = Uint32Array.from(all.x.keys()).filter((i) => Math.abs(all.x[i]) < 4.5 * MM);
    const sides = { x: Float64Array.from(keep, (i) => all.x[i]), y: Float64Array.from(keep, (i) => all.y[i]) };
    const sizes = sizesAtDepth(sides, spec);
    expect(sizes[0]).toBeNaN();
    expect(sizes[1]).toBeCloseTo(4 * MM, 12);
    const none = { x: new Float64Array(0), y: new Float64Array(0) };
    for (const each of specs) expect(sizesAtDepth(none, each).every(Number.isNaN)).toBe(true);
  });
});

describe('taper', () => {
  const depth = 3 * MM;
  const depths = Float64Array.from({ length: 61 }, (_, i) => (i / 60) * depth);

  it('of a cone is its half-angle, positive when it is wider at the entry', () => {
    for (const angle of [0.02, -0.01, 0]) {
      const sizes = depths.map((at) => 5 * MM - 2 * Math.tan(angle) * at);
      const found = taperOf(depths, sizes, depth);
      expect(found.halfAngle).toBeCloseTo(angle, 12);
      expect(found.sizeAtEntry).toBeCloseTo(5 * MM, 12);
      expect(found.residual).toBeLessThan(1e-17);
    }
  });

  it('does not see the entry and the floor, nor depths without a size', () => {
    const sizes = depths.map((at) => 5 * MM - 2 * Math.tan(0.02) * at);
    const spoiled = sizes.map((size, i) => (i < 6 || i > 54 ? size + 1 : i === 30 ? Number.NaN : size));
    const found = taperOf(depths, spoiled, depth);
    expect(found.halfAngle).toBeCloseTo(0.02, 12);
    expect(found.count).toBe(49 - 1);
    expect(taperOf(depths.slice(0, 7), sizes.slice(0, 7), depth).halfAngle).toBeNaN();
  });

  it('of a ring is positive on both walls when the cavity is wider at the entry', () => {
    const spec = specs[1] as OutlineSpec;
    const outer = depths.map((at) => 8 * MM - 2 * Math.tan(0.02) * at);
    const inner = depths.map((at) => 5 * MM + 2 * Math.tan(0.01) * at);
    expect(sizeSigns(spec)).toEqual([1, -1]);
    const found = tapers(depths, [outer, inner], depth, spec).map((taper) => taper.halfAngle);
    expect(found[0]).toBeCloseTo(0.02, 12);
    expect(found[1]).toBeCloseTo(0.01, 12);
  });

  it('of sizes measured on the walls of a tapered hexagon is the angle of its walls', () => {
    const spec = specs[7] as OutlineSpec;
    const sizes = depths.map((at) => sizesAtDepth(contour(offsetSpec(spec, 30 * UM - 0.015 * at), 1200), spec)[0]);
    expect(taperOf(depths, sizes, depth).halfAngle).toBeCloseTo(Math.atan(0.015), 9);
  });

  it('goes with an entry size at a tenth of the depth and a floor size 0.2 mm above the floor, or at 0.8 if shallow', () => {
    expect(entrySizeDepth(3 * MM)).toBeCloseTo(0.3 * MM, 15);
    expect(floorSizeDepth(3 * MM)).toBeCloseTo(2.8 * MM, 15);
    expect(floorSizeDepth(0.5 * MM)).toBeCloseTo(0.4 * MM, 15);
  });
});
