import { pow } from '#src/base/math.ts';
import type { Outline } from '#src/base/outline.ts';
import { craterLaw } from '#src/physics/crater.ts';
import { type ExitBreakout, exitBreakout } from '#src/physics/exit.ts';
import { loadQuantile } from './book.ts';
import { OUT_OF_REACH } from './kernels/contract.ts';
import { edgeTables, loadNow } from './load.ts';
import type { CutModel, WallModel } from './model.ts';
import { ENDED, SCALAR } from './scalars.ts';
import { boundBlocks, highestReach } from './start.ts';
import type { CutState, WallState } from './state.ts';
import { footAlong, passedHeight } from './wall.ts';

/** Work left under the tip, in largest cracks, from which on the last ligament is looked at. */
const NEAR = 40;
/** Largest grains by which the floor beside the tip may lag and still break out with it. */
const LAG = 2;

/** Share of the hits below the hardest that the exit is reckoned with: few of the cut's hits fall at its edge at the end. */
const HARDEST = 0.999;

/** Narrow over long width of an outline: 1 for a disc, its breadth over its length for a slot or a ring. */
export function aspectOf({ area, perimeter }: Outline): number {
  return Math.min(1, (4 * Math.PI * area) / (perimeter * perimeter));
}

/** What the exit comes to under the load of the moment. */
function breakoutNow(model: CutModel, state: CutState): ExitBreakout {
  const { work, constants } = model.spec.conditions;
  const hard = loadQuantile(state.floor, HARDEST);
  return exitBreakout({
    load: loadNow(model, state),
    work,
    crack: hard > 0 ? craterLaw(work, constants).crack * pow(hard, 2 / 3) : 0,
    backing: model.spec.exit?.backing ?? false,
    edgeLoad: hard,
    constants,
    aspect: aspectOf(model.outline),
  });
}

/** Looks whether the last ligament gives way, or whether a backed cut has come out, and books it. */
export function checkExit(model: CutModel, state: CutState): void {
  const { exit } = model.spec;
  const s = state.scalars;
  if (!exit || (s[SCALAR.ended] as number) !== ENDED.not) return;
  const left = exit.thickness + (s[SCALAR.floorMean] as number);
  if (exit.backing) {
    if (left > 0 || (s[SCALAR.brokeThrough] as number) > 0) return;
    bookExit(model, state, breakoutNow(model, state));
    return;
  }
  const { work, constants } = model.spec.conditions;
  const largest = s[SCALAR.largestLoad] as number;
  if (left > NEAR * craterLaw(work, constants).crack * pow(largest, 2 / 3)) return;
  const breakout = breakoutNow(model, state);
  if (left > breakout.ligament) return;
  breakThrough(model, state, breakout);
}

function bookExit(model: CutModel, state: CutState, breakout: ExitBreakout): void {
  const s = state.scalars;
  const depth = Math.min(model.spec.exit?.thickness ?? 0, -(s[SCALAR.floorMean] as number));
  s[SCALAR.brokeThrough] = Math.max(s[SCALAR.brokeThrough] as number, depth);
  // a broken ring is of the mean size given; chips of single grits are given at their largest
  const most = breakout.ligament > 0 ? 1 : weakestSize(state);
  s[SCALAR.exitChipWidth] = Math.max(s[SCALAR.exitChipWidth] as number, breakout.chipWidth / most);
  s[SCALAR.exitChipDepth] = Math.max(s[SCALAR.exitChipDepth] as number, breakout.chipDepth / most);
}

function weakestSize(state: CutState): number {
  let most = 0;
  for (const { rim } of state.walls) for (const factor of rim.siteFactors) most = Math.max(most, siteSize(factor));
  return most;
}

/**
 * The last ligament breaks out: what is no thicker, and the floor that lags behind the tip at its edge, goes through. A tool
 * with a shoulder still in the work goes on with that; any other is through.
 */
function breakThrough(model: CutModel, state: CutState, breakout: ExitBreakout): void {
  const { floor, map, scalars: s } = state;
  const thickness = model.spec.exit?.thickness ?? 0;
  const radius = s[SCALAR.edgeRadius] as number;
  const most = breakout.ligament + radius + LAG * model.spec.conditions.grit.largest;
  bookExit(model, state, breakout);
  openToExit(model, state, most);
  for (let c = 0; c < floor.heights.length; c++) {
    const h = floor.heights[c] as number;
    if (h <= OUT_OF_REACH || (floor.edges[c] as number) > radius) continue;
    if (thickness + h + (map.rises[c] ?? 0) > most) continue;
    floor.heights[c] = OUT_OF_REACH;
    floor.cracks[c] = OUT_OF_REACH;
  }
  boundBlocks(floor, edgeTables(state), s[SCALAR.face] as number);
  const goesOn = model.partial && highestReach(floor) > OUT_OF_REACH && model.spec.depth > thickness;
  if (goesOn) return;
  s[SCALAR.ended] = ENDED.through;
  s[SCALAR.floorMean] = -thickness;
}

/** Opens the walls' last rows, down to the exit face, where the tool had come near enough to it. */
function openToExit(model: CutModel, state: CutState, most: number): void {
  const passed = passedHeight(state);
  const thickness = model.spec.exit?.thickness ?? 0;
  state.walls.forEach((wall, k) => {
    const plan = model.walls[k] as WallModel;
    const { field, opened } = wall;
    const rows = Math.min(field.ny, Math.ceil(thickness / field.dy));
    const near = opened.map((_, i) => (thickness + passed + (plan.rises[i] as number) <= most ? 1 : 0));
    if (!near.includes(1)) return;
    const foot = footAlong(model, state, k);
    for (let i = 0; i < field.nx; i++) {
      if (near[i] !== 1) continue;
      for (let row = opened[i] as number; row < rows; row++) {
        field.heights[row * field.nx + i] = -(foot[i] as number);
        field.cracks[row * field.nx + i] = -(foot[i] as number);
        field.ages[row * field.nx + i] = state.scalars[SCALAR.time] as number;
      }
      opened[i] = Math.max(opened[i] as number, rows);
    }
  });
}

/** Where along a wall and how far outside its outline a place lies (m). */
export interface ExitPlace {
  readonly outside: number;
  readonly wall: WallState;
  readonly cell: number;
  readonly rimCell: number;
}

/** Size of an exit chip at a site of this load factor, over that at a site of factor one. */
const siteSize = (factor: number) => pow(factor, -2 / 3);

/** Exit chip at a cell of a rim: on the exit face and up the wall (m). Weak sites break out wider, as at the entry. */
export function exitChipAt(state: CutState, { rim }: WallState, rimCell: number): { width: number; depth: number } {
  const s = state.scalars;
  const size = siteSize(rim.siteFactors[Math.floor(rimCell / rim.cellsPerSite)] as number);
  return { width: size * (s[SCALAR.exitChipWidth] as number), depth: size * (s[SCALAR.exitChipDepth] as number) };
}

/** Side gap of a wall where it comes out (m); NaN where the wall does not reach the exit. */
export function exitGap(model: CutModel, wall: WallState, cell: number): number {
  const { field } = wall;
  const thickness = model.spec.exit?.thickness ?? 0;
  const row = Math.min(field.ny - 1, Math.max(0, Math.ceil(thickness / field.dy - 1e-9) - 1));
  const h = field.heights[row * field.nx + cell] as number;
  return h > OUT_OF_REACH ? -h : Number.NaN;
}

/** Share of a voxel that an exit chip has taken. */
export function exitChipShare(
  model: CutModel,
  state: CutState,
  at: ExitPlace,
  voxel: { readonly top: number; readonly pitch: number },
): number {
  const thickness = model.spec.exit?.thickness ?? 0;
  const above = thickness - voxel.top;
  if (above <= 0 || above - voxel.pitch > 3 * (state.scalars[SCALAR.exitChipDepth] as number)) return 0;
  const gap = exitGap(model, at.wall, at.cell);
  if (!Number.isFinite(gap)) return 0;
  const chip = exitChipAt(state, at.wall, at.rimCell);
  const beyond = Math.max(0, at.outside - gap);
  if (beyond >= chip.width) return 0;
  const depth = chip.depth * Math.sqrt(1 - (beyond / chip.width) ** 2);
  return Math.max(0, Math.min(1, (voxel.pitch - above + depth) / voxel.pitch));
}
