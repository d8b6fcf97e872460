import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  makeOutline,
  nearest,
  nominalSizes,
  type OutlineSpec,
  offsetSpec,
  type PathLoop,
  type PathPiece,
  pointAt,
  smallestFeature,
} from '#src/base/outline.ts';
import { checkLoops, orientLoops } from '#src/base/outline-check.ts';
import { bulgeOf, loopArea, pathLoops, reverseLoop } from '#src/base/outline-path.ts';
import { circleLoop, ellipsePolygon, polygon, random, starPolygon } from './outline-samples.ts';

const pi = Math.PI;
const builtIn: OutlineSpec[] = [
  { kind: 'circle', diameter: 3e-3 },
  { kind: 'rectangle', length: 4e-3, width: 2.5e-3, cornerRadius: 0 },
  { kind: 'rectangle', length: 4e-3, width: 2.5e-3, cornerRadius: 0.4e-3 },
  { kind: 'slot', length: 5e-3, width: 1.2e-3 },
  { kind: 'regularPolygon', sides: 3, acrossFlats: 3e-3, cornerRadius: 0 },
  { kind: 'regularPolygon', sides: 6, acrossFlats: 4e-3, cornerRadius: 0.2e-3 },
  { kind: 'ring', outerDiameter: 6e-3, innerDiameter: 3.6e-3 },
];
const pathOf = (spec: OutlineSpec): OutlineSpec => ({ kind: 'path', loops: pathLoops(makeOutline(spec).loops) });
const washer = [circleLoop(0, 0, 3e-3), reverseLoop(circleLoop(0.2e-3, 0, 1e-3))];

describe('a path of lines and arcs', () => {
  test('that follows a built-in shape is sound, as large and as narrow as the shape', () => {
    for (const spec of builtIn) {
      const shape = makeOutline(spec);
      const path = makeOutline(pathOf(spec));
      expect(checkLoops(pathLoops(shape.loops))).toEqual([]);
      // a dozen sums in double precision of areas near 1e-5 m2 and lengths near 1e-2 m
      expect(Math.abs(path.area - shape.area)).toBeLessThan(1e-19);
      expect(Math.abs(path.perimeter - shape.perimeter)).toBeLessThan(1e-16);
      expect(path.loops.map(({ hole }) => hole)).toEqual(shape.loops.map(({ hole }) => hole));
      // balls stop within 1e-9 of their radius
      expect(smallestFeature(pathOf(spec)) / smallestFeature(spec)).toBeCloseTo(1, 7);
    }
  });

  test('that follows a built-in shape has its distance field', () => {
    for (const spec of builtIn) {
      const shape = makeOutline(spec);
      const path = makeOutline(pathOf(spec));
      const draw = random(5);
      for (let k = 0; k < 2000; k++) {
        const x = (draw() - 0.5) * 8e-3;
        const y = (draw() - 0.5) * 8e-3;
        // ends of arcs are known to a few units in the last place of 3e-3 m
        expect(Math.abs(nearest(path, x, y).distance - nearest(shape, x, y).distance)).toBeLessThan(1e-17);
      }
    }
  });

  test('turns a bulge into the arc of four times its arctangent, whatever the arc', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1.999 * pi, max: 1.999 * pi, noNaN: true }),
        fc.double({ min: 0, max: 2 * pi, noNaN: true }),
        fc.double({ min: 1e-4, max: 1e-2, noNaN: true }),
        (sweep, start, radius) => {
          fc.pre(Math.abs(sweep) > 0.01);
          const at = (angle: number) => ({ x: radius * Math.cos(angle), y: radius * Math.sin(angle) });
          const piece: PathPiece = { kind: 'arc', ...at(start + sweep), bulge: bulgeOf(sweep) };
          const loop: PathLoop = { ...at(start), pieces: [piece, { kind: 'line', ...at(start) }] };
          // circular segment: r^2 (t - sin t) / 2, r |t| + 2 r |sin(t / 2)|; nearly whole circles lose digits with the chord
          const whole = makeOutline({ kind: 'path', loops: [loop] });
          expect(loopArea(loop) / radius ** 2).toBeCloseTo((sweep - Math.sin(sweep)) / 2, 9);
          const length = Math.abs(sweep) + 2 * Math.abs(Math.sin(sweep / 2));
          expect(whole.perimeter / radius).toBeCloseTo(length, 9);
          const middle = at(start + sweep / 2);
          expect(Math.abs(nearest(whole, middle.x, middle.y).distance) / radius).toBeLessThan(1e-9);
        },
      ),
      { seed: 11, numRuns: 500 },
    );
  });

  test('with a hole is the area between, solid between the circles and empty in the bore', () => {
    const spec: OutlineSpec = { kind: 'path', loops: washer };
    const outline = makeOutline(spec);
    expect(outline.area).toBeCloseTo(pi * (9e-6 - 1e-6), 16);
    expect(outline.perimeter).toBeCloseTo(2 * pi * 4e-3, 14);
    expect(nearest(outline, 0.2e-3, 0).distance).toBeCloseTo(1e-3, 14);
    expect(nearest(outline, 2e-3, 0).distance).toBeCloseTo(-0.8e-3, 14);
    expect(nearest(outline, 2e-3, 0).loop).toBe(1);
    expect(nominalSizes(spec)).toEqual([6e-3, 6e-3]);
    // wall of the eccentric washer where it is thinnest: 3 - (1 + 0.2) mm
    expect(smallestFeature(spec)).toBeCloseTo(1.8e-3, 9);
  });

  test('with two islands is two solids with a gap, and its thinnest place is the smaller of web and gap', () => {
    const square = (x: number) =>
      polygon([
        [x, 0],
        [x + 2e-3, 0],
        [x + 2e-3, 2e-3],
        [x, 2e-3],
      ]);
    const spec: OutlineSpec = { kind: 'path', loops: [square(0), square(2.5e-3)] };
    const outline = makeOutline(spec);
    expect(outline.area).toBeCloseTo(8e-6, 16);
    expect(nearest(outline, 2.25e-3, 1e-3).distance).toBeCloseTo(0.25e-3, 14);
    expect(nearest(outline, 3.5e-3, 1e-3).distance).toBeCloseTo(-1e-3, 14);
    expect(nearest(outline, 1.9e-3, 1e-3).loop).toBe(0);
    expect(nearest(outline, 2.6e-3, 1e-3).loop).toBe(1);
    expect(nominalSizes(spec)).toEqual([2e-3 + 2.5e-3, 2e-3]);
    expect(smallestFeature(spec)).toBeCloseTo(0.5e-3, 9);
    // the nearest point's arc length leads back to it, the corner where one loop ends and the next starts included
    const corner = nearest(outline, -1e-3, -1e-3);
    expect(corner.s).toBe(0);
    const other = nearest(outline, 2.4e-3, -1e-3);
    expect(pointAt(outline, other.s)).toMatchObject({ x: 2.5e-3, y: 0 });
    expect(other.distance).toBeCloseTo(Math.sqrt(1.01) * 1e-3, 14);
  });

  test('with a neck is as narrow as the neck', () => {
    // two squares of 2 mm joined by a web of 0.3 mm
    const dogbone = polygon([
      [0, 0],
      [2e-3, 0],
      [2e-3, 0.85e-3],
      [3e-3, 0.85e-3],
      [3e-3, 0],
      [5e-3, 0],
      [5e-3, 2e-3],
      [3e-3, 2e-3],
      [3e-3, 1.15e-3],
      [2e-3, 1.15e-3],
      [2e-3, 2e-3],
      [0, 2e-3],
    ]);
    expect(smallestFeature({ kind: 'path', loops: [dogbone] })).toBeCloseTo(0.3e-3, 9);
  });

  test('cannot be moved by its description, and there is none without loops', () => {
    expect(() => offsetSpec({ kind: 'path', loops: washer }, 1e-5)).toThrow(RangeError);
    expect(() => makeOutline({ kind: 'path', loops: [] })).toThrow(RangeError);
  });
});

describe('a star polygon', () => {
  test('has the area of the shoelace sum and the perimeter of its sides', () => {
    fc.assert(
      fc.property(fc.integer({ min: 3, max: 200 }), fc.integer(), (n, seed) => {
        const points = starPolygon(n, seed);
        const outline = makeOutline({ kind: 'path', loops: [polygon(points)] });
        const next = (k: number) => points[(k + 1) % n] as readonly [number, number];
        const shoelace = points.reduce((sum, [x, y], k) => sum + x * next(k)[1] - y * next(k)[0], 0) / 2;
        const sides = points.reduce((sum, [x, y], k) => sum + Math.hypot(next(k)[0] - x, next(k)[1] - y), 0);
        expect(outline.area / shoelace).toBeCloseTo(1, 12);
        expect(outline.perimeter / sides).toBeCloseTo(1, 12);
      }),
      { seed: 3, numRuns: 200 },
    );
  });

  test('has a negative distance exactly where a ray leaves it an odd number of times', () => {
    fc.assert(
      fc.property(fc.integer({ min: 3, max: 120 }), fc.integer(), (n, seed) => {
        const points = starPolygon(n, seed);
        const outline = makeOutline({ kind: 'path', loops: [polygon(points)] });
        const draw = random(seed ^ 0x5bd1);
        for (let k = 0; k < 50; k++) {
          const [px, py] = [(draw() - 0.5) * 5e-3, (draw() - 0.5) * 5e-3] as const;
          let inside = false;
          points.forEach(([x0, y0], i) => {
            const [x1, y1] = points[(i + 1) % n] as readonly [number, number];
            if (y0 > py === y1 > py) return;
            if (px < x0 + ((py - y0) / (y1 - y0)) * (x1 - x0)) inside = !inside;
          });
          expect(nearest(outline, px, py).distance < 0).toBe(inside);
        }
      }),
      { seed: 4, numRuns: 150 },
    );
  });
});

describe('the search through the tree', () => {
  test('finds what a look at each segment finds, to the last bit', () => {
    const specs: OutlineSpec[] = [
      { kind: 'path', loops: [polygon(starPolygon(300, 8))] },
      {
        kind: 'path',
        loops: [...washer, ...Array.from({ length: 20 }, (_, k) => circleLoop(5e-3 + k * 1e-3, 0, 0.4e-3))],
      },
      { kind: 'regularPolygon', sides: 60, acrossFlats: 4e-3, cornerRadius: 0.1e-3 },
    ];
    for (const spec of specs) {
      const outline = makeOutline(spec);
      expect(outline.tree).toBeDefined();
      const { tree: _, ...plain } = outline;
      const draw = random(21);
      for (let k = 0; k < 3000; k++) {
        const x = (draw() - 0.3) * 10e-3;
        const y = (draw() - 0.5) * 6e-3;
        expect(nearest(outline, x, y)).toEqual(nearest(plain, x, y));
      }
      // the middle of a polygon, where everything is equally far
      expect(nearest(outline, 0, 0)).toEqual(nearest(plain, 0, 0));
    }
  });

  test('finds arc lengths as a walk along the segments does', () => {
    const outline = makeOutline({
      kind: 'path',
      loops: [...washer, polygon(starPolygon(40, 2).map(([x, y]) => [x + 9e-3, y]))],
    });
    const { tree: _, ...plain } = outline;
    const draw = random(22);
    for (let k = 0; k < 500; k++) {
      const s = (draw() * 3 - 1) * outline.perimeter;
      const a = pointAt(outline, s);
      const b = pointAt(plain, s);
      // sums of lengths in another order
      expect(Math.hypot(a.x - b.x, a.y - b.y)).toBeLessThan(1e-15);
      expect(Math.abs(nearest(outline, a.x, a.y).distance)).toBeLessThan(1e-15);
    }
  });

  test('is exact for an ellipse of 5000 chords: no boundary point is off it, and every chord midpoint is on it', () => {
    const points = ellipsePolygon(3e-3, 1e-3, 5000);
    const outline = makeOutline({ kind: 'path', loops: [polygon(points)] });
    // inscribed polygon of n sides: pi a b sinc(2 pi / n)
    expect(outline.area / (pi * 3e-6)).toBeCloseTo(Math.sin((2 * pi) / 5000) / ((2 * pi) / 5000), 12);
    for (let k = 0; k < 5000; k += 37) {
      const [[x0, y0], [x1, y1]] = [points[k], points[(k + 1) % 5000]] as (readonly [number, number])[];
      expect(Math.abs(nearest(outline, (x0 + x1) / 2, (y0 + y1) / 2).distance)).toBeLessThan(1e-15);
    }
  });
});

describe('directions', () => {
  test('are set by nesting: solid, hole, solid again, however they were drawn', () => {
    const nested = [1e-3, 4e-3, 2e-3, 3e-3].map((r) => circleLoop(0, 0, r));
    fc.assert(
      fc.property(fc.array(fc.boolean(), { minLength: 4, maxLength: 4 }), (turned) => {
        const loops = orientLoops(nested.map((loop, k) => (turned[k] ? reverseLoop(loop) : loop)));
        // from the outside in: 4 solid, 3 hole, 2 solid, 1 hole
        expect(loops.map((loop) => Math.sign(loopArea(loop)))).toEqual([-1, 1, 1, -1]);
        expect(checkLoops(loops)).toEqual([]);
        expect(makeOutline({ kind: 'path', loops }).area).toBeCloseTo(pi * (16 - 9 + 4 - 1) * 1e-6, 15);
      }),
      { seed: 1, numRuns: 16 },
    );
  });

  test('turned twice are as before', () => {
    const loop = pathLoops(makeOutline(builtIn[2] as OutlineSpec).loops)[0] as PathLoop;
    expect(reverseLoop(reverseLoop(loop))).toEqual(loop);
    expect(loopArea(reverseLoop(loop))).toBeCloseTo(-loopArea(loop), 18);
  });
});
