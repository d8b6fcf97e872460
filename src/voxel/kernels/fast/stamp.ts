import { type Field, OUT_OF_REACH, SUM } from '../contract.ts';

/** Where and how large one crater is, in columns of the field. */
export interface Footprint {
  /** Centre, in columns from the field's corner. */
  x: number;
  y: number;
  /** Index of the column struck. */
  column: number;
  /** Radius as the chip has it, before magnification (m). */
  radius: number;
  depth: number;
  /** Columns at or above this height are left alone: the tool has passed them, or they stand too tall (m). */
  limit: number;
}

/**
 * Lowers the columns under a half-ellipsoid: h = min(h, h0 - depth sqrt(1 - (r/radius)^2)). Books the credited volume,
 * what overlap took of it and what was removed, in the sums at `base`.
 */
export function stampChip(
  field: Field,
  at: Footprint,
  step: { magnification: number; time: number },
  base: number,
): void {
  const { nx, ny, heights, ages, sums, periodicX, periodicY } = field;
  const wide = at.radius * step.magnification;
  const rx = wide / field.dx;
  const ry = wide / field.dy;
  const { x, y, depth, limit } = at;
  const time = step.time;
  const h0 = heights[at.column] as number;
  let credited = 0;
  let removed = 0;
  let j0 = Math.ceil(y - 0.5 - ry);
  let j1 = Math.floor(y - 0.5 + ry);
  if (!periodicY) {
    if (j0 < 0) j0 = 0;
    if (j1 > ny - 1) j1 = ny - 1;
  }
  for (let j = j0; j <= j1; j++) {
    const v = (j + 0.5 - y) / ry;
    const rest = 1 - v * v;
    if (rest <= 0) continue;
    const reach = rx * Math.sqrt(rest);
    let i0 = Math.ceil(x - 0.5 - reach);
    let i1 = Math.floor(x - 0.5 + reach);
    if (!periodicX) {
      if (i0 < 0) i0 = 0;
      if (i1 > nx - 1) i1 = nx - 1;
    }
    const row = (j < 0 ? j + ny : j >= ny ? j - ny : j) * nx;
    for (let i = i0; i <= i1; i++) {
      const u = (i + 0.5 - x) / rx;
      const w = rest - u * u;
      if (w <= 0) continue;
      const bowl = depth * Math.sqrt(w);
      const column = row + (i < 0 ? i + nx : i >= nx ? i - nx : i);
      const h = heights[column] as number;
      if (h >= limit || h <= OUT_OF_REACH) continue;
      credited += bowl;
      const target = h0 - bowl;
      if (h <= target) continue;
      heights[column] = target;
      removed += h - (heights[column] as number);
      ages[column] = time;
    }
  }
  const area = field.dx * field.dy;
  sums[base + SUM.credited] = (sums[base + SUM.credited] as number) + credited * area;
  sums[base + SUM.overlap] = (sums[base + SUM.overlap] as number) + (credited - removed) * area;
  sums[base + SUM.chipRemoved] = (sums[base + SUM.chipRemoved] as number) + removed * area;
}

/**
 * Takes a dent's volume (m3, magnification included) off the columns around its centre: a paraboloid of radius
 * `at.radius` where the columns resolve it, shared over the four nearest columns where they do not.
 */
export function stampDent(
  field: Field,
  at: Footprint,
  volume: number,
  step: { magnification: number; time: number },
  base: number,
): void {
  const wide = at.radius * step.magnification;
  const removed =
    wide > 1.5 * field.dx && wide > 1.5 * field.dy ? bowlDent(field, at, volume, wide) : splatDent(field, at, volume);
  const sums = field.sums;
  sums[base + SUM.dentRemoved] = (sums[base + SUM.dentRemoved] as number) + removed * field.dx * field.dy;
}

function splatDent(field: Field, at: Footprint, volume: number): number {
  const { nx, ny, heights, periodicX, periodicY } = field;
  const cx = at.x - 0.5;
  const cy = at.y - 0.5;
  const i0 = Math.floor(cx);
  const j0 = Math.floor(cy);
  const fx = cx - i0;
  const fy = cy - j0;
  const deep = volume / (field.dx * field.dy);
  let removed = 0;
  for (let q = 0; q < 4; q++) {
    let i = i0 + (q & 1);
    let j = j0 + (q >> 1);
    if (i < 0 || i >= nx) {
      if (!periodicX) continue;
      i = i < 0 ? i + nx : i - nx;
    }
    if (j < 0 || j >= ny) {
      if (!periodicY) continue;
      j = j < 0 ? j + ny : j - ny;
    }
    const column = j * nx + i;
    const h = heights[column] as number;
    if (h >= at.limit || h <= OUT_OF_REACH) continue;
    const weight = ((q & 1) === 1 ? fx : 1 - fx) * (q >> 1 === 1 ? fy : 1 - fy);
    heights[column] = h - deep * weight;
    removed += h - (heights[column] as number);
  }
  return removed;
}

function bowlDent(field: Field, at: Footprint, volume: number, wide: number): number {
  const { nx, ny, heights, periodicX, periodicY } = field;
  const rx = wide / field.dx;
  const ry = wide / field.dy;
  // volume of a paraboloid: pi r^2 depth / 2
  const depth = (2 * volume) / (Math.PI * wide * wide);
  let removed = 0;
  let j0 = Math.ceil(at.y - 0.5 - ry);
  let j1 = Math.floor(at.y - 0.5 + ry);
  if (!periodicY) {
    if (j0 < 0) j0 = 0;
    if (j1 > ny - 1) j1 = ny - 1;
  }
  for (let j = j0; j <= j1; j++) {
    const v = (j + 0.5 - at.y) / ry;
    const rest = 1 - v * v;
    if (rest <= 0) continue;
    const reach = rx * Math.sqrt(rest);
    let i0 = Math.ceil(at.x - 0.5 - reach);
    let i1 = Math.floor(at.x - 0.5 + reach);
    if (!periodicX) {
      if (i0 < 0) i0 = 0;
      if (i1 > nx - 1) i1 = nx - 1;
    }
    const row = (j < 0 ? j + ny : j >= ny ? j - ny : j) * nx;
    for (let i = i0; i <= i1; i++) {
      const u = (i + 0.5 - at.x) / rx;
      const w = rest - u * u;
      if (w <= 0) continue;
      const column = row + (i < 0 ? i + nx : i >= nx ? i - nx : i);
      const h = heights[column] as number;
      if (h >= at.limit || h <= OUT_OF_REACH) continue;
      heights[column] = h - depth * w;
      removed += h - (heights[column] as number);
    }
  }
  return removed;
}
