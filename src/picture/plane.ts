import type { Loop, Outline } from '#src/base/outline.ts';
import { type Bounds, joinBounds, NO_BOUNDS, onSweep, type Segment, segmentBounds } from '#src/base/outline-segment.ts';

/** Outlines cut by a plane y = const: which plane to take, and the stretches of x that lie inside. Metres. */

/** A stretch along x (m). */
export interface Chord {
  readonly from: number;
  readonly to: number;
}

/** Where a segment crosses the height y, as x. */
function crossingsOf(segment: Segment, y: number): number[] {
  if (segment.kind === 'line') {
    const { x0, y0, x1, y1 } = segment;
    if (y0 <= y === y1 <= y) return [];
    return [x0 + ((y - y0) / (y1 - y0)) * (x1 - x0)];
  }
  const sine = (y - segment.cy) / segment.radius;
  if (!(Math.abs(sine) < 1)) return [];
  const angle = Math.asin(sine);
  const reach = segment.radius * Math.cos(angle);
  const found: number[] = [];
  if (onSweep(segment, angle, 0)) found.push(segment.cx + reach);
  if (onSweep(segment, Math.PI - angle, 0)) found.push(segment.cx - reach);
  return found;
}

function loopBounds(loop: Loop): Bounds {
  return loop.segments.reduce((bounds, segment) => joinBounds(bounds, segmentBounds(segment)), NO_BOUNDS);
}

/** Share of the height by which the plane is moved off points where segments meet. */
const NUDGE = 1e-7;

function chordsOf(loops: readonly Loop[], y: number): Chord[] {
  const bounds = loops.map(loopBounds).reduce(joinBounds, NO_BOUNDS);
  const nudge = NUDGE * (bounds.yMax - bounds.yMin);
  // where segments meet on the plane a crossing may be counted twice or not at all: then a little beside it
  for (const steps of [1, -1, 3.7, -3.7, 11.3]) {
    const at = loops.flatMap(({ segments }) => segments.flatMap((segment) => crossingsOf(segment, y + steps * nudge)));
    if (at.length % 2 === 1) continue;
    at.sort((a, b) => a - b);
    return Array.from({ length: at.length / 2 }, (_, n) => ({
      from: at[2 * n] as number,
      to: at[2 * n + 1] as number,
    }));
  }
  return [];
}

/** The stretches of the plane y that lie in the solid of an outline, from left to right. */
export function chordsAt(outline: Outline, y: number): Chord[] {
  return chordsOf(outline.loops, y);
}

/** The stretches of the plane y from end to end of each island, holes in it passed over, from left to right. */
export function islandsAt(outline: Outline, y: number): Chord[] {
  const whole = outline.loops
    .filter(({ hole }) => !hole)
    .flatMap((loop): Chord[] => {
      const chords = chordsOf([loop], y);
      const first = chords[0];
      return first === undefined ? [] : [{ from: first.from, to: (chords.at(-1) as Chord).to }];
    });
  // an island that stands in the hole of another belongs to that one's cut
  const inside = (a: Chord, b: Chord) => a !== b && a.from >= b.from && a.to <= b.to;
  return whole.filter((chord) => !whole.some((other) => inside(chord, other))).sort((a, b) => a.from - b.from);
}

/** Share of an island's breadth that a plane must cut to show it fairly. */
const FAIR = 0.5;
/** Share of the island's height either side of a plane within which the cut may not change by more than a quarter. */
const BESIDE = 0.09;
const STEADY = 0.25;
/** Steps, as a share of the island's height and at most so many, in which a steadier plane is looked for. */
const STEP = 0.04;
const TRIED = 12;

const lengthOf = (chords: readonly Chord[]): number => chords.reduce((sum, { from, to }) => sum + to - from, 0);

/** Length cut at y where the planes a little beside cut about the same; 0 where the plane runs along a wall. */
function steadyCut(outline: Outline, y: number, beside: number): number {
  const cuts = [-beside, 0, beside].map((step) => chordsAt(outline, y + step));
  const lengths = cuts.map(lengthOf);
  const most = Math.max(...lengths);
  const even = cuts.every(({ length }) => length === cuts[1]?.length);
  return even && most - Math.min(...lengths) <= STEADY * most ? (lengths[1] as number) : 0;
}

/** The plane nearest to y that does not run along a wall; the one that cuts more where two are as near. */
function steadyPlane(outline: Outline, y: number, height: number): number {
  const beside = BESIDE * height;
  for (let n = 0; n <= TRIED; n++) {
    const [below, above] = [y - n * STEP * height, y + n * STEP * height];
    const [less, more] = [steadyCut(outline, below, beside), steadyCut(outline, above, beside)];
    if (less > 0 || more > 0) return more >= less ? above : below;
  }
  return y;
}

/**
 * The plane of the section (y, m): y = 0 where it cuts an island over half of its breadth or more, else the middle of the
 * island nearest to the middle of the whole; moved aside where it would run along a wall.
 */
export function sectionPlane(outline: Outline): number {
  const islands = outline.loops.filter(({ hole }) => !hole).map((loop) => ({ loop, box: loopBounds(loop) }));
  const fair = islands.find(({ loop, box: { xMin, xMax } }) =>
    chordsOf([loop], 0).some(({ from, to }) => to - from >= FAIR * (xMax - xMin)),
  );
  if (fair) return steadyPlane(outline, 0, fair.box.yMax - fair.box.yMin);
  const { bounds } = outline;
  const x = (bounds.xMin + bounds.xMax) / 2;
  const y = (bounds.yMin + bounds.yMax) / 2;
  let best = { distance: Number.POSITIVE_INFINITY, y: 0, height: 0 };
  for (const { box } of islands) {
    const middle = (box.yMin + box.yMax) / 2;
    const distance = ((box.xMin + box.xMax) / 2 - x) ** 2 + (middle - y) ** 2;
    if (distance < best.distance) best = { distance, y: middle, height: box.yMax - box.yMin };
  }
  return steadyPlane(outline, best.y, best.height);
}
