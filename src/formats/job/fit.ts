import { nearest, type Outline, type OutlineSpec, pointAt, smallestFeature } from '#src/base/outline.ts';

const SAMPLES = 240;
/** Segments up to which the middle of each is looked at. */
const MOST_MIDDLES = 2000;

interface Point {
  readonly x: number;
  readonly y: number;
}

/** Points along an outline, corners and the middles of arcs among them, which the even spacing would step over (m). */
function samplePoints(outline: Outline): Point[] {
  const points: Point[] = [];
  const segments = outline.loops.reduce((sum, loop) => sum + loop.segments.length, 0);
  for (const loop of outline.loops) {
    const count = Math.max(12, Math.ceil((SAMPLES * loop.length) / outline.perimeter));
    for (let k = 0; k < count; k++) points.push(pointAt(outline, loop.start + (k / count) * loop.length));
    let s = loop.start;
    for (const segment of loop.segments) {
      points.push(pointAt(outline, s));
      if (segments <= MOST_MIDDLES) points.push(pointAt(outline, s + segment.length / 2));
      s += segment.length;
    }
  }
  return points;
}

/**
 * Smallest gap between a tool and the wall of a cavity about the same origin (m); negative by as much as the tool reaches
 * over the wall. Both outlines are sampled, since neither sees the other's islands.
 */
export function sideGap(cavity: Outline, tool: Outline): number {
  let gap = Infinity;
  for (const { x, y } of samplePoints(tool)) gap = Math.min(gap, -nearest(cavity, x, y).distance);
  for (const { x, y } of samplePoints(cavity)) gap = Math.min(gap, nearest(tool, x, y).distance);
  return gap;
}

/**
 * Smallest wall between two cavities (m), the second moved by (dx, dy); negative where one reaches into the other. Sampled.
 */
export function wallBetween(one: Outline, other: Outline, { x: dx, y: dy }: Point): number {
  let wall = Infinity;
  for (const { x, y } of samplePoints(other)) wall = Math.min(wall, nearest(one, x + dx, y + dy).distance);
  for (const { x, y } of samplePoints(one)) wall = Math.min(wall, nearest(other, x - dx, y - dy).distance);
  return wall;
}

const features = new WeakMap<OutlineSpec, number>();

/** `smallestFeature`, kept for each description, since that of a path takes a while. */
export function featureOf(spec: OutlineSpec): number {
  const known = features.get(spec) ?? smallestFeature(spec);
  features.set(spec, known);
  return known;
}

/** Says what the smallest feature of a description is, where its maker knows better (m). */
export function noteFeature(spec: OutlineSpec, feature: number): void {
  features.set(spec, feature);
}

/** What handbooks mean by the diameter of a cavity or tool (m): the smallest width over all, the outer one of a ring. */
export function overallWidth(spec: OutlineSpec): number {
  return spec.kind === 'ring' ? spec.outerDiameter : featureOf(spec);
}
