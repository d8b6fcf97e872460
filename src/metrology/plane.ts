import type { HeightField } from '#src/base/field.ts';
import { solveLinear } from './linear.ts';

/** Plane z = `level` + `slopeX` (x - `x`) + `slopeY` (y - `y`); (x, y) is the middle of the cells it was fitted to. */
export interface Plane {
  readonly level: number;
  readonly slopeX: number;
  readonly slopeY: number;
  readonly x: number;
  readonly y: number;
}

/** Height of a plane at (x, y) (m). */
export function planeAt(plane: Plane, x: number, y: number): number {
  return plane.level + plane.slopeX * (x - plane.x) + plane.slopeY * (y - plane.y);
}

/** Count of cells that have a surface, and the middle of them in cells and height. */
function middleOf(field: HeightField): { count: number; i: number; j: number; z: number } {
  const { nx, ny, z } = field;
  const first = z.find((height) => Number.isFinite(height)) ?? Number.NaN;
  let count = 0;
  let si = 0;
  let sj = 0;
  let sz = 0;
  for (let j = 0; j < ny; j++) {
    for (let i = 0; i < nx; i++) {
      const height = z[j * nx + i];
      if (!Number.isFinite(height)) continue;
      count++;
      si += i;
      sj += j;
      sz += height - first;
    }
  }
  return { count, i: si / count, j: sj / count, z: first + sz / count };
}

/**
 * Least-squares plane through the cells that have a surface.
 * @throws RangeError when they are fewer than three or lie on one line.
 */
export function fitPlane(field: HeightField): Plane {
  const { nx, ny, z } = field;
  const middle = middleOf(field);
  const moments = new Float64Array(5);
  for (let j = 0; j < ny; j++) {
    const v = (j - middle.j) / ny;
    for (let i = 0; i < nx; i++) {
      const height = z[j * nx + i] - middle.z;
      if (!Number.isFinite(height)) continue;
      const u = (i - middle.i) / nx;
      moments[0] += u * u;
      moments[1] += u * v;
      moments[2] += v * v;
      moments[3] += u * height;
      moments[4] += v * height;
    }
  }
  const [uu, uv, vv, uz, vz] = moments;
  const slopes = solveLinear(Float64Array.of(uu, uv, uv, vv), Float64Array.of(uz, vz));
  if (middle.count < 3 || slopes === undefined)
    throw new RangeError(`no plane through ${middle.count} cells: three that are not on one line are needed`);
  return {
    level: middle.z,
    slopeX: slopes[0] / (nx * field.dx),
    slopeY: slopes[1] / (ny * field.dy),
    x: field.x0 + middle.i * field.dx,
    y: field.y0 + middle.j * field.dy,
  };
}

/** The field less a plane; cells without a surface stay NaN. */
export function withoutPlane(field: HeightField, plane: Plane): HeightField & { readonly z: Float64Array } {
  const { nx, ny, dx, dy, x0, y0 } = field;
  const z = new Float64Array(nx * ny);
  for (let j = 0; j < ny; j++) {
    const row = planeAt(plane, x0, y0 + j * dy);
    for (let i = 0; i < nx; i++) z[j * nx + i] = field.z[j * nx + i] - row - plane.slopeX * i * dx;
  }
  return { nx, ny, dx, dy, x0, y0, z };
}
