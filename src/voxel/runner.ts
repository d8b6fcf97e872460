import { type Field, type Kernel, type KernelTables, type Rim, STEP } from './kernels/contract.ts';
import type { CutModel } from './model.ts';
import type { CutState } from './state.ts';

/** One field with its step numbers; `rim` marks a wall. */
export interface Workpiece {
  readonly field: Field;
  readonly step: Float64Array;
  readonly rim: Rim | null;
  /** Tables of each zone of the slurry, and the zone of each tile; one table serves a field without zones. */
  readonly tables: readonly KernelTables[];
  readonly tileZones: Uint8Array | null;
}

/** Bits of a task that number the tile; the others number the piece. */
const TILE_BITS = 18;

/** What the tiles of a step need: the fields in a fixed order, and the tables. */
export interface TileWork {
  readonly pieces: readonly Workpiece[];
  /** Tasks of each of the four colours; a task is (piece << TILE_BITS) | tile. */
  readonly colours: readonly Int32Array[];
}

/** Runs all tiles of one step: the four colours one after another, the tiles of a colour in any order. */
export interface TileRunner {
  run(): void;
}

/** Lists the tiles of every field by colour, (x even/odd) and (y even/odd): tiles of one colour never touch. */
export function tileWork(pieces: readonly Workpiece[]): TileWork {
  const colours: number[][] = [[], [], [], []];
  pieces.forEach(({ field }, piece) => {
    for (let tile = 0; tile < field.tilesX * field.tilesY; tile++) {
      const tx = tile % field.tilesX;
      const ty = Math.floor(tile / field.tilesX);
      (colours[(tx & 1) | ((ty & 1) << 1)] as number[]).push((piece << TILE_BITS) | tile);
    }
  });
  return { pieces, colours: colours.map((tasks) => Int32Array.from(tasks)) };
}

/**
 * The fields of a cut in their fixed order: strip first, since its few tiles are the longest, then floor and walls. The
 * strip has the slurry of the middle zone; the walls' own renewal stands for theirs.
 */
export function piecesOf(model: CutModel, state: CutState): Workpiece[] {
  const fresh = [model.tables.kernel];
  const { zones } = state.zones;
  const middle = [zones[zones.length >> 1] as KernelTables];
  const tileZones = model.slurry?.tileZones ?? null;
  return [
    ...(state.strip ? [{ field: state.strip, step: state.stripStep, rim: null, tables: middle, tileZones: null }] : []),
    { field: state.floor, step: state.floorStep, rim: null, tables: zones, tileZones },
    ...state.walls.map((wall) => ({
      field: wall.field,
      step: wall.step,
      rim: wall.rim,
      tables: fresh,
      tileZones: null,
    })),
  ];
}

/** Hits the tile of one task. */
export function runTask(kernel: Kernel, work: TileWork, task: number): void {
  const piece = work.pieces[task >> TILE_BITS] as Workpiece;
  if (piece.step[STEP.active] !== 1) return;
  const tile = task & ((1 << TILE_BITS) - 1);
  const tables = piece.tables[piece.tileZones ? (piece.tileZones[tile] as number) : 0] as KernelTables;
  if (piece.rim) kernel.hitWall(piece.field, tables, piece.step, tile, piece.rim);
  else kernel.hitFloor(piece.field, tables, piece.step, tile);
}

/** Runs every tile on the calling thread. */
export function serialRunner(kernel: Kernel, model: CutModel, state: CutState): TileRunner {
  const work = tileWork(piecesOf(model, state));
  return {
    run() {
      for (const tasks of work.colours) for (const task of tasks) runTask(kernel, work, task);
    },
  };
}
