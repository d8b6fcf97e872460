import { OUT_OF_REACH } from './kernels/contract.ts';
import type { CutModel, WallModel } from './model.ts';
import { SCALAR } from './scalars.ts';
import type { CutState, Surroundings, WallState } from './state.ts';
import { feetByRow } from './wall-start.ts';

/** Rows opened at once up to which their feet are new ones. */
const FEW_ROWS = 4;

/**
 * Opens the wall rows the tool has passed at its full width, above its curved edge, which along a shaped face lies as far
 * behind the tip as the face does there. A new row starts at the foot: at each arc length the outermost floor column that
 * still stood below the tool as it passed. The foot is what the floor cut there, not a number put in; where an earlier cavity
 * is wider it is that cavity's wall, and out of reach where no grain spans the gap.
 */
export function openRows(model: CutModel, state: CutState): void {
  const passed = passedHeight(state);
  state.walls.forEach((wall, k) => {
    const plan = model.walls[k] as WallModel;
    const { field, opened } = wall;
    const to = opened.map((_, i) => rowsPassed(wall, passed + (plan.rises[i] as number)));
    if (to.every((rows, i) => rows <= (opened[i] as number))) return;
    if (model.spec.before) openByRow(model, state, k, to);
    else openAt(state, wall, { to, foot: footAlong(model, state, k), furthest: Number.POSITIVE_INFINITY });
    for (let i = 0; i < field.nx; i++) opened[i] = Math.max(opened[i] as number, to[i] as number);
    if (plan.pilot) closeAbove(model, state, wall);
    if (k === 0) state.scalars[SCALAR.openRows] = opened.reduce((most, rows) => Math.max(most, rows), 0);
  });
}

/** Rows to be opened at a foot (m), cell by cell, and the gap past which nothing is squeezed (m). */
interface Opening {
  readonly to: Int32Array;
  readonly foot: ArrayLike<number>;
  readonly furthest: number;
}

/** Opens all cells' rows that are not open yet at one foot each; one row alone if `only` is given. */
function openAt(state: CutState, { field, opened }: WallState, { to, foot, furthest }: Opening, only?: number): void {
  const time = state.scalars[SCALAR.time] as number;
  for (let i = 0; i < field.nx; i++) {
    const h = (foot[i] as number) > furthest ? OUT_OF_REACH : -(foot[i] as number);
    const first = Math.max(opened[i] as number, only ?? 0);
    const end = Math.min(to[i] as number, only === undefined ? field.ny : only + 1);
    for (let row = first; row < end; row++) {
      const column = row * field.nx + i;
      field.heights[column] = h;
      field.cracks[column] = h;
      field.ages[column] = time;
    }
  }
}

/** Opens rows each at its own foot: in an earlier cavity the tool may pass many at once. */
function openByRow(model: CutModel, state: CutState, k: number, to: Int32Array): void {
  const plan = model.walls[k] as WallModel;
  const wall = state.walls[k] as WallState;
  const from = wall.opened.reduce((least, rows) => Math.min(least, rows), wall.field.ny);
  const most = to.reduce((rows, own) => Math.max(rows, own), 0);
  const { nx, dx } = wall.field;
  const feet = feetByRow(state, plan, wall, { from, to: most });
  // a rim of the floor's own making is smoothed as ever; what earlier passes have smoothed is taken as it is
  const span = Math.max(1, Math.round(model.spec.conditions.grit.massMedian / 2 / dx));
  const furthest = widestGap(model);
  for (let row = from; row < most; row++) {
    const raw = feet.subarray((row - from) * nx, (row - from + 1) * nx);
    const foot = (most - from <= FEW_ROWS ? runningMedian(raw, span) : raw).map((gap) =>
      Math.max(gap, state.floor.dx / 2),
    );
    openAt(state, wall, { to, foot, furthest }, row);
  }
}

/** Rows of a wall that lie wholly above a height (m). */
export function rowsPassed(wall: WallState, height: number): number {
  return Math.max(0, Math.min(wall.field.ny, Math.floor(-height / wall.field.dy)));
}

/** The pilot's wall is no more where the shoulder's floor has come down. */
function closeAbove(model: CutModel, state: CutState, wall: WallState): void {
  const shoulder = (state.scalars[SCALAR.floorMean] as number) + (model.face.pilot?.step ?? 0);
  const to = rowsPassed(wall, shoulder);
  wall.field.heights.fill(OUT_OF_REACH, 0, to * wall.field.nx);
}

/** Side gap past which no grain is squeezed at any run-out (m). */
export function widestGap({ spec }: CutModel): number {
  return spec.conditions.grit.largest + spec.runout * spec.conditions.constants.runoutCap;
}

/** Height the tip of the tool has passed at its full width (m). */
export function passedHeight(state: CutState): number {
  return (state.scalars[SCALAR.face] as number) + (state.scalars[SCALAR.edgeRadius] as number);
}

/** The columns round a wall's outline. */
export function roundWall(state: CutState, plan: WallModel): Surroundings {
  return plan.pilot && state.map.aroundPilot ? state.map.aroundPilot : state.map.around;
}

/**
 * Side gap along one loop at the face's height (m), nx: the outermost column below the face, the median over the length of
 * one median grain, since no grain follows a slit narrower than itself.
 */
export function footAlong(model: CutModel, state: CutState, k: number): Float64Array {
  const plan = model.walls[k] as WallModel;
  const { nx, dx } = (state.walls[k] as WallState).field;
  const { columns, outside, along, ofLoop } = roundWall(state, plan);
  const { heights, dx: pitch } = state.floor;
  const { rises } = state.map;
  const passed = passedHeight(state);
  const reach = new Float64Array(nx).fill(Number.NEGATIVE_INFINITY);
  for (const n of ofLoop[plan.loop] as Int32Array) {
    const column = columns[n] as number;
    const i = Math.min(nx - 1, Math.floor((along[n] as number) / dx));
    const h = heights[column] as number;
    if (h > OUT_OF_REACH && h + (rises[column] ?? 0) > passed + (plan.rises[i] as number)) continue;
    const outer = (outside[n] as number) + pitch / 2;
    if (outer > (reach[i] as number)) reach[i] = outer;
  }
  // the tool has passed: no gap is less than what half a column can show
  const span = Math.max(1, Math.round(model.spec.conditions.grit.massMedian / 2 / dx));
  return runningMedian(fillFromBeside(reach), span).map((gap) => Math.max(gap, pitch / 2));
}

/** Cells without a column of their own (columns wider than a cell, a sharp inner corner) take the nearest one's gap. */
export function fillFromBeside(values: Float64Array): Float64Array {
  const n = values.length;
  const out = values.slice();
  for (let i = 0; i < n; i++) {
    if (Number.isFinite(values[i] as number)) continue;
    out[i] = 0;
    for (let k = 1; k <= n / 2; k++) {
      const found = Math.max(values[(i - k + n) % n] as number, values[(i + k) % n] as number);
      if (!Number.isFinite(found)) continue;
      out[i] = found;
      break;
    }
  }
  return out;
}

/** Median over 2 span + 1 cells of a closed row. */
function runningMedian(values: Float64Array, span: number): Float64Array {
  const n = values.length;
  const window = new Float64Array(2 * span + 1);
  return values.map((_, i) => {
    for (let k = -span; k <= span; k++) window[k + span] = values[(((i + k) % n) + n) % n] as number;
    return window.slice().sort()[span] as number;
  });
}
