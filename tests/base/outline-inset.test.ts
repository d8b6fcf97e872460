import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  makeOutline,
  nearest,
  type Outline,
  type OutlineSpec,
  offsetSpec,
  pointAt,
  smallestFeature,
} from '#src/base/outline.ts';
import { checkLoops, orientLoops } from '#src/base/outline-check.ts';
import { insetLoops } from '#src/base/outline-inset.ts';
import { type PathLoop, pathLoops } from '#src/base/outline-path.ts';

const asPath = (spec: OutlineSpec) => makeOutline({ kind: 'path', loops: pathLoops(makeOutline(spec).loops) });

const polygon = (...points: readonly (readonly [number, number])[]): PathLoop => {
  const [x, y] = points[0] as readonly [number, number];
  const rest = [...points.slice(1), [x, y] as const];
  return { x, y, pieces: rest.map(([px, py]) => ({ kind: 'line', x: px, y: py })) };
};

function inset(outline: Outline, distance: number): Outline {
  const loops = insetLoops(outline, distance);
  if (!loops || loops.length === 0) throw new Error('nothing left');
  expect(checkLoops(loops).map(({ fault }) => fault)).toEqual([]);
  return makeOutline({ kind: 'path', loops });
}

/** Largest departure of the moved outline from the distance it was moved by (m). */
function departure(outline: Outline, moved: Outline, distance: number): number {
  let worst = 0;
  for (let k = 0; k < 400; k++) {
    const { x, y } = pointAt(moved, ((k + 0.5) / 400) * moved.perimeter);
    worst = Math.max(worst, Math.abs(nearest(outline, x, y).distance + distance));
  }
  return worst;
}

describe('an outline moved inward as a path', () => {
  // Slivers where tangent pieces meet cost up to the joining of ends, 2e-8 m, of length: 1e-9 of these areas.
  test.each<OutlineSpec>([
    { kind: 'circle', diameter: 3e-3 },
    { kind: 'ring', outerDiameter: 6e-3, innerDiameter: 3.6e-3 },
    { kind: 'rectangle', length: 4e-3, width: 2.5e-3, cornerRadius: 0.3e-3 },
    { kind: 'rectangle', length: 4e-3, width: 2.5e-3, cornerRadius: 0.05e-3 },
    { kind: 'rectangle', length: 4e-3, width: 2.5e-3, cornerRadius: 0 },
    { kind: 'slot', length: 5e-3, width: 1e-3 },
    { kind: 'regularPolygon', sides: 6, acrossFlats: 3e-3, cornerRadius: 0 },
  ])('is the $kind with smaller sizes', (spec) => {
    const moved = inset(asPath(spec), 60e-6);
    const smaller = makeOutline(offsetSpec(spec, -60e-6));
    expect(Math.abs(moved.area / smaller.area - 1)).toBeLessThan(1e-8);
    expect(moved.loops.map(({ hole }) => hole)).toEqual(smaller.loops.map(({ hole }) => hole));
  });

  // Removed: perimeter x d, less d^2 per convex right angle, plus pi/4 d^2 at the re-entrant one, where it runs round.
  test('runs round a re-entrant corner', () => {
    const ell = makeOutline({
      kind: 'path',
      loops: [polygon([0, 0], [4e-3, 0], [4e-3, 2e-3], [2e-3, 2e-3], [2e-3, 4e-3], [0, 4e-3])],
    });
    const d = 0.2e-3;
    const area = 12e-6 - 16e-3 * d + 5 * d * d - (Math.PI / 4) * d * d;
    expect(inset(ell, d).area / area).toBeCloseTo(1, 10);
  });

  test('falls into two where a neck is narrower than twice the distance, and vanishes where everything is', () => {
    const dumbbell = makeOutline({
      kind: 'path',
      loops: [
        polygon(
          [0, 0],
          [2e-3, 0],
          [2e-3, 0.95e-3],
          [3e-3, 0.95e-3],
          [3e-3, 0],
          [5e-3, 0],
          [5e-3, 2e-3],
          [3e-3, 2e-3],
          [3e-3, 1.05e-3],
          [2e-3, 1.05e-3],
          [2e-3, 2e-3],
          [0, 2e-3],
        ),
      ],
    });
    expect(inset(dumbbell, 0.04e-3).loops).toHaveLength(1);
    expect(inset(dumbbell, 0.06e-3).loops).toHaveLength(2);
    expect(insetLoops(dumbbell, 1.01e-3)).toEqual([]);
  });

  test('lies at the distance all along, whatever the polygon', () => {
    const corner = fc.tuple(fc.double({ min: 0.4, max: 1, noNaN: true }), fc.double({ min: 0.1, max: 1, noNaN: true }));
    let moved = 0;
    fc.assert(
      fc.property(
        fc.array(corner, { minLength: 3, maxLength: 14 }),
        fc.integer({ min: 20, max: 200 }),
        (corners, um) => {
          const sum = corners.reduce((total, [, turn]) => total + turn, 0);
          let angle = 0;
          // corners in order round the origin: a star, which never crosses itself
          const points = corners.map(([radius, turn]) => {
            angle += (turn / sum) * 2 * Math.PI;
            return [3e-3 * radius * Math.cos(angle), 3e-3 * radius * Math.sin(angle)] as const;
          });
          const loops = orientLoops([polygon(...points)]);
          if (checkLoops(loops).length > 0) return;
          const outline = makeOutline({ kind: 'path', loops });
          const result = insetLoops(outline, um * 1e-6);
          expect(result).toBeDefined();
          if (!result || result.length === 0) return;
          moved++;
          expect(departure(outline, makeOutline({ kind: 'path', loops: result }), um * 1e-6)).toBeLessThan(1e-8);
        },
      ),
      { seed: 21, numRuns: 400, endOnFailure: true },
    );
    expect(moved).toBeGreaterThan(300);
  });

  test('is moved by more than zero only', () => {
    const circle = asPath({ kind: 'circle', diameter: 1e-3 });
    for (const distance of [0, -1e-6, Number.NaN]) expect(() => insetLoops(circle, distance)).toThrow(RangeError);
  });
});

// A square of 5 mm with a square of 1 mm in the middle: the hole is the narrowest, and its corners are no width.
test('corners of a square hole do not count as a width', () => {
  const loops = [
    polygon([0, 0], [5e-3, 0], [5e-3, 5e-3], [0, 5e-3]),
    polygon([2e-3, 2e-3], [2e-3, 3e-3], [3e-3, 3e-3], [3e-3, 2e-3]),
  ];
  expect(smallestFeature({ kind: 'path', loops })).toBeCloseTo(1e-3, 6);
});
