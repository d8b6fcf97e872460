import { expect, test } from 'vitest';
import { cutCurves, mainCurve, splitCurve, stretchNear } from '#src/picture/cavity/contour.ts';
import { crackStrokes } from '#src/picture/cavity/cracks.ts';
import { boxPocket, bricksOf, type FieldSize, sphereCap } from '../../support/synthetic-bricks.ts';

const SIZE: FieldSize = { nx: 160, ny: 80, nz: 80, pitch: 10e-6 };
const RADIUS = 0.36e-3;

// As for the lines of sight: the ramp's ends bend the curve by up to 0.06 pitch.
test('the cut of half a ball is one open line whose sunken part lies on the circle', () => {
  const curves = cutCurves(bricksOf(sphereCap(RADIUS), SIZE), 0);
  expect(curves.length).toBe(1);
  const main = mainCurve(curves);
  expect(main?.closed).toBe(false);
  main?.x.forEach((x, n) => {
    const z = main.z[n] as number;
    if (z > 2 * SIZE.pitch) expect(Math.abs(Math.hypot(x, z) - RADIUS)).toBeLessThan(0.1 * SIZE.pitch);
  });
});

test('the line goes from left to right, so work lies to its right: the area under it is the half disc removed', () => {
  const main = mainCurve(cutCurves(bricksOf(sphereCap(RADIUS), SIZE), 0));
  if (main === undefined) throw new Error('no line');
  let area = 0;
  for (let n = 0; n + 1 < main.x.length; n++) {
    area +=
      (((main.z[n] as number) + (main.z[n + 1] as number)) / 2) * ((main.x[n + 1] as number) - (main.x[n] as number));
  }
  // polygon inscribed in the circle and corners rounded at the rim by one voxel: 0.5 %
  expect(Math.abs(area / ((Math.PI * RADIUS * RADIUS) / 2) - 1)).toBeLessThan(0.005);
});

test('a hollow inside the work is a closed curve of its own', () => {
  const hollow = bricksOf((x, y, z) => Math.hypot(x, y, z - 0.4e-3) - 0.1e-3, SIZE);
  const curves = cutCurves(hollow, 0);
  expect(curves.map((curve) => curve.closed).sort()).toEqual([false, true]);
});

test('a straight pocket splits into two walls at half its length and a floor at its depth', () => {
  const [length, depth] = [1.0e-3, 0.5e-3];
  const main = mainCurve(cutCurves(bricksOf(boxPocket(length, 0.4e-3, depth), SIZE), 0));
  if (main === undefined) throw new Error('no line');
  const parts = splitCurve(main, depth);
  if (parts === undefined) throw new Error('no floor');
  const halfway = (wall: Float64Array): number => {
    for (let n = 0; n < wall.length; n += 2) if ((wall[n + 1] as number) > 0.5 * depth) return wall[n] as number;
    return Number.NaN;
  };
  expect(halfway(parts.left)).toBeCloseTo(-length / 2, 7);
  expect(halfway(parts.right)).toBeCloseTo(length / 2, 7);
  const middle = 2 * Math.floor(parts.floor.length / 4);
  expect(parts.floor[middle + 1]).toBeCloseTo(depth, 7);
  const near = stretchNear(main, length / 2, depth, 50e-6);
  for (let n = 0; n < near.length; n += 2) {
    expect(Math.hypot((near[n] as number) - length / 2, (near[n + 1] as number) - depth)).toBeLessThan(60e-6);
  }
});

// Strokes are 0.75 +- 0.25 of the damaged way, which is whole voxels and at most one voxel long along a leaning stroke.
test('strokes of cracks start on the cut and end within the damaged work', () => {
  const reach = 45e-6;
  const field = bricksOf(boxPocket(1.0e-3, 0.4e-3, 0.4e-3), SIZE, {
    reach: 60e-6,
    damage: (_x, _y, _z, beneath) => (beneath < reach ? 200 : 0),
  });
  const main = mainCurve(cutCurves(field, 0));
  if (main === undefined) throw new Error('no line');
  const strokes = crackStrokes(field, main, 0);
  expect(strokes.length / 4).toBeGreaterThan(20);
  for (let n = 0; n < strokes.length; n += 4) {
    const [, , x, z] = strokes.slice(n, n + 4) as unknown as [number, number, number, number];
    const out = Math.max(Math.abs(x) - 0.5e-3, z - 0.4e-3);
    expect(out).toBeGreaterThan(0);
    expect(out).toBeLessThan(reach + SIZE.pitch);
  }
});
