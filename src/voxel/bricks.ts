/**
 * The solid as sparse voxels: cubes of one pitch in bricks of 8 x 8 x 8, stored only where the surface or its damage
 * passes. Axes: see README.md (right-handed, +z into the work, entry face at z = 0).
 */

export const BRICK = 8;
export const BRICK_VOXELS = 512;
/** Brick table entries for bricks that hold no voxels of their own. */
export const ALL_SOLID = -1;
export const ALL_EMPTY = -2;

export interface BrickField {
  /** Voxels along each axis, multiples of 8. */
  readonly nx: number;
  readonly ny: number;
  readonly nz: number;
  /** Edge of a voxel (m). */
  readonly pitch: number;
  /** Centre of voxel (0, 0, 0) (m); z grows into the work, so z0 = pitch / 2 for a grid that starts at the entry face. */
  readonly x0: number;
  readonly y0: number;
  readonly z0: number;
  /** Depth of the exit face (m), below which there is air; no exit face within reach if left out. */
  readonly thickness?: number;
  /** Process time over which `age` runs (s). */
  readonly time?: number;
  /** Brick number, ALL_SOLID or ALL_EMPTY, of each brick, (nx/8) x (ny/8) x (nz/8), x fastest. Bricks may be shared. */
  readonly table: Int32Array;
  /** Number of stored bricks. */
  readonly count: number;
  /** Solid fraction 0..255 of each stored voxel, brick after brick, x fastest inside a brick. */
  readonly solid: Uint8Array;
  /** Damage 0..255: 255 where a crack from the surface reaches this voxel, less towards the tip of the deepest. */
  readonly damage: Uint8Array;
  /** When the surface here was last hit, 0..255 over the recorded time; 0 where never. */
  readonly age: Uint8Array;
}

/** Solid fraction 0..255 of voxel (i, j, k); outside the grid the work is solid, above and below the work empty. */
export function solidAt(bricks: BrickField, i: number, j: number, k: number): number {
  if (k < 0 || (bricks.thickness !== undefined && k * bricks.pitch >= bricks.thickness)) return 0;
  if (i < 0 || j < 0 || i >= bricks.nx || j >= bricks.ny || k >= bricks.nz) return 255;
  const bx = bricks.nx >> 3;
  const by = bricks.ny >> 3;
  const entry = bricks.table[((k >> 3) * by + (j >> 3)) * bx + (i >> 3)] as number;
  if (entry === ALL_SOLID) return 255;
  if (entry === ALL_EMPTY) return 0;
  return bricks.solid[entry * BRICK_VOXELS + (((k & 7) << 6) | ((j & 7) << 3) | (i & 7))] as number;
}
