import { type Edge, TOUCH } from './outline-edge.ts';
import { type ArcSegment, type LineSegment, nearestOnSegment, type Segment } from './outline-segment.ts';

/** Around a vertex that two edges share, nothing else within this distance (m) counts as a second meeting. */
const SHARED = 1e-8;

interface Point {
  readonly x: number;
  readonly y: number;
}

/** Where two edges meet although they should not. */
export interface Crossing extends Point {
  readonly a: Edge;
  readonly b: Edge;
  /** True when a vertex of one lies on a vertex of the other. */
  readonly atVertices: boolean;
}

function crossLines(a: LineSegment, b: LineSegment): Point[] | undefined {
  const ux = (a.x1 - a.x0) / a.length;
  const uy = (a.y1 - a.y0) / a.length;
  // heights of b's ends over a's line
  const h0 = ux * (b.y0 - a.y0) - uy * (b.x0 - a.x0);
  const h1 = ux * (b.y1 - a.y0) - uy * (b.x1 - a.x0);
  if (Math.min(h0, h1) > TOUCH || Math.max(h0, h1) < -TOUCH) return undefined;
  if (h0 === h1) return [];
  const t = h0 / (h0 - h1);
  return [{ x: b.x0 + t * (b.x1 - b.x0), y: b.y0 + t * (b.y1 - b.y0) }];
}

function crossLineArc(a: LineSegment, b: ArcSegment): Point[] | undefined {
  const ux = (a.x1 - a.x0) / a.length;
  const uy = (a.y1 - a.y0) / a.length;
  const along = ux * (b.cx - a.x0) + uy * (b.cy - a.y0);
  const off = ux * (b.cy - a.y0) - uy * (b.cx - a.x0);
  if (Math.abs(off) > b.radius + TOUCH) return undefined;
  const half = Math.sqrt(Math.max(0, (b.radius - off) * (b.radius + off)));
  if (along + half < -TOUCH || along - half > a.length + TOUCH) return undefined;
  if (along + half > a.length + TOUCH && along - half < -TOUCH) return undefined;
  return [along - half, along + half].map((t) => ({ x: a.x0 + t * ux, y: a.y0 + t * uy }));
}

function crossArcs(a: ArcSegment, b: ArcSegment): Point[] | undefined {
  const dx = b.cx - a.cx;
  const dy = b.cy - a.cy;
  const d = Math.sqrt(dx * dx + dy * dy);
  if (d > a.radius + b.radius + TOUCH || d < Math.abs(a.radius - b.radius) - TOUCH) return undefined;
  // one circle: where the arcs overlap, an end of one lies on the other
  if (d < TOUCH) return [];
  const along = (d + ((a.radius - b.radius) * (a.radius + b.radius)) / d) / 2;
  const half = Math.sqrt(Math.max(0, (a.radius - along) * (a.radius + along)));
  const mx = a.cx + (along * dx) / d;
  const my = a.cy + (along * dy) / d;
  return [half, -half].map((h) => ({ x: mx - (h * dy) / d, y: my + (h * dx) / d }));
}

/** Points that the full lines and circles under two segments share; undefined when the segments cannot meet at all. */
function carriersMeet(a: Segment, b: Segment): Point[] | undefined {
  if (a.kind === 'line') return b.kind === 'line' ? crossLines(a, b) : crossLineArc(a, b);
  return b.kind === 'line' ? crossLineArc(b, a) : crossArcs(a, b);
}

function near(p: Point, x: number, y: number, distance: number): boolean {
  return (p.x - x) * (p.x - x) + (p.y - y) * (p.y - y) <= distance * distance;
}

function touches(edge: Edge, p: Point): boolean {
  if (near(p, edge.x0, edge.y0, TOUCH) || near(p, edge.x1, edge.y1, TOUCH)) return true;
  return nearestOnSegment(edge.shape, p.x, p.y).d2 <= TOUCH * TOUCH;
}

function atEnd(edge: Edge, p: Point): boolean {
  return near(p, edge.x0, edge.y0, SHARED) || near(p, edge.x1, edge.y1, SHARED);
}

/** True when `after` starts where `before` ends, on the same loop. */
function follows(before: Edge, after: Edge): boolean {
  return before.loop === after.loop && (before.segment + 1) % before.of === after.segment;
}

/** Places where two edges meet, or come within a nanometre of it, besides a vertex they share by right. */
function meetings(a: Edge, b: Edge): Crossing[] {
  const carriers = carriersMeet(a.shape, b.shape);
  if (carriers === undefined) return [];
  const ends = [a, b].flatMap(({ x0, y0, x1, y1 }) => [
    { x: x0, y: y0 },
    { x: x1, y: y1 },
  ]);
  const known: Point[] = [
    ...(follows(a, b) ? [{ x: a.x1, y: a.y1 }] : []),
    ...(follows(b, a) ? [{ x: b.x1, y: b.y1 }] : []),
  ];
  const found: Crossing[] = [];
  for (const p of [...carriers, ...ends]) {
    if (known.some((other) => near(other, p.x, p.y, SHARED)) || !touches(a, p) || !touches(b, p)) continue;
    known.push(p);
    found.push({ x: p.x, y: p.y, a, b, atVertices: atEnd(a, p) && atEnd(b, p) });
  }
  return found;
}

/** Edges in the order of a sweep along x or y, and numbers by which most pairs are told apart at a glance (m). */
interface Sweep {
  readonly order: readonly Edge[];
  /** Ends of the span along the sweep and across it, a touch wider than the edge. */
  readonly low: Float64Array;
  readonly high: Float64Array;
  readonly lowAcross: Float64Array;
  readonly highAcross: Float64Array;
  /** A point and the unit direction of a line; the middle and radius of an arc, with a direction of zero. */
  readonly px: Float64Array;
  readonly py: Float64Array;
  readonly ux: Float64Array;
  readonly uy: Float64Array;
  /** Length of a line, radius of an arc. */
  readonly size: Float64Array;
}

function sweepOf(edges: readonly Edge[]): Sweep {
  const wide = (of: (edge: Edge) => number) => edges.reduce((sum, edge) => sum + of(edge), 0);
  const alongX = wide(({ bounds }) => bounds.xMax - bounds.xMin) <= wide(({ bounds }) => bounds.yMax - bounds.yMin);
  const start = ({ bounds }: Edge) => (alongX ? bounds.xMin : bounds.yMin);
  const order = [...edges].sort((a, b) => start(a) - start(b));
  const column = (of: (edge: Edge) => number) => Float64Array.from(order, of);
  return {
    order,
    low: column((edge) => start(edge) - TOUCH),
    high: column(({ bounds }) => (alongX ? bounds.xMax : bounds.yMax) + TOUCH),
    lowAcross: column(({ bounds }) => (alongX ? bounds.yMin : bounds.xMin) - TOUCH),
    highAcross: column(({ bounds }) => (alongX ? bounds.yMax : bounds.xMax) + TOUCH),
    px: column(({ shape }) => (shape.kind === 'line' ? shape.x0 : shape.cx)),
    py: column(({ shape }) => (shape.kind === 'line' ? shape.y0 : shape.cy)),
    ux: column(({ shape }) => (shape.kind === 'line' ? (shape.x1 - shape.x0) / shape.length : 0)),
    uy: column(({ shape }) => (shape.kind === 'line' ? (shape.y1 - shape.y0) / shape.length : 0)),
    size: column(({ shape }) => (shape.kind === 'line' ? shape.length : shape.radius)),
  };
}

/** True when line j lies on one side of line i, or when the circles under two arcs do not meet: then the edges do not. */
function clearlyApart(sweep: Sweep, i: number, j: number): boolean {
  const { px, py, ux, uy, size } = sweep;
  const dx = (px[j] as number) - (px[i] as number);
  const dy = (py[j] as number) - (py[i] as number);
  const ix = ux[i] as number;
  const iy = uy[i] as number;
  const jx = ux[j] as number;
  const jy = uy[j] as number;
  const a = size[i] as number;
  const b = size[j] as number;
  const arcs = (ix === 0 && iy === 0 ? 1 : 0) + (jx === 0 && jy === 0 ? 1 : 0);
  if (arcs === 0) {
    const start = ix * dy - iy * dx;
    const end = start + b * (ix * jy - iy * jx);
    return (start > TOUCH && end > TOUCH) || (start < -TOUCH && end < -TOUCH);
  }
  if (arcs === 1) return false;
  const d2 = dx * dx + dy * dy;
  const far = a + b + TOUCH;
  const within = Math.abs(a - b) - TOUCH;
  return d2 > far * far || (within > 0 && d2 < within * within);
}

/** Pairs of edges compared before a path counts as too dense: several times what outlines of 20 000 pieces need, and a second at most. */
const MOST_PAIRS = 1.5e7;
/** Pairs that only their full geometry tells apart. */
const MOST_LOOKS = 1e6;

/**
 * Places where edges cross, touch or overlap, about `limit` at most; undefined when so many edges lie alongside each other
 * that they cannot be compared. Edges are swept in order of the coordinate along which they are shorter, and compared while
 * their spans overlap: n log n for outlines.
 */
export function crossings(edges: readonly Edge[], limit: number): Crossing[] | undefined {
  const sweep = sweepOf(edges);
  const { order, low, high, lowAcross, highAcross } = sweep;
  const found: Crossing[] = [];
  let pairs = 0;
  let looks = 0;
  for (let i = 0; i < order.length; i++) {
    const end = high[i] as number;
    const bottom = lowAcross[i] as number;
    const top = highAcross[i] as number;
    let j = i + 1;
    for (; j < order.length && (low[j] as number) <= end; j++) {
      if ((lowAcross[j] as number) > top || (highAcross[j] as number) < bottom) continue;
      if (clearlyApart(sweep, i, j) || clearlyApart(sweep, j, i)) continue;
      looks++;
      for (const crossing of meetings(order[i] as Edge, order[j] as Edge)) found.push(crossing);
      if (found.length >= limit) return found;
    }
    pairs += j - i;
    if (pairs > MOST_PAIRS || looks > MOST_LOOKS) return found.length > 0 ? found : undefined;
  }
  return found;
}
