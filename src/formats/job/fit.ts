import { nearest, type Outline, type OutlineSpec, pointAt, smallestFeature } from '#src/base/outline.ts';

const SAMPLES = 240;

/** Points along an outline, corners and the middles of arcs among them, which the even spacing would step over (m). */
function samplePoints(outline: Outline): { x: number; y: number }[] {
  const points = Array.from({ length: SAMPLES }, (_, k) => pointAt(outline, (k / SAMPLES) * outline.perimeter));
  for (const loop of outline.loops) {
    let s = loop.start;
    for (const segment of loop.segments) {
      points.push(pointAt(outline, s), pointAt(outline, s + segment.length / 2));
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

/** What handbooks mean by the diameter of a cavity or tool (m): the smallest width over all, the outer one of a ring. */
export function overallWidth(spec: OutlineSpec): number {
  return spec.kind === 'ring' ? spec.outerDiameter : smallestFeature(spec);
}
