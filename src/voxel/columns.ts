import { BRICK } from './bricks.ts';
import { exitChipShare } from './exit.ts';
import { OUT_OF_REACH } from './kernels/contract.ts';
import type { CutModel } from './model.ts';
import { SCALAR } from './scalars.ts';
import type { CutState, Surroundings, WallState } from './state.ts';

/** Where a column lies along the walls of one outline. */
interface WallPlace {
  /** Distance outside the outline (m), NaN where none of its walls is near. */
  outside: number;
  wall: WallState | null;
  cell: number;
  rimCell: number;
}

/** A column of the solid on its way into bricks. */
interface Column {
  /** Depth of the floor surface and of the deepest crack tip (m). */
  surface: number;
  crack: number;
  age: number;
  readonly own: WallPlace;
  readonly pilot: WallPlace;
}

/** What is gone of a voxel, what is hurt of it and when it was last hit, 0..1, 0..1 and 0..255. */
interface VoxelState {
  removed: number;
  damage: number;
  age: number;
}

/** How the process times of a cut become ages 1 to 255. */
export interface AgeScale {
  /** Process time of the passes before (s), and ages a second. */
  readonly before: number;
  readonly perSecond: number;
}

const emptyPlace = (): WallPlace => ({ outside: Number.NaN, wall: null, cell: 0, rimCell: 0 });
const NO_WALL: VoxelState = { removed: 0, damage: 0, age: 0 };
const clamp01 = (value: number) => Math.max(0, Math.min(1, value));

/** Size of an exit chip at the weakest site reckoned with, over that at a usual one. */
const WIDEST_SITE = 1.7;

/** Links from floor columns to the walls of one outline. */
interface WallLinks {
  readonly where: Int32Array;
  readonly around: Surroundings;
  /** Walls by loop. */
  readonly walls: readonly WallState[];
}

function linkWalls(columns: number, around: Surroundings, walls: readonly WallState[]): WallLinks {
  const where = new Int32Array(columns).fill(-1);
  around.columns.forEach((column, n) => {
    where[column] = n;
  });
  return { where, around, walls };
}

/** Reads the fields that carry a cut's surface 8 x 8 columns at a time. */
export class ColumnReader {
  /** Every voxel above this depth is empty, every voxel below that one is solid and sound (m). */
  emptyAbove = 0;
  solidBelow = 0;
  private readonly columns: Column[];
  private readonly model: CutModel;
  private readonly state: CutState;
  private readonly links: WallLinks;
  private readonly pilotLinks: WallLinks | null;
  private readonly openDepth: number;
  private readonly ages: AgeScale;
  /** Depth of the shoulder's floor (m), which the columns between pilot and shoulder have at least. */
  private readonly shoulder: number;
  /** Depth at which a column ends that goes right through (m). */
  private readonly bottom: number;

  constructor(model: CutModel, state: CutState, at: { ages: AgeScale; bottom: number }) {
    this.model = model;
    this.state = state;
    this.ages = at.ages;
    this.bottom = at.bottom;
    this.columns = Array.from({ length: BRICK * BRICK }, () => ({
      surface: 0,
      crack: 0,
      age: 0,
      own: emptyPlace(),
      pilot: emptyPlace(),
    }));
    const size = state.floor.nx * state.floor.ny;
    const own = state.walls.filter((_, k) => !model.walls[k]?.pilot);
    const its = state.walls.filter((_, k) => model.walls[k]?.pilot);
    this.links = linkWalls(size, state.map.around, own);
    this.pilotLinks = state.map.aroundPilot ? linkWalls(size, state.map.aroundPilot, its) : null;
    this.openDepth = openDepthOf(state);
    const step = model.face.pilot?.step ?? Number.POSITIVE_INFINITY;
    this.shoulder = -(state.scalars[SCALAR.floorMean] as number) - step;
  }

  /** Reads the columns from (i0, j0) on. */
  load(i0: number, j0: number): void {
    const { floor, map } = this.state;
    const furthest = this.reach();
    this.emptyAbove = Number.POSITIVE_INFINITY;
    this.solidBelow = 0;
    for (let n = 0; n < BRICK * BRICK; n++) {
      const column = this.columns[n] as Column;
      const index = (j0 + (n >> 3)) * floor.nx + i0 + (n & 7);
      const h = floor.heights[index] as number;
      const rise = map.rises[index] ?? 0;
      column.surface = h <= OUT_OF_REACH ? this.bottom : -(h + rise);
      column.crack = h <= OUT_OF_REACH ? this.bottom : -((floor.cracks[index] as number) + rise);
      column.age = this.ageOf(floor.ages[index] as number);
      // what this cut has not lowered is told by the earlier cavity's own voxels
      if (map.starts.length > 0 && h === map.starts[index]) {
        column.surface = 0;
        column.crack = 0;
      }
      place(column.own, index, this.links);
      if (this.pilotLinks) {
        place(column.pilot, index, this.pilotLinks);
        if (column.pilot.outside > 0) column.surface = Math.max(column.surface, this.shoulder);
      }
      const walled = column.own.outside < furthest || column.pilot.outside < furthest;
      const deepest = Math.max(column.surface, column.crack, walled ? this.openDepth : 0);
      this.solidBelow = Math.max(this.solidBelow, deepest);
      const beside = column.own.outside > 0 || column.pilot.outside > 0;
      this.emptyAbove = Math.min(this.emptyAbove, beside ? 0 : column.surface);
    }
  }

  private ageOf(hit: number): number {
    return hit > 0 ? 1 + (this.ages.before + hit) * this.ages.perSecond : 0;
  }

  /** How far outside the tool the wall, its cracks and the rim's chips can lie (m). */
  private reach(): number {
    const { grit, constants } = this.model.spec.conditions;
    const exit = this.state.scalars[SCALAR.exitChipWidth] as number;
    return 2 * grit.largest + Math.max(constants.chipWidthRatio * this.model.deepestEdgeChip, WIDEST_SITE * exit);
  }

  /** Writes the voxels of the 8 layers from k0 down. */
  fill(k0: number, pitch: number, into: { solid: Uint8Array; damage: Uint8Array; age: Uint8Array }): void {
    for (let n = 0; n < BRICK * BRICK; n++) {
      const column = this.columns[n] as Column;
      for (let k = 0; k < BRICK; k++) {
        const at = k * BRICK * BRICK + n;
        const voxel = this.voxelOf(column, (k0 + k) * pitch, pitch);
        const share = Math.round(255 * (1 - voxel.removed));
        into.solid[at] = share;
        into.damage[at] = share > 0 ? Math.round(255 * voxel.damage) : 0;
        into.age[at] = Math.min(255, Math.round(voxel.age));
      }
    }
  }

  private voxelOf(column: Column, top: number, pitch: number): VoxelState {
    const voxel: VoxelState = {
      removed: clamp01((column.surface - top) / pitch),
      damage: depthDamage(column, top + pitch / 2),
      age: column.age,
    };
    for (const at of [column.own, column.pilot]) {
      if (!at.wall) continue;
      const side = this.wallAt(at, top + pitch / 2, pitch);
      // outside the tool, rows the tool has passed are the wall's: a lone floor column left deep there is no slit
      const below = at === column.own || top + pitch / 2 > this.shoulder;
      if (side !== NO_WALL && at.outside > 0 && below) voxel.removed = 0;
      if (side.removed >= voxel.removed) voxel.age = side.age;
      const chips = Math.max(this.chipAt(at, top, pitch), this.exitChipAt(at, top, pitch));
      voxel.removed = Math.max(voxel.removed, side.removed, chips);
      voxel.damage = Math.max(voxel.damage, side.damage);
    }
    return voxel;
  }

  private wallAt({ outside, wall, cell }: WallPlace, z: number, pitch: number): VoxelState {
    const { field } = wall as WallState;
    const row = Math.floor(z / field.dy);
    if (row >= field.ny) return NO_WALL;
    const index = row * field.nx + cell;
    const h = field.heights[index] as number;
    if (h <= OUT_OF_REACH) return NO_WALL;
    const beyond = outside + h;
    const cracked = h - (field.cracks[index] as number);
    const damage = cracked > 0 && beyond > 0 ? Math.max(0, 1 - beyond / cracked) : 0;
    return { removed: clamp01(0.5 - beyond / pitch), damage, age: this.ageOf(field.ages[index] as number) };
  }

  private chipAt({ outside, wall, cell, rimCell }: WallPlace, top: number, pitch: number): number {
    const { rim, field } = wall as WallState;
    const deep = rim.chips[rimCell] as number;
    if (!(deep > top)) return 0;
    const first = field.heights[cell] as number;
    if (first <= OUT_OF_REACH) return 0;
    const width = this.model.spec.conditions.constants.chipWidthRatio * deep;
    const beyond = Math.max(0, outside + first);
    if (beyond >= width) return 0;
    const depth = deep * Math.sqrt(1 - (beyond / width) ** 2);
    return clamp01((depth - top) / pitch);
  }

  private exitChipAt({ outside, wall, cell, rimCell }: WallPlace, top: number, pitch: number): number {
    const { brokeThrough } = SCALAR;
    if (!((this.state.scalars[brokeThrough] as number) > 0)) return 0;
    return exitChipShare(this.model, this.state, { outside, wall: wall as WallState, cell, rimCell }, { top, pitch });
  }
}

/** Depth to which any wall has been opened (m). */
function openDepthOf(state: CutState): number {
  let deepest = 0;
  for (const { field, opened } of state.walls) {
    for (const rows of opened) deepest = Math.max(deepest, rows * field.dy);
  }
  return deepest;
}

function place(at: WallPlace, index: number, { where, around, walls }: WallLinks): void {
  const n = where[index] as number;
  at.outside = n < 0 ? Number.NaN : (around.outside[n] as number);
  at.wall = n < 0 ? null : (walls[around.loops[n] as number] ?? null);
  if (!at.wall) return;
  const along = around.along[n] as number;
  at.cell = Math.min(at.wall.field.nx - 1, Math.floor(along / at.wall.field.dx));
  at.rimCell = Math.min(at.wall.rim.n - 1, Math.floor(along / at.wall.rim.spacing));
}

function depthDamage(column: Column, z: number): number {
  const length = column.crack - column.surface;
  if (!(length > 0) || z < column.surface || z > column.crack) return 0;
  return 1 - (z - column.surface) / length;
}
