import { atan2, PI, sinCos } from '#src/base/math.ts';
import { bulgeOf } from '#src/base/outline-path.ts';

/** A plane point in the units of the drawing. */
export interface XY {
  readonly x: number;
  readonly y: number;
}

/** A piece in the units of the drawing: a chord, or an arc when it has a bulge. */
export interface DrawnPiece extends XY {
  readonly bulge?: number;
}

/**
 * Number of chords of equal parameter steps that stay within `tolerance` of a curve whose second derivative never exceeds
 * `bend`: the chord of a step h is off by at most bend h^2 / 8 (linear interpolation).
 */
function chordCount(bend: number, tolerance: number): number {
  return Math.max(1, Math.ceil(Math.sqrt(bend / (8 * tolerance))));
}

/** Length of a - 2 b + c. */
function secondDifference(a: XY, b: XY, c: XY): number {
  return Math.hypot(a.x - 2 * b.x + c.x, a.y - 2 * b.y + c.y);
}

/**
 * Chords of a Bezier curve of two to four control points, all ends on the curve and none farther from it than `tolerance`.
 * Undefined when it would take more than `most`.
 */
export function flattenBezier(points: readonly XY[], tolerance: number, most: number): DrawnPiece[] | undefined {
  const degree = points.length - 1;
  let bend = 0;
  for (let k = 0; k + 2 <= degree; k++) {
    bend = Math.max(bend, secondDifference(points[k] as XY, points[k + 1] as XY, points[k + 2] as XY));
  }
  const n = chordCount(degree * (degree - 1) * bend, tolerance);
  if (!(n <= most)) return undefined;
  return Array.from({ length: n }, (_, k) => (k === n - 1 ? (points[degree] as XY) : bezierAt(points, (k + 1) / n)));
}

/** De Casteljau's construction. */
function bezierAt(points: readonly XY[], t: number): XY {
  let level = points;
  while (level.length > 1) {
    level = level.slice(1).map((b, k) => {
      const a = level[k] as XY;
      return { x: a.x + t * (b.x - a.x), y: a.y + t * (b.y - a.y) };
    });
  }
  return level[0] as XY;
}

/** An arc as SVG paths have it: radii, rotation of the first (degrees), flags, end. */
export interface EllipseArc extends XY {
  readonly rx: number;
  readonly ry: number;
  readonly rotation: number;
  readonly large: boolean;
  readonly positive: boolean;
}

/** Radii that differ by less than this share are those of a circle. */
const ROUND = 1e-9;

/**
 * Pieces of an elliptical arc from a point: one or two exact arcs when it is circular, chords within `tolerance` otherwise.
 * Centre and angles, and what to do with radii too small or zero, by SVG 1.1, appendix F.6. Undefined for more than `most`.
 */
export function flattenArc(from: XY, arc: EllipseArc, tolerance: number, most: number): DrawnPiece[] | undefined {
  const end = { x: arc.x, y: arc.y };
  let rx = Math.abs(arc.rx);
  let ry = Math.abs(arc.ry);
  if (from.x === arc.x && from.y === arc.y) return [];
  if (rx === 0 || ry === 0) return [end];
  const { sin, cos } = sinCos(((arc.rotation % 360) * PI) / 180);
  // half the chord in the ellipse's axes
  const hx = (cos * (from.x - arc.x) + sin * (from.y - arc.y)) / 2;
  const hy = (cos * (from.y - arc.y) - sin * (from.x - arc.x)) / 2;
  const reach = Math.sqrt((hx / rx) ** 2 + (hy / ry) ** 2);
  if (reach > 1) {
    rx *= reach;
    ry *= reach;
  }
  const s = hx / rx;
  const t = hy / ry;
  const root = Math.sqrt(Math.max(0, 1 - s * s - t * t) / (s * s + t * t));
  const side = arc.large === arc.positive ? -root : root;
  // middle of the unit circle the ellipse becomes
  const mx = side * t;
  const my = -side * s;
  const start = atan2(t - my, s - mx);
  let sweep = atan2(-t - my, -s - mx) - start;
  if (arc.positive && sweep <= 0) sweep += 2 * PI;
  if (!arc.positive && sweep >= 0) sweep -= 2 * PI;
  const circular = Math.abs(rx - ry) <= ROUND * rx;
  const bend = Math.max(rx, ry) * sweep * sweep;
  const n = circular ? (Math.abs(sweep) > 3.2 ? 2 : 1) : chordCount(bend, tolerance);
  if (!(n <= most)) return undefined;
  const cx = (from.x + arc.x) / 2 + cos * mx * rx - sin * my * ry;
  const cy = (from.y + arc.y) / 2 + sin * mx * rx + cos * my * ry;
  const bulge = circular ? { bulge: bulgeOf(sweep / n) } : {};
  return Array.from({ length: n }, (_, k): DrawnPiece => {
    if (k === n - 1) return { ...end, ...bulge };
    const turned = sinCos(start + ((k + 1) / n) * sweep);
    const ex = rx * turned.cos;
    const ey = ry * turned.sin;
    return { x: cx + cos * ex - sin * ey, y: cy + sin * ex + cos * ey, ...bulge };
  });
}
