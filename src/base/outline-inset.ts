import { atan2, PI } from './math.ts';
import { crossings } from './outline-cross.ts';
import { type Edge, TOUCH } from './outline-edge.ts';
import { bulgeOf, type PathLoop, type PathPiece } from './outline-path.ts';
import { type Loop, nearest, type Outline } from './outline-query.ts';
import { arc, endNormal, line, pointOn, type Segment, segmentBounds } from './outline-segment.ts';

/**
 * An outline moved inward: the points inside at a given distance from it. Candidates are every piece moved along its normal
 * and an arc round every re-entrant corner; between them they hold the whole curve, since each of its points has a nearest
 * point on a piece or at such a corner. Cut where they meet, the parts nearer to the outline than the distance are dropped and
 * the rest joined. Derived.
 */

/** Parts nearer than the distance by more than this are dropped (m): far above rounding, below the tails of shallow crossings. */
const SLACK = 1e-13;
/** Parts that lead nowhere are left out up to this length (m): tails of crossings too shallow to tell. */
const TAIL = 1e-7;
/** Ends within this distance are joined (m). */
const JOINED = 2e-8;
/** Pieces an outline may have to be moved. */
const MOST_SEGMENTS = 4000;
/** Turns at corners below this are tangent (radians). */
const TANGENT = 1e-9;

/** Part of the moved curve: its ends and its way. */
interface Part {
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
  /** Angle an arc turns through (radians); 0 for a line. */
  readonly sweep: number;
}

function lengthOf(dx: number, dy: number): number {
  return Math.sqrt(dx * dx + dy * dy);
}

/** A piece moved to its left by `distance` (m); undefined where nothing of it is left. */
function moved(segment: Segment, distance: number): Segment | undefined {
  if (segment.kind === 'line') {
    const { nx, ny } = endNormal(segment, false);
    const [dx, dy] = [-distance * nx, -distance * ny];
    return line(segment.x0 + dx, segment.y0 + dy, segment.x1 + dx, segment.y1 + dy);
  }
  const radius = segment.sweep > 0 ? segment.radius - distance : segment.radius + distance;
  if (radius <= TOUCH) return undefined;
  return arc(segment.cx, segment.cy, radius, segment.start, segment.sweep);
}

/** The arc round a re-entrant corner between two pieces; undefined at any other. */
function roundCorner(before: Segment, after: Segment, distance: number): Segment | undefined {
  const a = endNormal(before, true);
  const b = endNormal(after, false);
  const turn = atan2(a.nx * b.ny - a.ny * b.nx, a.nx * b.nx + a.ny * b.ny);
  if (turn > -TANGENT) return undefined;
  const { x, y } = pointOn(before, before.length);
  return arc(x, y, distance, atan2(-a.ny, -a.nx), turn);
}

function candidatesOf(loops: readonly Loop[], distance: number): Segment[] {
  return loops.flatMap(({ segments }) =>
    segments.flatMap((segment, k) => {
      const own = moved(segment, distance);
      const corner = roundCorner(segment, segments[(k + 1) % segments.length] as Segment, distance);
      return [...(own ? [own] : []), ...(corner ? [corner] : [])];
    }),
  );
}

function edgeOf(shape: Segment, loop: number): Edge {
  const from = pointOn(shape, 0);
  const to = pointOn(shape, shape.length);
  const ends = { x0: from.x, y0: from.y, x1: to.x, y1: to.y };
  return { loop, segment: 0, of: 1, ...ends, shape, bounds: segmentBounds(shape) };
}

/** How far along a segment one of its points lies (m). */
function alongOf(segment: Segment, x: number, y: number): number {
  if (segment.kind === 'line') {
    const { x0, y0, x1, y1, length } = segment;
    return ((x - x0) * (x1 - x0) + (y - y0) * (y1 - y0)) / length;
  }
  const way = segment.sweep > 0 ? 1 : -1;
  let turned = way * (atan2(y - segment.cy, x - segment.cx) - segment.start);
  turned -= 2 * PI * Math.floor(turned / (2 * PI));
  // an end met a hair before its start
  return turned * segment.radius > segment.length + TOUCH ? 0 : turned * segment.radius;
}

/** Parts of the candidates between the places where they meet that keep the distance. */
function partsOf(outline: Outline, shapes: readonly Segment[], distance: number): Part[] | undefined {
  const found = crossings(
    shapes.map((shape, k) => edgeOf(shape, k)),
    Infinity,
  );
  if (found === undefined && shapes.length > 1) return undefined;
  const stops = shapes.map(({ length }) => [0, length]);
  for (const { x, y, a, b } of found ?? []) {
    for (const { loop } of [a, b]) (stops[loop] as number[]).push(alongOf(shapes[loop] as Segment, x, y));
  }
  return shapes.flatMap((shape, k) => {
    const at = (stops[k] as number[]).filter((s) => s >= 0 && s <= shape.length).sort((p, q) => p - q);
    return at.slice(1).flatMap((to, j): Part[] => {
      const from = at[j] as number;
      if (to - from <= 2 * TOUCH) return [];
      const middle = pointOn(shape, (from + to) / 2);
      if (nearest(outline, middle.x, middle.y).distance > SLACK - distance) return [];
      const p = pointOn(shape, from);
      const q = pointOn(shape, to);
      const sweep = shape.kind === 'arc' ? (shape.sweep * (to - from)) / shape.length : 0;
      return [{ x0: p.x, y0: p.y, x1: q.x, y1: q.y, sweep }];
    });
  });
}

/** Parts by the cell their start lies in. */
function startsOf(parts: readonly Part[]): (x: number, y: number, used: Uint8Array) => number {
  const cells = new Map<string, number[]>();
  const cell = (v: number) => Math.floor(v / JOINED);
  parts.forEach(({ x0, y0 }, k) => {
    const key = `${cell(x0)},${cell(y0)}`;
    const known = cells.get(key);
    if (known) known.push(k);
    else cells.set(key, [k]);
  });
  return (x, y, used) => {
    let best = -1;
    let least = JOINED;
    for (let i = -1; i <= 1; i++) {
      for (let j = -1; j <= 1; j++) {
        for (const k of cells.get(`${cell(x) + i},${cell(y) + j}`) ?? []) {
          const { x0, y0 } = parts[k] as Part;
          const away = lengthOf(x0 - x, y0 - y);
          if (used[k] === 0 && away <= least) [best, least] = [k, away];
        }
      }
    }
    return best;
  };
}

/** A part as pieces to (x, y); an arc well over half a turn as two. */
function piecesOf(part: Part, x: number, y: number): PathPiece[] {
  if (part.sweep === 0) return [{ kind: 'line', x, y }];
  if (Math.abs(part.sweep) <= 3.2) return [{ kind: 'arc', x, y, bulge: bulgeOf(part.sweep) }];
  // the middle of the arc, from the chord: left of it by half the chord times the bulge
  const bulge = bulgeOf(part.sweep);
  const [dx, dy] = [part.x1 - part.x0, part.y1 - part.y0];
  const middle = { x: (part.x0 + part.x1) / 2 + (dy * bulge) / 2, y: (part.y0 + part.y1) / 2 - (dx * bulge) / 2 };
  const half = bulgeOf(part.sweep / 2);
  return [
    { kind: 'arc', ...middle, bulge: half },
    { kind: 'arc', x, y, bulge: half },
  ];
}

/** A loop walked from one part on; undefined where it does not close, null where it is but the tail of a shallow crossing. */
function walked(
  parts: readonly Part[],
  first: number,
  next: (x: number, y: number) => number,
): PathLoop | null | undefined {
  const start = parts[first] as Part;
  const pieces: PathPiece[] = [];
  for (let k = first; ; ) {
    const part = parts[k] as Part;
    const away = lengthOf(part.x1 - start.x0, part.y1 - start.y0);
    const after = away <= JOINED ? first : next(part.x1, part.y1);
    if (after < 0) return away > TAIL ? undefined : null;
    const { x0, y0 } = parts[after] as Part;
    pieces.push(...piecesOf(part, x0, y0));
    if (after === first) return { x: start.x0, y: start.y0, pieces };
    k = after;
  }
}

/** Joins parts end to start into loops; undefined where one does not close. */
function joined(parts: readonly Part[]): PathLoop[] | undefined {
  const used = new Uint8Array(parts.length);
  const startNear = startsOf(parts);
  const next = (x: number, y: number) => {
    const k = startNear(x, y, used);
    if (k >= 0) used[k] = 1;
    return k;
  };
  const loops: PathLoop[] = [];
  for (let first = 0; first < parts.length; first++) {
    if (used[first] === 1) continue;
    used[first] = 1;
    const loop = walked(parts, first, next);
    if (loop === undefined) return undefined;
    if (loop !== null) loops.push(loop);
  }
  return loops;
}

/**
 * The loops of an outline moved inward by `distance` (m, above zero), in the outline's directions; empty when nothing is left.
 * Undefined when it has too many pieces, or is so degenerate that the parts do not join: then nothing is claimed. Loops may
 * hold pieces too short for a tool.
 */
export function insetLoops(outline: Outline, distance: number): PathLoop[] | undefined {
  if (!(distance > 0)) throw new RangeError(`an outline is moved inward by more than zero: ${distance}`);
  const count = outline.loops.reduce((sum, { segments }) => sum + segments.length, 0);
  if (count > MOST_SEGMENTS) return undefined;
  const parts = partsOf(outline, candidatesOf(outline.loops, distance), distance);
  return parts && joined(parts);
}
