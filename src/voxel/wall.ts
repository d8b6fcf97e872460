import { OUT_OF_REACH } from './kernels/contract.ts';
import type { CutModel } from './model.ts';
import { type CutState, SCALAR, type WallState } from './state.ts';

/**
 * Opens the wall rows the tool has passed at its full width, above its curved edge. A new row starts at the foot: at each
 * arc length the outermost floor column that still stood below the tool as it passed. The foot is what the floor cut there, not a number put in.
 */
export function openRows(model: CutModel, state: CutState): void {
  const face = passedHeight(model, state);
  const open = state.scalars[SCALAR.openRows] as number;
  const first = model.walls[0];
  if (!first) return;
  // all loops share one depth scale only where their pitches agree, so each keeps its own count of rows
  state.walls.forEach((wall, k) => {
    const from = k === 0 ? open : rowsOpen(wall);
    const to = Math.min(wall.field.ny, Math.floor(-face / wall.field.dy));
    if (to <= from) return;
    const foot = footAlong(state, wall, { loop: k, face, grain: model.spec.conditions.grit.massMedian });
    for (let row = from; row < to; row++) {
      for (let i = 0; i < wall.field.nx; i++) {
        const column = row * wall.field.nx + i;
        wall.field.heights[column] = -(foot[i] as number);
        wall.field.cracks[column] = -(foot[i] as number);
        wall.field.ages[column] = state.scalars[SCALAR.time] as number;
      }
    }
    if (k === 0) state.scalars[SCALAR.openRows] = to;
  });
}

/** Height the tool has passed at its full width (m). */
export function passedHeight(model: CutModel, state: CutState): number {
  return (state.scalars[SCALAR.face] as number) + model.spec.edgeRadius;
}

/** Rows of a wall that have been opened. */
export function rowsOpen(wall: WallState): number {
  const { nx, ny, heights } = wall.field;
  let row = 0;
  while (row < ny && (heights[row * nx] as number) > OUT_OF_REACH) row++;
  return row;
}

/**
 * Side gap along one loop at the face's height (m), nx: the outermost column below the face, the median over the length of
 * one median grain, since no grain follows a slit narrower than itself.
 */
function footAlong(
  state: CutState,
  wall: WallState,
  at: { readonly loop: number; readonly face: number; readonly grain: number },
): Float64Array {
  const { loop, face, grain } = at;
  const { nx, dx } = wall.field;
  const { columns, outside, loops, along } = state.around;
  const { heights, dx: pitch } = state.floor;
  const reach = new Float64Array(nx).fill(Number.NEGATIVE_INFINITY);
  for (let n = 0; n < columns.length; n++) {
    if (loops[n] !== loop) continue;
    if ((heights[columns[n] as number] as number) > face) continue;
    const i = Math.min(nx - 1, Math.floor((along[n] as number) / dx));
    const outer = (outside[n] as number) + pitch / 2;
    if (outer > (reach[i] as number)) reach[i] = outer;
  }
  // the tool has passed: no gap is less than what half a column can show
  const span = Math.max(1, Math.round(grain / 2 / dx));
  return runningMedian(fillFromBeside(reach), span).map((gap) => Math.max(gap, pitch / 2));
}

/** Cells without a column of their own (columns wider than a cell, a sharp inner corner) take the nearest one's gap. */
function fillFromBeside(values: Float64Array): Float64Array {
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
