import { atan2, PI, sinCos } from '#src/base/math.ts';
import type { OutlineSpec } from '#src/base/outline.ts';
import { fitCircle, type PlanePoints, pointsWhere } from './circle.ts';
import { solveLinear } from './linear.ts';

/** Share of a straight face that is measured; the rest goes to the corners, half at each end. */
const KEPT_OF_FACE = 0.9;
/** A face or an arc with fewer points than this has no size. */
const FEWEST_POINTS = 4;

function centre(values: Float64Array): number {
  return values.reduce((sum, value) => sum + value / values.length, 0);
}

/**
 * Distance between two parallel lines laid through two opposite faces together: least sum of squared distances with one
 * common direction, so that neither turns alone.
 */
function parallelWidth(a: PlanePoints, b: PlanePoints): number {
  if (a.x.length < FEWEST_POINTS || b.x.length < FEWEST_POINTS) return Number.NaN;
  const middles = [a, b].map(({ x, y }) => ({ x: centre(x), y: centre(y) }));
  let xx = 0;
  let xy = 0;
  let yy = 0;
  [a, b].forEach((face, side) => {
    for (let i = 0; i < face.x.length; i++) {
      const dx = face.x[i] - middles[side].x;
      const dy = face.y[i] - middles[side].y;
      xx += dx * dx;
      xy += dx * dy;
      yy += dy * dy;
    }
  });
  const direction = atan2(2 * xy, xx - yy) / 2;
  const { sin, cos } = sinCos(direction);
  return Math.abs((middles[1].y - middles[0].y) * cos - (middles[1].x - middles[0].x) * sin);
}

/** Distance between the two faces square to the first axis of a box a x b; `along` is the kept half-length of them. */
function boxWidth(points: PlanePoints, turned: boolean, half: readonly [number, number], along: number): number {
  const face = (side: number) =>
    pointsWhere(points, (x, y) => {
      const [u, t] = turned ? [y, x] : [x, y];
      const nearest = Math.abs(Math.abs(u) - half[0]) <= Math.abs(Math.abs(t) - half[1]);
      return side * u > 0 && Math.abs(t) <= along && nearest;
    });
  return parallelWidth(face(-1), face(1));
}

function rectangleSizes(points: PlanePoints, spec: Extract<OutlineSpec, { kind: 'rectangle' }>): number[] {
  const a = spec.length / 2;
  const b = spec.width / 2;
  return [
    boxWidth(points, false, [a, b], KEPT_OF_FACE * (b - spec.cornerRadius)),
    boxWidth(points, true, [b, a], KEPT_OF_FACE * (a - spec.cornerRadius)),
  ];
}

function slotSizes(points: PlanePoints, spec: Extract<OutlineSpec, { kind: 'slot' }>): number[] {
  const a = spec.length / 2;
  const b = spec.width / 2;
  const straight = a - b;
  const ends = [-1, 1].map((side) => pointsWhere(points, (x) => side * x > straight + (1 - KEPT_OF_FACE) * b));
  const width = boxWidth(points, true, [b, a], KEPT_OF_FACE * straight);
  if (ends.some((end) => end.x.length < FEWEST_POINTS)) return [Number.NaN, width];
  const [left, right] = ends.map(fitCircle);
  const apart = Math.sqrt((right.x - left.x) ** 2 + (right.y - left.y) ** 2);
  return [apart + left.radius + right.radius, width];
}

/** One regular polygon through all faces: its middle, its turn and its width across flats at once. */
function polygonSizes(points: PlanePoints, spec: Extract<OutlineSpec, { kind: 'regularPolygon' }>): number[] {
  const { sides, acrossFlats, cornerRadius } = spec;
  const half = PI / sides;
  const tangent = sinCos(half).sin / sinCos(half).cos;
  const along = KEPT_OF_FACE * (acrossFlats / 2 - cornerRadius) * tangent;
  const normals = Array.from({ length: sides }, (_, k) => sinCos(2 * k * half));
  const perFace = new Array<number>(sides).fill(0);
  let state = Float64Array.of(0, 0, acrossFlats / 2);
  let turn = 0;
  for (let round = 0; round < 4; round++) {
    const { sin, cos } = sinCos(turn);
    const matrix = new Float64Array(16);
    const rhs = new Float64Array(4);
    perFace.fill(0);
    for (let i = 0; i < points.x.length; i++) {
      // turn the point back, find the face it lies on
      const x = cos * points.x[i] + sin * points.y[i];
      const y = cos * points.y[i] - sin * points.x[i];
      let face = 0;
      let out = Number.NEGATIVE_INFINITY;
      normals.forEach((normal, k) => {
        const off = normal.cos * (x - state[0]) + normal.sin * (y - state[1]);
        if (off > out) [face, out] = [k, off];
      });
      const { cos: nx, sin: ny } = normals[face];
      const t = nx * (y - state[1]) - ny * (x - state[0]);
      if (Math.abs(t) > along) continue;
      perFace[face]++;
      const row = [nx, ny, 1, t / acrossFlats];
      for (let a = 0; a < 4; a++) {
        rhs[a] += row[a] * (nx * x + ny * y);
        for (let b = 0; b < 4; b++) matrix[4 * a + b] += row[a] * row[b];
      }
    }
    const solved = perFace.every((count) => count >= FEWEST_POINTS) ? solveLinear(matrix, rhs) : undefined;
    if (solved === undefined) return [Number.NaN];
    state = solved.slice(0, 3);
    // along a face of a body turned forward, n.p falls by the turn times t
    turn -= solved[3] / acrossFlats;
  }
  return [2 * state[2]];
}

/**
 * Sizes of a wall contour at one depth (m), in the order of `nominalSizes`: circle and ring (outer, inner) by
 * least-squares diameter; rectangle and the width of a slot by least-squares width between opposite faces; the length
 * of a slot from least-squares circles on its two ends (nine tenths of their radius); regular polygon by one least-squares polygon, across flats; a path
 * by its overall length and width.
 * Corners (nominal radius and a tenth of the straight face) are left out. Points in the outline's own frame, in any
 * order; the contour may be shifted or turned a little against it. A size whose face or circle has fewer than four points
 * is NaN.
 */
export function sizesAtDepth(points: PlanePoints, spec: OutlineSpec): number[] {
  switch (spec.kind) {
    case 'circle':
      return [diameterOf(points)];
    case 'ring': {
      const parting = (spec.outerDiameter + spec.innerDiameter) / 4;
      const outside = (x: number, y: number) => x * x + y * y > parting * parting;
      return [diameterOf(pointsWhere(points, outside)), diameterOf(pointsWhere(points, (x, y) => !outside(x, y)))];
    }
    case 'rectangle':
      return rectangleSizes(points, spec);
    case 'slot':
      return slotSizes(points, spec);
    case 'regularPolygon':
      return polygonSizes(points, spec);
    case 'path':
      return [extentOf(points.x), extentOf(points.y)];
  }
}

/** Length covered by the points along one axis; NaN with too few. */
function extentOf(values: Float64Array): number {
  if (values.length < FEWEST_POINTS) return Number.NaN;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const value of values) {
    low = Math.min(low, value);
    high = Math.max(high, value);
  }
  return high - low;
}

function diameterOf(points: PlanePoints): number {
  return points.x.length < FEWEST_POINTS ? Number.NaN : 2 * fitCircle(points).radius;
}
