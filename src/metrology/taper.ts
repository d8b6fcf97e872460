import { atan2 } from '#src/base/math.ts';
import type { OutlineSpec } from '#src/base/outline.ts';
import { nominalSizes } from '#src/base/outline.ts';
import { METRES_PER_MILLIMETRE } from '#src/base/units.ts';
import { fitLine } from './linear.ts';

const ENTRY_SHARE = 0.1;
const FLOOR_SHARE = 0.8;
const ABOVE_FLOOR = 0.2 * METRES_PER_MILLIMETRE;
const TAPER_FROM = 0.1;
const TAPER_TO = 0.9;

/** Depth at which the entry size is taken: a tenth of the cavity's depth (m). */
export function entrySizeDepth(depth: number): number {
  return ENTRY_SHARE * depth;
}

/** Depth at which the floor size is taken: 0.2 mm above the floor, in cavities under 1 mm at 0.8 of the depth (m). */
export function floorSizeDepth(depth: number): number {
  return Math.max(depth - ABOVE_FLOOR, FLOOR_SHARE * depth);
}

/** +1 for a size that is larger where the cavity is wider, -1 for the island in a ring; order of `nominalSizes`. */
export function sizeSigns(spec: OutlineSpec): number[] {
  return spec.kind === 'ring' ? [1, -1] : nominalSizes(spec).map(() => 1);
}

export interface Taper {
  /** Half-angle per side (rad), positive when the cavity is wider at the entry. NaN with fewer than two sizes. */
  readonly halfAngle: number;
  /** Size of the fitted line at the entry face (m). */
  readonly sizeAtEntry: number;
  /** Root mean square distance of half the sizes from the line (m). */
  readonly residual: number;
  readonly count: number;
}

/**
 * Taper of one dimension from its sizes at several depths: least-squares line of half the size on depth, between 10 and
 * 90 % of the cavity's `depth`. NaN sizes are left out. `sign` as in `sizeSigns`.
 */
export function taperOf(depths: Float64Array, sizes: Float64Array, depth: number, sign = 1): Taper {
  const slack = 1e-9 * depth;
  const used = Uint32Array.from(depths.keys()).filter(
    (i) =>
      depths[i] >= TAPER_FROM * depth - slack && depths[i] <= TAPER_TO * depth + slack && Number.isFinite(sizes[i]),
  );
  const at = Float64Array.from(used, (i) => depths[i]);
  const half = Float64Array.from(used, (i) => sizes[i] / 2);
  if (new Set(at).size < 2)
    return { halfAngle: Number.NaN, sizeAtEntry: Number.NaN, residual: Number.NaN, count: at.length };
  const line = fitLine(at, half);
  let square = 0;
  at.forEach((place, i) => {
    square += (half[i] - line.level - line.slope * (place - line.at)) ** 2;
  });
  return {
    halfAngle: -sign * atan2(line.slope, 1),
    sizeAtEntry: 2 * (line.level - line.slope * line.at),
    residual: Math.sqrt(square / at.length),
    count: at.length,
  };
}

/** Taper of every dimension of an outline; `sizes[k]` holds the sizes of dimension k over `depths`. */
export function tapers(
  depths: Float64Array,
  sizes: readonly Float64Array[],
  depth: number,
  spec: OutlineSpec,
): Taper[] {
  return sizeSigns(spec).map((sign, k) => taperOf(depths, sizes[k], depth, sign));
}
