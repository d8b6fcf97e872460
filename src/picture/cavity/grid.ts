import { ALL_EMPTY, ALL_SOLID, BRICK_VOXELS, type BrickField } from '#src/voxel/bricks.ts';

/**
 * The bricks with one brick of solid round them and one of empty above, so that rays and stencils read without range
 * checks, and with the empty squares ahead of a ray, so that it can leap. Padded indices are the voxel's plus 8.
 */
export interface Grid {
  readonly field: BrickField;
  readonly table: Int32Array;
  readonly solid: Uint8Array;
  /** Padded bricks along x, y, z. */
  readonly px: number;
  readonly py: number;
  readonly pz: number;
  /**
   * Edge, in bricks, of the largest square of bricks in the y-z plane, from this one towards +y and +z, in which no
   * interpolation cell touches anything but empty voxels.
   */
  readonly leap: Uint8Array;
}

/** Added to a voxel index to give its padded index. */
export const PAD = 8;

function paddedTable(field: BrickField): Int32Array {
  const bx = field.nx >> 3;
  const by = field.ny >> 3;
  const bz = field.nz >> 3;
  const px = bx + 2;
  const py = by + 2;
  const table = new Int32Array(px * py * (bz + 2)).fill(ALL_SOLID);
  table.fill(ALL_EMPTY, 0, px * py);
  for (let k = 0; k < bz; k++) {
    for (let j = 0; j < by; j++) {
      const from = (k * by + j) * bx;
      table.set(field.table.subarray(from, from + bx), ((k + 1) * py + j + 1) * px + 1);
    }
  }
  return table;
}

/** Whether all voxels that the cells of this brick interpolate, its own and the next ones, are empty. */
function cellsEmpty(
  table: Int32Array,
  size: readonly [number, number, number],
  at: readonly [number, number, number],
): boolean {
  const [px, py, pz] = size;
  const [x, y, z] = at;
  for (let corner = 0; corner < 8; corner++) {
    const cx = Math.min(px - 1, x + (corner & 1));
    const cy = Math.min(py - 1, y + ((corner >> 1) & 1));
    const cz = Math.min(pz - 1, z + (corner >> 2));
    if (table[(cz * py + cy) * px + cx] !== ALL_EMPTY) return false;
  }
  return true;
}

function leapTable(table: Int32Array, px: number, py: number, pz: number): Uint8Array {
  const leap = new Uint8Array(table.length);
  for (let z = pz - 2; z >= 0; z--) {
    for (let y = py - 2; y >= 0; y--) {
      for (let x = 0; x < px; x++) {
        if (!cellsEmpty(table, [px, py, pz], [x, y, z])) continue;
        const right = leap[(z * py + y + 1) * px + x] as number;
        const below = leap[((z + 1) * py + y) * px + x] as number;
        const both = leap[((z + 1) * py + y + 1) * px + x] as number;
        leap[(z * py + y) * px + x] = Math.min(255, 1 + Math.min(right, below, both));
      }
    }
  }
  return leap;
}

/** Prepares the bricks for looking at; the field is read in place, not copied. */
export function makeGrid(field: BrickField): Grid {
  const px = (field.nx >> 3) + 2;
  const py = (field.ny >> 3) + 2;
  const pz = (field.nz >> 3) + 2;
  const table = paddedTable(field);
  return { field, table, solid: field.solid, px, py, pz, leap: leapTable(table, px, py, pz) };
}

/** Index of a stored voxel in the brick arrays by padded indices, or ALL_SOLID or ALL_EMPTY. */
export function storedAt(grid: Grid, i: number, j: number, k: number): number {
  const entry = grid.table[((k >> 3) * grid.py + (j >> 3)) * grid.px + (i >> 3)] as number;
  return entry < 0 ? entry : entry * BRICK_VOXELS + (((k & 7) << 6) | ((j & 7) << 3) | (i & 7));
}

/** Solid fraction 0..255 by padded indices. */
export function fractionAt(grid: Grid, i: number, j: number, k: number): number {
  const at = storedAt(grid, i, j, k);
  return at >= 0 ? (grid.solid[at] as number) : at === ALL_SOLID ? 255 : 0;
}
