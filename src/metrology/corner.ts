import { atan2, PI, sinCos } from '#src/base/math.ts';
import { fitCircle, type PlanePoints, pointsWhere } from './circle.ts';
import { median } from './order.ts';

/** Share of the points at either end that surely belongs to the wall or to the floor, to start from. */
const STRAIGHT_SHARE = 0.2;
/** Half the angle about the bisector within which a point gives the radius of the fillet through it, as a share. */
const MIDDLE_SHARE = 0.4;
/** Share of the arc between the two tangent points that the circle is laid through, the same left out at either end. */
const ARC_SHARE = 0.8;
const FEWEST_POINTS = 5;
const ROUNDS = 12;

export interface CornerRadius {
  /** Radius of the least-squares arc (m); NaN when fewer than five points lie on it. */
  readonly radius: number;
  /** Standard error of that radius (m), NaN with it. Where it is large, few and rough points, the tangent radius is safer. */
  readonly radiusError: number;
  /** Radius of the fillet that touches wall and floor (median over the points about the bisector), m. */
  readonly tangentRadius: number;
  /** Angle between wall and floor (rad); pi/2 when square. */
  readonly angle: number;
  /** Root mean square distance of the points from the arc (m). */
  readonly residual: number;
  readonly points: number;
}

interface StraightLine {
  readonly x: number;
  readonly y: number;
  /** Unit direction, away from the corner. */
  readonly ux: number;
  readonly uy: number;
}

/** Line of least squared distances with Tukey's weights, so that single chips do not turn it. */
function robustLine({ x, y }: PlanePoints): StraightLine {
  const n = x.length;
  if (n < 3) throw new RangeError(`no straight piece beside the corner: ${n} points`);
  const weight = new Float64Array(n).fill(1);
  let line: StraightLine = { x: 0, y: 0, ux: 1, uy: 0 };
  for (let round = 0; round < ROUNDS; round++) {
    line = weightedLine(x, y, weight);
    const { ux, uy } = line;
    const off = x.map((value, i) => Math.abs((value - line.x) * uy - (y[i] - line.y) * ux));
    const scale = 6 * median(off.slice());
    if (!(scale > 0)) break;
    off.forEach((distance, i) => {
      weight[i] = distance < scale ? (1 - (distance / scale) ** 2) ** 2 : 0;
    });
  }
  return line;
}

function weightedLine(x: Float64Array, y: Float64Array, weight: Float64Array): StraightLine {
  let w = 0;
  let sx = 0;
  let sy = 0;
  for (let i = 0; i < x.length; i++) {
    w += weight[i];
    sx += weight[i] * x[i];
    sy += weight[i] * y[i];
  }
  const mx = sx / w;
  const my = sy / w;
  let xx = 0;
  let xy = 0;
  let yy = 0;
  for (let i = 0; i < x.length; i++) {
    xx += weight[i] * (x[i] - mx) ** 2;
    xy += weight[i] * (x[i] - mx) * (y[i] - my);
    yy += weight[i] * (y[i] - my) ** 2;
  }
  const { sin, cos } = sinCos(atan2(2 * xy, xx - yy) / 2);
  return { x: mx, y: my, ux: cos, uy: sin };
}

/** Where wall and floor meet, and the geometry of fillets that touch both. */
interface CornerFrame {
  readonly x: number;
  readonly y: number;
  readonly wall: StraightLine;
  readonly floor: StraightLine;
  readonly angle: number;
  /** Unit vector along the bisector, into the cavity, and the distance of the centre of a fillet of radius 1. */
  readonly bx: number;
  readonly by: number;
  readonly out: number;
}

function cornerFrame(wall: StraightLine, floor: StraightLine): CornerFrame {
  const cross = wall.ux * floor.uy - wall.uy * floor.ux;
  if (!(Math.abs(cross) > 0.05)) throw new RangeError('no corner: wall and floor are nearly parallel');
  const t = ((floor.x - wall.x) * floor.uy - (floor.y - wall.y) * floor.ux) / cross;
  const x = wall.x + t * wall.ux;
  const y = wall.y + t * wall.uy;
  const away = (line: StraightLine): StraightLine => {
    const side = (line.x - x) * line.ux + (line.y - y) * line.uy < 0 ? -1 : 1;
    return { ...line, ux: side * line.ux, uy: side * line.uy };
  };
  const w = away(wall);
  const f = away(floor);
  const length = Math.sqrt((w.ux + f.ux) ** 2 + (w.uy + f.uy) ** 2);
  const half = atan2(Math.abs(w.ux * f.uy - w.uy * f.ux), 1 + w.ux * f.ux + w.uy * f.uy);
  return {
    x,
    y,
    wall: w,
    floor: f,
    angle: 2 * half,
    bx: (w.ux + f.ux) / length,
    by: (w.uy + f.uy) / length,
    out: 1 / sinCos(half).sin,
  };
}

/** Radius of the fillet through a point: |p - R out b| = R, the root that makes the point lie on the near side. */
function filletThrough(frame: CornerFrame, dx: number, dy: number): number {
  const along = (dx * frame.bx + dy * frame.by) * frame.out;
  const square = dx * dx + dy * dy;
  const a = frame.out * frame.out - 1;
  const root = Math.sqrt(Math.max(along * along - a * square, 0));
  return (along + root) / a;
}

/** Angle of a point about the centre of a fillet, from the bisector towards the corner (rad, 0 in the middle). */
function angleOnFillet(frame: CornerFrame, radius: number, dx: number, dy: number): number {
  const px = frame.bx * frame.out * radius - dx;
  const py = frame.by * frame.out * radius - dy;
  return Math.abs(atan2(px * frame.by - py * frame.bx, px * frame.bx + py * frame.by));
}

function medianFillet(points: PlanePoints, frame: CornerFrame, radius: number | undefined): number {
  const halfArc = (PI - frame.angle) / 2;
  const near = pointsWhere(points, (x, y) => {
    const dx = x - frame.x;
    const dy = y - frame.y;
    if (radius !== undefined) return angleOnFillet(frame, radius, dx, dy) <= MIDDLE_SHARE * halfArc;
    const turn = Math.abs(atan2(dx * frame.by - dy * frame.bx, dx * frame.bx + dy * frame.by));
    return turn <= (MIDDLE_SHARE * frame.angle) / 2;
  });
  return median(near.x.map((x, i) => filletThrough(frame, x - frame.x, near.y[i] - frame.y)));
}

/** Points of the profile, in order, that lie farther than `reach` from the corner on the wall's or the floor's side. */
function straightPieces(points: PlanePoints, frame: CornerFrame, reach: number): [PlanePoints, PlanePoints] {
  const beyond = (own: StraightLine, other: StraightLine) =>
    pointsWhere(points, (x, y) => {
      const along = (x - frame.x) * own.ux + (y - frame.y) * own.uy;
      return along > reach && along > (x - frame.x) * other.ux + (y - frame.y) * other.uy;
    });
  return [beyond(frame.wall, frame.floor), beyond(frame.floor, frame.wall)];
}

/** First and last fifth of the points; chips lengthen a path, so its length is no measure. */
function endPieces({ x, y }: PlanePoints): [PlanePoints, PlanePoints] {
  const count = Math.max(3, Math.floor(STRAIGHT_SHARE * x.length));
  return [
    { x: x.slice(0, count), y: y.slice(0, count) },
    { x: x.slice(-count), y: y.slice(-count) },
  ];
}

/**
 * Corner radius between wall and floor from a profile square to the outline, points (r, z) given in order from the wall
 * to the floor: least-squares arc (derived). Robust lines through the first and the last fifth of the points give the corner; the
 * fillet that touches both lines and passes through a point is unique, and the median over the points about the bisector
 * is the tangent radius; the lines are laid again through what lies a quarter beyond its tangent points, until both stand
 * still. The circle is then laid freely through the points on the middle 80 % of the arc between the tangent points, so
 * that neither straight nor transition enters.
 * @throws RangeError when wall or floor has fewer than three points beyond the arc, or they are nearly parallel.
 */
export function cornerRadius(points: PlanePoints): CornerRadius {
  if (points.x.length < 8) throw new RangeError(`a corner needs eight points at least, not ${points.x.length}`);
  let pieces = endPieces(points);
  let frame = cornerFrame(robustLine(pieces[0]), robustLine(pieces[1]));
  let tangentRadius = medianFillet(points, frame, undefined);
  for (let round = 0; round < ROUNDS && tangentRadius > 0; round++) {
    const half = sinCos(frame.angle / 2);
    pieces = straightPieces(points, frame, (1.25 * tangentRadius * half.cos) / half.sin);
    frame = cornerFrame(robustLine(pieces[0]), robustLine(pieces[1]));
    const next = medianFillet(points, frame, tangentRadius);
    if (!(next > 0)) break;
    const moved = Math.abs(next - tangentRadius);
    tangentRadius = next;
    if (moved <= 1e-9 * tangentRadius) break;
  }
  const halfArc = (PI - frame.angle) / 2;
  const arc = pointsWhere(
    points,
    (x, y) => angleOnFillet(frame, tangentRadius, x - frame.x, y - frame.y) <= ARC_SHARE * halfArc,
  );
  const count = arc.x.length;
  const common = { tangentRadius, angle: frame.angle, points: count };
  if (!(tangentRadius > 0) || count < FEWEST_POINTS)
    return { ...common, radius: Number.NaN, radiusError: Number.NaN, residual: Number.NaN };
  const { radius, radiusError, residual } = fitCircle(arc);
  return { ...common, radius, radiusError, residual };
}
