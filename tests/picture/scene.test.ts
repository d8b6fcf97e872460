import { expect, test } from 'vitest';
import type { OutlineSpec } from '#src/base/outline.ts';
import { type CutSubject, sceneOf, sizesIn } from '#src/picture/scene.ts';

const MM = 1e-3;
const UM = 1e-6;
const JOIN = 20 * UM;

const subject = (more: Partial<CutSubject> = {}): CutSubject => ({
  cavity: { kind: 'circle', diameter: 2 * MM },
  tool: { kind: 'circle', diameter: 1.9 * MM },
  face: { kind: 'flat' },
  bores: [],
  depth: MM,
  ...more,
});

const whole = { depth: MM, entrySize: 2.01 * MM, floorSize: 1.99 * MM, chipDepth: 0 };

/** A cut line with straight walls between the given ends, all to one depth. */
function trenches(spans: readonly (readonly [number, number])[], depth: number): number[] {
  return spans.flatMap(([from, to]) => [from, 0, from, depth, to, depth, to, 0]);
}

const gang = (pitch: number, diameter: number): OutlineSpec => ({
  kind: 'path',
  loops: [-pitch, 0, pitch].map((x) => ({
    x: x + diameter / 2,
    y: 0,
    pieces: [-1, 1].map((side) => ({ kind: 'arc', x: x + (side * diameter) / 2, y: 0, bulge: 1 })),
  })),
});

test('sizes measured all round the cavity are drawn where they are those of its section', () => {
  const sizes = sizesIn(sceneOf(subject()), [trenches([[-0.99 * MM, 0.99 * MM]], MM)], whole, JOIN);
  expect(sizes).toEqual({
    centre: 0,
    extent: { from: -1.005 * MM, to: 1.005 * MM },
    entrySize: 2.01 * MM,
    floorSize: 1.99 * MM,
  });
});

test('of several islands the sizes are those of the first, read off the section', () => {
  const spec = gang(2 * MM, MM);
  const scene = sceneOf(subject({ cavity: spec, tool: gang(2 * MM, 0.9 * MM) }));
  expect(scene.round).toBe(true);
  expect(scene.nominalSize).toBeCloseTo(MM, 8);
  const spans = [-2, 0, 2].map((x) => [(x - 0.52) * MM, (x + 0.5) * MM] as const);
  const sizes = sizesIn(scene, [trenches(spans, MM)], whole, JOIN);
  expect(sizes?.entrySize).toBeCloseTo(1.02 * MM, 9);
  expect(sizes?.floorSize).toBeCloseTo(1.02 * MM, 9);
  expect(sizes?.centres?.map((x) => x / MM)).toEqual([-2, 0, 2].map((x) => expect.closeTo(x, 6)));
});

test('an island that is not open at the depth of the entry size leaves nothing to be drawn', () => {
  const scene = sceneOf(subject({ cavity: gang(2 * MM, MM), tool: gang(2 * MM, 0.9 * MM) }));
  expect(sizesIn(scene, [trenches([[-0.5 * MM, 0.5 * MM]], MM)], whole, JOIN)).toBeUndefined();
});

// w(z) = 2 (d - z) tan(angle / 2): drawn on from two depths to z = 0 exactly, since it is straight.
test('a countersink without walls is as wide at the entry face as its form says', () => {
  const scene = sceneOf(subject({ face: { kind: 'cone', angle: Math.PI / 2 }, depth: 0.9 * MM }));
  // half of 1.9 mm less the depth, above the entry face
  expect(scene.wall).toBeCloseTo(-0.05 * MM, 9);
  expect(scene.nominalSize).toBeCloseTo(1.8 * MM, 9);
  const line = [-0.9 * MM, 0, 0, 0.9 * MM, 0.9 * MM, 0];
  const sizes = sizesIn(scene, [line], { ...whole, depth: 0.9 * MM }, JOIN);
  expect(sizes?.entrySize).toBeCloseTo(1.8 * MM, 12);
  expect(sizes?.floorSize).toBeNaN();
});

test('the exit size is read above the exit chips', () => {
  const scene = sceneOf(subject({ through: MM }));
  const line = [-MM, 0, -0.99 * MM, 0.8 * MM, -1.2 * MM, MM, 1.2 * MM, MM, 0.99 * MM, 0.8 * MM, MM, 0];
  const sizes = sizesIn(scene, [line], { ...whole, floorSize: Number.NaN, exitChipDepth: 0.2 * MM, through: MM }, JOIN);
  // 1.1 chip depths above the face, on a wall that leans by 10 um in 0.8 mm
  expect(Math.abs((sizes?.floorSize ?? 0) - 2 * (MM - (10 * UM * 0.78) / 0.8))).toBeLessThan(1e-9);
});
