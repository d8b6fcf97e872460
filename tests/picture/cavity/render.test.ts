import { expect, test } from 'vitest';
import { makeGrid } from '#src/picture/cavity/grid.ts';
import { makeOccluders, openness } from '#src/picture/cavity/occlusion.ts';
import { type Picture, render, renderSteps } from '#src/picture/cavity/render.ts';
import { fitView, toPicture } from '#src/picture/cavity/view.ts';
import { cividis } from '#src/picture/cividis.ts';
import { LIGHT, rgbOf } from '#src/picture/palette.ts';
import { ALL_EMPTY, ALL_SOLID, BRICK_VOXELS, type BrickField } from '#src/voxel/bricks.ts';
import { boxPocket, bricksOf, type FieldSize, pocketForm } from '../../support/synthetic-bricks.ts';

const SIZE: FieldSize = { nx: 160, ny: 160, nz: 56, pitch: 10e-6 };
const [LENGTH, WIDTH, DEPTH] = [1.0e-3, 0.8e-3, 0.4e-3];
const BOX = bricksOf(boxPocket(LENGTH, WIDTH, DEPTH), SIZE);
const BOUNDS = { xMin: -LENGTH / 2, xMax: LENGTH / 2, yMin: -WIDTH / 2, yMax: WIDTH / 2, depth: DEPTH };
const VIEW = fitView({ width: 200, height: 150 }, BOUNDS, { left: 25, right: 25, top: 15, bottom: 30 }, 0);

function rgbAt(data: Uint8ClampedArray, width: number, px: number, py: number): number[] {
  const at = 4 * (Math.floor(py) * width + Math.floor(px));
  return [data[at], data[at + 1], data[at + 2]] as number[];
}

function sameBytes(a: Picture, b: Picture): boolean {
  return Buffer.from(a.data.buffer).equals(Buffer.from(b.data.buffer));
}

/** The same work with every brick stored. */
function stored(field: BrickField): BrickField {
  const count = field.table.length;
  const solid = new Uint8Array(count * BRICK_VOXELS);
  field.table.forEach((entry, brick) => {
    const at = brick * BRICK_VOXELS;
    if (entry === ALL_SOLID) solid.fill(255, at, at + BRICK_VOXELS);
    else if (entry !== ALL_EMPTY) solid.set(field.solid.subarray(entry * BRICK_VOXELS, (entry + 1) * BRICK_VOXELS), at);
  });
  const none = new Uint8Array(count * BRICK_VOXELS);
  return { ...field, table: Int32Array.from({ length: count }, (_, n) => n), count, solid, damage: none, age: none };
}

const ROUGH = bricksOf(
  pocketForm({ diameter: 1.0e-3, depth: 0.35e-3, taper: 0.02, cornerRadius: 40e-6, seed: 3 }),
  SIZE,
);

test('leaping over empty and solid bricks changes no byte: the picture is that of the field with every brick stored', () => {
  expect(sameBytes(render(stored(ROUGH), VIEW), render(ROUGH, VIEW))).toBe(true);
});

test('the same field gives the same bytes, whole or a few rows at a time', () => {
  const steps = renderSteps(ROUGH, VIEW, { rows: 3 });
  let step = steps.next();
  let last = -1;
  while (!step.done) {
    expect(step.value).toBeGreaterThanOrEqual(last);
    last = step.value;
    step = steps.next();
  }
  expect(sameBytes(step.value, render(ROUGH, VIEW))).toBe(true);
});

test('the cut face is the glass tone and the entry face its own, flat to the byte', () => {
  const { data, width } = render(BOX, VIEW);
  const cut = toPicture(VIEW, 0, 0, DEPTH + 60e-6);
  const entry = toPicture(VIEW, 0, WIDTH / 2 + 60e-6, 0);
  expect(rgbAt(data, width, cut.px, cut.py)).toEqual([...rgbOf(LIGHT.glass)]);
  expect(rgbAt(data, width, entry.px, entry.py)).toEqual([...rgbOf(LIGHT.glassTop)]);
});

test('the block runs off both sides: entry face above and cut face below its line to the very edge of the picture', () => {
  const { data, width } = render(BOX, VIEW);
  const line = toPicture(VIEW, 0, 0, 0).py;
  for (const px of [0, width - 1]) {
    expect(rgbAt(data, width, px, line - 4)).toEqual([...rgbOf(LIGHT.glassTop)]);
    expect(rgbAt(data, width, px, line + 4)).toEqual([...rgbOf(LIGHT.glass)]);
  }
});

// The darkness of a column through the entry face line adds up to the line's width; the ground changes from one tone to
// another beneath it, so the darkness of each pixel is taken against the nearer tone: good to 0.1 px.
test.each([1, 1.5])('the cut outline is 1.7 px wide at unit %d', (unit) => {
  const { data, width } = render(BOX, VIEW, { unit });
  const line = toPicture(VIEW, 0, 0, 0).py;
  const [ink] = rgbOf(LIGHT.ink);
  let sum = 0;
  for (let py = Math.floor(line) - 5; py <= Math.floor(line) + 5; py++) {
    const ground = rgbOf(py + 0.5 < line ? LIGHT.glassTop : LIGHT.glass)[0];
    sum += (ground - (rgbAt(data, width, 5, py)[0] as number)) / (ground - ink);
  }
  expect(Math.abs(sum - 1.7 * unit)).toBeLessThan(0.15);
});

test('paper shows below a work of given thickness', () => {
  const { data, width } = render(BOX, VIEW, { thickness: DEPTH + 40e-6 });
  const under = toPicture(VIEW, 0, 0, DEPTH + 70e-6);
  expect(rgbAt(data, width, under.px, under.py)).toEqual([...rgbOf(LIGHT.paper)]);
});

// Lambert: floor and right wall face the light, the left wall does not.
test('the light comes from the upper left: the wall at the right is brighter than the wall at the left', () => {
  const round = bricksOf((x, y, z) => Math.max(Math.sqrt(x * x + y * y) - 0.5e-3, z - 0.4e-3), SIZE);
  const { data, width } = render(round, VIEW);
  const bright = (x: number): number => {
    const at = toPicture(VIEW, x, Math.sqrt(0.25e-6 - x * x), 0.2e-3);
    return rgbAt(data, width, at.px, at.py)[0] as number;
  };
  expect(bright(0.4e-3)).toBeGreaterThan(bright(-0.4e-3) + 20);
});

test('an open face sees the whole sky and the foot of a wall less, the less the nearer', () => {
  const grid = makeGrid(BOX);
  const occluders = makeOccluders(grid, 0);
  const up = Float64Array.of(0, 0, -1);
  const face = 8 - 0.5;
  expect(openness(occluders, 8 + 5, 8 + 90, face, up)).toBe(1);
  const floor = face + DEPTH / SIZE.pitch;
  const behind = 8 + 80 - 0.5 + WIDTH / 2 / SIZE.pitch;
  const open = [1, 5, 12, 25].map((away) => openness(occluders, 8 + 80, behind - away, floor, up));
  for (let n = 1; n < open.length; n++) expect(open[n]).toBeGreaterThan(open[n - 1] as number);
  expect(open[0]).toBeLessThan(0.75);
});

// A map colour is only made lighter or darker, by 0.14 to 1.14: its channels keep their ratio. Bytes are rounded and
// red may reach 255, hence green and blue within 1 %.
test('a depth map colours the floor with the colour of its depth, shaded and no more', () => {
  const high = 1e-3;
  const { data, width } = render(BOX, VIEW, { shading: { kind: 'depth', high } });
  const at = toPicture(VIEW, 0.1e-3, WIDTH / 4, DEPTH);
  const [, green, blue] = rgbAt(data, width, at.px, at.py) as [number, number, number];
  const [, wantedGreen, wantedBlue] = cividis(DEPTH / high);
  expect(Math.abs(green / blue / (wantedGreen / wantedBlue) - 1)).toBeLessThan(0.01);
  expect(green / wantedGreen).toBeGreaterThan(0.14);
  expect(green / wantedGreen).toBeLessThanOrEqual(1.14 + 1 / wantedGreen);
});

test('a damage map reads the depth of damage beneath the floor, to a voxel', () => {
  const damaged = bricksOf(boxPocket(LENGTH, WIDTH, DEPTH), SIZE, {
    reach: 60e-6,
    damage: (_x, _y, _z, beneath) => (beneath < 40e-6 ? 255 : 0),
  });
  const high = 80e-6;
  const { data, width } = render(damaged, VIEW, { shading: { kind: 'damage', high } });
  const at = toPicture(VIEW, 0.1e-3, WIDTH / 4, DEPTH);
  const [red, green, blue] = rgbAt(data, width, at.px, at.py) as [number, number, number];
  const ratio = (share: number): number => {
    const colour = cividis(share);
    return colour[0] / colour[2];
  };
  expect(green).toBeGreaterThan(0);
  expect(red / blue).toBeGreaterThan(ratio((40e-6 - SIZE.pitch) / high) * 0.98);
  expect(red / blue).toBeLessThan(ratio((40e-6 + SIZE.pitch) / high) * 1.02);
});
