import { expect, test } from 'vitest';
import { curveLine, curveLines, cutCurves, mainCurve, splitCurve } from '#src/picture/cavity/contour.ts';
import { makeGrid } from '#src/picture/cavity/grid.ts';
import { render } from '#src/picture/cavity/render.ts';
import { cavityBounds, fitView, toPicture } from '#src/picture/cavity/view.ts';
import { LIGHT, rgbOf } from '#src/picture/palette.ts';
import { openAt, strokesAbove } from '#src/picture/through.ts';
import {
  bricksOf,
  type FieldSize,
  type Form,
  moved,
  roundHole,
  throughHole,
  together,
} from '../../support/synthetic-bricks.ts';

const SIZE: FieldSize = { nx: 120, ny: 120, nz: 56, pitch: 10e-6 };
const [RADIUS, THICKNESS, CHIP] = [0.35e-3, 0.4e-3, 80e-6];
const HOLE = { radius: RADIUS, thickness: THICKNESS, exitChip: CHIP };
/** Air beneath the plate, as the cut stores it; and work that ends at the plate's face, as a cut into a backing might. */
const PIERCED = bricksOf(throughHole(HOLE, false), SIZE);
const BACKED = bricksOf(throughHole(HOLE, true), { ...SIZE, nz: 40 });
const ENDS = { from: -0.6e-3, to: 0.6e-3 };

const lineOf = (field: typeof PIERCED) => {
  const main = mainCurve(cutCurves(field, 0, makeGrid(field), THICKNESS));
  if (main === undefined) throw new Error('no line');
  return main;
};

// The far face is where the drawing says, not where the voxels end: to the last digit.
test.each([
  ['air', PIERCED],
  ['a backing', BACKED],
] as const)('the cut line of a hole over %s runs along the far face and not beyond it', (_name, field) => {
  const main = lineOf(field);
  expect(Math.max(...main.z)).toBe(THICKNESS);
  const split = splitCurve(main, THICKNESS);
  expect(split).toBeDefined();
  const { lines, face } = strokesAbove([ENDS.from, 0, ...curveLine(main), ENDS.to, 0], THICKNESS, ENDS);
  expect(lines.length).toBe(2);
  expect(face.length).toBe(2);
  // the chip is on the right: its width is beyond the hole's radius, to 1.5 voxels
  expect(Math.abs((face[0]?.to ?? 0) + RADIUS)).toBeLessThan(1.5 * SIZE.pitch);
  expect(Math.abs((face[1]?.from ?? 0) - RADIUS - CHIP)).toBeLessThan(1.5 * SIZE.pitch);
});

test('half way down, the hole is open over its diameter to a tenth of a voxel', () => {
  const [chord, ...more] = openAt([curveLine(lineOf(PIERCED))], THICKNESS / 2, 2 * SIZE.pitch);
  expect(more).toEqual([]);
  expect(Math.abs((chord?.to ?? 0) - (chord?.from ?? 0) - 2 * RADIUS)).toBeLessThan(0.1 * SIZE.pitch);
});

test('the wall left between two holes is work from face to face', () => {
  const two = [-0.3e-3, 0.3e-3].map((x) => moved(roundHole(0.2e-3, 2 * THICKNESS), x, 0));
  const plate = bricksOf((x, y, z) => Math.min(together(...two)(x, y, z), THICKNESS - z), SIZE);
  const line = curveLine(lineOf(plate));
  expect(openAt([line], THICKNESS / 2, 2 * SIZE.pitch).length).toBe(2);
  const { lines, face } = strokesAbove([ENDS.from, 0, ...line, ENDS.to, 0], THICKNESS, ENDS);
  expect(lines.length).toBe(3);
  expect(face.map(({ from, to }) => Math.round((from + to) / 2e-4))).toEqual([-6, 0, 6].map((x) => x - Math.sign(x)));
});

// Exit chips that meet leave the wall between two holes hanging above the far face: a line of its own.
test('a wall between two holes that ends above the far face is a piece of work apart, and closes the holes as before', () => {
  const two = [-0.3e-3, 0.3e-3].map((x) => moved(roundHole(0.2e-3, 2 * THICKNESS), x, 0));
  const web: Form = (x, y, z) => Math.max(Math.abs(x) - 0.15e-3, Math.abs(y) - 0.3e-3, 0.3e-3 - z);
  const plate = bricksOf((x, y, z) => Math.min(together(...two, web)(x, y, z), THICKNESS - z), SIZE);
  const main = lineOf(plate);
  expect(main.loose?.length).toBe(1);
  const lines = curveLines(main);
  expect(openAt(lines, THICKNESS / 2, 2 * SIZE.pitch).length).toBe(2);
  expect(openAt(lines.slice(0, 1), THICKNESS / 2, 2 * SIZE.pitch).length).toBe(1);
});

test('the removed work of a hole ends at the far face', () => {
  const bounds = cavityBounds(PIERCED, THICKNESS);
  expect(bounds?.depth).toBeCloseTo(THICKNESS, 12);
  expect((bounds?.xMax ?? 0) - RADIUS - CHIP).toBeLessThan(1.5 * SIZE.pitch);
});

const BOUNDS = { xMin: -0.5e-3, xMax: 0.5e-3, yMin: -0.4e-3, yMax: 0.4e-3, depth: THICKNESS };
const VIEW = fitView({ width: 160, height: 130 }, BOUNDS, { left: 20, right: 20, top: 10, bottom: 30 }, 0);

function seen(field: typeof PIERCED, backing: number, at: { px: number; py: number }): number[] {
  const { data, width } = render(field, VIEW, { thickness: THICKNESS, through: { backing } });
  const from = 4 * (Math.floor(at.py) * width + Math.floor(at.px));
  return [data[from], data[from + 1], data[from + 2]] as number[];
}

// A line of sight through (0, z) of the cut face meets the far wall at depth z + rise RADIUS; z = 0.35 mm passes under it.
test('paper shows through a hole, its far wall above, and paper beneath the plate', () => {
  const through = toPicture(VIEW, 0, 0, 0.35e-3);
  const wall = toPicture(VIEW, 0, 0, 0.1e-3);
  const beneath = toPicture(VIEW, -0.45e-3, 0, THICKNESS + 30e-6);
  expect(seen(PIERCED, 0, through)).toEqual([...rgbOf(LIGHT.paper)]);
  expect(seen(PIERCED, 0, beneath)).toEqual([...rgbOf(LIGHT.paper)]);
  expect(seen(PIERCED, 0, wall)).not.toEqual([...rgbOf(LIGHT.paper)]);
});

test.each([
  ['stored as air', PIERCED],
  ['stored as work', BACKED],
] as const)(
  'a backing %s closes the hole with its own shaded tone, and shows beneath the plate flat',
  (_name, field) => {
    const tone = rgbOf(LIGHT.plotGround);
    const inside = seen(field, 60e-6, toPicture(VIEW, 0, 0, 0.35e-3));
    expect(inside).not.toEqual([...rgbOf(LIGHT.paper)]);
    // one tone made darker: channels keep their ratio, bytes are rounded
    const share = (inside[0] as number) / tone[0];
    inside.forEach((channel, c) => {
      expect(Math.abs(channel - share * (tone[c] as number))).toBeLessThan(1.5);
    });
    expect(seen(field, 60e-6, toPicture(VIEW, -0.45e-3, 0, THICKNESS + 30e-6))).toEqual([...tone]);
  },
);
