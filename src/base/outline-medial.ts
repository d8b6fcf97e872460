import { type Loop, nearest, type Outline, pointAt } from './outline-query.ts';

/** Points of the outline from which balls are grown: evenly spaced, at least and at most. */
const FEWEST = 256;
const MOST = 2048;
const FEWEST_OF_LOOP = 12;
/** Widths looked at closely: those narrowest by the samples. */
const REFINED = 3;
/** Cosine of 150 degrees: two contacts nearer to each other, as the ball's middle sees them, are the sides of a corner. */
const OPPOSITE = -0.8660254037844386;
/** Balls of this radius (m) and less are the rounding of a point at a corner, and held by nothing. */
const ROUNDING = 1e-10;
/** Share of the radius below which a ball counts as free of the outline. */
const FREE = 1e-9;
const ROUNDS = 40;

/** The largest ball on one side of an outline that touches it at one point: its radius (m), and whether it is held across. */
interface Ball {
  readonly radius: number;
  readonly across: boolean;
}

/**
 * Grows the ball by shrinking one that is too large until no other point of the outline is inside it (Ma, Bae and Choi, Visual
 * Computer 28 (2012) 7, from memory). `side` is -1 for the solid and 1 for the gaps.
 */
function touchingBall(outline: Outline, s: number, side: number): Ball {
  const p = pointAt(outline, s);
  const { xMin, xMax, yMin, yMax } = outline.bounds;
  let radius = xMax - xMin + (yMax - yMin);
  let across = false;
  for (let round = 0; round < ROUNDS; round++) {
    const cx = p.x + side * radius * p.nx;
    const cy = p.y + side * radius * p.ny;
    const near = nearest(outline, cx, cy);
    if (Math.abs(near.distance) >= radius * (1 - FREE)) break;
    const q = pointAt(outline, near.s);
    const dx = q.x - p.x;
    const dy = q.y - p.y;
    const along = side * (dx * p.nx + dy * p.ny);
    if (!(along > 0)) break;
    const smaller = (dx * dx + dy * dy) / (2 * along);
    if (smaller >= radius * (1 - FREE)) break;
    radius = smaller;
    // cosine of the angle between the two contacts, from chord^2 = 2 r^2 (1 - cos)
    across = radius > ROUNDING && 1 - (dx * dx + dy * dy) / (2 * radius * radius) <= OPPOSITE;
  }
  return { radius, across };
}

/** Least radius of balls held across, near arc length s (m), by thirds between the samples on either side of it. */
function refine(outline: Outline, s: number, side: number, spacing: number): number {
  let low = s - spacing;
  let high = s + spacing;
  let least = touchingBall(outline, s, side).radius;
  for (let round = 0; round < ROUNDS; round++) {
    const thirds = [low + (high - low) / 3, high - (high - low) / 3] as const;
    const [a, b] = thirds.map((at) => {
      const ball = touchingBall(outline, at, side);
      return ball.across ? ball.radius : Infinity;
    }) as [number, number];
    least = Math.min(least, a, b);
    if (a < b) high = thirds[1];
    else low = thirds[0];
  }
  return least;
}

/** Arc lengths at which balls are tried along one loop: evenly spaced, and the middle of each segment while they are few. */
function samplesOf(loop: Loop, perimeter: number, count: number): number[] {
  const n = Math.max(FEWEST_OF_LOOP, Math.ceil((count * loop.length) / perimeter));
  const even = Array.from({ length: n }, (_, k) => loop.start + ((k + 0.5) / n) * loop.length);
  if (loop.segments.length > n) return even;
  let s = loop.start;
  for (const segment of loop.segments) {
    even.push(s + segment.length / 2);
    s += segment.length;
  }
  return even;
}

/** A ball held across, where it was grown, or what stands for it where none is. */
interface Width {
  readonly radius: number;
  readonly s: number;
  readonly side: number;
  /** Spacing of the samples (m); 0 when the radius is final. */
  readonly spacing: number;
}

/** Width of the solid or of the gaps along one loop; undefined where nothing stands across. */
function widthAlong(outline: Outline, loop: Loop, side: number, samples: readonly number[]): Width | undefined {
  const spacing = loop.length / samples.length;
  let best: Width | undefined;
  let largest = 0;
  for (const s of samples) {
    const { radius, across } = touchingBall(outline, s, side);
    largest = Math.max(largest, radius);
    if (across && radius < (best?.radius ?? Infinity)) best = { radius, s, side, spacing };
  }
  if (best !== undefined || side > 0 || loop.hole) return best;
  // without a neck or a pair of walls, as in a triangle, the solid is as wide as the largest ball in it
  return { radius: largest, s: loop.start, side, spacing: 0 };
}

/**
 * Smallest width of an outline (m): the diameter of the smallest ball, in the solid or in the gaps between and inside solids,
 * that touches the outline at two points at least 150 degrees apart, as its middle sees them. Corners of more than 30 degrees
 * are no width, necks, ribs, bores and slots are; a sharper tip counts down to where it was sampled. An estimate from above:
 * balls are grown from about 256 to 2048 points, and a neck shorter than their spacing may be missed.
 */
export function smallestWidth(outline: Outline): number {
  const segments = outline.loops.reduce((sum, loop) => sum + loop.segments.length, 0);
  const count = Math.min(Math.max(4 * segments, FEWEST), MOST);
  const widths = outline.loops.flatMap((loop) => {
    const samples = samplesOf(loop, outline.perimeter, count);
    return [-1, 1].flatMap((side) => widthAlong(outline, loop, side, samples) ?? []);
  });
  widths.sort((a, b) => a.radius - b.radius);
  const narrowest = widths.slice(0, REFINED).map(({ radius, s, side, spacing }) => {
    return spacing > 0 ? refine(outline, s, side, spacing) : radius;
  });
  return 2 * Math.min(...narrowest);
}
