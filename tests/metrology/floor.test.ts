import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { HeightField } from '#src/base/field.ts';
import { makeOutline, nearest, type OutlineSpec } from '#src/base/outline.ts';
import { FLATNESS_S_FILTER, floorDepth, floorFlatness, insideOutline } from '#src/metrology/floor.ts';
import { hullCells, minimumZone, type SpacePoints } from '#src/metrology/minimum-zone.ts';
import { normalSource, uniformSource } from './random.ts';

const MM = 1e-3;
const UM = 1e-6;

function cloud(seed: number, n: number, thickness: number, tilt: readonly [number, number] = [0, 0]): SpacePoints {
  const uniform = uniformSource(seed);
  const x = new Float64Array(n).map(() => uniform());
  const y = new Float64Array(n).map(() => uniform());
  const z = x.map((value, i) => thickness * uniform() + tilt[0] * value + tilt[1] * y[i]);
  return { x, y, z };
}

type Vector = [number, number, number];

function cross(a: Vector, b: Vector): Vector {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}

/**
 * Width of a point set by trial of every pair of directions between points: the closest pair of parallel planes touches
 * three points with one of them, or two with each (width of a convex body, from memory), and in both cases its normal is
 * square to two such directions.
 */
function bruteForceWidth({ x, y, z }: SpacePoints): number {
  const directions: Vector[] = [];
  for (let i = 0; i < x.length; i++) {
    for (let j = 0; j < i; j++) directions.push([x[i] - x[j], y[i] - y[j], z[i] - z[j]]);
  }
  let least = Number.POSITIVE_INFINITY;
  for (let a = 0; a < directions.length; a++) {
    for (let b = 0; b < a; b++) {
      const normal = cross(directions[a], directions[b]);
      const length = Math.hypot(...normal);
      if (length < 1e-12) continue;
      let low = Number.POSITIVE_INFINITY;
      let high = Number.NEGATIVE_INFINITY;
      for (let k = 0; k < x.length; k++) {
        const off = (normal[0] * x[k] + normal[1] * y[k] + normal[2] * z[k]) / length;
        low = Math.min(low, off);
        high = Math.max(high, off);
      }
      least = Math.min(least, high - low);
    }
  }
  return least;
}

function makeField(nx: number, ny: number, d: number, f: (x: number, y: number) => number): HeightField {
  const x0 = (-(nx - 1) / 2) * d;
  const y0 = (-(ny - 1) / 2) * d;
  const z = new Float64Array(nx * ny).map((_, k) => f(x0 + (k % nx) * d, y0 + Math.floor(k / nx) * d));
  return { nx, ny, dx: d, dy: d, x0, y0, z };
}

describe('the minimum zone (ISO 1101 flatness)', () => {
  it('equals the width found by trying every pair of planes', () => {
    for (let seed = 1; seed <= 25; seed++) {
      const points = cloud(seed, 4 + (seed % 9), seed % 2 ? 0.02 : 0.1, [0.3 * (seed % 3), -0.1]);
      expect(minimumZone(points).width).toBeCloseTo(bruteForceWidth(points), 13);
    }
  });

  it('equals it on a grid, where many points share a line', () => {
    for (let seed = 1; seed <= 12; seed++) {
      const uniform = uniformSource(seed);
      const field = makeField(4, 3, 1, () => 1e-5 * Math.round(4 * uniform()));
      const points = hullCells(field);
      const found = minimumZone(points).width;
      const all = {
        x: new Float64Array(12).map((_, k) => field.x0 + (k % 4)),
        y: new Float64Array(12).map((_, k) => field.y0 + Math.floor(k / 4)),
        z: Float64Array.from(field.z),
      };
      // planes alike along z may differ by their slopes squared, (4e-5)^2
      expect(Math.abs(found / bruteForceWidth(all) - 1)).toBeLessThan(2e-9);
    }
  });

  it('holds every point between its planes', () => {
    const points = cloud(77, 3000, 0.05, [0.1, 0.2]);
    const zone = minimumZone(points);
    const square = Math.sqrt(1 + zone.slopeX ** 2 + zone.slopeY ** 2);
    let most = 0;
    points.z.forEach((z, i) => {
      const off = z - zone.level - zone.slopeX * points.x[i] - zone.slopeY * points.y[i];
      most = Math.max(most, Math.abs(off) / square);
    });
    expect(most).toBeCloseTo(zone.width / 2, 12);
  });

  it('is no larger than the zone about the least-squares plane, and does not change with a tilt', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 10_000 }), (seed) => {
        const flat = cloud(seed, 60, 1e-4);
        const tilted = { ...flat, z: flat.z.map((z, i) => z + 1e-4 * flat.x[i] - 2e-4 * flat.y[i] - 3) };
        const range = flat.z.reduce((a, b) => Math.max(a, b)) - flat.z.reduce((a, b) => Math.min(a, b));
        const width = minimumZone(flat).width;
        expect(width).toBeLessThanOrEqual(range * (1 + 1e-12));
        // tilting by slopes t is a rotation to t^2/2 = 2.5e-8
        expect(Math.abs(minimumZone(tilted).width / width - 1)).toBeLessThan(1e-6);
      }),
      { seed: 1101, numRuns: 50 },
    );
  });

  it('of a plane is zero and of three points too', () => {
    const points = cloud(5, 200, 0, [0.2, -0.4]);
    expect(minimumZone(points).width).toBeLessThan(1e-15);
    expect(minimumZone(cloud(6, 3, 1)).width).toBeLessThan(1e-15);
  });

  it('of points on one line or of two points is refused', () => {
    const x = Float64Array.of(0, 1, 2, 3);
    expect(() => minimumZone({ x, y: x, z: x })).toThrow(RangeError);
    expect(() => minimumZone({ x: x.slice(0, 2), y: x.slice(0, 2), z: x.slice(0, 2) })).toThrow(RangeError);
  });

  it('loses nothing when only the hull of each row is kept', () => {
    const normal = normalSource(30);
    const field = makeField(60, 40, 1 * UM, (x, y) => (x * y > 4e-10 ? Number.NaN : 1e-8 * normal()));
    const kept = hullCells(field);
    const all = { x: [] as number[], y: [] as number[], z: [] as number[] };
    field.z.forEach((z, k) => {
      if (Number.isNaN(z)) return;
      all.x.push(field.x0 + (k % 60) * UM);
      all.y.push(field.y0 + Math.floor(k / 60) * UM);
      all.z.push(z);
    });
    const every = { x: Float64Array.from(all.x), y: Float64Array.from(all.y), z: Float64Array.from(all.z) };
    expect(kept.x.length).toBeLessThan(every.x.length / 2);
    expect(Math.abs(minimumZone(kept).width / minimumZone(every).width - 1)).toBeLessThan(1e-11);
  });
});

describe('the floor', () => {
  const shapes: readonly OutlineSpec[] = [
    { kind: 'circle', diameter: 2 * MM },
    { kind: 'ring', outerDiameter: 2 * MM, innerDiameter: 0.8 * MM },
    { kind: 'rectangle', length: 2 * MM, width: 1.2 * MM, cornerRadius: 0.1 * MM },
    { kind: 'slot', length: 2 * MM, width: 0.7 * MM },
    { kind: 'regularPolygon', sides: 5, acrossFlats: 1.4 * MM, cornerRadius: 0 },
  ];

  it.each(shapes)('inside a $kind less the margin is what a look at every cell says', (spec) => {
    const outline = makeOutline(spec);
    const margin = 0.11 * MM;
    const field = makeField(120, 110, 20 * UM, () => 1);
    const found = insideOutline(field, outline, margin).z;
    let wrong = 0;
    found.forEach((z, k) => {
      const off = nearest(outline, field.x0 + (k % 120) * field.dx, field.y0 + Math.floor(k / 120) * field.dy);
      if (Number.isFinite(z) !== off.distance <= -margin) wrong++;
    });
    expect(wrong).toBe(0);
  });

  it('that is a paraboloid of sag h is flat to h, whatever its tilt, less what the S-filter rounds', () => {
    const sag = 10 * UM;
    const radius = 1 * MM;
    const outline = makeOutline({ kind: 'circle', diameter: 2 * radius });
    const field = makeField(201, 201, 10 * UM, (x, y) => (sag * (x * x + y * y)) / radius ** 2 - 3 * MM + 0.01 * x);
    const floor = insideOutline(field, outline, 0);
    const { flatness, sFilter, slopeX } = floorFlatness(floor);
    expect(sFilter).toBe(FLATNESS_S_FILTER);
    // at the rim the filter averages one-sided over some alpha 0.08/(2 pi) ... 15 um: 2 x 15 um/1 mm x 10 um x 0.8 = 0.25 um
    expect(Math.abs(flatness - sag)).toBeLessThan(0.4 * UM);
    expect(slopeX).toBeCloseTo(0.01, 4);
  });

  it('loses craters shorter than the S-filter and keeps waves longer than it', () => {
    const wave = (length: number) =>
      floorFlatness(makeField(161, 41, 10 * UM, (x) => UM * Math.cos((2 * Math.PI * x) / length))).flatness / (2 * UM);
    // 2^-(cutoff/wavelength)^2 inside: 0.0625 at half the cutoff, 0.99 at ten cutoffs; ends renormalised add a little
    expect(wave(0.04 * MM)).toBeLessThan(0.2);
    expect(wave(0.8 * MM)).toBeGreaterThan(0.97);
    expect(wave(0.8 * MM)).toBeLessThan(1);
  });

  it('says when the cells are too coarse for the filter and measures without it', () => {
    const field = makeField(21, 21, 50 * UM, (x) => (x > 0 ? UM : 0));
    const found = floorFlatness(field);
    expect(found.sFilter).toBeUndefined();
    expect(found.cells).toBe(441);
    // a step of a micrometre across: the zone may tilt, but not below half of it
    expect(found.flatness).toBeGreaterThan(0.5 * UM);
    expect(found.flatness).toBeLessThanOrEqual(UM);
  });

  it('is as deep as its mean, with its plane', () => {
    const field = makeField(50, 40, 10 * UM, (x, y) => -2 * MM + 1e-3 * x - 2e-3 * y);
    const found = floorDepth(field, 0.5 * MM);
    expect(found.mean).toBeCloseTo(2.5 * MM, 12);
    expect(found.plane.slopeX).toBeCloseTo(1e-3, 12);
    expect(found.plane.slopeY).toBeCloseTo(-2e-3, 12);
    expect(found.deepest - found.shallowest).toBeCloseTo(1e-3 * 0.49 * MM + 2e-3 * 0.39 * MM, 12);
    expect(() => floorDepth({ ...field, z: new Float64Array(2000).fill(Number.NaN) })).toThrow(RangeError);
  });
});
