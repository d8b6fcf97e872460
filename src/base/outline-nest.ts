import type { Edge } from './outline-edge.ts';
import type { ArcSegment } from './outline-segment.ts';

/** Most rows the plane is cut into; a ray meets only what reaches into its row. */
const MOST_ROWS = 256;

/** Part of an edge along which y only rises or only falls. */
interface Rise {
  readonly loop: number;
  readonly yLow: number;
  readonly yHigh: number;
  /** The edge's own span in x (m). */
  readonly xMin: number;
  readonly xMax: number;
  /** x of the part at height y (m). */
  readonly xAt: (y: number) => number;
}

/** Angle from `start` to the first of the top or bottom of the circle, and on by half turns, while less than the sweep. */
function arcTurns({ start, sweep }: ArcSegment): number[] {
  const direction = sweep > 0 ? 1 : -1;
  const turns: number[] = [];
  let next = direction > 0 ? Math.ceil(start / Math.PI - 0.5) : Math.floor(start / Math.PI - 0.5);
  for (let k = 0; k < 3; k++) {
    const turned = direction * ((next + 0.5) * Math.PI - start);
    if (turned > 0 && turned < Math.abs(sweep)) turns.push((next + 0.5) * Math.PI);
    next += direction;
  }
  return turns;
}

function arcRises(edge: Edge, shape: ArcSegment): Rise[] {
  const { cx, cy, radius, start, sweep } = shape;
  const turns = arcTurns(shape);
  const angles = [start, ...turns, start + sweep];
  const heightOf = (angle: number) => (Math.round(angle / Math.PI - 0.5) % 2 === 0 ? cy + radius : cy - radius);
  const heights = [edge.y0, ...turns.map(heightOf), edge.y1];
  return heights.slice(1).map((end, k): Rise => {
    const begin = heights[k] as number;
    // the half of the circle the middle of this part is on
    const middle = ((angles[k] as number) + (angles[k + 1] as number)) / 2;
    const right = Math.round(middle / Math.PI) % 2 === 0 ? 1 : -1;
    return {
      loop: edge.loop,
      yLow: Math.min(begin, end),
      yHigh: Math.max(begin, end),
      xMin: edge.bounds.xMin,
      xMax: edge.bounds.xMax,
      xAt: (y) => cx + right * Math.sqrt(Math.max(0, (radius - (y - cy)) * (radius + (y - cy)))),
    };
  });
}

function risesOf(edge: Edge): Rise[] {
  const { loop, shape, x0, y0, x1, y1, bounds } = edge;
  if (shape.kind === 'arc') return arcRises(edge, shape);
  const xAt = (y: number) => x0 + ((y - y0) / (y1 - y0)) * (x1 - x0);
  return [{ loop, yLow: Math.min(y0, y1), yHigh: Math.max(y0, y1), xMin: bounds.xMin, xMax: bounds.xMax, xAt }];
}

/** The rises in columns of numbers, and which of them reach into each row of the plane. */
function tableOf(rises: readonly Rise[]) {
  const yMin = rises.reduce((least, { yLow }) => Math.min(least, yLow), Infinity);
  const yMax = rises.reduce((most, { yHigh }) => Math.max(most, yHigh), -Infinity);
  const count = Math.min(MOST_ROWS, Math.max(1, rises.length));
  const rowOf = (y: number) => Math.min(Math.max(Math.floor(((y - yMin) / (yMax - yMin)) * count), 0), count - 1);
  const rows: number[][] = Array.from({ length: count }, () => []);
  rises.forEach(({ yLow, yHigh }, k) => {
    // from the lower end, which counts, to the upper one, which does not
    for (let row = rowOf(yLow); yLow < yHigh && row <= rowOf(yHigh); row++) (rows[row] as number[]).push(k);
  });
  return {
    rowAt: (y: number) => rows[rowOf(y)] as number[],
    loop: Int32Array.from(rises, ({ loop }) => loop),
    yLow: Float64Array.from(rises, ({ yLow }) => yLow),
    yHigh: Float64Array.from(rises, ({ yHigh }) => yHigh),
    xMin: Float64Array.from(rises, ({ xMin }) => xMin),
    xMax: Float64Array.from(rises, ({ xMax }) => xMax),
  };
}

/**
 * How many other loops each loop lies in, by a ray to the right from its start: inside a loop when the ray crosses it an odd
 * number of times. The loops must not touch each other.
 */
export function nestingDepths(
  edges: readonly Edge[],
  loops: readonly { readonly x: number; readonly y: number }[],
): number[] {
  const rises = edges.flatMap(risesOf);
  const table = tableOf(rises);
  const odd = new Uint8Array(loops.length);
  return loops.map(({ x, y }, own): number => {
    odd.fill(0);
    let depth = 0;
    for (const k of table.rowAt(y)) {
      const loop = table.loop[k] as number;
      if (x > (table.xMax[k] as number) || y < (table.yLow[k] as number) || y >= (table.yHigh[k] as number)) continue;
      if (loop === own || (x >= (table.xMin[k] as number) && (rises[k] as Rise).xAt(y) <= x)) continue;
      odd[loop] = 1 - (odd[loop] as number);
      depth += (odd[loop] as number) * 2 - 1;
    }
    return depth;
  });
}
