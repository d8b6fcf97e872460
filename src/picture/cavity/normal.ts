import { ALL_EMPTY, ALL_SOLID, BRICK_VOXELS } from '#src/voxel/bricks.ts';
import type { Grid } from './grid.ts';

/** Reused working memory of `surfaceNormal`: cubic B-spline weights and their derivatives along x, y, z. */
export interface NormalScratch {
  readonly weight: Float64Array;
  readonly slope: Float64Array;
}

export function newNormalScratch(): NormalScratch {
  return { weight: new Float64Array(12), slope: new Float64Array(12) };
}

function splineWeights(scratch: NormalScratch, axis: number, a: number): void {
  const { weight, slope } = scratch;
  const b = 1 - a;
  const at = axis * 4;
  weight[at] = (b * b * b) / 6;
  weight[at + 1] = (3 * a * a * a - 6 * a * a + 4) / 6;
  weight[at + 2] = (3 * b * b * b - 6 * b * b + 4) / 6;
  weight[at + 3] = (a * a * a) / 6;
  slope[at] = (-b * b) / 2;
  slope[at + 1] = (3 * a * a - 4 * a) / 2;
  slope[at + 2] = (-3 * b * b + 4 * b) / 2;
  slope[at + 3] = (a * a) / 2;
}

/**
 * Outward unit normal of the surface at a padded voxel position into `out`: minus the gradient of the solid fraction
 * smoothed by a cubic B-spline over 4 x 4 x 4 voxels. Up where the field is flat.
 */
export function surfaceNormal(
  out: Float64Array,
  grid: Grid,
  at: { i: number; j: number; k: number },
  scratch: NormalScratch,
): void {
  const { table, solid, px, py } = grid;
  const { weight, slope } = scratch;
  const i0 = Math.floor(at.i);
  const j0 = Math.floor(at.j);
  const k0 = Math.floor(at.k);
  splineWeights(scratch, 0, at.i - i0);
  splineWeights(scratch, 1, at.j - j0);
  splineWeights(scratch, 2, at.k - k0);
  let gx = 0;
  let gy = 0;
  let gz = 0;
  for (let c = 0; c < 4; c++) {
    const k = k0 + c - 1;
    for (let b = 0; b < 4; b++) {
      const j = j0 + b - 1;
      const row = ((k >> 3) * py + (j >> 3)) * px;
      const inner = ((k & 7) << 6) | ((j & 7) << 3);
      let sum = 0;
      let change = 0;
      for (let a = 0; a < 4; a++) {
        const i = i0 + a - 1;
        const entry = table[row + (i >> 3)] as number;
        if (entry === ALL_EMPTY) continue;
        const f = entry === ALL_SOLID ? 255 : (solid[entry * BRICK_VOXELS + (inner | (i & 7))] as number);
        sum += f * (weight[a] as number);
        change += f * (slope[a] as number);
      }
      const wy = weight[4 + b] as number;
      const wz = weight[8 + c] as number;
      gx += change * wy * wz;
      gy += sum * (slope[4 + b] as number) * wz;
      gz += sum * wy * (slope[8 + c] as number);
    }
  }
  const length = Math.sqrt(gx * gx + gy * gy + gz * gz);
  if (length < 1e-6) {
    out[0] = 0;
    out[1] = 0;
    out[2] = -1;
    return;
  }
  out[0] = -gx / length;
  out[1] = -gy / length;
  out[2] = -gz / length;
}
