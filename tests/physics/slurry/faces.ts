import { makeOutline, type OutlineSpec } from '#src/base/outline.ts';
import type { Outlet } from '#src/physics/slurry/flow.ts';
import { type Bore, type FaceGrid, faceGrid, type GridOffset } from '#src/physics/slurry/grid.ts';

/** Faces about one metre across, so that errors read as shares. */
export const DISC: OutlineSpec = { kind: 'circle', diameter: 2 };
export const RING: OutlineSpec = { kind: 'ring', outerDiameter: 2, innerDiameter: 0.6 };
export const RECTANGLE: OutlineSpec = { kind: 'rectangle', length: 2, width: 1.3, cornerRadius: 0.1 };
export const SLOT: OutlineSpec = { kind: 'slot', length: 2, width: 0.7 };
export const HEXAGON: OutlineSpec = { kind: 'regularPolygon', sides: 6, acrossFlats: 2, cornerRadius: 0 };
export const CENTRE_BORE: Bore = { x: 0, y: 0, radius: 0.3 };
export const SIDE_BORE: Bore = { x: 0.25, y: -0.05, radius: 0.1 };

export function gridOf(
  spec: OutlineSpec,
  cells: number,
  options: { bores?: readonly Bore[]; offset?: GridOffset } = {},
): FaceGrid {
  return faceGrid(makeOutline(spec), options.bores ?? [], cells, options.offset);
}

/** A cell field from a function of place. */
export function fieldOf(grid: FaceGrid, f: (x: number, y: number) => number): Float64Array {
  return Float64Array.from(grid.active, (_, c) =>
    f(grid.x0 + (c % grid.nx) * grid.pitch, grid.y0 + Math.floor(c / grid.nx) * grid.pitch),
  );
}

/** Root mean square over the active cells of a field less what it should be. */
export function rmsError(grid: FaceGrid, field: Float64Array, exact: (x: number, y: number) => number): number {
  const wanted = fieldOf(grid, exact);
  let sum = 0;
  let count = 0;
  for (let c = 0; c < field.length; c++) {
    if (grid.active[c] === 0) continue;
    sum += (field[c] - wanted[c]) ** 2;
    count += 1;
  }
  return Math.sqrt(sum / count);
}

/** Order of convergence between the first and the last of errors on grids that halve the pitch each time. */
export function orderOf(errors: readonly number[]): number {
  return Math.log2(Math.abs(errors[0]) / Math.abs(errors[errors.length - 1])) / (errors.length - 1);
}

export const freeOutlet = (pressure: number): Outlet => ({ pressure, resistance: 0, mouth: Infinity });

/** Smallest and largest value over the active cells. */
export function rangeOf(grid: FaceGrid, field: Float64Array): { least: number; most: number } {
  const inside = field.filter((_, c) => grid.active[c] === 1);
  return { least: Math.min(...inside), most: Math.max(...inside) };
}
