import { crossings } from './outline-cross.ts';
import { type Edge, edgesOf, TOUCH } from './outline-edge.ts';
import { nestingDepths } from './outline-nest.ts';
import { loopArea, orientLoop, type PathLoop } from './outline-path.ts';
import { endNormal, joinBounds, NO_BOUNDS } from './outline-segment.ts';

/** What a path may hold. */
export const PATH_LIMITS = {
  segments: 20_000,
  loops: 2_000,
  /** Shortest piece, and side of the smallest area enclosed (m). */
  smallest: 1e-6,
  /** Longest side of the box around a loop, and farthest coordinate from the origin (m). */
  largest: 1,
  /** Least angle between a piece and the way back along the one before (radians). */
  spike: 1e-3,
  /** Problems listed in one go. */
  problems: 100,
} as const;

/**
 * What is wrong with loops:
 * - `tooMany`: more pieces or loops than `PATH_LIMITS`; `value` is the count;
 * - `tooDense`: so many pieces alongside each other that they cannot be compared in a second;
 * - `noLoops`, `noPieces`: nothing there;
 * - `notFinite`: a coordinate or bulge that is no number;
 * - `open`: the last piece does not end at the start; `value` is the gap (m);
 * - `zeroLength`: a piece whose ends are the same point, a whole circle in one piece among them;
 * - `tiny`: a piece shorter than, or a loop enclosing less than the square of, the smallest length; `value` is that length (m);
 * - `huge`: a loop longer or farther out than the largest length; `value` is that length (m);
 * - `spike`: the path turns straight back on itself;
 * - `duplicatePoint`: the path comes through one of its vertices, or another loop's, again;
 * - `selfCrossing`, `loopsCross`: pieces that cross, touch or overlap, of one loop or of two;
 * - `holeOutside`: a clockwise loop that lies in no solid;
 * - `nesting`: a counter-clockwise loop inside a solid, or a clockwise one inside a hole.
 */
export type OutlineFault =
  | 'tooMany'
  | 'tooDense'
  | 'noLoops'
  | 'noPieces'
  | 'notFinite'
  | 'open'
  | 'zeroLength'
  | 'tiny'
  | 'huge'
  | 'spike'
  | 'duplicatePoint'
  | 'selfCrossing'
  | 'loopsCross'
  | 'holeOutside'
  | 'nesting';

/** One thing wrong with the loops of a path, and the place to mark. */
export interface OutlineProblem {
  readonly fault: OutlineFault;
  /** Place (m); always finite. */
  readonly x: number;
  readonly y: number;
  /** Loop and piece in it, counted from 0. */
  readonly loop: number;
  readonly segment: number;
  readonly value?: number;
  /** The other piece, where two are involved. */
  readonly other?: { readonly loop: number; readonly segment: number };
}

type Fault = Omit<OutlineProblem, 'loop' | 'segment' | 'x' | 'y'>;

/** The problems of one loop that can be seen piece by piece. */
function loopProblems(loop: PathLoop, index: number): OutlineProblem[] {
  const problems: OutlineProblem[] = [];
  let from = { x: loop.x, y: loop.y };
  const report = (segment: number, fault: Fault) => {
    const [x, y] = [from.x, from.y].map((v) => (Number.isFinite(v) ? v : 0)) as [number, number];
    problems.push({ ...fault, loop: index, segment, x, y });
  };
  if (![loop.x, loop.y].every(Number.isFinite)) report(0, { fault: 'notFinite' });
  else if (loop.pieces.length === 0) report(0, { fault: 'noPieces' });
  if (problems.length > 0) return problems;
  for (const [segment, piece] of loop.pieces.entries()) {
    if (![piece.x, piece.y, piece.kind === 'arc' ? piece.bulge : 0].every(Number.isFinite)) {
      report(segment, { fault: 'notFinite' });
      return problems;
    }
    const length = Math.sqrt((piece.x - from.x) ** 2 + (piece.y - from.y) ** 2);
    if (length <= TOUCH) report(segment, { fault: 'zeroLength' });
    else if (length < PATH_LIMITS.smallest) report(segment, { fault: 'tiny', value: length });
    from = piece;
  }
  const gap = Math.sqrt((from.x - loop.x) ** 2 + (from.y - loop.y) ** 2);
  if (gap > TOUCH) report(loop.pieces.length - 1, { fault: 'open', value: gap });
  return problems;
}

/** Loops that are too large or too far out. */
function sizeProblems(edges: readonly Edge[], loops: readonly PathLoop[]): OutlineProblem[] {
  const boxes = loops.map(() => NO_BOUNDS);
  for (const { loop, bounds } of edges) boxes[loop] = joinBounds(boxes[loop] as typeof bounds, bounds);
  return boxes.flatMap(({ xMin, xMax, yMin, yMax }, loop): OutlineProblem[] => {
    const value = Math.max(xMax - xMin, yMax - yMin, -xMin, xMax, -yMin, yMax);
    if (value <= PATH_LIMITS.largest) return [];
    const { x, y } = loops[loop] as PathLoop;
    return [{ fault: 'huge', loop, segment: 0, x, y, value }];
  });
}

/** Vertices at which a loop turns straight back, or so sharply that the side of a point there would be rounding. */
function spikeProblems(edges: readonly Edge[]): OutlineProblem[] {
  const bound = -1 + PATH_LIMITS.spike ** 2 / 2;
  return edges.flatMap((edge, k): OutlineProblem[] => {
    const after = edges[edge.segment === edge.of - 1 ? k - edge.of + 1 : k + 1] as Edge;
    const a = endNormal(edge.shape, true);
    const b = endNormal(after.shape, false);
    if (a.nx * b.nx + a.ny * b.ny > bound) return [];
    return [{ fault: 'spike', loop: edge.loop, segment: after.segment, x: after.x0, y: after.y0 }];
  });
}

function crossingProblems(edges: readonly Edge[]): OutlineProblem[] {
  const problems: OutlineProblem[] = [];
  const found = crossings(edges, PATH_LIMITS.problems);
  if (found === undefined) return [{ fault: 'tooDense', loop: 0, segment: 0, x: edges[0].x0, y: edges[0].y0 }];
  for (const { x, y, a, b, atVertices } of found) {
    // the pairs of edges around one vertex meet at the same place
    if (problems.some((known) => Math.abs(known.x - x) < 10 * TOUCH && Math.abs(known.y - y) < 10 * TOUCH)) continue;
    const [first, other] = a.loop < b.loop || (a.loop === b.loop && a.segment <= b.segment) ? [a, b] : [b, a];
    const apart = first.loop === other.loop ? 'selfCrossing' : 'loopsCross';
    problems.push({
      fault: atVertices ? 'duplicatePoint' : apart,
      loop: first.loop,
      segment: first.segment,
      x,
      y,
      other: { loop: other.loop, segment: other.segment },
    });
  }
  return problems;
}

/** Loops that enclose next to nothing, and loops whose direction contradicts where they lie. */
function roleProblems(edges: readonly Edge[], loops: readonly PathLoop[]): OutlineProblem[] {
  const depths = nestingDepths(edges, loops);
  return loops.flatMap((loop, index): OutlineProblem[] => {
    const place = { loop: index, segment: 0, x: loop.x, y: loop.y };
    const area = loopArea(loop);
    if (Math.abs(area) < PATH_LIMITS.smallest ** 2)
      return [{ fault: 'tiny', ...place, value: Math.sqrt(Math.abs(area)) }];
    const depth = depths[index] as number;
    if (area < 0 === (depth % 2 === 1)) return [];
    return [{ fault: depth === 0 ? 'holeOutside' : 'nesting', ...place, value: depth }];
  });
}

/** Problems that must be gone before the loops mean anything as geometry. */
function pieceProblems(loops: readonly PathLoop[]): OutlineProblem[] {
  const place = { loop: 0, segment: 0, x: 0, y: 0 };
  if (loops.length === 0) return [{ fault: 'noLoops', ...place }];
  const count = loops.reduce((sum, { pieces }) => sum + pieces.length, 0);
  if (count > PATH_LIMITS.segments) return [{ fault: 'tooMany', ...place, value: count }];
  if (loops.length > PATH_LIMITS.loops) return [{ fault: 'tooMany', ...place, value: loops.length }];
  return loops.flatMap(loopProblems);
}

/**
 * Checks the loops of a path: outer ones counter-clockwise, holes clockwise, nothing crossing. Every problem comes with its
 * place. What is wrong with single pieces is told first and alone, then what crosses, then what is nested wrongly, since each
 * hides the next. At most `PATH_LIMITS.problems`; empty when the path is sound.
 */
export function checkLoops(loops: readonly PathLoop[]): OutlineProblem[] {
  const first = pieceProblems(loops);
  if (first.length > 0) return first.slice(0, PATH_LIMITS.problems);
  const edges = edgesOf(loops);
  const sizes = sizeProblems(edges, loops);
  if (sizes.length > 0) return sizes.slice(0, PATH_LIMITS.problems);
  const tangled = [...spikeProblems(edges), ...crossingProblems(edges)];
  if (tangled.length > 0) return tangled.slice(0, PATH_LIMITS.problems);
  return roleProblems(edges, loops).slice(0, PATH_LIMITS.problems);
}

/**
 * The same loops with their directions set by how they lie in each other: a loop in none is a solid, one in a solid is a hole,
 * one in a hole a solid again. Loops with unsound pieces, or too large, come back as they are, for `checkLoops` to name.
 */
export function orientLoops(loops: readonly PathLoop[]): PathLoop[] {
  if (pieceProblems(loops).length > 0) return [...loops];
  const edges = edgesOf(loops);
  if (sizeProblems(edges, loops).length > 0) return [...loops];
  const depths = nestingDepths(edges, loops);
  return loops.map((loop, index) => orientLoop(loop, (depths[index] as number) % 2 === 1));
}
