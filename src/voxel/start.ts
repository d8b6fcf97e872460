import type { BrickField } from './bricks.ts';
import { COEFFICIENT, type Field, type KernelTables, OUT_OF_REACH } from './kernels/contract.ts';
import { riseAt } from './kernels/fast/look-up.ts';
import type { CutModel } from './model.ts';
import { type Axis, resamplePlane } from './overlap.ts';
import { surfaceDepths } from './surface.ts';

/** The axes of a floor grid, or of the columns of voxels. */
export function planeAxes(grid: {
  readonly nx: number;
  readonly ny: number;
  readonly pitch: number;
  readonly x0: number;
  readonly y0: number;
}): { x: Axis; y: Axis } {
  const { nx, ny, pitch, x0, y0 } = grid;
  return { x: { n: nx, pitch, centre: x0 }, y: { n: ny, pitch, centre: y0 } };
}

/** Depth of an earlier cavity under each floor column (m), 0 beyond it; Infinity where it goes right through. */
export function depthsBefore(model: CutModel, before: BrickField): Float64Array {
  const { nx, ny, dx: pitch } = model.floor;
  const depths = surfaceDepths(before);
  const bottom = model.spec.exit?.thickness ?? bottomOf(before);
  // a column with no solid left in it: a tenth of a voxel is rounding
  const open = Float64Array.from(depths, (depth) => (depth > bottom - 0.1 * before.pitch ? 1 : 0));
  const to = planeAxes({ nx, ny, pitch, x0: model.x0, y0: model.y0 });
  const from = planeAxes(before);
  const mean = resamplePlane(depths, from, to);
  const through = open.some((one) => one > 0) ? resamplePlane(open, from, to) : null;
  return through ? mean.map((depth, c) => ((through[c] as number) > 0.5 ? Number.POSITIVE_INFINITY : depth)) : mean;
}

/** Depth of the lowest layer of voxels, below which nothing is known (m). */
const bottomOf = (bricks: BrickField) => bricks.nz * bricks.pitch;

/** Renews the bounds of every block of a floor under a tip at height `face` (m); above all columns if left out. */
export function boundBlocks(field: Field, tables: KernelTables, face = Number.POSITIVE_INFINITY): void {
  const { nx, tile, block, tilesX, heights, edges, bounds } = field;
  const edgeRadius = tables.coefficients[COEFFICIENT.edgeRadius] as number;
  const most = (tables.coefficients[COEFFICIENT.largest] as number) / 2 + edgeRadius;
  const per = tile / block;
  for (let k = 0; k < bounds.length; k++) {
    const home = Math.floor(k / (per * per));
    const inside = k % (per * per);
    const row = Math.floor(home / tilesX) * tile + Math.floor(inside / per) * block;
    const col = (home % tilesX) * tile + (inside % per) * block;
    let bound = OUT_OF_REACH;
    for (let n = 0; n < block * block; n++) {
      const column = (row + Math.floor(n / block)) * nx + col + (n % block);
      const h = heights[column] as number;
      const e = edges.length > 0 ? (edges[column] as number) : 0;
      if (h <= OUT_OF_REACH || e >= most || h >= face + riseAt(edgeRadius, e)) continue;
      bound = Math.max(bound, e > 0 ? h - (most - Math.sqrt(most * most - e * e)) : h);
    }
    bounds[k] = bound;
  }
}

/** Height of the highest place a grain under the tool can reach, as `boundBlocks` left it (m); OUT_OF_REACH if none. */
export function highestReach(field: Field): number {
  let highest = OUT_OF_REACH;
  for (const bound of field.bounds) if (bound > highest) highest = bound;
  return highest;
}
