import { atan2, PI, sinCos } from './math.ts';

/**
 * Plane outlines of tools and cavities: closed loops of lines and arcs, outer loops counter-clockwise and holes clockwise,
 * so that the solid lies to the left of the path. Metres and radians; the origin is the outline's own.
 */

export type OutlineSpec =
  | { readonly kind: 'circle'; readonly diameter: number }
  | { readonly kind: 'rectangle'; readonly length: number; readonly width: number; readonly cornerRadius: number }
  | { readonly kind: 'slot'; readonly length: number; readonly width: number }
  | {
      readonly kind: 'regularPolygon';
      readonly sides: number;
      readonly acrossFlats: number;
      readonly cornerRadius: number;
    }
  | { readonly kind: 'ring'; readonly outerDiameter: number; readonly innerDiameter: number };

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
  readonly bounds: { readonly xMin: number; readonly xMax: number; readonly yMin: number; readonly yMax: number };
}

/** A point of the outline nearest to a given one. `distance` is negative inside the solid (m). */
export interface NearestPoint {
  distance: number;
  /** Running arc length of the nearest point (m). */
  s: number;
  loop: number;
}

function line(x0: number, y0: number, x1: number, y1: number): LineSegment {
  return { kind: 'line', x0, y0, x1, y1, length: Math.sqrt((x1 - x0) ** 2 + (y1 - y0) ** 2) };
}

function arc(cx: number, cy: number, radius: number, start: number, sweep: number): ArcSegment {
  return { kind: 'arc', cx, cy, radius, start, sweep, length: radius * Math.abs(sweep) };
}

/** Outline of a convex polygon (counter-clockwise vertices) with every corner rounded by `radius`. */
function roundedPolygon(vertices: readonly (readonly [number, number])[], radius: number): Segment[] {
  const n = vertices.length;
  const segments: Segment[] = [];
  const turn = (k: number) => {
    const [ax, ay] = vertices[(k + n - 1) % n] as readonly [number, number];
    const [bx, by] = vertices[k] as readonly [number, number];
    const [cx, cy] = vertices[(k + 1) % n] as readonly [number, number];
    const before = atan2(by - ay, bx - ax);
    let angle = atan2(cy - by, cx - bx) - before;
    if (angle < 0) angle += 2 * PI;
    const { sin, cos } = sinCos(angle / 2);
    return { before, angle, setback: (radius * sin) / cos };
  };
  for (let k = 0; k < n; k++) {
    const [ax, ay] = vertices[k] as readonly [number, number];
    const [bx, by] = vertices[(k + 1) % n] as readonly [number, number];
    const here = turn(k);
    const next = turn((k + 1) % n);
    const length = Math.sqrt((bx - ax) ** 2 + (by - ay) ** 2);
    const ux = (bx - ax) / length;
    const uy = (by - ay) / length;
    const straight = length - here.setback - next.setback;
    const x1 = bx - ux * next.setback;
    const y1 = by - uy * next.setback;
    if (straight > 1e-12 * length) segments.push(line(ax + ux * here.setback, ay + uy * here.setback, x1, y1));
    if (radius > 0) segments.push(arc(x1 - uy * radius, y1 + ux * radius, radius, atan2(-ux, uy), next.angle));
  }
  return segments;
}

function segmentsOf(spec: OutlineSpec): { segments: Segment[]; hole: boolean }[] {
  switch (spec.kind) {
    case 'circle':
      return [{ segments: [arc(0, 0, spec.diameter / 2, 0, 2 * PI)], hole: false }];
    case 'ring':
      return [
        { segments: [arc(0, 0, spec.outerDiameter / 2, 0, 2 * PI)], hole: false },
        { segments: [arc(0, 0, spec.innerDiameter / 2, 0, -2 * PI)], hole: true },
      ];
    case 'rectangle':
    case 'slot': {
      const a = spec.length / 2;
      const b = spec.width / 2;
      const radius = spec.kind === 'slot' ? b : spec.cornerRadius;
      const vertices = [
        [-a, -b],
        [a, -b],
        [a, b],
        [-a, b],
      ] as const;
      return [{ segments: roundedPolygon(vertices, radius), hole: false }];
    }
    case 'regularPolygon': {
      const half = PI / spec.sides;
      const radius = spec.acrossFlats / 2 / sinCos(half).cos;
      const vertices = Array.from({ length: spec.sides }, (_, k) => {
        const { sin, cos } = sinCos((2 * k + 1) * half);
        return [radius * cos, radius * sin] as const;
      });
      return [{ segments: roundedPolygon(vertices, spec.cornerRadius), hole: false }];
    }
  }
}

/** Twice the signed area under one segment, by Green's theorem. */
function doubleArea(segment: Segment): number {
  if (segment.kind === 'line') return segment.x0 * segment.y1 - segment.x1 * segment.y0;
  const { cx, cy, radius, start, sweep } = segment;
  const a = sinCos(start);
  const b = sinCos(start + sweep);
  return radius * (radius * sweep + cx * (b.sin - a.sin) - cy * (b.cos - a.cos));
}

/** Builds an outline from its description. The description must have been checked (`formats/job`). */
export function makeOutline(spec: OutlineSpec): Outline {
  let running = 0;
  let area = 0;
  const loops = segmentsOf(spec).map(({ segments, hole }): Loop => {
    const start = running;
    const length = segments.reduce((sum, segment) => sum + segment.length, 0);
    area += segments.reduce((sum, segment) => sum + doubleArea(segment), 0) / 2;
    running += length;
    return { segments, length, start, hole };
  });
  const bare = { spec, loops, area, perimeter: running, bounds: { xMin: 0, xMax: 0, yMin: 0, yMax: 0 } };
  const bounds = { xMin: Infinity, xMax: -Infinity, yMin: Infinity, yMax: -Infinity };
  const steps = 720;
  for (let k = 0; k < steps; k++) {
    const p = pointAt(bare, (k / steps) * running);
    bounds.xMin = Math.min(bounds.xMin, p.x);
    bounds.xMax = Math.max(bounds.xMax, p.x);
    bounds.yMin = Math.min(bounds.yMin, p.y);
    bounds.yMax = Math.max(bounds.yMax, p.y);
  }
  return { ...bare, bounds };
}

/** Point and outward unit normal at running arc length s (m), wrapped over the whole outline. */
export function pointAt(outline: Outline, s: number): { x: number; y: number; nx: number; ny: number } {
  let rest = s % outline.perimeter;
  if (rest < 0) rest += outline.perimeter;
  const loop = outline.loops.findLast((candidate) => candidate.start <= rest) ?? (outline.loops[0] as Loop);
  rest -= loop.start;
  for (const [k, segment] of loop.segments.entries()) {
    if (rest > segment.length && k < loop.segments.length - 1) {
      rest -= segment.length;
      continue;
    }
    if (segment.kind === 'line') {
      const t = rest / segment.length;
      const ux = (segment.x1 - segment.x0) / segment.length;
      const uy = (segment.y1 - segment.y0) / segment.length;
      return {
        x: segment.x0 + t * (segment.x1 - segment.x0),
        y: segment.y0 + t * (segment.y1 - segment.y0),
        nx: uy,
        ny: -ux,
      };
    }
    const { sin, cos } = sinCos(segment.start + (rest / segment.length) * segment.sweep);
    const side = segment.sweep > 0 ? 1 : -1;
    return {
      x: segment.cx + segment.radius * cos,
      y: segment.cy + segment.radius * sin,
      nx: side * cos,
      ny: side * sin,
    };
  }
  throw new RangeError('an outline has no segments');
}

/** Outward unit normal at one end of a segment. */
function endNormal(segment: Segment, atEnd: boolean): { nx: number; ny: number } {
  if (segment.kind === 'line') {
    return { nx: (segment.y1 - segment.y0) / segment.length, ny: -(segment.x1 - segment.x0) / segment.length };
  }
  const { sin, cos } = sinCos(segment.start + (atEnd ? segment.sweep : 0));
  const side = segment.sweep > 0 ? 1 : -1;
  return { nx: side * cos, ny: side * sin };
}

/** Nearest point of one segment: distance squared, fraction along it, and the signed side (positive outside). */
function nearestOnSegment(segment: Segment, x: number, y: number): { d2: number; t: number; side: number } {
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

/**
 * Signed distance from (x, y) to the outline and where along it the nearest point lies. At a vertex the sign comes from
 * the sum of the two normals that meet there (Baerentzen and Aanaes, IEEE TVCG 11 (2005) 243, the plane case).
 */
export function nearest(outline: Outline, x: number, y: number): NearestPoint {
  let best = Infinity;
  const result: NearestPoint = { distance: Infinity, s: 0, loop: 0 };
  outline.loops.forEach((loop, index) => {
    let before = loop.start;
    const n = loop.segments.length;
    for (let k = 0; k < n; k++) {
      const segment = loop.segments[k] as Segment;
      const { d2, t, side } = nearestOnSegment(segment, x, y);
      if (d2 < best) {
        best = d2;
        let sign = side;
        if ((t === 0 || t === 1) && n > 1) {
          const other = loop.segments[t === 0 ? (k + n - 1) % n : (k + 1) % n] as Segment;
          const own = endNormal(segment, t === 1);
          const its = endNormal(other, t === 0);
          const vertex = pointAt(outline, before + t * segment.length);
          sign = (x - vertex.x) * (own.nx + its.nx) + (y - vertex.y) * (own.ny + its.ny);
        }
        result.distance = sign < 0 ? -Math.sqrt(d2) : Math.sqrt(d2);
        result.s = before + t * segment.length;
        result.loop = index;
      }
      before += segment.length;
    }
  });
  return result;
}

/**
 * The outline moved outward by `offset` (m, negative inward), still of the same kind.
 * @throws RangeError when nothing is left.
 */
export function offsetSpec(spec: OutlineSpec, offset: number): OutlineSpec {
  const positive = (value: number) => {
    if (!(value > 0)) throw new RangeError(`the outline vanishes when moved inward by ${-offset} m`);
    return value;
  };
  switch (spec.kind) {
    case 'circle':
      return { kind: 'circle', diameter: positive(spec.diameter + 2 * offset) };
    case 'ring': {
      const outerDiameter = positive(spec.outerDiameter + 2 * offset);
      const innerDiameter = positive(spec.innerDiameter - 2 * offset);
      positive(outerDiameter - innerDiameter);
      return { kind: 'ring', outerDiameter, innerDiameter };
    }
    case 'slot': {
      const width = positive(spec.width + 2 * offset);
      return { kind: 'slot', length: positive(spec.length + 2 * offset), width };
    }
    case 'rectangle':
      return {
        kind: 'rectangle',
        length: positive(spec.length + 2 * offset),
        width: positive(spec.width + 2 * offset),
        cornerRadius: Math.max(0, spec.cornerRadius + offset),
      };
    case 'regularPolygon':
      return {
        kind: 'regularPolygon',
        sides: spec.sides,
        acrossFlats: positive(spec.acrossFlats + 2 * offset),
        cornerRadius: Math.max(0, spec.cornerRadius + offset),
      };
  }
}

/** The sizes a drawing gives for an outline, as written in results: one value per dimension (m). */
export function nominalSizes(spec: OutlineSpec): number[] {
  switch (spec.kind) {
    case 'circle':
      return [spec.diameter];
    case 'ring':
      return [spec.outerDiameter, spec.innerDiameter];
    case 'slot':
    case 'rectangle':
      return [spec.length, spec.width];
    case 'regularPolygon':
      return [spec.acrossFlats];
  }
}

/** The smallest distance across the solid: what a grain must pass (m). */
export function smallestFeature(spec: OutlineSpec): number {
  switch (spec.kind) {
    case 'ring':
      return Math.min((spec.outerDiameter - spec.innerDiameter) / 2, spec.innerDiameter);
    case 'slot':
    case 'rectangle':
      return Math.min(spec.length, spec.width);
    default:
      return nominalSizes(spec)[0] as number;
  }
}
