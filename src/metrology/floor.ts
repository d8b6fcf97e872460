import type { HeightField } from '#src/base/field.ts';
import { nearest, type Outline } from '#src/base/outline.ts';
import { METRES_PER_MILLIMETRE } from '#src/base/units.ts';
import { arealMean } from './areal-gaussian.ts';
import { hullCells, minimumZone } from './minimum-zone.ts';
import { fitPlane, type Plane } from './plane.ts';

/** Nesting index of the S-filter a floor's flatness is measured after (m). */
export const FLATNESS_S_FILTER = 0.08 * METRES_PER_MILLIMETRE;

/**
 * The field with NaN wherever the outline, moved inward by `margin` (m), does not cover the cell's centre; corners stay
 * sharp as distance contours do. A signed distance changes by at most one step per step, so whole runs of a row are
 * settled by one look.
 */
export function insideOutline(
  field: HeightField,
  outline: Outline,
  margin: number,
): HeightField & { readonly z: Float64Array } {
  const { nx, ny, dx, dy, x0, y0 } = field;
  const z = Float64Array.from(field.z);
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx; ) {
      const off = nearest(outline, x0 + i * dx, y0 + j * dy).distance + margin;
      const run = Math.max(1, Math.ceil(Math.abs(off) / dx - 1e-9));
      const end = Math.min(nx, i + run);
      if (off > 0) z.fill(Number.NaN, j * nx + i, j * nx + end);
      i = end;
    }
  }
  return { nx, ny, dx, dy, x0, y0, z };
}

export interface Flatness {
  /** Minimum zone of the filtered floor (m). */
  readonly flatness: number;
  /** Slopes of the zone against the entry face. */
  readonly slopeX: number;
  readonly slopeY: number;
  /** Nesting index of the S-filter (m); undefined when cells are too coarse for it (over half the index). */
  readonly sFilter: number | undefined;
  readonly cells: number;
}

/**
 * Flatness of a floor: S-filter, then minimum zone. `floor` holds the floor alone, walls and the margin beside them
 * already NaN (`insideOutline`), so that the filter does not carry the wall into the floor. Where the filter does not act
 * the result says so.
 * @throws RangeError when fewer than three cells not on one line are left.
 */
export function floorFlatness(floor: HeightField, sFilter: number = FLATNESS_S_FILTER): Flatness {
  const filtered = 2 * Math.max(floor.dx, floor.dy) <= sFilter;
  const surface = filtered ? arealMean(floor, sFilter) : floor;
  const zone = minimumZone(hullCells(surface));
  let cells = 0;
  for (const height of floor.z) if (Number.isFinite(height)) cells++;
  return {
    flatness: zone.width,
    slopeX: zone.slopeX,
    slopeY: zone.slopeY,
    sFilter: filtered ? sFilter : undefined,
    cells,
  };
}

export interface FloorDepth {
  /** Mean depth below the entry face z = `entryLevel` (m). */
  readonly mean: number;
  readonly deepest: number;
  readonly shallowest: number;
  /** Least-squares plane of the floor's heights. */
  readonly plane: Plane;
}

/**
 * Depth of a floor whose walls are NaN, below the entry face at height `entryLevel` (m).
 * @throws RangeError when the floor has no plane (`fitPlane`).
 */
export function floorDepth(floor: HeightField, entryLevel = 0): FloorDepth {
  const plane = fitPlane(floor);
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const height of floor.z) {
    if (!Number.isFinite(height)) continue;
    low = Math.min(low, height);
    high = Math.max(high, height);
  }
  return { mean: entryLevel - plane.level, deepest: entryLevel - low, shallowest: entryLevel - high, plane };
}
