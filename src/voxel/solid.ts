import { BrickStore } from './brick-store.ts';
import { ALL_EMPTY, ALL_SOLID, BRICK, BRICK_VOXELS, type BrickField } from './bricks.ts';
import { ColumnReader } from './columns.ts';
import { EarlierReader, type VoxelGrid, voxelAxes } from './earlier.ts';
import { OUT_OF_REACH } from './kernels/contract.ts';
import type { CutModel } from './model.ts';
import { type CutState, SCALAR } from './state.ts';

/** Room below the floor for cracks and for the picture's cut face (m). */
const BELOW = 120e-6;

/** The voxels of the result, and where the floor's bricks begin among them. */
interface ResultGrid {
  readonly bx: number;
  readonly by: number;
  readonly bz: number;
  readonly pitch: number;
  readonly x0: number;
  readonly y0: number;
  /** Bricks of the result before the first of the floor. */
  readonly left: number;
  readonly above: number;
}

/**
 * Builds the voxels of the solid from the three fields that carry it: the floor's height per column, the wall's offset
 * along the outline and the rim's chips, with what earlier passes have left. Voxels are cubes of the floor's pitch on a
 * grid that covers both cavities; nothing else holds the undercut of a barrelled wall. Bricks wholly above or below the
 * surface are not stored; below an exit face there is air.
 */
export function buildBricks(model: CutModel, state: CutState): BrickField {
  const before = model.spec.before ?? null;
  const grid = resultGrid(model, state);
  const { bx, by, bz, pitch } = grid;
  const time = state.scalars[SCALAR.time] as number;
  const earlierTime = before?.time ?? 0;
  const whole = earlierTime + time;
  const columns = new ColumnReader(model, state, {
    ages: { before: earlierTime, perSecond: whole > 0 ? 254 / whole : 0 },
    bottom: bz * BRICK * pitch,
  });
  const earlier = before ? new EarlierReader(before, axesOf(grid), whole > 0 ? earlierTime / whole : 1) : null;
  const table = new Int32Array(bx * by * bz).fill(ALL_SOLID);
  const store = new BrickStore();
  const plate = model.spec.exit ? new PlateBottom(model.spec.exit.thickness, pitch, store) : null;
  for (let j = 0; j < by; j++) {
    for (let i = 0; i < bx; i++) {
      const own = i >= grid.left && j >= grid.above && isOn(model, i - grid.left, j - grid.above);
      if (own) columns.load((i - grid.left) * BRICK, (j - grid.above) * BRICK);
      for (let k = 0; k < bz; k++) {
        table[(k * by + j) * bx + i] = brickAt(
          { i, j, k },
          { pitch, columns: own ? columns : null, earlier, plate, store },
        );
      }
    }
  }
  return {
    nx: bx * BRICK,
    ny: by * BRICK,
    nz: bz * BRICK,
    pitch,
    x0: grid.x0,
    y0: grid.y0,
    z0: pitch / 2,
    ...(model.spec.exit && { thickness: model.spec.exit.thickness }),
    time: whole,
    table,
    count: store.count,
    ...store.finish(),
  };
}

/** What a brick is made from. */
interface Sources {
  readonly pitch: number;
  readonly columns: ColumnReader | null;
  readonly earlier: EarlierReader | null;
  readonly plate: PlateBottom | null;
  readonly store: BrickStore;
}

/** Table entry of brick (i, j, k). */
function brickAt(at: { i: number; j: number; k: number }, from: Sources): number {
  const { pitch, columns, earlier, plate, store } = from;
  const top = at.k * BRICK * pitch;
  const own = columns ? ownKind(columns, top, pitch) : ALL_SOLID;
  const its = earlier ? earlier.kindOf(at.i, at.j, at.k) : ALL_SOLID;
  const air = plate ? plate.kindOf(at.k) : ALL_SOLID;
  if (own === ALL_EMPTY || its === ALL_EMPTY || air === ALL_EMPTY) return ALL_EMPTY;
  if (own === ALL_SOLID && its === ALL_SOLID) return air === ALL_SOLID ? ALL_SOLID : (plate as PlateBottom).shared();
  return store.add((solid, damage, age) => {
    const into = { solid, damage, age };
    if (columns && own !== ALL_SOLID) columns.fill(at.k * BRICK, pitch, into);
    else {
      solid.fill(255);
      damage.fill(0);
      age.fill(0);
    }
    if (earlier && its !== ALL_SOLID) earlier.join(at, into);
    if (plate && air !== ALL_SOLID) plate.clip(into);
  });
}

function ownKind(columns: ColumnReader, top: number, pitch: number): number {
  if (columns.solidBelow < top) return ALL_SOLID;
  return top + BRICK * pitch <= columns.emptyAbove ? ALL_EMPTY : 0;
}

const isOn = ({ floor }: CutModel, i: number, j: number) => i * BRICK < floor.nx && j * BRICK < floor.ny;

const axesOf = ({ bx, by, bz, pitch, x0, y0 }: ResultGrid): VoxelGrid => ({
  x: { n: bx * BRICK, pitch, centre: x0 },
  y: { n: by * BRICK, pitch, centre: y0 },
  z: { n: bz * BRICK, pitch, centre: pitch / 2 },
});

/** The floor's grid, grown by whole bricks where an earlier cavity reaches past it. */
function resultGrid(model: CutModel, state: CutState): ResultGrid {
  const { floor } = state;
  const pitch = floor.dx;
  let deepest = 0;
  for (let c = 0; c < floor.heights.length; c++) {
    const h = floor.heights[c] as number;
    if (h > OUT_OF_REACH) deepest = Math.max(deepest, -(h + (state.map.rises[c] ?? 0)));
  }
  const before = model.spec.before ? voxelAxes(model.spec.before) : null;
  const x = grown({ n: floor.nx, pitch, centre: model.x0 }, before?.x);
  const y = grown({ n: floor.ny, pitch, centre: model.y0 }, before?.y);
  const earlier = before ? before.z.n * before.z.pitch : 0;
  const depth = model.spec.exit?.thickness ?? Math.max(deepest + BELOW, earlier);
  const side = BRICK * pitch;
  return {
    bx: x.bricks,
    by: y.bricks,
    bz: Math.ceil(depth / pitch / BRICK - 1e-9),
    pitch,
    x0: model.x0 - x.lead * side,
    y0: model.y0 - y.lead * side,
    left: x.lead,
    above: y.lead,
  };
}

/** Bricks along an axis that cover our own cells and an earlier cavity's, and how many of them come before our own. */
function grown(own: VoxelGrid['x'], before: VoxelGrid['x'] | undefined): { bricks: number; lead: number } {
  const bricks = own.n / BRICK;
  if (!before) return { bricks, lead: 0 };
  const side = BRICK * own.pitch;
  const low = own.centre - own.pitch / 2;
  const itsLow = before.centre - before.pitch / 2;
  const lead = Math.max(0, Math.ceil((low - itsLow) / side - 1e-6));
  const trail = Math.max(0, Math.ceil((itsLow + before.n * before.pitch - low) / side - bricks - 1e-6));
  return { bricks: lead + bricks + trail, lead };
}

/** The layers in which the work ends at its exit face. */
class PlateBottom {
  private readonly thickness: number;
  private readonly pitch: number;
  private readonly store: BrickStore;
  private brick = ALL_SOLID;

  constructor(thickness: number, pitch: number, store: BrickStore) {
    this.thickness = thickness;
    this.pitch = pitch;
    this.store = store;
  }

  /** ALL_SOLID above the exit face, ALL_EMPTY below it, 0 for the layer of bricks it passes through. */
  kindOf(k: number): number {
    const top = k * BRICK * this.pitch;
    if (top + BRICK * this.pitch <= this.thickness * (1 + 1e-12)) return ALL_SOLID;
    return top >= this.thickness ? ALL_EMPTY : 0;
  }

  /** Takes off what lies below the exit face. */
  clip({ solid, damage }: { solid: Uint8Array; damage: Uint8Array }): void {
    const inside = this.thickness / this.pitch;
    const first = Math.floor(inside / BRICK) * BRICK;
    for (let n = 0; n < BRICK_VOXELS; n++) {
      const share = Math.max(0, Math.min(1, inside - (first + (n >> 6))));
      solid[n] = Math.round((solid[n] as number) * share);
      if (solid[n] === 0) damage[n] = 0;
    }
  }

  /** The one brick that stands for all where nothing else is going on. */
  shared(): number {
    if (this.brick === ALL_SOLID) {
      this.brick = this.store.add((solid, damage, age) => {
        solid.fill(255);
        damage.fill(0);
        age.fill(0);
        this.clip({ solid, damage });
      });
    }
    return this.brick;
  }
}

/** Volume the cuts have taken, from the voxels (m3): what is empty, less the air below an exit face. */
export function removedVolume(bricks: BrickField): number {
  const { nx, ny, nz, pitch, table, count, thickness } = bricks;
  const ofBrick = new Float64Array(count);
  bricks.solid.forEach((solid, n) => {
    const brick = Math.floor(n / BRICK_VOXELS);
    ofBrick[brick] = (ofBrick[brick] as number) + 255 - solid;
  });
  let empty = 0;
  for (const entry of table) {
    if (entry === ALL_EMPTY) empty += BRICK_VOXELS * 255;
    else if (entry >= 0) empty += ofBrick[entry] as number;
  }
  // the layer the exit face passes through is stored in 255 parts like any other
  const inside = (thickness ?? 0) / pitch;
  const filled = Math.floor(inside) + Math.round(255 * (inside - Math.floor(inside))) / 255;
  const air = thickness === undefined ? 0 : nx * ny * (nz - filled);
  return (empty / 255 - air) * pitch ** 3;
}
