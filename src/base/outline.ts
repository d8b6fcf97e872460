import { atan2, PI, sinCos } from './math.ts';
import { smallestWidth } from './outline-medial.ts';
import { loopSegments, type PathLoop } from './outline-path.ts';
import { type Loop, type Outline, pointAt } from './outline-query.ts';
import {
  arc,
  type Bounds,
  doubleArea,
  joinBounds,
  line,
  NO_BOUNDS,
  type Segment,
  segmentBounds,
} from './outline-segment.ts';
import { buildTree, SCANNED_SEGMENTS } from './outline-tree.ts';

export type { PathArc, PathLine, PathLoop, PathPiece } from './outline-path.ts';
export { type Loop, type NearestPoint, nearest, type Outline, pointAt } from './outline-query.ts';
export type { ArcSegment, LineSegment, Segment } from './outline-segment.ts';

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
  | { readonly kind: 'ring'; readonly outerDiameter: number; readonly innerDiameter: number }
  | PathSpec;

/**
 * Any outline of lines and arcs, in loops as `checkLoops` accepts them: several solids beside each other (gang tools), holes in
 * them, and solids again in the holes.
 */
export interface PathSpec {
  readonly kind: 'path';
  readonly loops: readonly PathLoop[];
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
    case 'path':
      return spec.loops.map((loop) => {
        const segments = loopSegments(loop);
        return { segments, hole: segments.reduce((sum, segment) => sum + doubleArea(segment), 0) < 0 };
      });
  }
}

/** Box around 720 points spread evenly along an outline (m): that of the ends of its axes, and nearly that of a rounding. */
function sampledBounds(outline: Outline): Bounds {
  const bounds = { xMin: Infinity, xMax: -Infinity, yMin: Infinity, yMax: -Infinity };
  const steps = 720;
  for (let k = 0; k < steps; k++) {
    const p = pointAt(outline, (k / steps) * outline.perimeter);
    bounds.xMin = Math.min(bounds.xMin, p.x);
    bounds.xMax = Math.max(bounds.xMax, p.x);
    bounds.yMin = Math.min(bounds.yMin, p.y);
    bounds.yMax = Math.max(bounds.yMax, p.y);
  }
  return bounds;
}

function exactBounds(loops: readonly { readonly segments: readonly Segment[] }[]): Bounds {
  return loops
    .flatMap(({ segments }) => segments)
    .reduce((bounds, segment) => joinBounds(bounds, segmentBounds(segment)), NO_BOUNDS);
}

/**
 * Builds an outline from its description, which must have been checked: sizes by `formats/job`, loops by `checkLoops`.
 * @throws RangeError for a path without loops.
 */
export function makeOutline(spec: OutlineSpec): Outline {
  return outlineOf(spec, segmentsOf(spec));
}

/** A round hole through a tool: centre and radius (m), in the outline's frame. */
export interface RoundHole {
  readonly x: number;
  readonly y: number;
  readonly radius: number;
}

/** An outline with round holes in it, which come after its own loops; they must lie inside it and apart. */
export function makeBoredOutline(spec: OutlineSpec, holes: readonly RoundHole[]): Outline {
  const bored = holes.map(({ x, y, radius }) => ({ segments: [arc(x, y, radius, 0, -2 * PI)], hole: true }));
  return outlineOf(spec, [...segmentsOf(spec), ...bored]);
}

function outlineOf(spec: OutlineSpec, parts: readonly { segments: Segment[]; hole: boolean }[]): Outline {
  let running = 0;
  let area = 0;
  const loops = parts.map(({ segments, hole }): Loop => {
    const start = running;
    const length = segments.reduce((sum, segment) => sum + segment.length, 0);
    area += segments.reduce((sum, segment) => sum + doubleArea(segment), 0) / 2;
    running += length;
    return { segments, length, start, hole };
  });
  const count = loops.reduce((sum, { segments }) => sum + segments.length, 0);
  if (count === 0) throw new RangeError('an outline has no segments');
  const tree = count > SCANNED_SEGMENTS ? { tree: buildTree(loops) } : {};
  const bare = { spec, loops, area, perimeter: running, bounds: NO_BOUNDS, ...tree };
  return { ...bare, bounds: spec.kind === 'path' ? exactBounds(loops) : sampledBounds(bare) };
}

/**
 * The outline moved outward by `offset` (m, negative inward), still of the same kind.
 * @throws RangeError when nothing is left, and for a path, whose loops may part or merge when they move.
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
    case 'path':
      throw new RangeError('an outline given as a path is moved by its loops, not by its description');
  }
}

/**
 * The sizes a drawing gives for an outline, as written in results: one value per dimension (m). A path has the length along x
 * and the width along y of the box around it.
 */
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
    case 'path': {
      const { xMin, xMax, yMin, yMax } = exactBounds(segmentsOf(spec));
      return [xMax - xMin, yMax - yMin];
    }
  }
}

/**
 * The smallest distance across the solid or across a hole in it: what a grain must pass (m). Of a path an estimate from above,
 * that of `smallestWidth`.
 */
export function smallestFeature(spec: OutlineSpec): number {
  switch (spec.kind) {
    case 'ring':
      return Math.min((spec.outerDiameter - spec.innerDiameter) / 2, spec.innerDiameter);
    case 'slot':
    case 'rectangle':
      return Math.min(spec.length, spec.width);
    case 'path':
      return smallestWidth(makeOutline(spec));
    default:
      return nominalSizes(spec)[0] as number;
  }
}
