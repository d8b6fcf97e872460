import type { HeightField } from '#src/base/field.ts';
import { nearest } from '#src/base/outline.ts';
import { cornerRadius } from '#src/metrology/corner.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import type { Cut } from '#src/voxel/cut.ts';
import { SCALAR } from '#src/voxel/state.ts';
import { type Measured, meanGap } from './measure-wall.ts';

/** Floor heights left out of the corner's profile above the mean floor, in mean chip depths and in voxels. */
const FLOOR_PEAKS = 4;
/** Standard error of the corner's least-squares arc, over its radius, past which the touching fillet is taken. */
const ARC_ERROR = 0.15;

/** Radius of the tool's edge now (m). */
export const edgeNow = ({ state }: Cut): number => state.scalars[SCALAR.edgeRadius] as number;

/**
 * Corner radius between wall and floor from the profile averaged around the outline: wall points by layer down to the
 * floor's highest peaks, floor heights under the tool. NaN when the corner is too shallow or too coarse to measure.
 */
export function cornerOf(
  cut: Cut,
  bricks: BrickField,
  at: { readonly surface: HeightField; readonly depth: number; readonly measured: Measured },
): number {
  const { model } = cut;
  const { surface, depth, measured } = at;
  const { grit } = model.spec.conditions;
  const span = 3 * (edgeNow(cut) + grit.massMedian);
  const peaks = Math.max(FLOOR_PEAKS * model.chipDepth, 1.5 * bricks.pitch);
  const r: number[] = [];
  const z: number[] = [];
  for (let k = Math.max(0, Math.floor((depth - span) / bricks.pitch)); (k + 0.5) * bricks.pitch < depth - peaks; k++) {
    const gap = meanGap(cut, bricks, measured, (k + 0.5) * bricks.pitch);
    if (!Number.isFinite(gap)) continue;
    r.push(gap);
    z.push(-(k + 0.5) * bricks.pitch);
  }
  const floor = floorByDistance(cut, surface, span);
  r.push(...floor.r);
  z.push(...floor.z);
  try {
    const corner = cornerRadius({ x: Float64Array.from(r), y: Float64Array.from(z) });
    // on few voxels the free arc is weak; the fillet that touches wall and floor is steadier
    const sure = corner.radiusError < ARC_ERROR * corner.radius;
    return sure ? corner.radius : corner.tangentRadius;
  } catch (problem) {
    if (problem instanceof RangeError) return Number.NaN;
    throw problem;
  }
}

/** Mean height of the floor by distance inside the start of the curved edge, from the edge inward (m). */
function floorByDistance(cut: Cut, surface: HeightField, span: number): { r: number[]; z: number[] } {
  const { model } = cut;
  const { nx, ny, dx, x0, y0 } = surface;
  const bins = Math.max(4, Math.floor(span / dx));
  const sums = new Float64Array(bins);
  const counts = new Float64Array(bins);
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx; i++) {
      const { distance } = nearest(model.outline, x0 + i * dx, y0 + j * dx);
      const bin = Math.floor((-distance - edgeNow(cut)) / dx);
      if (bin < 0 || bin >= bins) continue;
      sums[bin] = (sums[bin] as number) + (surface.z[j * nx + i] as number);
      counts[bin] = (counts[bin] as number) + 1;
    }
  }
  const r: number[] = [];
  const z: number[] = [];
  sums.forEach((sum, bin) => {
    if ((counts[bin] as number) === 0) return;
    r.push(-edgeNow(cut) - (bin + 0.5) * dx);
    z.push(sum / (counts[bin] as number));
  });
  return { r, z };
}
