import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { PathLoop } from '#src/base/outline.ts';
import { checkLoops, type OutlineProblem, orientLoops, PATH_LIMITS } from '#src/base/outline-check.ts';
import { reverseLoop } from '#src/base/outline-path.ts';
import { circleLoop, ellipsePolygon, polygon, random, starPolygon } from './outline-samples.ts';

const mm = 1e-3;
const square = (x: number, y: number, side: number) =>
  polygon([
    [x, y],
    [x + side, y],
    [x + side, y + side],
    [x, y + side],
  ]);
const hole = (x: number, y: number, r: number) => reverseLoop(circleLoop(x, y, r));
/** What is wrong and where, in millimetres. */
const told = (loops: readonly PathLoop[]) =>
  checkLoops(loops).map(({ fault, loop, segment, x, y }) => [
    fault,
    loop,
    segment,
    Number((x / mm).toFixed(6)),
    Number((y / mm).toFixed(6)),
  ]);

describe('sound loops', () => {
  test('have no problems: one solid, a washer, two islands, an island in a hole, tangent roundings', () => {
    expect(told([square(0, 0, 2 * mm)])).toEqual([]);
    expect(told([circleLoop(0, 0, 3 * mm), hole(0, 0, 1 * mm)])).toEqual([]);
    expect(told([square(0, 0, 2 * mm), square(3 * mm, 0, 2 * mm)])).toEqual([]);
    expect(told([circleLoop(0, 0, 3 * mm), hole(0, 0, 2 * mm), circleLoop(0, 0, 1 * mm)])).toEqual([]);
    const slot: PathLoop = {
      x: -1 * mm,
      y: -1 * mm,
      pieces: [
        { kind: 'line', x: 1 * mm, y: -1 * mm },
        { kind: 'arc', x: 1 * mm, y: 1 * mm, bulge: 1 },
        { kind: 'line', x: -1 * mm, y: 1 * mm },
        { kind: 'arc', x: -1 * mm, y: -1 * mm, bulge: 1 },
      ],
    };
    expect(told([slot])).toEqual([]);
  });

  test('stay sound in any star polygon, turned any way, as solid or with its holes', () => {
    fc.assert(
      fc.property(fc.integer({ min: 3, max: 400 }), fc.integer(), fc.boolean(), (n, seed, turned) => {
        const star = polygon(starPolygon(n, seed));
        expect(checkLoops(orientLoops([turned ? reverseLoop(star) : star, circleLoop(0, 0, 0.05 * mm)]))).toEqual([]);
      }),
      { seed: 9, numRuns: 100 },
    );
  });

  test('may have as many pieces as allowed', () => {
    const n = PATH_LIMITS.segments;
    expect(told([polygon(ellipsePolygon(20 * mm, 9 * mm, n))])).toEqual([]);
    expect(told([polygon(ellipsePolygon(20 * mm, 9 * mm, n + 1))])).toEqual([['tooMany', 0, 0, 0, 0]]);
  });
});

describe('each fault is told with its place', () => {
  const line = (x: number, y: number) => ({ kind: 'line', x: x * mm, y: y * mm }) as const;
  // radius 4 (1 + 0.36) / 2.4 mm, lowest point 1 - 0.6 x 2 = -0.2 mm: half the chord it cuts from y = 0
  const radius = (4 * 1.36) / 2.4;
  const dip = Math.sqrt(radius ** 2 - (radius - 0.2) ** 2);
  const cases: [string, readonly PathLoop[], unknown[]][] = [
    ['nothing at all', [], [['noLoops', 0, 0, 0, 0]]],
    ['a loop without pieces', [{ x: mm, y: 0, pieces: [] }], [['noPieces', 0, 0, 1, 0]]],
    ['an open loop, at its end', [{ x: 0, y: 0, pieces: [line(2, 0), line(2, 3)] }], [['open', 0, 1, 2, 3]]],
    [
      'a coordinate that is no number, at the last good one',
      [{ x: 0, y: 0, pieces: [line(2, 1), line(Number.NaN, 0), line(0, 0)] }],
      [['notFinite', 0, 1, 2, 1]],
    ],
    [
      'a bulge that is no number',
      [{ x: 0, y: 0, pieces: [{ kind: 'arc', x: mm, y: 0, bulge: Infinity }, line(0, 0)] }],
      [['notFinite', 0, 0, 0, 0]],
    ],
    ['a start that is no number', [{ x: Number.NaN, y: 0, pieces: [line(1, 0)] }], [['notFinite', 0, 0, 0, 0]]],
    [
      'a point drawn twice in a row',
      [
        polygon([
          [0, 0],
          [2 * mm, 0],
          [2 * mm, 0],
          [2 * mm, 2 * mm],
        ]),
      ],
      [['zeroLength', 0, 1, 2, 0]],
    ],
    [
      'a whole circle in one piece',
      [{ x: mm, y: 0, pieces: [{ kind: 'arc', x: mm, y: 0, bulge: 1e5 }] }],
      [['zeroLength', 0, 0, 1, 0]],
    ],
    [
      'a piece of half a micrometre',
      [
        polygon([
          [0, 0],
          [2 * mm, 0],
          [2 * mm, 0.0005 * mm],
          [0, 2 * mm],
        ]),
      ],
      [['tiny', 0, 1, 2, 0]],
    ],
    [
      'a loop around next to nothing',
      [
        polygon([
          [0, 0],
          [1.2e-6, 0],
          [0.6e-6, 1e-6],
        ]),
      ],
      [['tiny', 0, 0, 0, 0]],
    ],
    ['a loop of two metres', [square(0, 0, 2)], [['huge', 0, 0, 0, 0]]],
    ['a loop far from the origin', [square(3, 0, mm)], [['huge', 0, 0, 3000, 0]]],
    [
      'an arc that bulges out of all measure',
      [{ x: 0, y: 0, pieces: [{ kind: 'arc', x: 100 * mm, y: 0, bulge: 1000 }, line(0, 0)] }],
      [['huge', 0, 0, 0, 0]],
    ],
    [
      'a bow tie, at its knot',
      [
        polygon([
          [0, 0],
          [4 * mm, 4 * mm],
          [4 * mm, 0],
          [0, 4 * mm],
        ]),
      ],
      [['selfCrossing', 0, 0, 2, 2]],
    ],
    [
      'a vertex on another side',
      [
        polygon([
          [0, 0],
          [4 * mm, 0],
          [4 * mm, 2 * mm],
          [2 * mm, 0],
          [0, 2 * mm],
        ]),
      ],
      [['selfCrossing', 0, 0, 2, 0]],
    ],
    [
      'a waist of no width',
      [
        polygon([
          [0, 0],
          [2 * mm, 1 * mm],
          [4 * mm, 0],
          [4 * mm, 2 * mm],
          [2 * mm, 1 * mm],
          [0, 2 * mm],
        ]),
      ],
      [['duplicatePoint', 0, 0, 2, 1]],
    ],
    [
      'an arc that dips through a side',
      [{ x: 0, y: 0, pieces: [line(4, 0), line(4, 1), { kind: 'arc', x: 0, y: 1 * mm, bulge: -0.6 }, line(0, 0)] }],
      [
        ['selfCrossing', 0, 0, 2 - dip, 0],
        ['selfCrossing', 0, 0, 2 + dip, 0],
      ],
    ],
    [
      'two circles that cross',
      [circleLoop(0, 0, 5 * mm), circleLoop(6 * mm, 0, 5 * mm)],
      [
        ['loopsCross', 0, 0, 3, 4],
        ['loopsCross', 0, 1, 3, -4],
      ],
    ],
    ['two circles that touch', [circleLoop(0, 0, 2 * mm), circleLoop(0, 4 * mm, 2 * mm)], [['loopsCross', 0, 0, 0, 2]]],
    [
      'a circle drawn twice',
      [circleLoop(0, 0, 2 * mm), circleLoop(0, 0, 2 * mm)],
      [
        ['duplicatePoint', 0, 1, 2, 0],
        ['duplicatePoint', 0, 1, -2, 0],
      ],
    ],
    [
      'two squares with a side in common',
      [
        square(0, 0, 2 * mm),
        polygon([
          [2 * mm, 0.5 * mm],
          [3 * mm, 0.5 * mm],
          [3 * mm, 1 * mm],
          [2 * mm, 1 * mm],
        ]),
      ],
      [
        ['loopsCross', 0, 1, 2, 0.5],
        ['loopsCross', 0, 1, 2, 1],
      ],
    ],
    [
      'a hole outside its outer loop',
      [circleLoop(0, 0, 2 * mm), hole(5 * mm, 0, 1 * mm)],
      [['holeOutside', 1, 0, 6, 0]],
    ],
    [
      'a hole around its outer loop',
      [circleLoop(0, 0, 2 * mm), hole(0, 0, 3 * mm)],
      [
        ['nesting', 0, 0, 2, 0],
        ['holeOutside', 1, 0, 3, 0],
      ],
    ],
    ['a solid in a solid', [circleLoop(0, 0, 3 * mm), circleLoop(0, 0, 1 * mm)], [['nesting', 1, 0, 1, 0]]],
    ['a hole in a hole', [circleLoop(0, 0, 3 * mm), hole(0, 0, 2 * mm), hole(0, 0, 1 * mm)], [['nesting', 2, 0, 1, 0]]],
  ];
  test.each(cases)('%s', (_, loops, expected) => {
    const rounded = (expected as unknown[][]).map((row) =>
      row.map((v) => (typeof v === 'number' ? Number(v.toFixed(6)) : v)),
    );
    const sorted = (rows: unknown[][]) => [...rows].sort((a, b) => String(a).localeCompare(String(b)));
    expect(sorted(told(loops))).toEqual(sorted(rounded));
  });

  test('a spike, at its tip', () => {
    const spiked = polygon([
      [0, 0],
      [2 * mm, 0],
      [2 * mm, 2 * mm],
      [5 * mm, 2 * mm],
      [2 * mm, 2.0005 * mm],
      [0, 2.1 * mm],
    ]);
    expect(told([spiked])).toContainEqual(['spike', 0, 3, 5, 2]);
  });

  test('more than a hundred at most, and places that can be marked', () => {
    const draw = random(77);
    const scribble = polygon(Array.from({ length: 5000 }, () => [draw() * mm, draw() * mm]));
    const problems = checkLoops([scribble]);
    expect(problems.length).toBeGreaterThan(20);
    expect(problems.length).toBeLessThanOrEqual(PATH_LIMITS.problems);
    for (const { x, y } of problems) expect(Number.isFinite(x) && Number.isFinite(y)).toBe(true);
  });
});

test('whichever two sides of a polygon cross, they are found: all pairs, one by one', () => {
  fc.assert(
    fc.property(fc.integer({ min: 4, max: 14 }), fc.integer(), (n, seed) => {
      const draw = random(seed);
      const points = Array.from({ length: n }, () => [draw() * mm, draw() * mm] as const);
      const side = (k: number) => [points[k], points[(k + 1) % n]] as const;
      const turn = (a: readonly number[], b: readonly number[], c: readonly number[]) =>
        Math.sign((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]));
      const expected = new Set<string>();
      for (let i = 0; i < n; i++) {
        for (let j = i + 2; j < n; j++) {
          if (i === 0 && j === n - 1) continue;
          const [[a, b], [c, d]] = [side(i), side(j)];
          if (turn(a, b, c) !== turn(a, b, d) && turn(c, d, a) !== turn(c, d, b)) expected.add(`${i} ${j}`);
        }
      }
      const faults = checkLoops([polygon(points)]).filter(({ fault }) => fault === 'selfCrossing');
      const pair = ({ segment, other }: OutlineProblem) => `${segment} ${other?.segment}`;
      expect(new Set(faults.map(pair))).toEqual(expected);
    }),
    { seed: 12, numRuns: 300 },
  );
});

test('pieces packed side by side beyond comparing are refused, not compared for ever', () => {
  // nested half circles, 5 um apart: a double spiral of 16 000 pieces
  const pieces: PathLoop['pieces'][number][] = [];
  let x = mm;
  const to = (distance: number, bulge: number) => {
    x = -Math.sign(x) * (Math.abs(x) + distance);
    pieces.push({ kind: 'arc', x, y: 0, bulge });
  };
  for (let k = 0; k < 8000; k++) to(5e-6, 1);
  x += Math.sign(x) * 2.5e-6;
  pieces.push({ kind: 'line', x, y: 0 });
  for (let k = 0; k < 8000; k++) to(-5e-6, -1);
  pieces.push({ kind: 'line', x: mm, y: 0 });
  expect(told([{ x: mm, y: 0, pieces }])).toEqual([['tooDense', 0, 0, 1, 0]]);
});
