import { distance2ToSegment, type Segment, segmentBounds } from './outline-segment.ts';

/** Outlines with more segments than this are searched through a tree. */
export const SCANNED_SEGMENTS = 16;
const LEAF = 4;

/**
 * Segments of all loops one after the other and a tree of boxes around runs of them. Neighbours along a path are neighbours
 * in the plane, so that the order of the path serves as the order of the tree.
 */
export interface SegmentTree {
  readonly segments: readonly Segment[];
  /** Loop of each segment, and running arc length at which each starts (m). */
  readonly loopOf: Int32Array;
  readonly starts: Float64Array;
  /** Number of the first segment of each loop. */
  readonly firsts: Int32Array;
  /** Number of leaves, a power of two; node 1 is the root, node k has the children 2 k and 2 k + 1. */
  readonly leaves: number;
  /** xMin, yMin, xMax, yMax of each node (m). */
  readonly boxes: Float64Array;
}

/** The best segment of a search so far: distance squared (m2) and its number in the tree. */
interface Best {
  d2: number;
  k: number;
}

/** Builds the tree over loops whose running starts are known. */
export function buildTree(
  loops: readonly { readonly segments: readonly Segment[]; readonly start: number }[],
): SegmentTree {
  const segments = loops.flatMap((loop) => loop.segments);
  const loopOf = new Int32Array(segments.length);
  const starts = new Float64Array(segments.length);
  const firsts = new Int32Array(loops.length);
  let k = 0;
  loops.forEach((loop, index) => {
    firsts[index] = k;
    let before = loop.start;
    for (const segment of loop.segments) {
      loopOf[k] = index;
      starts[k++] = before;
      before += segment.length;
    }
  });
  return { segments, loopOf, starts, firsts, ...boxTree(segments) };
}

function boxTree(segments: readonly Segment[]): { leaves: number; boxes: Float64Array } {
  let leaves = 1;
  while (leaves * LEAF < segments.length) leaves *= 2;
  const boxes = new Float64Array(8 * leaves);
  for (let node = 0; node < 2 * leaves; node++) boxes.set([Infinity, Infinity, -Infinity, -Infinity], 4 * node);
  segments.forEach((segment, index) => {
    growBox(boxes, leaves + Math.floor(index / LEAF), segment);
  });
  for (let node = leaves - 1; node >= 1; node--) {
    for (let side = 0; side < 4; side++) {
      const a = boxes[8 * node + side] as number;
      const b = boxes[8 * node + 4 + side] as number;
      boxes[4 * node + side] = side < 2 ? Math.min(a, b) : Math.max(a, b);
    }
  }
  return { leaves, boxes };
}

function growBox(boxes: Float64Array, node: number, segment: Segment): void {
  const { xMin, yMin, xMax, yMax } = segmentBounds(segment);
  // an arc's own rounding, so that its box never cuts it
  const slack = segment.kind === 'arc' ? 2e-15 * (Math.abs(segment.cx) + Math.abs(segment.cy) + segment.radius) : 0;
  const at = 4 * node;
  boxes[at] = Math.min(boxes[at] as number, xMin - slack);
  boxes[at + 1] = Math.min(boxes[at + 1] as number, yMin - slack);
  boxes[at + 2] = Math.max(boxes[at + 2] as number, xMax + slack);
  boxes[at + 3] = Math.max(boxes[at + 3] as number, yMax + slack);
}

function boxDistance2(boxes: Float64Array, node: number, x: number, y: number): number {
  const at = 4 * node;
  const dx = Math.max((boxes[at] as number) - x, x - (boxes[at + 2] as number), 0);
  const dy = Math.max((boxes[at + 1] as number) - y, y - (boxes[at + 3] as number), 0);
  return dx * dx + dy * dy;
}

/**
 * Number of the nearest segment to (x, y): the same one, to the last bit, as a look at each in turn finds, the first of equals.
 * A box is passed over only when it is farther by more than rounding can hide.
 */
export function searchTree(tree: SegmentTree, x: number, y: number): number {
  const best: Best = { d2: Infinity, k: 0 };
  visit(tree, 1, x, y, best);
  return best.k;
}

function visit(tree: SegmentTree, node: number, x: number, y: number, best: Best): void {
  if (node >= tree.leaves) {
    const first = (node - tree.leaves) * LEAF;
    const end = Math.min(first + LEAF, tree.segments.length);
    for (let k = first; k < end; k++) {
      const d2 = distance2ToSegment(tree.segments[k] as Segment, x, y);
      if (d2 > best.d2 || (d2 === best.d2 && k > best.k)) continue;
      best.d2 = d2;
      best.k = k;
    }
    return;
  }
  const left = boxDistance2(tree.boxes, 2 * node, x, y);
  const right = boxDistance2(tree.boxes, 2 * node + 1, x, y);
  const near = left <= right ? 2 * node : 2 * node + 1;
  if (within(Math.min(left, right), best)) visit(tree, near, x, y, best);
  if (within(Math.max(left, right), best)) visit(tree, near ^ 1, x, y, best);
}

function within(d2: number, best: Best): boolean {
  return d2 <= best.d2 * (1 + 1e-9) + 1e-24 && d2 < Infinity;
}

/** Number of the segment that holds running arc length s (m), by bisection. */
export function segmentAt(tree: SegmentTree, s: number): number {
  let low = 0;
  let high = tree.starts.length - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if ((tree.starts[middle] as number) <= s) low = middle;
    else high = middle - 1;
  }
  return low;
}
