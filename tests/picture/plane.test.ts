import fc from 'fast-check';
import { expect, test } from 'vitest';
import { makeOutline, type OutlineSpec, type PathLoop } from '#src/base/outline.ts';
import { chordsAt, islandsAt, sectionPlane } from '#src/picture/plane.ts';

const polygon = (points: readonly (readonly [number, number])[]): PathLoop => {
  const [x, y] = points.at(-1) as readonly [number, number];
  return { x, y, pieces: points.map(([px, py]) => ({ kind: 'line', x: px, y: py })) };
};

const disc = (x: number, y: number, diameter: number): PathLoop => ({
  x: x + diameter / 2,
  y,
  pieces: [-1, 1].map((side) => ({ kind: 'arc', x: x + (side * diameter) / 2, y, bulge: 1 })),
});

const path = (...loops: PathLoop[]): OutlineSpec => ({ kind: 'path', loops });
const MM = 1e-3;

// The planes lie 1e-7 of the height beside the one asked for, where a wall may lean by any angle: 1e-6 of the size.
test('a circle is cut over its chord, 2 sqrt(r^2 - y^2)', () => {
  fc.assert(
    fc.property(fc.double({ min: -0.9, max: 0.9, noNaN: true }), (share) => {
      const chords = chordsAt(makeOutline({ kind: 'circle', diameter: 2 * MM }), share * MM);
      expect(chords.length).toBe(1);
      const [{ from, to }] = chords as [{ from: number; to: number }];
      expect(from).toBeCloseTo(-to, 12);
      expect(Math.abs(to - from - 2 * MM * Math.sqrt(1 - share * share))).toBeLessThan(2e-6 * MM);
    }),
    { seed: 3, numRuns: 100 },
  );
});

test('a plane through vertices counts every crossing once: a square on its corner is cut over its diagonal', () => {
  const diamond = polygon([
    [MM, 0],
    [0, MM],
    [-MM, 0],
    [0, -MM],
  ]);
  const [chord] = chordsAt(makeOutline(path(diamond)), 0);
  expect((chord?.to ?? 0) - (chord?.from ?? 0)).toBeCloseTo(2 * MM, 8);
});

test('a ring is cut twice and is one island', () => {
  const ring = makeOutline({ kind: 'ring', outerDiameter: 2 * MM, innerDiameter: MM });
  expect(chordsAt(ring, 0).length).toBe(2);
  const islands = islandsAt(ring, 0);
  expect(islands.length).toBe(1);
  expect(islands[0]?.to).toBeCloseTo(MM, 8);
});

test.each([
  ['circle', { kind: 'circle', diameter: MM }],
  ['slot', { kind: 'slot', length: 3 * MM, width: MM }],
  ['hexagon', { kind: 'regularPolygon', sides: 6, acrossFlats: MM, cornerRadius: 0 }],
  ['triangle', { kind: 'regularPolygon', sides: 3, acrossFlats: MM, cornerRadius: 0 }],
  ['ring', { kind: 'ring', outerDiameter: 2 * MM, innerDiameter: MM }],
  ['three in a row', path(disc(-2 * MM, 0, MM), disc(0, 0, MM), disc(2 * MM, 0, MM))],
] as const)('the section of a %s is its middle plane', (_name, spec) => {
  expect(sectionPlane(makeOutline(spec))).toBe(0);
});

test('four islands round the middle are cut through the middles of two', () => {
  const gang = makeOutline(path(disc(-MM, -MM, MM), disc(MM, -MM, MM), disc(-MM, MM, MM), disc(MM, MM, MM)));
  const plane = sectionPlane(gang);
  expect(Math.abs(plane)).toBeCloseTo(MM, 12);
  const islands = islandsAt(gang, plane);
  expect(islands.map(({ from, to }) => Math.round((from + to) / 2 / MM))).toEqual([-1, 1]);
  for (const { from, to } of islands) expect(to - from).toBeCloseTo(MM, 8);
});

// The inner wall of the L lies on y = 0: a cut is wider than its drawing, so a plane there would show one thing or another.
test('a plane that would run along a wall moves off it, to where more is cut', () => {
  const ell = makeOutline(
    path(
      polygon([
        [MM, -0.7 * MM],
        [MM, 0],
        [-0.3 * MM, 0],
        [-0.3 * MM, 0.7 * MM],
        [-MM, 0.7 * MM],
        [-MM, -0.7 * MM],
      ]),
    ),
  );
  const plane = sectionPlane(ell);
  expect(plane).toBeLessThan(-0.09 * 1.4 * MM);
  const [chord] = chordsAt(ell, plane);
  expect((chord?.to ?? 0) - (chord?.from ?? 0)).toBeCloseTo(2 * MM, 8);
});
