import type { OutlineSpec } from './outline.ts';
import {
  type Bounds,
  distance2ToSegment,
  endNormal,
  nearestOnSegment,
  pointOn,
  type Segment,
} from './outline-segment.ts';
import { type SegmentTree, searchTree, segmentAt } from './outline-tree.ts';

export interface Loop {
  readonly segments: readonly Segment[];
  readonly length: number;
  /** Arc length at which this loop starts in the outline's running count (m). */
  readonly start: number;
  readonly hole: boolean;
}

export interface Outline {
  readonly spec: OutlineSpec;
  readonly loops: readonly Loop[];
  /** Enclosed area (m2), holes taken off. */
  readonly area: number;
  /** Length of all loops (m). */
  readonly perimeter: number;
  readonly bounds: Bounds;
  /** How `nearest` finds its way where there are many segments. */
  readonly tree?: SegmentTree;
}

/** A point of the outline nearest to a given one. `distance` is negative inside the solid (m). */
export interface NearestPoint {
  distance: number;
  /** Running arc length of the nearest point (m). */
  s: number;
  loop: number;
}

/** Point and outward unit normal at running arc length s (m), wrapped over the whole outline. */
export function pointAt(outline: Outline, s: number): { x: number; y: number; nx: number; ny: number } {
  let rest = s % outline.perimeter;
  if (rest < 0) rest += outline.perimeter;
  if (outline.tree !== undefined && outline.spec.kind === 'path') {
    const k = segmentAt(outline.tree, rest);
    const segment = outline.tree.segments[k] as Segment;
    return pointOn(segment, Math.min(rest - (outline.tree.starts[k] as number), segment.length));
  }
  const loop = outline.loops.findLast((candidate) => candidate.start <= rest) ?? (outline.loops[0] as Loop);
  rest -= loop.start;
  for (const [k, segment] of loop.segments.entries()) {
    if (rest <= segment.length || k === loop.segments.length - 1) return pointOn(segment, rest);
    rest -= segment.length;
  }
  throw new RangeError('an outline has no segments');
}

/**
 * Sign of a distance whose foot is at a vertex, from the sum of the two normals that meet there (Baerentzen and Aanaes,
 * IEEE TVCG 11 (2005) 243, the plane case).
 */
function vertexSide(loop: Loop, k: number, atEnd: boolean, point: { x: number; y: number }): number {
  const n = loop.segments.length;
  const segment = loop.segments[k] as Segment;
  const other = loop.segments[atEnd ? (k + 1) % n : (k + n - 1) % n] as Segment;
  const own = endNormal(segment, atEnd);
  const its = endNormal(other, !atEnd);
  const vertex = pointOn(segment, atEnd ? segment.length : 0);
  return (point.x - vertex.x) * (own.nx + its.nx) + (point.y - vertex.y) * (own.ny + its.ny);
}

/** Number of the nearest segment through all loops, by a look at each. */
function scan(loops: readonly Loop[], x: number, y: number): number {
  let best = Infinity;
  let found = 0;
  let k = 0;
  for (const loop of loops) {
    for (const segment of loop.segments) {
      const d2 = distance2ToSegment(segment, x, y);
      if (d2 < best) {
        best = d2;
        found = k;
      }
      k++;
    }
  }
  return found;
}

/** Where the segment numbered k through all loops is: its loop, its number there, the running arc length of its start (m). */
function locate(outline: Outline, k: number): { loop: number; own: number; before: number } {
  if (outline.tree !== undefined) {
    const loop = outline.tree.loopOf[k] as number;
    const own = k - (outline.tree.firsts[loop] as number);
    return { loop, own, before: outline.tree.starts[k] as number };
  }
  let own = k;
  let loop = 0;
  while (own >= (outline.loops[loop] as Loop).segments.length) {
    own -= (outline.loops[loop] as Loop).segments.length;
    loop++;
  }
  const { segments, start } = outline.loops[loop] as Loop;
  let before = start;
  for (let i = 0; i < own; i++) before += (segments[i] as Segment).length;
  return { loop, own, before };
}

/**
 * Signed distance from (x, y) to the outline and where along it the nearest point lies. Exact, whether each segment is looked
 * at or, with many of them, only those near.
 */
export function nearest(outline: Outline, x: number, y: number): NearestPoint {
  const k = outline.tree ? searchTree(outline.tree, x, y) : scan(outline.loops, x, y);
  const { loop, own, before } = locate(outline, k);
  const found = outline.loops[loop] as Loop;
  const n = found.segments.length;
  const { d2, t, side } = nearestOnSegment(found.segments[own] as Segment, x, y);
  const atVertex = (t === 0 || t === 1) && n > 1;
  const sign = atVertex ? vertexSide(found, own, t === 1, { x, y }) : side;
  // the end of one loop is its own start again and not the start of the next
  const wraps = t === 1 && own === n - 1 && outline.loops.length > 1;
  const s = wraps ? found.start : before + t * (found.segments[own] as Segment).length;
  return { distance: sign < 0 ? 0 - Math.sqrt(d2) : Math.sqrt(d2), s, loop };
}
