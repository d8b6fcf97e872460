import { solveLinear } from './linear.ts';

/** Points in the plane as two arrays of equal length (m). A `PlaneCurve` is one. */
export interface PlanePoints {
  readonly x: Float64Array;
  readonly y: Float64Array;
}

export interface Circle {
  readonly x: number;
  readonly y: number;
  readonly radius: number;
  /** Root mean square distance of the points from the circle (m). */
  readonly residual: number;
  /** Standard error of the radius if the distances are independent noise (m); Infinity for three points. */
  readonly radiusError: number;
}

/** Middle of the points and half their extent, to scale the unknowns. */
function frameOf({ x, y }: PlanePoints): { x: number; y: number; scale: number } {
  const n = x.length;
  let cx = 0;
  let cy = 0;
  let scale = 0;
  for (let i = 0; i < n; i++) {
    cx += x[i] / n;
    cy += y[i] / n;
  }
  for (let i = 0; i < n; i++) scale = Math.max(scale, Math.abs(x[i] - cx), Math.abs(y[i] - cy));
  return { x: cx, y: cy, scale };
}

/** Algebraic start: the linear problem x^2 + y^2 = 2 a x + 2 b y + c (Kasa 1976, from memory). */
function algebraicCircle(u: Float64Array, v: Float64Array): Float64Array | undefined {
  const matrix = new Float64Array(9);
  const rhs = new Float64Array(3);
  for (let i = 0; i < u.length; i++) {
    const row = [u[i], v[i], 1];
    const square = u[i] * u[i] + v[i] * v[i];
    for (let a = 0; a < 3; a++) {
      rhs[a] += row[a] * square;
      for (let b = 0; b < 3; b++) matrix[3 * a + b] += row[a] * row[b];
    }
  }
  const solved = solveLinear(matrix, rhs);
  if (solved === undefined) return undefined;
  const [a, b, c] = solved;
  return Float64Array.of(a / 2, b / 2, Math.sqrt(Math.max(c + (a * a + b * b) / 4, 0)));
}

/** Sum of squared distances to the circle (cx, cy, r) and, when asked, its normal equations. */
function squaredDistances(u: Float64Array, v: Float64Array, c: Float64Array, normal?: Float64Array): number {
  let sum = 0;
  normal?.fill(0);
  for (let i = 0; i < u.length; i++) {
    const dx = u[i] - c[0];
    const dy = v[i] - c[1];
    const r = Math.sqrt(dx * dx + dy * dy);
    const off = r - c[2];
    sum += off * off;
    if (normal === undefined || r === 0) continue;
    const row = [dx / r, dy / r, 1];
    for (let a = 0; a < 3; a++) {
      normal[9 + a] += row[a] * off;
      for (let b = 0; b < 3; b++) normal[3 * a + b] += row[a] * row[b];
    }
  }
  return sum;
}

/**
 * Least-squares circle: least sum of squared distances from the points (the association of ISO 14405-1 GG and of
 * roundness), by damped Gauss-Newton from the algebraic circle.
 * @throws RangeError for fewer than three points or points on one line.
 */
export function fitCircle(points: PlanePoints): Circle {
  const n = points.x.length;
  const frame = frameOf(points);
  const u = points.x.map((x) => (x - frame.x) / frame.scale);
  const v = points.y.map((y) => (y - frame.y) / frame.scale);
  const start = n >= 3 ? algebraicCircle(u, v) : undefined;
  if (start === undefined)
    throw new RangeError(`no circle through ${n} points: three that are not on one line are needed`);
  let circle = start;
  const normal = new Float64Array(12);
  let sum = squaredDistances(u, v, circle, normal);
  let damping = 0;
  for (let round = 0; round < 60; round++) {
    const matrix = normal.slice(0, 9);
    for (let a = 0; a < 3; a++) matrix[4 * a] *= 1 + damping;
    const step = solveLinear(matrix, normal.slice(9));
    const next = step && circle.map((value, a) => value + step[a]);
    const better = next ? squaredDistances(u, v, next) : Number.POSITIVE_INFINITY;
    if (next === undefined || !(better <= sum)) {
      damping = Math.max(10 * damping, 1e-4);
      if (damping > 1e8) break;
      continue;
    }
    const moved = Math.max(...(step as Float64Array).map(Math.abs));
    circle = next;
    sum = squaredDistances(u, v, circle, normal);
    damping /= 10;
    if (moved < 1e-14 * (1 + circle[2])) break;
  }
  squaredDistances(u, v, circle, normal);
  const variance = solveLinear(normal.slice(0, 9), Float64Array.of(0, 0, 1))?.[2] ?? Number.POSITIVE_INFINITY;
  return {
    x: frame.x + circle[0] * frame.scale,
    y: frame.y + circle[1] * frame.scale,
    radius: circle[2] * frame.scale,
    residual: Math.sqrt(sum / n) * frame.scale,
    radiusError: n > 3 ? Math.sqrt((sum / (n - 3)) * variance) * frame.scale : Number.POSITIVE_INFINITY,
  };
}

/** The points for which `keep` holds. */
export function pointsWhere(points: PlanePoints, keep: (x: number, y: number) => boolean): PlanePoints {
  const chosen = Uint32Array.from(points.x.keys()).filter((i) => keep(points.x[i], points.y[i]));
  return { x: Float64Array.from(chosen, (i) => points.x[i]), y: Float64Array.from(chosen, (i) => points.y[i]) };
}
