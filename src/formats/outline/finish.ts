import type { PathLoop, PathPiece, PathSpec } from '#src/base/outline.ts';
import { makeOutline } from '#src/base/outline.ts';
import { checkLoops, orientLoops, PATH_LIMITS } from '#src/base/outline-check.ts';
import { moveLoop } from '#src/base/outline-path.ts';
import { fileWarning, type OutlineFileProblem, outlineFileProblem } from './problems.ts';

/** Where the outline's own origin is: in the middle of the box around it, where the file has its origin, or at a point of the file (m). */
export type OutlineOrigin = 'middle' | 'file' | { readonly x: number; readonly y: number };

/** What a file held. Never both an outline and a refusal. */
export interface ReadOutline {
  /** The outline, sound, its directions set by how the loops lie in each other. */
  readonly outline?: PathSpec;
  /** Point of the file that became the outline's origin (m). */
  readonly origin?: { readonly x: number; readonly y: number };
  /** The loops as read (m, the file's frame), to draw the problems on. */
  readonly loops: readonly PathLoop[];
  readonly problems: readonly OutlineFileProblem[];
}

/** Within this distance (m) two ends are one point: below what any drawing means, above what exports round to. */
export const JOIN_TOLERANCE = 1e-6;

/** A loop without pieces shorter than a tool can have, and how many those were; as it is when next to nothing would be left. */
function withoutSlivers(loop: PathLoop): { loop: PathLoop; merged: number } {
  const kept: PathPiece[] = [];
  let from = { x: loop.x, y: loop.y };
  let merged = 0;
  for (const piece of loop.pieces) {
    const short = Math.hypot(piece.x - from.x, piece.y - from.y) < PATH_LIMITS.smallest;
    if (short && (piece.kind === 'line' || Math.abs(piece.bulge) <= 1)) {
      // a point drawn twice is no sliver
      if (piece.x !== from.x || piece.y !== from.y) merged++;
      continue;
    }
    kept.push(piece);
    from = piece;
  }
  const end = loop.pieces[loop.pieces.length - 1];
  const last = kept[kept.length - 1];
  if (kept.length < 2 || end === undefined || last === undefined) return { loop, merged: 0 };
  kept[kept.length - 1] = { ...last, x: end.x, y: end.y };
  return { loop: { ...loop, pieces: kept }, merged };
}

/** A loop whose last piece ends at its start when it ends close to it. */
function closed(loop: PathLoop, tolerance: number): PathLoop {
  const last = loop.pieces[loop.pieces.length - 1];
  if (last === undefined || Math.hypot(last.x - loop.x, last.y - loop.y) > tolerance) return loop;
  return { ...loop, pieces: [...loop.pieces.slice(0, -1), { ...last, x: loop.x, y: loop.y }] };
}

/** Middle of the box around the loops (m); the origin when they have none. */
function middleOf(loops: readonly PathLoop[]): { x: number; y: number } {
  try {
    const { xMin, xMax, yMin, yMax } = makeOutline({ kind: 'path', loops }).bounds;
    const [x, y] = [(xMin + xMax) / 2, (yMin + yMax) / 2] as const;
    return Number.isFinite(x) && Number.isFinite(y) ? { x, y } : { x: 0, y: 0 };
  } catch {
    return { x: 0, y: 0 };
  }
}

function originOf(loops: readonly PathLoop[], origin: OutlineOrigin): { readonly x: number; readonly y: number } {
  if (origin === 'middle') return middleOf(loops);
  return origin === 'file' ? { x: 0, y: 0 } : origin;
}

/** Closes, mends, moves, turns and checks the loops of a file. */
export function finishLoops(
  raw: readonly PathLoop[],
  { origin, tolerance }: { readonly origin: OutlineOrigin; readonly tolerance: number },
): ReadOutline {
  const count = raw.reduce((sum, { pieces }) => sum + pieces.length, 0);
  if (count > PATH_LIMITS.segments || raw.length > PATH_LIMITS.loops) {
    return { loops: [], problems: checkLoops(raw).map(outlineFileProblem) };
  }
  const mended = raw.map((loop) => withoutSlivers(closed(loop, tolerance)));
  const loops = mended.map(({ loop }) => loop);
  const merged = mended.reduce((sum, one) => sum + one.merged, 0);
  const shift = originOf(loops, origin);
  const moved = loops.map((loop) => moveLoop(loop, -shift.x, -shift.y));
  // the direction a loop was drawn in means nothing here: how it lies in the others decides
  const faults = checkLoops(moved).filter(({ fault }) => fault !== 'holeOutside' && fault !== 'nesting');
  const warnings = merged > 0 ? [sliverWarning(merged)] : [];
  if (faults.length === 0) {
    return { outline: { kind: 'path', loops: orientLoops(moved) }, origin: shift, loops, problems: warnings };
  }
  const problems = faults.map((fault) => outlineFileProblem({ ...fault, x: fault.x + shift.x, y: fault.y + shift.y }));
  return { loops, problems: [...problems, ...warnings] };
}

function sliverWarning(merged: number): OutlineFileProblem {
  return fileWarning(
    `${merged} piece${merged === 1 ? ' is' : 's are'} too short for a tool and left out, their ends joined. Nothing to do.`,
    `pieces of ${PATH_LIMITS.smallest * 1e6} um or more`,
  );
}
