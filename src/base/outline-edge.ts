import { type PathLoop, type PathPiece, pieceSegment } from './outline-path.ts';
import { type Bounds, type Segment, segmentBounds } from './outline-segment.ts';

/** Closer than this (m) two points of a path are one. */
export const TOUCH = 1e-9;

/** One piece of a loop with both its ends, which neighbours share to the last bit. */
export interface Edge {
  readonly loop: number;
  readonly segment: number;
  /** Number of pieces in its loop. */
  readonly of: number;
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
  readonly shape: Segment;
  readonly bounds: Bounds;
}

/** The pieces of all loops as edges, in order. The last piece of a loop ends at the loop's start. */
export function edgesOf(loops: readonly PathLoop[]): Edge[] {
  return loops.flatMap((loop, index) => {
    const of = loop.pieces.length;
    return loop.pieces.map((piece, segment): Edge => {
      const from = segment === 0 ? loop : (loop.pieces[segment - 1] as PathPiece);
      const to = segment === of - 1 ? loop : piece;
      const shape = pieceSegment(from.x, from.y, { ...piece, x: to.x, y: to.y });
      const ends = { x0: from.x, y0: from.y, x1: to.x, y1: to.y };
      return { loop: index, segment, of, ...ends, shape, bounds: edgeBounds(ends, shape) };
    });
  });
}

function edgeBounds(ends: { x0: number; y0: number; x1: number; y1: number }, shape: Segment): Bounds {
  const { x0, y0, x1, y1 } = ends;
  const box = segmentBounds(shape);
  return {
    xMin: Math.min(box.xMin, x0, x1),
    xMax: Math.max(box.xMax, x0, x1),
    yMin: Math.min(box.yMin, y0, y1),
    yMax: Math.max(box.yMax, y0, y1),
  };
}
