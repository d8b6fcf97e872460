import type { PathLoop } from '#src/base/outline.ts';

type XY = readonly [number, number];

/** A closed polygon through points (m). */
export function polygon(points: readonly XY[]): PathLoop {
  const [[x, y]] = points as readonly [XY];
  const pieces = [...points.slice(1), [x, y] as const].map(([px, py]) => ({ kind: 'line', x: px, y: py }) as const);
  return { x, y, pieces };
}

/** A counter-clockwise circle of two half arcs (m). */
export function circleLoop(cx: number, cy: number, radius: number): PathLoop {
  const half = (x: number) => ({ kind: 'arc', x, y: cy, bulge: 1 }) as const;
  return { x: cx + radius, y: cy, pieces: [half(cx - radius), half(cx + radius)] };
}

/** Numbers in [0, 1) from a seed (mulberry32, public domain). */
export function random(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 4294967296;
  };
}

/** Counter-clockwise polygon of n corners, each seen from the origin, at 0.5 to 2 mm, no two in nearly one direction. */
export function starPolygon(n: number, seed: number): XY[] {
  const draw = random(seed);
  return Array.from({ length: n }, (_, k) => {
    const angle = ((k + 0.8 * draw()) / n) * 2 * Math.PI;
    const radius = (0.5 + 1.5 * draw()) * 1e-3;
    return [radius * Math.cos(angle), radius * Math.sin(angle)];
  });
}

/** n points around an ellipse with half axes a and b (m). */
export function ellipsePolygon(a: number, b: number, n: number): XY[] {
  return Array.from({ length: n }, (_, k) => {
    const angle = (2 * Math.PI * k) / n;
    return [a * Math.cos(angle), b * Math.sin(angle)];
  });
}
