import { atan2, PI, sinCos } from './math.ts';

/** A straight piece from (x0, y0) to (x1, y1). */
export interface LineSegment {
  readonly kind: 'line';
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
  readonly length: number;
}

/** An arc about (cx, cy): starts at angle `start`, turns by `sweep` (positive counter-clockwise). */
export interface ArcSegment {
  readonly kind: 'arc';
  readonly cx: number;
  readonly cy: number;
  readonly radius: number;
  readonly start: number;
  readonly sweep: number;
  readonly length: number;
}

export type Segment = LineSegment | ArcSegment;

/** Smallest box around something (m). */
export interface Bounds {
  readonly xMin: number;
  readonly xMax: number;
  readonly yMin: number;
  readonly yMax: number;
}

/** A straight segment between two points (m). */
export function line(x0: number, y0: number, x1: number, y1: number): LineSegment {
  return { kind: 'line', x0, y0, x1, y1, length: Math.sqrt((x1 - x0) ** 2 + (y1 - y0) ** 2) };
}

/** A circular arc (m, radians). */
export function arc(cx: number, cy: number, radius: number, start: number, sweep: number): ArcSegment {
  return { kind: 'arc', cx, cy, radius, start, sweep, length: radius * Math.abs(sweep) };
}

/** Twice the signed area under one segment, by Green's theorem (m2). */
export function doubleArea(segment: Segment): number {
  if (segment.kind === 'line') return segment.x0 * segment.y1 - segment.x1 * segment.y0;
  const { cx, cy, radius, start, sweep } = segment;
  const a = sinCos(start);
  const b = sinCos(start + sweep);
  return radius * (radius * sweep + cx * (b.sin - a.sin) - cy * (b.cos - a.cos));
}

/** Point of a segment and the outward unit normal there; `along` is the length from its start (m). */
export function pointOn(segment: Segment, along: number): { x: number; y: number; nx: number; ny: number } {
  if (segment.kind === 'line') {
    const t = along / segment.length;
    const ux = (segment.x1 - segment.x0) / segment.length;
    const uy = (segment.y1 - segment.y0) / segment.length;
    return {
      x: segment.x0 + t * (segment.x1 - segment.x0),
      y: segment.y0 + t * (segment.y1 - segment.y0),
      nx: uy,
      ny: -ux,
    };
  }
  const { sin, cos } = sinCos(segment.start + (along / segment.length) * segment.sweep);
  const side = segment.sweep > 0 ? 1 : -1;
  return {
    x: segment.cx + segment.radius * cos,
    y: segment.cy + segment.radius * sin,
    nx: side * cos,
    ny: side * sin,
  };
}

/** Outward unit normal at one end of a segment. */
export function endNormal(segment: Segment, atEnd: boolean): { nx: number; ny: number } {
  if (segment.kind === 'line') {
    return { nx: (segment.y1 - segment.y0) / segment.length, ny: -(segment.x1 - segment.x0) / segment.length };
  }
  const { sin, cos } = sinCos(segment.start + (atEnd ? segment.sweep : 0));
  const side = segment.sweep > 0 ? 1 : -1;
  return { nx: side * cos, ny: side * sin };
}

/**
 * Nearest point of one segment: distance squared (m2), fraction along it, and the side (positive outside; only its sign
 * has a meaning, and at an end of the segment only with the neighbour there).
 */
export function nearestOnSegment(segment: Segment, x: number, y: number): { d2: number; t: number; side: number } {
  if (segment.kind === 'line') {
    const ux = (segment.x1 - segment.x0) / segment.length;
    const uy = (segment.y1 - segment.y0) / segment.length;
    const along = (x - segment.x0) * ux + (y - segment.y0) * uy;
    const clamped = Math.min(Math.max(along, 0), segment.length);
    const px = x - segment.x0 - clamped * ux;
    const py = y - segment.y0 - clamped * uy;
    return { d2: px * px + py * py, t: clamped / segment.length, side: px * uy - py * ux };
  }
  const dx = x - segment.cx;
  const dy = y - segment.cy;
  const r = Math.sqrt(dx * dx + dy * dy);
  const direction = segment.sweep > 0 ? 1 : -1;
  let turned = direction * (atan2(dy, dx) - segment.start);
  while (turned < 0) turned += 2 * PI;
  while (turned >= 2 * PI) turned -= 2 * PI;
  const span = Math.abs(segment.sweep);
  if (turned <= span) {
    const off = r - segment.radius;
    return { d2: off * off, t: turned / span, side: direction * off };
  }
  const t = turned - span < 2 * PI - turned ? 1 : 0;
  const { sin, cos } = sinCos(segment.start + t * segment.sweep);
  const px = dx - segment.radius * cos;
  const py = dy - segment.radius * sin;
  return { d2: px * px + py * py, t, side: direction * (px * cos + py * sin) };
}

/** Distance squared to a segment (m2), the very number `nearestOnSegment` gives. */
export function distance2ToSegment(segment: Segment, x: number, y: number): number {
  if (segment.kind === 'arc') return nearestOnSegment(segment, x, y).d2;
  const { x0, y0, x1, y1, length } = segment;
  const ux = (x1 - x0) / length;
  const uy = (y1 - y0) / length;
  const clamped = Math.min(Math.max((x - x0) * ux + (y - y0) * uy, 0), length);
  const px = x - x0 - clamped * ux;
  const py = y - y0 - clamped * uy;
  return px * px + py * py;
}

/** True when the direction at `angle` from the middle of an arc lies on it. */
export function onSweep(arcSegment: ArcSegment, angle: number, slack: number): boolean {
  const direction = arcSegment.sweep > 0 ? 1 : -1;
  let turned = (direction * (angle - arcSegment.start)) % (2 * PI);
  if (turned < 0) turned += 2 * PI;
  return turned <= Math.abs(arcSegment.sweep) + slack || turned >= 2 * PI - slack;
}

/** Smallest box around a segment (m). */
export function segmentBounds(segment: Segment): Bounds {
  if (segment.kind === 'line') {
    const { x0, y0, x1, y1 } = segment;
    return { xMin: Math.min(x0, x1), xMax: Math.max(x0, x1), yMin: Math.min(y0, y1), yMax: Math.max(y0, y1) };
  }
  const { cx, cy, radius, start, sweep } = segment;
  const a = sinCos(start);
  const b = sinCos(start + sweep);
  const reach = (quarter: number) => onSweep(segment, (quarter * PI) / 2, 0);
  return {
    xMin: reach(2) ? cx - radius : cx + radius * Math.min(a.cos, b.cos),
    xMax: reach(0) ? cx + radius : cx + radius * Math.max(a.cos, b.cos),
    yMin: reach(3) ? cy - radius : cy + radius * Math.min(a.sin, b.sin),
    yMax: reach(1) ? cy + radius : cy + radius * Math.max(a.sin, b.sin),
  };
}

/** Smallest box around both of two boxes (m). */
export function joinBounds(a: Bounds, b: Bounds): Bounds {
  return {
    xMin: Math.min(a.xMin, b.xMin),
    xMax: Math.max(a.xMax, b.xMax),
    yMin: Math.min(a.yMin, b.yMin),
    yMax: Math.max(a.yMax, b.yMax),
  };
}

/** The box around nothing: joined with another it gives the other. */
export const NO_BOUNDS: Bounds = { xMin: Infinity, xMax: -Infinity, yMin: Infinity, yMax: -Infinity };
