import { ALL_EMPTY, ALL_SOLID, BRICK, BRICK_VOXELS, type BrickField } from './bricks.ts';
import { OUT_OF_REACH } from './kernels/contract.ts';
import type { CutModel } from './model.ts';
import { type CutState, SCALAR, type WallState } from './state.ts';

/** Room below the floor for cracks and for the picture's cut face (m). */
const BELOW = 120e-6;

/** A column of the solid on its way into bricks. */
interface Column {
  /** Depth of the floor surface and of the deepest crack tip (m). */
  surface: number;
  crack: number;
  age: number;
  /** Distance outside the tool's outline (m), NaN under the face. */
  outside: number;
  wall: WallState | null;
  cell: number;
  rimCell: number;
}

/**
 * Builds the voxels of the solid from the three fields that carry it: the floor's height per column, the wall's offset
 * along the outline and the rim's chips. Voxels are cubes of the floor's pitch; nothing else holds the undercut of a
 * barrelled wall. Bricks wholly above or below the surface are not stored.
 */
export function buildBricks(model: CutModel, state: CutState): BrickField {
  const { floor } = state;
  const pitch = floor.dx;
  let deepest = 0;
  for (const h of floor.heights) if (h > OUT_OF_REACH && -h > deepest) deepest = -h;
  const nz = Math.ceil((deepest + BELOW) / pitch / BRICK) * BRICK;
  const bx = floor.nx / BRICK;
  const by = floor.ny / BRICK;
  const bz = nz / BRICK;
  const table = new Int32Array(bx * by * bz).fill(ALL_SOLID);
  const store = new BrickStore();
  const columns = new ColumnReader(model, state);
  for (let j = 0; j < by; j++) {
    for (let i = 0; i < bx; i++) {
      columns.load(i * BRICK, j * BRICK);
      for (let k = 0; k < bz; k++) {
        const top = k * BRICK * pitch;
        const at = (k * by + j) * bx + i;
        if (columns.solidBelow < top) break;
        if (top + BRICK * pitch <= columns.emptyAbove) {
          table[at] = ALL_EMPTY;
          continue;
        }
        table[at] = store.add((solid, damage, age) => {
          columns.fill(k * BRICK, pitch, solid, damage, age);
        });
      }
    }
  }
  return {
    nx: floor.nx,
    ny: floor.ny,
    nz,
    pitch,
    x0: model.x0,
    y0: model.y0,
    z0: pitch / 2,
    table,
    count: store.count,
    ...store.finish(),
  };
}

/** Growing storage of bricks. */
class BrickStore {
  count = 0;
  private solid = new Uint8Array(1024 * BRICK_VOXELS);
  private damage = new Uint8Array(1024 * BRICK_VOXELS);
  private age = new Uint8Array(1024 * BRICK_VOXELS);

  /** Fills a new brick; returns its number, or what it is when it turns out uniform and undamaged. */
  add(fill: (solid: Uint8Array, damage: Uint8Array, age: Uint8Array) => void): number {
    const from = this.count * BRICK_VOXELS;
    const to = from + BRICK_VOXELS;
    if (to > this.solid.length) this.grow();
    const solid = this.solid.subarray(from, to);
    const damage = this.damage.subarray(from, to);
    fill(solid, damage, this.age.subarray(from, to));
    const first = solid[0] as number;
    const plain = (first === 0 || first === 255) && solid.every((v) => v === first) && damage.every((v) => v === 0);
    if (plain) return first === 255 ? ALL_SOLID : ALL_EMPTY;
    return this.count++;
  }

  finish(): { solid: Uint8Array; damage: Uint8Array; age: Uint8Array } {
    const end = this.count * BRICK_VOXELS;
    return { solid: this.solid.slice(0, end), damage: this.damage.slice(0, end), age: this.age.slice(0, end) };
  }

  private grow(): void {
    const larger = (old: Uint8Array<ArrayBuffer>) => {
      const next = new Uint8Array(old.length * 2);
      next.set(old);
      return next;
    };
    this.solid = larger(this.solid);
    this.damage = larger(this.damage);
    this.age = larger(this.age);
  }
}

/** Reads the 8 x 8 columns of one brick column. */
class ColumnReader {
  /** Every voxel above this depth is empty, every voxel below that one is solid and sound (m). */
  emptyAbove = 0;
  solidBelow = 0;
  private readonly columns: Column[];
  private readonly where: Int32Array;
  private readonly model: CutModel;
  private readonly state: CutState;
  private readonly openDepth: number;
  private readonly agePerSecond: number;

  constructor(model: CutModel, state: CutState) {
    this.model = model;
    this.state = state;
    this.columns = Array.from({ length: BRICK * BRICK }, () => ({
      surface: 0,
      crack: 0,
      age: 0,
      outside: Number.NaN,
      wall: null,
      cell: 0,
      rimCell: 0,
    }));
    this.where = new Int32Array(state.floor.nx * state.floor.ny).fill(-1);
    state.around.columns.forEach((column, n) => {
      this.where[column] = n;
    });
    const rows = state.scalars[SCALAR.openRows] as number;
    this.openDepth = rows * (state.walls[0]?.field.dy ?? 0);
    const time = state.scalars[SCALAR.time] as number;
    this.agePerSecond = time > 0 ? 254 / time : 0;
  }

  load(i0: number, j0: number): void {
    const { floor, around, walls } = this.state;
    const furthest = this.reach();
    this.emptyAbove = Number.POSITIVE_INFINITY;
    this.solidBelow = 0;
    for (let j = 0; j < BRICK; j++) {
      for (let i = 0; i < BRICK; i++) {
        const column = this.columns[j * BRICK + i] as Column;
        const index = (j0 + j) * floor.nx + i0 + i;
        column.surface = -(floor.heights[index] as number);
        column.crack = -(floor.cracks[index] as number);
        const hit = floor.ages[index] as number;
        column.age = hit > 0 ? 1 + hit * this.agePerSecond : 0;
        const n = this.where[index] as number;
        column.outside = n < 0 ? Number.NaN : (around.outside[n] as number);
        column.wall = n < 0 ? null : (walls[around.loops[n] as number] ?? null);
        if (column.wall) {
          const along = around.along[n] as number;
          column.cell = Math.min(column.wall.field.nx - 1, Math.floor(along / column.wall.field.dx));
          column.rimCell = Math.min(column.wall.rim.n - 1, Math.floor(along / column.wall.rim.spacing));
        }
        const walled = column.outside < furthest;
        const bottom = Math.max(column.surface, column.crack, walled ? this.openDepth : 0);
        this.solidBelow = Math.max(this.solidBelow, bottom);
        this.emptyAbove = Math.min(this.emptyAbove, column.outside > 0 ? 0 : column.surface);
      }
    }
  }

  /** How far outside the tool the wall, its cracks and the rim's chips can lie (m). */
  private reach(): number {
    const { grit, constants } = this.model.spec.conditions;
    return 2 * grit.largest + constants.chipWidthRatio * this.model.deepestEdgeChip;
  }

  fill(k0: number, pitch: number, solid: Uint8Array, damage: Uint8Array, age: Uint8Array): void {
    for (let n = 0; n < BRICK * BRICK; n++) {
      const column = this.columns[n] as Column;
      for (let k = 0; k < BRICK; k++) {
        const at = k * BRICK * BRICK + n;
        const top = (k0 + k) * pitch;
        let removed = clamp01((column.surface - top) / pitch);
        let hurt = depthDamage(column, top + pitch / 2);
        let when = column.age;
        if (column.wall) {
          const side = this.wallAt(column, top + pitch / 2, pitch);
          const chip = this.chipAt(column, top, pitch);
          // outside the tool, rows the tool has passed are the wall's: a lone floor column left deep there is no slit
          if (side !== NO_WALL && column.outside > 0) removed = 0;
          if (side.removed >= removed) when = side.age;
          removed = Math.max(removed, side.removed, chip);
          hurt = Math.max(hurt, side.damage);
        }
        const share = Math.round(255 * (1 - removed));
        solid[at] = share;
        damage[at] = share > 0 ? Math.round(255 * hurt) : 0;
        age[at] = Math.min(255, Math.round(when));
      }
    }
  }

  private wallAt(column: Column, z: number, pitch: number): { removed: number; damage: number; age: number } {
    const { field } = column.wall as WallState;
    const row = Math.floor(z / field.dy);
    if (row >= field.ny) return NO_WALL;
    const index = row * field.nx + column.cell;
    const h = field.heights[index] as number;
    if (h <= OUT_OF_REACH) return NO_WALL;
    const beyond = column.outside + h;
    const cracked = h - (field.cracks[index] as number);
    const hurt = cracked > 0 && beyond > 0 ? Math.max(0, 1 - beyond / cracked) : 0;
    const hit = field.ages[index] as number;
    return { removed: clamp01(0.5 - beyond / pitch), damage: hurt, age: hit > 0 ? 1 + hit * this.agePerSecond : 0 };
  }

  private chipAt(column: Column, top: number, pitch: number): number {
    const { rim, field } = column.wall as WallState;
    const deep = rim.chips[column.rimCell] as number;
    if (!(deep > top)) return 0;
    const first = field.heights[column.cell] as number;
    if (first <= OUT_OF_REACH) return 0;
    const width = this.model.spec.conditions.constants.chipWidthRatio * deep;
    const beyond = Math.max(0, column.outside + first);
    if (beyond >= width) return 0;
    const depth = deep * Math.sqrt(1 - (beyond / width) ** 2);
    return clamp01((depth - top) / pitch);
  }
}

const NO_WALL = { removed: 0, damage: 0, age: 0 };

const clamp01 = (value: number) => Math.max(0, Math.min(1, value));

function depthDamage(column: Column, z: number): number {
  const length = column.crack - column.surface;
  if (!(length > 0) || z < column.surface || z > column.crack) return 0;
  return 1 - (z - column.surface) / length;
}

/** Volume the cut has taken, from the voxels (m3). */
export function removedVolume(bricks: BrickField): number {
  let empty = 0;
  for (const entry of bricks.table) if (entry === ALL_EMPTY) empty += BRICK_VOXELS * 255;
  for (const solid of bricks.solid) empty += 255 - solid;
  return (empty / 255) * bricks.pitch ** 3;
}
