import { pointAt } from '#src/base/outline.ts';
import { BRICK_VOXELS, type BrickField, solidAt } from './bricks.ts';
import { OUT_OF_REACH } from './kernels/contract.ts';
import type { CutModel, WallModel } from './model.ts';
import type { CutState, WallState } from './state.ts';

/** Half of a full voxel. */
const HALF = 127.5;
/** Furthest outside a wall that is looked at (m). */
const REACH = 1e-3;
/** Layers of a wall at which it is looked at, and the share of its depth left to chips and fillet at either end. */
const LAYERS = 24;
const ENDS = 0.1;
/** Places along each loop. */
const PLACES = 360;

/** Damage of earlier passes that lies below the surface now. */
export interface DamageLeft {
  /** Share of the surface looked at under which there is some. */
  readonly share: number;
  /** Depth below the surface now: the deepest, and what 99 % of the surface has less than (m). */
  readonly deepest: number;
  readonly p99: number;
}

/** What earlier passes have left in the surface the last one made: under the flat floor and behind the wall. */
export interface EarlierDamage {
  readonly floor: DamageLeft;
  readonly wall: DamageLeft;
}

function leftOf(depths: readonly number[]): DamageLeft {
  const sorted = Float64Array.from(depths).sort();
  const n = sorted.length;
  if (n === 0) return { share: 0, deepest: 0, p99: 0 };
  return {
    share: sorted.filter((depth) => depth > 0).length / n,
    deepest: sorted[n - 1] as number,
    p99: sorted[Math.floor(0.99 * (n - 1))] as number,
  };
}

/** Number of the voxel column at a place. */
function columnAt(bricks: BrickField, x: number, y: number): { i: number; j: number } {
  return { i: Math.round((x - bricks.x0) / bricks.pitch), j: Math.round((y - bricks.y0) / bricks.pitch) };
}

function damageAt({ nx, ny, nz, table, damage }: BrickField, i: number, j: number, k: number): number {
  if (i < 0 || j < 0 || k < 0 || i >= nx || j >= ny || k >= nz) return 0;
  const entry = table[((k >> 3) * (ny >> 3) + (j >> 3)) * (nx >> 3) + (i >> 3)] as number;
  return entry < 0 ? 0 : (damage[entry * BRICK_VOXELS + (((k & 7) << 6) | ((j & 7) << 3) | (i & 7))] as number);
}

/** Damage the passes before have left below the surface of a finished pass; null for a cut in untouched work. */
export function earlierDamage(model: CutModel, state: CutState): EarlierDamage | null {
  const { before } = model.spec;
  if (!before) return null;
  const walls = state.walls.flatMap((wall, k) => behindWall(model.walls[k] as WallModel, wall, before));
  return { floor: leftOf(belowFloor(model, state, before)), wall: leftOf(walls) };
}

/** Depth of earlier damage below the floor's columns under the flat face (m). */
function belowFloor(model: CutModel, state: CutState, before: BrickField): number[] {
  const { floor, map } = state;
  const out: number[] = [];
  for (let c = 0; c < floor.heights.length; c++) {
    const h = floor.heights[c] as number;
    if ((floor.edges[c] as number) > 0 || h <= OUT_OF_REACH) continue;
    const x = model.x0 + (c % floor.nx) * floor.dx;
    const y = model.y0 + Math.floor(c / floor.nx) * floor.dx;
    const { i, j } = columnAt(before, x, y);
    const surface = -(h + (map.rises[c] ?? 0));
    let k = before.nz - 1;
    while ((k + 1) * before.pitch > surface && damageAt(before, i, j, k) === 0) k--;
    out.push(Math.max(0, (k + 1) * before.pitch - surface));
  }
  return out;
}

/** Depth of earlier damage behind a wall this pass has cut, place by place and layer by layer (m). */
function behindWall(plan: WallModel, wall: WallState, before: BrickField): number[] {
  const { field, opened } = wall;
  const start = plan.outline.loops[plan.loop]?.start ?? 0;
  const out: number[] = [];
  for (let n = 0; n < PLACES; n++) {
    const cell = Math.floor(((n + 0.5) * field.nx) / PLACES);
    const p = pointAt(plan.outline, start + (cell + 0.5) * field.dx);
    for (let layer = 0; layer < LAYERS; layer++) {
      const share = ENDS + ((1 - 2 * ENDS) * layer) / (LAYERS - 1);
      const row = Math.floor(share * (opened[cell] as number));
      const h = field.heights[row * field.nx + cell] as number;
      if (row >= (opened[cell] as number) || h <= OUT_OF_REACH) continue;
      out.push(damageBehind(before, p, -h, (row + 0.5) * field.dy));
    }
  }
  return out;
}

/** Furthest damaged voxel outward of a wall `gap` outside the outline at depth z, as a distance from the wall (m). */
function damageBehind(
  before: BrickField,
  p: { x: number; y: number; nx: number; ny: number },
  gap: number,
  z: number,
): number {
  const k = Math.floor(z / before.pitch);
  let furthest = 0;
  for (let off = 0.5 * before.pitch; off < REACH; off += before.pitch) {
    const { i, j } = columnAt(before, p.x + (gap + off) * p.nx, p.y + (gap + off) * p.ny);
    if (damageAt(before, i, j, k) > 0) furthest = off + before.pitch / 2;
    else if (solidAt(before, i, j, k) === 255 && off - furthest > 20 * before.pitch) break;
  }
  return furthest;
}

/** Chips of earlier passes that stand out beyond this one's rim: down the wall and on the entry face (m), by cell of the rim. */
export function earlierChips(
  plan: WallModel,
  wall: WallState,
  before: BrickField,
): { depth: Float64Array; width: Float64Array } {
  const { field, rim } = wall;
  const depth = new Float64Array(rim.n);
  const width = new Float64Array(rim.n);
  const start = plan.outline.loops[plan.loop]?.start ?? 0;
  for (let n = 0; n < rim.n; n++) {
    const s = (n + 0.5) * rim.spacing;
    const cell = Math.min(field.nx - 1, Math.floor(s / field.dx));
    const h = field.heights[cell] as number;
    if (h <= OUT_OF_REACH) continue;
    const p = pointAt(plan.outline, start + s);
    const columnOff = (off: number) => columnAt(before, p.x + (off - h) * p.nx, p.y + (off - h) * p.ny);
    const emptyAt = (off: number, k: number) => {
      const { i, j } = columnOff(off);
      return solidAt(before, i, j, k) < HALF;
    };
    let off = 0.75 * before.pitch;
    while (off < REACH && emptyAt(off, 0)) off += before.pitch;
    if (off < before.pitch) continue;
    width[n] = off - before.pitch / 4;
    let k = 0;
    while (k < before.nz && emptyAt(0.75 * before.pitch, k)) k++;
    depth[n] = k * before.pitch;
  }
  return { depth, width };
}
