import { atan, atan2, sinCos } from './math.ts';
import { arc, doubleArea, line, type Segment } from './outline-segment.ts';

/** A straight piece of a path, to (x, y) (m). */
export interface PathLine {
  readonly kind: 'line';
  readonly x: number;
  readonly y: number;
}

/**
 * A circular piece of a path, to (x, y) (m). `bulge` is the tangent of a quarter of the angle it turns through, positive
 * counter-clockwise: 1 is a half circle, and a whole circle takes two pieces. Both ends are exact, whatever the bulge.
 */
export interface PathArc {
  readonly kind: 'arc';
  readonly x: number;
  readonly y: number;
  readonly bulge: number;
}

export type PathPiece = PathLine | PathArc;

/**
 * A closed loop: pieces end to end from (x, y) back to (x, y) (m). Counter-clockwise around the solid, clockwise around a
 * hole in it.
 */
export interface PathLoop {
  readonly x: number;
  readonly y: number;
  readonly pieces: readonly PathPiece[];
}

/** Below this height over its chord (m) an arc is taken for the chord: far below a grit's mark, and its radius has no digits left. */
const FLAT = 1e-9;

/** Bulge of an arc that turns by `sweep` (radians, positive counter-clockwise), less than a whole turn. */
export function bulgeOf(sweep: number): number {
  const { sin, cos } = sinCos(sweep / 4);
  return sin / cos;
}

/** Segment from (x0, y0) along one piece (m). */
export function pieceSegment(x0: number, y0: number, piece: PathPiece): Segment {
  const { x, y } = piece;
  const dx = x - x0;
  const dy = y - y0;
  const chord = Math.sqrt(dx * dx + dy * dy);
  if (piece.kind === 'line' || Math.abs(piece.bulge) * chord < 2 * FLAT) return line(x0, y0, x, y);
  const { bulge } = piece;
  // the middle lies on the chord's perpendicular bisector, to the left of a flat counter-clockwise arc
  const apothem = (1 - bulge * bulge) / (4 * bulge);
  const cx = (x0 + x) / 2 - dy * apothem;
  const cy = (y0 + y) / 2 + dx * apothem;
  const radius = (chord * (1 + bulge * bulge)) / (4 * Math.abs(bulge));
  return arc(cx, cy, radius, atan2(y0 - cy, x0 - cx), 4 * atan(bulge));
}

/** Segments of a loop, in order; the last one ends at the loop's start. */
export function loopSegments(loop: PathLoop): Segment[] {
  let { x, y } = loop;
  const last = loop.pieces.length - 1;
  return loop.pieces.map((piece, k) => {
    const end = k === last ? { ...piece, x: loop.x, y: loop.y } : piece;
    const segment = pieceSegment(x, y, end);
    x = end.x;
    y = end.y;
    return segment;
  });
}

/** Area a loop encloses (m2), positive when it runs counter-clockwise. Taken about its start, so that distance costs no digits. */
export function loopArea(loop: PathLoop): number {
  const moved = moveLoop(loop, -loop.x, -loop.y);
  return loopSegments(moved).reduce((sum, segment) => sum + doubleArea(segment), 0) / 2;
}

/** The same loop moved by (dx, dy) (m). */
export function moveLoop(loop: PathLoop, dx: number, dy: number): PathLoop {
  const pieces = loop.pieces.map((piece) => ({ ...piece, x: piece.x + dx, y: piece.y + dy }));
  return { x: loop.x + dx, y: loop.y + dy, pieces };
}

/** The same loop run the other way round, from the same start. */
export function reverseLoop(loop: PathLoop): PathLoop {
  const { x, y, pieces } = loop;
  const reversed = pieces.map((piece, k): PathPiece => {
    const to = k === 0 ? { x, y } : (pieces[k - 1] as PathPiece);
    return piece.kind === 'line'
      ? { kind: 'line', x: to.x, y: to.y }
      : { kind: 'arc', x: to.x, y: to.y, bulge: -piece.bulge };
  });
  return { x, y, pieces: reversed.reverse() };
}

/** A loop run as the edge of a hole (clockwise) or of a solid (counter-clockwise). */
export function orientLoop(loop: PathLoop, hole: boolean): PathLoop {
  return loopArea(loop) < 0 === hole ? loop : reverseLoop(loop);
}

/** Loops of lines and arcs as path loops; a whole circle becomes two halves. */
export function pathLoops(loops: readonly { readonly segments: readonly Segment[] }[]): PathLoop[] {
  return loops.map(({ segments }): PathLoop => {
    const ends = segments.flatMap(segmentPieces);
    const last = ends[ends.length - 1] as PathPiece;
    return { x: last.x, y: last.y, pieces: ends };
  });
}

/** One segment as path pieces from its start; an arc well over half a turn as two, since its ends would leave its middle ill known. */
export function segmentPieces(segment: Segment): PathPiece[] {
  if (segment.kind === 'line') return [{ kind: 'line', x: segment.x1, y: segment.y1 }];
  const { cx, cy, radius, start, sweep } = segment;
  const parts = Math.abs(sweep) > 3.2 ? 2 : 1;
  const bulge = bulgeOf(sweep / parts);
  return Array.from({ length: parts }, (_, k): PathPiece => {
    const { sin, cos } = sinCos(start + ((k + 1) / parts) * sweep);
    return { kind: 'arc', x: cx + radius * cos, y: cy + radius * sin, bulge };
  });
}
