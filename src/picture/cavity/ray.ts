import { fractionAt, type Grid, PAD } from './grid.ts';
import type { SectionView } from './view.ts';

/** What a line of sight meets. */
export const CUT_FACE = 0;
export const ENTRY_FACE = 1;
export const SURFACE = 2;

/**
 * Where a line of sight ends, in padded voxel coordinates (voxel (0, 0, 0)'s centre at 8, 8, 8). `run` is the way into
 * the sheet in voxels.
 */
export interface Sight {
  kind: number;
  i: number;
  j: number;
  k: number;
  run: number;
}

export function newSight(): Sight {
  return { kind: CUT_FACE, i: 0, j: 0, k: 0, run: 0 };
}

/** Solid fraction at which the surface lies. */
const HALF = 127.5;

/** First root in [0, most] of c0 + c1 s + c2 s^2 = 0 for c0 < 0, or -1. */
function firstRoot(c0: number, c1: number, c2: number, most: number): number {
  if (Math.abs(c2) < 1e-9) {
    const s = -c0 / c1;
    return c1 > 0 && s <= most ? s : -1;
  }
  const discriminant = c1 * c1 - 4 * c2 * c0;
  if (discriminant < 0) return -1;
  const root = Math.sqrt(discriminant);
  const q = c1 > 0 ? -0.5 * (c1 + root) : -0.5 * (c1 - root);
  const a = q === 0 ? -1 : c0 / q;
  const b = q / c2;
  const low = Math.min(a, b);
  const high = Math.max(a, b);
  if (low >= 0 && low <= most) return low;
  return high >= 0 && high <= most ? high : -1;
}

/** Fraction between voxels i0 and i0 + 1 of row (j, k). */
function between(grid: Grid, i0: number, share: number, j: number, k: number): number {
  const near = fractionAt(grid, i0, j, k);
  if (share === 0) return near;
  return near + share * (fractionAt(grid, i0 + 1, j, k) - near);
}

/** The flat entry face beyond the stored field, z = 0. */
function meetEntryFace(grid: Grid, sight: Sight, j0: number, down: number, rise: number): void {
  const face = PAD - grid.field.z0 / grid.field.pitch;
  sight.kind = ENTRY_FACE;
  sight.run = Math.max(0, (face - down) / rise);
  sight.j = j0 + sight.run;
  sight.k = face;
}

/**
 * Follows the line of sight through picture point (across, down), both in metres, and writes where it meets the half
 * solid surface of the trilinear field: exact per cell, where the fraction along the ray is a quadratic. Empty squares of
 * bricks are leapt over.
 */
export function look(grid: Grid, view: SectionView, across: number, down: number, sight: Sight): void {
  const { field, leap, px, py, pz } = grid;
  const { rise } = view;
  const u = (across - field.x0) / field.pitch + PAD;
  const v0 = (view.yCut - field.y0) / field.pitch + PAD;
  const w0 = (down - field.z0) / field.pitch + PAD;
  sight.i = u;
  const i0 = Math.floor(u);
  const share = u - i0;

  // the block beyond the field: cut face below, entry face above
  const outside = i0 < PAD - 1 || i0 >= field.nx + PAD || v0 < PAD || v0 >= field.ny + PAD - 1;
  if (outside || w0 >= field.nz + PAD - 1) {
    if (down < 0) {
      meetEntryFace(grid, sight, v0, w0, rise);
      return;
    }
    sight.kind = CUT_FACE;
    sight.run = 0;
    sight.j = v0;
    sight.k = w0;
    return;
  }

  // down to the first cells that can hold work
  let s = w0 < PAD - 1 ? (PAD - 1 - w0) / rise : 0;
  let v = v0 + s;
  let w = Math.max(w0, PAD - 1);
  if (v >= field.ny + PAD - 1) {
    meetEntryFace(grid, sight, v0, w0, rise);
    return;
  }

  // corners of the present cell less one half; side: 0 unknown, 1 came from -y, 2 came from -z
  let f00 = 0;
  let f10 = 0;
  let f01 = 0;
  let f11 = 0;
  let side = 0;
  let first = s === 0;
  while (true) {
    const j = Math.floor(v);
    const k = Math.floor(w);
    const bj = j >> 3;
    const bk = k >> 3;
    if (bj >= py - 1 || bk >= pz - 1) break;
    const free = leap[(bk * py + bj) * px + (i0 >> 3)] as number;
    const edgeV = free > 0 ? (bj + free) << 3 : j + 1;
    const edgeW = free > 0 ? (bk + free) << 3 : k + 1;
    const toV = edgeV - v;
    const toW = (edgeW - w) / rise;
    const step = Math.min(toV, toW);
    if (free === 0) {
      if (side === 1) {
        f00 = f10;
        f01 = f11;
      } else {
        f00 = side === 2 ? f01 : between(grid, i0, share, j, k) - HALF;
        f01 = between(grid, i0, share, j, k + 1) - HALF;
      }
      f10 = side === 2 ? f11 : between(grid, i0, share, j + 1, k) - HALF;
      f11 = between(grid, i0, share, j + 1, k + 1) - HALF;
      if (f00 >= 0 || f10 >= 0 || f01 >= 0 || f11 >= 0) {
        // along the ray: c0 + c1 s + c2 s^2
        const a = v - j;
        const b = w - k;
        const da = f10 - f00;
        const db = f01 - f00;
        const dab = f11 - f10 - f01 + f00;
        const c0 = f00 + da * a + db * b + dab * a * b;
        const hit = c0 >= 0 ? 0 : firstRoot(c0, da + db * rise + dab * (b + rise * a), dab * rise, step);
        if (hit >= 0) {
          sight.kind = first && c0 >= 0 ? CUT_FACE : SURFACE;
          sight.run = s + hit;
          sight.j = v + hit;
          sight.k = w + rise * hit;
          return;
        }
      }
    }
    first = false;
    s += step;
    if (toV < toW) {
      v = edgeV;
      w += rise * step;
      side = free === 0 ? 1 : 0;
    } else {
      v += step;
      w = edgeW;
      side = free === 0 ? 2 : 0;
    }
  }
  // past the back or the bottom of the field
  if (w < PAD) {
    meetEntryFace(grid, sight, v0, w0, rise);
    return;
  }
  sight.kind = SURFACE;
  sight.run = s;
  sight.j = v;
  sight.k = w;
}
