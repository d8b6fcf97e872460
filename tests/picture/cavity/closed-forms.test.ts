import { expect, test } from 'vitest';
import { makeProbe } from '#src/picture/cavity/probe.ts';
import { cavityBounds, fitView, RISE, type SectionView, toPicture } from '#src/picture/cavity/view.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import { boxPocket, bricksOf, cone, type FieldSize, sphereCap } from '../../support/synthetic-bricks.ts';

const SIZE: FieldSize = { nx: 128, ny: 128, nz: 72, pitch: 10e-6 };
const MARGINS = { left: 30, right: 30, top: 20, bottom: 40 };

function viewOf(field: BrickField): SectionView {
  const bounds = cavityBounds(field);
  if (bounds === undefined) throw new Error('nothing removed');
  return fitView({ width: 400, height: 300 }, bounds, MARGINS, 0);
}

/** Every fourth pixel's, every third row's middle. */
function* pixels(view: SectionView): Generator<readonly [number, number]> {
  for (let py = 0.5; py < view.height; py += 3) for (let px = 0.5; px < view.width; px += 4) yield [px, py];
}

const RADIUS = 0.5e-3;

// A ball's surface: x^2 + y^2 + z^2 = R^2. The fraction of the test field is a ramp one pitch wide; cells whose corners
// lie beyond its ends bend the surface by up to 0.06 pitch (found), bytes by 0.004: 0.1 pitch.
test('every line of sight into half a ball ends on the ball, and the point maps back to its own pixel', () => {
  const field = bricksOf(sphereCap(RADIUS), SIZE);
  const view = viewOf(field);
  const probe = makeProbe(field, view);
  let seen = 0;
  for (const [px, py] of pixels(view)) {
    const at = probe(px, py);
    if (at.kind !== 'surface') continue;
    seen++;
    if (at.z > 2 * SIZE.pitch) expect(Math.abs(Math.hypot(at.x, at.y, at.z) - RADIUS)).toBeLessThan(0.1 * SIZE.pitch);
    const back = toPicture(view, at.x, at.y, at.z);
    expect(Math.hypot(back.px - px, back.py - py)).toBeLessThan(1e-6);
  }
  expect(seen).toBeGreaterThan(1500);
});

// The smoothed gradient reaches 2 voxels, a bend of 2 pitch / R = 2.3 degrees, and a ramp one voxel wide sampled once a
// voxel ripples by some degrees (5.7 at worst, 1.9 in the mean found): 7 everywhere, 2.5 in the mean.
test('normals of half a ball point to its middle', () => {
  const field = bricksOf(sphereCap(RADIUS), SIZE);
  const view = viewOf(field);
  const probe = makeProbe(field, view);
  const angles: number[] = [];
  for (const [px, py] of pixels(view)) {
    const { kind, x, y, z, normal } = probe(px, py);
    if (kind !== 'surface' || z < 4 * SIZE.pitch) continue;
    const cosine = -(normal[0] * x + normal[1] * y + normal[2] * z) / Math.hypot(x, y, z);
    angles.push((Math.acos(Math.min(1, cosine)) * 180) / Math.PI);
  }
  expect(Math.max(...angles)).toBeLessThan(7);
  expect(angles.reduce((a, b) => a + b) / angles.length).toBeLessThan(2.5);
});

// On the cut face (at true scale) work is where x^2 + z^2 > R^2: wrong nowhere but within half a pixel of the circle.
test('the cut face of half a ball ends at the circle to half a pixel', () => {
  const field = bricksOf(sphereCap(RADIUS), SIZE);
  const view = viewOf(field);
  const probe = makeProbe(field, view);
  for (const [px, py] of pixels(view)) {
    const x = view.left + px * view.pixel;
    const z = view.top + py * view.pixel;
    const beyond = (Math.hypot(x, z) - RADIUS) / view.pixel;
    if (z < 0 || Math.abs(beyond) < 0.5) continue;
    expect(probe(px, py).kind === 'cut').toBe(beyond > 0);
  }
});

// The rim x^2 + y^2 = R^2 rises at 0.5: an ellipse of half height R/2 above the entry face. The edge of the rim is as
// sharp as the voxels: 0.7 pitch or a pixel, whichever is more.
test('the far rim of half a ball is an ellipse of half its height', () => {
  const field = bricksOf(sphereCap(RADIUS), SIZE);
  const view = viewOf(field);
  const probe = makeProbe(field, view);
  const b = RISE * RADIUS;
  for (const [px, py] of pixels(view)) {
    const x = view.left + px * view.pixel;
    const down = view.top + py * view.pixel;
    if (down > 0) continue;
    const level = Math.hypot(x / RADIUS, down / b);
    const slope = Math.hypot(x / RADIUS ** 2, down / b ** 2) / Math.max(level, 1e-9);
    const outside = (level - 1) / slope;
    if (Math.abs(outside) < Math.max(view.pixel, 0.7 * SIZE.pitch)) continue;
    expect(probe(px, py).kind === 'entry').toBe(outside > 0);
  }
});

// Lean of the wall: normal (-cos a, 0, -sin a) outwards with tan a = radius/depth, the same all over.
test('a cone has one slope: normals hold their angle to the axis within 4 degrees', () => {
  const depth = 0.6e-3;
  const field = bricksOf(cone(RADIUS, depth), SIZE);
  const view = viewOf(field);
  const probe = makeProbe(field, view);
  const up = RADIUS / Math.hypot(RADIUS, depth);
  for (const [px, py] of pixels(view)) {
    const { kind, x, y, z, normal } = probe(px, py);
    if (kind !== 'surface' || z < 4 * SIZE.pitch || z > depth - 6 * SIZE.pitch) continue;
    const error = Math.acos(-normal[2]) - Math.acos(up);
    expect(Math.abs(error) * (180 / Math.PI)).toBeLessThan(4);
    expect(Math.abs(Math.hypot(x, y) - RADIUS * (1 - z / depth))).toBeLessThan(0.15 * SIZE.pitch);
  }
});

test('a box shows its floor, its back wall and nothing else, each where it lies', () => {
  const [length, width, depth] = [1.0e-3, 0.8e-3, 0.4e-3];
  const field = bricksOf(boxPocket(length, width, depth), SIZE);
  const view = viewOf(field);
  const probe = makeProbe(field, view);
  const edge = 2 * SIZE.pitch;
  for (const [px, py] of pixels(view)) {
    const { kind, x, y, z, normal } = probe(px, py);
    if (kind !== 'surface' || Math.abs(x) > length / 2 - edge || z < edge) continue;
    if (y < width / 2 - edge) {
      expect(Math.abs(z - depth)).toBeLessThan(0.02 * SIZE.pitch);
      expect(-normal[2]).toBeGreaterThan(Math.cos(0.01));
    } else if (z < depth - edge) {
      expect(Math.abs(y - width / 2)).toBeLessThan(0.02 * SIZE.pitch);
      expect(-normal[1]).toBeGreaterThan(Math.cos(0.01));
    }
  }
  // silhouette of the far rim: half the width behind the cut, drawn at half its length
  const { py: rim } = toPicture(view, 0, width / 2, 0);
  const middle = toPicture(view, 0, 0, 0).px;
  expect(probe(middle, rim - 1).kind).toBe('entry');
  expect(probe(middle, rim + 1).kind).toBe('surface');
});

test('a cut away from the axis moves the section: the chord of a ball at y is 2 sqrt(R^2 - y^2)', () => {
  const field = bricksOf(sphereCap(RADIUS), SIZE);
  const yCut = 0.3e-3;
  const view = { ...viewOf(field), yCut };
  const probe = makeProbe(field, view);
  const half = Math.sqrt(RADIUS * RADIUS - yCut * yCut);
  for (const side of [-1, 1]) {
    const edge = toPicture(view, side * half, yCut, 20e-6);
    expect(probe(edge.px + side * 2, edge.py).kind).toBe('cut');
    expect(probe(edge.px - side * 2, edge.py).kind).toBe('surface');
  }
});

test('the bounds of a ball are its radius to a voxel, and of untouched work there are none', () => {
  const bounds = cavityBounds(bricksOf(sphereCap(RADIUS), SIZE));
  expect(bounds?.xMax).toBeGreaterThan(RADIUS - 1.01 * SIZE.pitch);
  expect(bounds?.xMax).toBeLessThanOrEqual(RADIUS + SIZE.pitch);
  expect(bounds?.depth).toBeGreaterThan(RADIUS - 1.01 * SIZE.pitch);
  expect(cavityBounds(bricksOf(() => 1, SIZE))).toBeUndefined();
});
