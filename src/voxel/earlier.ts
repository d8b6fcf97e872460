import { ALL_EMPTY, ALL_SOLID, BRICK, BRICK_VOXELS, type BrickField } from './bricks.ts';
import { type Axis, type Overlaps, overlapsOf } from './overlap.ts';

/** The grid of voxels an earlier cavity is read into. */
export interface VoxelGrid {
  readonly x: Axis;
  readonly y: Axis;
  readonly z: Axis;
}

/** The axes of the voxels of a solid. */
export function voxelAxes({ nx, ny, nz, pitch, x0, y0, z0 }: BrickField): VoxelGrid {
  return {
    x: { n: nx, pitch, centre: x0 },
    y: { n: ny, pitch, centre: y0 },
    z: { n: nz, pitch, centre: z0 },
  };
}

/**
 * Lays an earlier cavity over the bricks of a new one, voxel by voxel the mean over what lies under it, so that volume is
 * kept whatever the two pitches. What either has removed is gone; cracks of the earlier one stay where the voxel is not.
 */
export class EarlierReader {
  private readonly before: BrickField;
  private readonly x: Overlaps;
  private readonly y: Overlaps;
  private readonly z: Overlaps;
  /** New ages per earlier age. */
  private readonly aging: number;
  private readonly cells = { solid: 0, damage: 0, age: 0 };

  constructor(before: BrickField, grid: VoxelGrid, aging: number) {
    const from = voxelAxes(before);
    this.before = before;
    this.x = overlapsOf(grid.x, from.x);
    this.y = overlapsOf(grid.y, from.y);
    this.z = overlapsOf(grid.z, from.z);
    this.aging = aging;
  }

  /** What the earlier cavity is all over brick (i, j, k): ALL_SOLID and sound, ALL_EMPTY, or 0 where it is neither. */
  kindOf(i: number, j: number, k: number): number {
    const { table, nx, ny } = this.before;
    const across = brickSpan(this.x, i);
    const down = brickSpan(this.y, j);
    const deep = brickSpan(this.z, k);
    if (!across.any || !down.any || !deep.any) return ALL_SOLID;
    const whole = across.whole && down.whole && deep.whole;
    let kind = table[(deep.from * (ny >> 3) + down.from) * (nx >> 3) + across.from] as number;
    for (let c = deep.from; c <= deep.to; c++) {
      for (let b = down.from; b <= down.to; b++) {
        for (let a = across.from; a <= across.to; a++) {
          if ((table[(c * (ny >> 3) + b) * (nx >> 3) + a] as number) !== kind) kind = 0;
        }
      }
    }
    if (kind === ALL_SOLID) return ALL_SOLID;
    return kind === ALL_EMPTY && whole ? ALL_EMPTY : 0;
  }

  /** Joins the earlier cavity into the voxels of brick (i, j, k). */
  join(
    brick: { i: number; j: number; k: number },
    into: { solid: Uint8Array; damage: Uint8Array; age: Uint8Array },
  ): void {
    const { cells } = this;
    for (let n = 0; n < BRICK_VOXELS; n++) {
      this.read(brick.i * BRICK + (n & 7), brick.j * BRICK + ((n >> 3) & 7), brick.k * BRICK + (n >> 6));
      const solid = Math.min(into.solid[n] as number, cells.solid);
      if (!((into.age[n] as number) > 0)) into.age[n] = cells.age;
      into.solid[n] = solid;
      into.damage[n] = solid > 0 ? Math.max(into.damage[n] as number, cells.damage) : 0;
    }
  }

  /** Means of the earlier voxels under voxel (i, j, k) into `cells`. */
  private read(i: number, j: number, k: number): void {
    const { x, y, z, before, cells } = this;
    const { nx, ny, table } = before;
    const alone = x.count[i] === 1 && y.count[j] === 1 && z.count[k] === 1;
    if (alone && x.share[i * x.most] === 1 && y.share[j * y.most] === 1 && z.share[k * z.most] === 1) {
      this.copy(x.first[i] as number, y.first[j] as number, z.first[k] as number);
      return;
    }
    let removed = 0;
    let damage = 0;
    let age = 0;
    for (let c = 0; c < (z.count[k] as number); c++) {
      const kk = (z.first[k] as number) + c;
      for (let b = 0; b < (y.count[j] as number); b++) {
        const jj = (y.first[j] as number) + b;
        for (let a = 0; a < (x.count[i] as number); a++) {
          const ii = (x.first[i] as number) + a;
          const share =
            (x.share[i * x.most + a] as number) *
            (y.share[j * y.most + b] as number) *
            (z.share[k * z.most + c] as number);
          const entry = table[((kk >> 3) * (ny >> 3) + (jj >> 3)) * (nx >> 3) + (ii >> 3)] as number;
          if (entry === ALL_SOLID) continue;
          if (entry === ALL_EMPTY) {
            removed += 255 * share;
            continue;
          }
          const at = entry * BRICK_VOXELS + (((kk & 7) << 6) | ((jj & 7) << 3) | (ii & 7));
          removed += share * (255 - (before.solid[at] as number));
          damage = Math.max(damage, before.damage[at] as number);
          age = Math.max(age, before.age[at] as number);
        }
      }
    }
    cells.solid = Math.round(255 - removed);
    cells.damage = damage;
    cells.age = this.older(age);
  }

  /** The one earlier voxel that lies under all of a new one. */
  private copy(i: number, j: number, k: number): void {
    const { before, cells } = this;
    const entry = before.table[((k >> 3) * (before.ny >> 3) + (j >> 3)) * (before.nx >> 3) + (i >> 3)] as number;
    const at = entry * BRICK_VOXELS + (((k & 7) << 6) | ((j & 7) << 3) | (i & 7));
    if (entry < 0) cells.solid = entry === ALL_SOLID ? 255 : 0;
    else cells.solid = before.solid[at] as number;
    cells.damage = entry < 0 ? 0 : (before.damage[at] as number);
    cells.age = entry < 0 ? 0 : this.older(before.age[at] as number);
  }

  private older(age: number): number {
    return age > 0 ? Math.round(1 + (age - 1) * this.aging) : 0;
  }
}

/** Earlier bricks under one brick of the new grid along an axis, and whether they cover it. */
function brickSpan(axis: Overlaps, brick: number): { any: boolean; whole: boolean; from: number; to: number } {
  let from = -1;
  let to = -1;
  let whole = true;
  for (let n = brick * BRICK; n < (brick + 1) * BRICK; n++) {
    const first = axis.first[n] as number;
    if (first < 0) {
      whole = false;
      continue;
    }
    let covered = 0;
    for (let a = 0; a < (axis.count[n] as number); a++) covered += axis.share[n * axis.most + a] as number;
    if (covered < 1 - 1e-6) whole = false;
    if (from < 0) from = first >> 3;
    to = (first + (axis.count[n] as number) - 1) >> 3;
  }
  return { any: from >= 0, whole, from, to };
}
