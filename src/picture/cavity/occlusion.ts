import { ALL_EMPTY, ALL_SOLID, BRICK_VOXELS } from '#src/voxel/bricks.ts';
import { type Grid, PAD } from './grid.ts';

/**
 * How much light reaches a point of the cut surface. The half of the work that is kept is averaged into ever coarser
 * cells; what stands near a point is read from the cell size that fits the distance. Nothing is drawn at random, so the
 * same field gives the same shade.
 */
interface Level {
  /** Cell edge in voxels. */
  readonly size: number;
  readonly nx: number;
  readonly ny: number;
  readonly nz: number;
  /** Mean solid fraction 0..255 of each cell. */
  readonly solid: Uint8Array;
}

export interface Occluders {
  readonly levels: readonly Level[];
}

const FINEST = 4;
const LEVELS = 5;

function meanOfQuarter(grid: Grid, entry: number, corner: number, firstKept: number): number {
  // corner: bit 0 x, bit 1 y, bit 2 z of the 4 x 4 x 4 voxels; rows before firstKept are cut away
  const i0 = (corner & 1) * 4;
  const j0 = ((corner >> 1) & 1) * 4;
  const k0 = (corner >> 2) * 4;
  let sum = 0;
  for (let k = k0; k < k0 + 4; k++) {
    for (let j = Math.max(j0, firstKept); j < j0 + 4; j++) {
      if (entry === ALL_SOLID) {
        sum += 4 * 255;
        continue;
      }
      const row = entry * BRICK_VOXELS + ((k << 6) | (j << 3) | i0);
      for (let i = 0; i < 4; i++) sum += grid.solid[row + i] as number;
    }
  }
  return Math.round(sum / 64);
}

function finestLevel(grid: Grid, firstKept: number): Level {
  const { field } = grid;
  const bx = field.nx >> 3;
  const by = field.ny >> 3;
  const nx = bx * 2;
  const ny = by * 2;
  const nz = (field.nz >> 3) * 2;
  const solid = new Uint8Array(nx * ny * nz);
  for (let brick = 0; brick < field.table.length; brick++) {
    const entry = field.table[brick] as number;
    if (entry === ALL_EMPTY) continue;
    const x = brick % bx;
    const y = Math.floor(brick / bx) % by;
    const z = Math.floor(brick / (bx * by));
    for (let corner = 0; corner < 8; corner++) {
      const at = ((z * 2 + (corner >> 2)) * ny + y * 2 + ((corner >> 1) & 1)) * nx + x * 2 + (corner & 1);
      solid[at] = meanOfQuarter(grid, entry, corner, firstKept - y * 8);
    }
  }
  return { size: FINEST, nx, ny, nz, solid };
}

function coarser(fine: Level): Level {
  const nx = (fine.nx + 1) >> 1;
  const ny = (fine.ny + 1) >> 1;
  const nz = (fine.nz + 1) >> 1;
  const solid = new Uint8Array(nx * ny * nz);
  for (let at = 0; at < solid.length; at++) {
    const x = 2 * (at % nx);
    const y = 2 * (Math.floor(at / nx) % ny);
    const z = 2 * Math.floor(at / (nx * ny));
    let sum = 0;
    for (let corner = 0; corner < 8; corner++) {
      const cx = Math.min(fine.nx - 1, x + (corner & 1));
      const cy = Math.min(fine.ny - 1, y + ((corner >> 1) & 1));
      const cz = Math.min(fine.nz - 1, z + (corner >> 2));
      sum += fine.solid[(cz * fine.ny + cy) * fine.nx + cx] as number;
    }
    solid[at] = Math.round(sum / 8);
  }
  return { size: fine.size * 2, nx, ny, nz, solid };
}

/** Averages the work behind the plane y = yCut (m). */
export function makeOccluders(grid: Grid, yCut: number): Occluders {
  const firstKept = Math.ceil((yCut - grid.field.y0) / grid.field.pitch);
  const levels = [finestLevel(grid, firstKept)];
  while (levels.length < LEVELS) levels.push(coarser(levels[levels.length - 1] as Level));
  return { levels };
}

/** Mean solid fraction 0..1 round a padded voxel position at one cell size; nothing above the entry face. */
function around(level: Level, i: number, j: number, k: number): number {
  const { size, nx, ny, nz, solid } = level;
  const x = (i - PAD + 0.5) / size - 0.5;
  const y = (j - PAD + 0.5) / size - 0.5;
  const z = (k - PAD + 0.5) / size - 0.5;
  if (z <= -1) return 0;
  const x0 = Math.floor(x);
  const y0 = Math.floor(y);
  const z0 = Math.floor(z);
  const fx = x - x0;
  const fy = y - y0;
  const fz = z - z0;
  const xa = x0 < 0 ? 0 : x0 >= nx ? nx - 1 : x0;
  const xb = x0 + 1 < 0 ? 0 : x0 + 1 >= nx ? nx - 1 : x0 + 1;
  const ya = (y0 < 0 ? 0 : y0 >= ny ? ny - 1 : y0) * nx;
  const yb = (y0 + 1 < 0 ? 0 : y0 + 1 >= ny ? ny - 1 : y0 + 1) * nx;
  const slab = nx * ny;
  let sum = 0;
  for (let side = 0; side < 2; side++) {
    const layer = z0 + side;
    if (layer < 0) continue;
    const from = (layer >= nz ? nz - 1 : layer) * slab;
    const near = (solid[from + ya + xa] as number) * (1 - fx) + (solid[from + ya + xb] as number) * fx;
    const far = (solid[from + yb + xa] as number) * (1 - fx) + (solid[from + yb + xb] as number) * fx;
    sum += (near * (1 - fy) + far * fy) * (side === 0 ? 1 - fz : fz);
  }
  return sum / 255;
}

/** Weight of what stands straight before the surface, fine to coarse, and of what stands aslant; chosen by eye. */
const STRAIGHT = [0.42, 0.42] as const;
const ASLANT = [0.34, 0.34, 0.3] as const;

/** Cell sizes ahead of which a flat face does not see itself: straight on, and at 45 degrees. */
const STRAIGHT_REACH = 1.45;
const ASLANT_REACH = 2.1;

/** Mean over four directions at 45 degrees about the normal of what stands there. */
function aslant(level: Level, at: readonly [number, number, number], normal: Float64Array): number {
  const [nx, ny, nz] = normal as unknown as [number, number, number];
  // two tangents: the first across the picture where it can be
  const flat = Math.abs(nx) < 0.8;
  const length = flat ? Math.sqrt(ny * ny + nz * nz) : Math.sqrt(nx * nx + nz * nz);
  const tx = flat ? 0 : nz / length;
  const ty = flat ? nz / length : 0;
  const tz = flat ? -ny / length : -nx / length;
  const bx = ny * tz - nz * ty;
  const by = nz * tx - nx * tz;
  const bz = nx * ty - ny * tx;
  const way = ASLANT_REACH * level.size * Math.SQRT1_2;
  let sum = 0;
  for (let n = 0; n < 4; n++) {
    const a = n === 0 ? 1 : n === 1 ? -1 : 0;
    const b = n === 2 ? 1 : n === 3 ? -1 : 0;
    const i = at[0] + way * (nx + a * tx + b * bx);
    const j = at[1] + way * (ny + a * ty + b * by);
    sum += around(level, i, j, at[2] + way * (nz + a * tz + b * bz));
  }
  return sum / 4;
}

/** Share 0..1 of the sky that a point with this normal sees: 1 on a flat open face, less in pits and corners. */
export function openness(occluders: Occluders, i: number, j: number, k: number, normal: Float64Array): number {
  const [nx, ny, nz] = normal as unknown as [number, number, number];
  let open = 1;
  for (let n = 0; n < STRAIGHT.length; n++) {
    const level = occluders.levels[n] as Level;
    const reach = STRAIGHT_REACH * level.size;
    open *= 1 - (STRAIGHT[n] as number) * around(level, i + nx * reach, j + ny * reach, k + nz * reach);
  }
  for (let n = 0; n < ASLANT.length; n++) {
    open *= 1 - (ASLANT[n] as number) * aslant(occluders.levels[n + 2] as Level, [i, j, k], normal);
  }
  return open;
}

/** Growth of the stride towards the light, and the strides taken: up to about 400 voxels. */
const STRIDE_GROWTH = 1.3;
const STRIDES = 15;

/** Share 0..1 of the light that reaches the point: a widening beam towards `light` (unit vector), soft at its edges. */
export function sunlit(occluders: Occluders, i: number, j: number, k: number, light: Float64Array): number {
  const lx = light[0] as number;
  const ly = light[1] as number;
  const lz = light[2] as number;
  let clear = 1;
  let way = 7;
  for (let n = 0; n < STRIDES; n++) {
    const w = k + lz * way;
    if (w < PAD - 8) break;
    const level = way < 18 ? 0 : way < 38 ? 1 : way < 80 ? 2 : 3;
    const solid = around(occluders.levels[level] as Level, i + lx * way, j + ly * way, w);
    const pass = 1 - 1.35 * solid;
    if (pass < clear) clear = pass;
    if (clear <= 0) return 0;
    way *= STRIDE_GROWTH;
  }
  return clear;
}
