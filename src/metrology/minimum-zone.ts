import type { HeightField } from '#src/base/field.ts';
import { solveLinear } from './linear.ts';

/** Points in space as three arrays of equal length (m). */
export interface SpacePoints {
  readonly x: Float64Array;
  readonly y: Float64Array;
  readonly z: Float64Array;
}

export interface MinimumZone {
  /** Distance between the two parallel planes that hold all points (m), measured square to them. */
  readonly width: number;
  /** Slopes of the planes. */
  readonly slopeX: number;
  readonly slopeY: number;
  /** Height of the middle plane at (x, y) = (0, 0) (m). */
  readonly level: number;
}

/** Chebyshev plane z = a x + b y + c of scaled points and the largest distance t along z. */
interface Chebyshev {
  readonly a: number;
  readonly b: number;
  readonly c: number;
  readonly t: number;
}

const MOST_PIVOTS = 2000;

/** Three points that span a plane: the two farthest along x or y and the one farthest from their line. */
function spanningPoints({ x, y }: SpacePoints): [number, number, number] {
  const farthest = (measure: (i: number) => number) => {
    let best = 0;
    let most = Number.NEGATIVE_INFINITY;
    for (let i = 0; i < x.length; i++) {
      const value = measure(i);
      if (value > most) [best, most] = [i, value];
    }
    return best;
  };
  const p = farthest((i) => -x[i] - 1e-3 * y[i]);
  const q = farthest((i) => (x[i] - x[p]) ** 2 + (y[i] - y[p]) ** 2);
  const cross = (i: number) => (x[q] - x[p]) * (y[i] - y[p]) - (y[q] - y[p]) * (x[i] - x[p]);
  const r = farthest((i) => Math.abs(cross(i)));
  if (!(Math.abs(cross(r)) > 1e-12 * ((x[q] - x[p]) ** 2 + (y[q] - y[p]) ** 2)))
    throw new RangeError('no minimum zone: three points that are not on one line are needed');
  return [p, q, r];
}

/** Four entries of the basis as a matrix: column k is side (1, x, y, .) of its point, with 1 below. */
function basisMatrix(points: SpacePoints, basis: Int32Array, sides: Int8Array, transposed: boolean): Float64Array {
  const matrix = new Float64Array(16);
  for (let k = 0; k < 4; k++) {
    const side = sides[k];
    const column = [side, side * points.x[basis[k]], side * points.y[basis[k]], 1];
    for (let row = 0; row < 4; row++) matrix[transposed ? 4 * k + row : 4 * row + k] = column[row];
  }
  return matrix;
}

/** The plane on which the four basis points stand off alike, each to its side. */
function planeOfBasis(points: SpacePoints, basis: Int32Array, sides: Int8Array): Chebyshev {
  const heights = Float64Array.from(basis, (i, k) => sides[k] * points.z[i]);
  const solved = solveLinear(basisMatrix(points, basis, sides, true), heights);
  if (solved === undefined) throw new RangeError('the minimum zone lost its basis: points too close to one line');
  return { c: solved[0], a: solved[1], b: solved[2], t: solved[3] };
}

/** The point farthest outside the zone, or the first one outside when `first`; -1 when all lie within. */
function violator(
  points: SpacePoints,
  plane: Chebyshev,
  slack: number,
  first: boolean,
): { point: number; side: number } {
  const { x, y, z } = points;
  let point = -1;
  let side = 1;
  let most = plane.t + slack;
  for (let i = 0; i < z.length; i++) {
    const off = z[i] - plane.a * x[i] - plane.b * y[i] - plane.c;
    if (Math.abs(off) <= most) continue;
    most = Math.abs(off);
    point = i;
    side = off < 0 ? -1 : 1;
    if (first) break;
  }
  return { point, side };
}

/** Brings a point into the basis in place of the one that keeps all weights from turning negative. */
function pivot(points: SpacePoints, basis: Int32Array, sides: Int8Array, entering: { point: number; side: number }) {
  const weights = solveLinear(basisMatrix(points, basis, sides, false), Float64Array.of(0, 0, 0, 1));
  const { point, side } = entering;
  const column = Float64Array.of(side, side * points.x[point], side * points.y[point], 1);
  const direction = solveLinear(basisMatrix(points, basis, sides, false), column);
  if (weights === undefined || direction === undefined)
    throw new RangeError('the minimum zone lost its basis: points too close to one line');
  let leaving = -1;
  let least = Number.POSITIVE_INFINITY;
  for (let k = 0; k < 4; k++) {
    if (direction[k] <= 1e-11) continue;
    const ratio = Math.max(weights[k], 0) / direction[k];
    const tied = ratio === least && basis[k] < basis[leaving];
    if (ratio < least || tied) {
      least = ratio;
      leaving = k;
    }
  }
  basis[leaving] = point;
  sides[leaving] = side;
}

/**
 * Plane of least largest |z - a x - b y - c|. The dual of this linear programme has four equations, so a basis is four
 * points; each round brings in the point farthest outside the zone of the four (the exchange of Stiefel, Numer. Math. 1
 * (1959) 1, as a simplex, from memory) and ends when none is outside, which proves the optimum. While the zone does not
 * grow (degenerate steps), the first point outside enters instead, Bland's rule, which cannot cycle.
 */
function chebyshevPlane(points: SpacePoints): Chebyshev {
  const [p, q, r] = spanningPoints(points);
  const basis = Int32Array.of(p, p, q, r);
  const sides = Int8Array.of(1, -1, 1, 1);
  let range = 0;
  for (const height of points.z) range = Math.max(range, Math.abs(height - points.z[0]));
  // x and y run from -1 to 1: rounding of the plane, and of the heights
  const slack = 1e-15 + 1e-12 * range;
  let grown = 0;
  let before = -1;
  for (let round = 0; round < MOST_PIVOTS; round++) {
    const plane = planeOfBasis(points, basis, sides);
    if (plane.t > before + slack) grown = round;
    before = Math.max(before, plane.t);
    const entering = violator(points, plane, slack, round - grown > 20);
    if (entering.point < 0) return plane;
    pivot(points, basis, sides, entering);
  }
  throw new RangeError(`the minimum zone did not settle in ${MOST_PIVOTS} rounds`);
}

/** Middle and half extent in x and y, so that the linear systems are well scaled. */
function frameOf(points: SpacePoints): { x: number; y: number; z: number; scale: number } {
  const middle = (values: Float64Array) => {
    let low = Number.POSITIVE_INFINITY;
    let high = Number.NEGATIVE_INFINITY;
    for (const value of values) {
      low = Math.min(low, value);
      high = Math.max(high, value);
    }
    return { at: (low + high) / 2, half: (high - low) / 2 };
  };
  const x = middle(points.x);
  const y = middle(points.y);
  return { x: x.at, y: y.at, z: middle(points.z).at, scale: Math.max(x.half, y.half) };
}

/** The same points seen along the normal of a plane of slopes (a, b). */
function seenAlongNormal({ x, y, z }: SpacePoints, normal: readonly [number, number, number]): SpacePoints {
  const [nx, ny, nz] = normal;
  const flat = Math.sqrt(ny * ny + nz * nz);
  const turned = { x: new Float64Array(x.length), y: new Float64Array(x.length), z: new Float64Array(x.length) };
  for (let i = 0; i < x.length; i++) {
    turned.x[i] = flat * x[i] - (nx * (ny * y[i] + nz * z[i])) / flat;
    turned.y[i] = (nz * y[i] - ny * z[i]) / flat;
    turned.z[i] = nx * x[i] + ny * y[i] + nz * z[i];
  }
  return turned;
}

/**
 * Minimum-zone plane of a set of points (ISO 1101 flatness): the least distance between two parallel planes that hold
 * all of them. Exact along z; then seen along its own normal and solved again until the normal stands still. A pair of
 * planes of slope s in that view is at least 2t/sqrt(1 + s^2) apart, so the width found is the least one to a share of
 * s^2/2, s being about thickness over width of the surface: 1e-6 for a floor.
 * @throws RangeError for fewer than three points, or points on one line seen from above.
 */
export function minimumZone(points: SpacePoints): MinimumZone {
  if (points.x.length < 3) throw new RangeError(`no minimum zone of ${points.x.length} points`);
  const frame = frameOf(points);
  const scaled = {
    x: points.x.map((value) => (value - frame.x) / frame.scale),
    y: points.y.map((value) => (value - frame.y) / frame.scale),
    z: points.z.map((value) => (value - frame.z) / frame.scale),
  };
  let normal: [number, number, number] = [0, 0, 1];
  let plane = chebyshevPlane(scaled);
  let slopes = { a: plane.a, b: plane.b };
  for (let round = 0; round < 20 && Math.max(Math.abs(plane.a), Math.abs(plane.b)) > 1e-9; round++) {
    const length = Math.sqrt(1 + slopes.a ** 2 + slopes.b ** 2);
    normal = [-slopes.a / length, -slopes.b / length, 1 / length];
    plane = chebyshevPlane(seenAlongNormal(scaled, normal));
    slopes = composed(normal, plane);
  }
  const width = (2 * plane.t * frame.scale) / Math.sqrt(1 + plane.a ** 2 + plane.b ** 2);
  // middle plane n . p = c in the last view; n is `normal` up to the 1e-9 left
  const atMiddle = (plane.c / normal[2]) * frame.scale + frame.z;
  return {
    width,
    slopeX: slopes.a,
    slopeY: slopes.b,
    level: atMiddle - slopes.a * frame.x - slopes.b * frame.y,
  };
}

/** Slopes in the first frame of a plane found in the view along `normal`. */
function composed(normal: readonly [number, number, number], { a, b }: Chebyshev): { a: number; b: number } {
  const [nx, ny, nz] = normal;
  const flat = Math.sqrt(ny * ny + nz * nz);
  // normal of the plane in the view, (-a, -b, 1), carried back along the axes of the view
  const vx = -a * flat + nx;
  const vy = (a * nx * ny) / flat - (b * nz) / flat + ny;
  const vz = (a * nx * nz) / flat + (b * ny) / flat + nz;
  return { a: -vx / vz, b: -vy / vz };
}

/** Turn of p, q, r seen from the side: positive when q lies below the line from p to r. */
function below(field: HeightField, p: number, q: number, r: number): number {
  const { z } = field;
  return (z[r] - z[p]) * (q - p) - (z[q] - z[p]) * (r - p);
}

/**
 * The cells of a field that can touch a minimum zone: the corners of the upper and lower convex hull of every row. A cell
 * between two others of its row lies inside the hull of all and can never touch, so nothing is lost.
 */
export function hullCells(field: HeightField): SpacePoints {
  const { nx, ny, dx, dy, x0, y0, z } = field;
  const kept: number[] = [];
  const upper = new Int32Array(nx);
  const lower = new Int32Array(nx);
  for (let j = 0; j < ny; j++) {
    let up = 0;
    let down = 0;
    for (let k = j * nx; k < (j + 1) * nx; k++) {
      if (!Number.isFinite(z[k])) continue;
      while (up > 1 && below(field, upper[up - 2], upper[up - 1], k) >= 0) up--;
      while (down > 1 && below(field, lower[down - 2], lower[down - 1], k) <= 0) down--;
      upper[up++] = k;
      lower[down++] = k;
    }
    for (let i = 0; i < up; i++) kept.push(upper[i]);
    for (let i = 0; i < down; i++) kept.push(lower[i]);
  }
  return {
    x: Float64Array.from(kept, (k) => x0 + (k % nx) * dx),
    y: Float64Array.from(kept, (k) => y0 + Math.floor(k / nx) * dy),
    z: Float64Array.from(kept, (k) => z[k]),
  };
}
