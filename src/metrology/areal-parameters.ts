import type { HeightField } from '#src/base/field.ts';
import { fitPlane, type Plane, withoutPlane } from './plane.ts';

/** ISO 25178-2 (formulas from memory) over the cells that have a surface; lengths in metres. */
export interface ArealParameters {
  readonly sa: number;
  readonly sq: number;
  /** NaN for a surface without height. */
  readonly ssk: number;
  readonly sku: number;
  readonly sp: number;
  readonly sv: number;
  readonly sz: number;
  /** Root mean square gradient, and developed area over projected area less one. NaN on a field of one row. */
  readonly sdq: number;
  readonly sdr: number;
  /** Cells that were measured. */
  readonly cells: number;
  readonly plane: Plane;
}

/**
 * Sdq: slopes by central differences over two cells, z_x = (z(i+1, j) - z(i-1, j))/(2 dx) and likewise in y, over the
 * cells whose four neighbours have a surface. No plane is removed. NaN when there is no such cell.
 */
export function rootMeanSquareGradient(field: HeightField): number {
  const { nx, ny, dx, dy, z } = field;
  let square = 0;
  let count = 0;
  for (let j = 1; j < ny - 1; j++) {
    for (let k = j * nx + 1; k < (j + 1) * nx - 1; k++) {
      const sx = (z[k + 1] - z[k - 1]) / (2 * dx);
      const sy = (z[k + nx] - z[k - nx]) / (2 * dy);
      const sum = sx * sx + sy * sy;
      if (!Number.isFinite(sum) || !Number.isFinite(z[k])) continue;
      square += sum;
      count++;
    }
  }
  return Math.sqrt(square / count);
}

/**
 * Sdr: every square of four neighbouring cell centres that all have a surface is cut into two triangles along one
 * diagonal and along the other, and the areas of the two cuts averaged, so that a mirrored surface has the same Sdr. No
 * plane is removed. NaN when there is no such square.
 */
export function developedAreaRatio(field: HeightField): number {
  const { nx, ny, dx, dy, z } = field;
  let excess = 0;
  let count = 0;
  for (let j = 0; j + 1 < ny; j++) {
    for (let i = 0; i + 1 < nx; i++) {
      const k = j * nx + i;
      const bottom = (z[k + 1] - z[k]) / dx;
      const top = (z[k + nx + 1] - z[k + nx]) / dx;
      const left = (z[k + nx] - z[k]) / dy;
      const right = (z[k + nx + 1] - z[k + 1]) / dy;
      const area = triangle(bottom, left) + triangle(top, right) + triangle(bottom, right) + triangle(top, left);
      if (!Number.isFinite(area)) continue;
      excess += area;
      count++;
    }
  }
  return count > 0 ? excess / (4 * count) : Number.NaN;
}

/** Excess of sqrt(1 + p^2 + q^2) over one, without cancellation. */
function triangle(p: number, q: number): number {
  const square = p * p + q * q;
  return square / (1 + Math.sqrt(1 + square));
}

/**
 * Sa, Sq, Ssk, Sku, Sp, Sv, Sz, Sdq and Sdr of a field less its least-squares plane; cells without a surface are left
 * out. Every cell stands for dx dy (rectangle rule). Filtering, where wanted, comes before (`arealMean`).
 * @throws RangeError when the field has no plane (`fitPlane`).
 */
export function arealParameters(field: HeightField): ArealParameters {
  const plane = fitPlane(field);
  const levelled = withoutPlane(field, plane);
  const heights = levelled.z.filter((height) => Number.isFinite(height));
  const cells = heights.length;
  // planes leave rounding behind; it is no surface
  const rounding = 1e-13 * heightScale(field);
  if (heights.every((height) => Math.abs(height) <= rounding)) heights.fill(0);
  let absolute = 0;
  let square = 0;
  let high = Number.NEGATIVE_INFINITY;
  let low = Number.POSITIVE_INFINITY;
  for (const height of heights) {
    absolute += Math.abs(height);
    square += height * height;
    high = Math.max(high, height);
    low = Math.min(low, height);
  }
  const sq = Math.sqrt(square / cells);
  let third = 0;
  let fourth = 0;
  for (const height of heights) {
    const share = height / sq;
    const second = share * share;
    third += second * share;
    fourth += second * second;
  }
  return {
    sa: absolute / cells,
    sq,
    ssk: third / cells,
    sku: fourth / cells,
    sp: high,
    sv: -low,
    sz: high - low,
    sdq: rootMeanSquareGradient(levelled),
    sdr: developedAreaRatio(levelled),
    cells,
    plane,
  };
}

function heightScale(field: HeightField): number {
  let scale = 0;
  for (const height of field.z) if (Math.abs(height) > scale) scale = Math.abs(height);
  return scale;
}
