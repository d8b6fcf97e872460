import { OUT_OF_REACH } from './kernels/contract.ts';
import type { CutModel } from './model.ts';
import { type CutState, SCALAR, type WallState } from './state.ts';

/**
 * Opens the wall rows the tool face has passed. A new row starts at the foot: at each arc length the outermost floor
 * column that still stood below the face as it passed. The foot is what the floor cut there, not a number put in.
 */
export function openRows(model: CutModel, state: CutState): void {
  const face = state.scalars[SCALAR.face] as number;
  const open = state.scalars[SCALAR.openRows] as number;
  const first = model.walls[0];
  if (!first) return;
  // all loops share one depth scale only where their pitches agree, so each keeps its own count of rows
  state.walls.forEach((wall, k) => {
    const from = k === 0 ? open : rowsOpen(wall);
    const to = Math.min(wall.field.ny, Math.floor(-face / wall.field.dy));
    if (to <= from) return;
    const foot = footAlong(state, wall, k, face);
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

/** Rows of a wall that have been opened. */
export function rowsOpen(wall: WallState): number {
  const { nx, ny, heights } = wall.field;
  let row = 0;
  while (row < ny && (heights[row * nx] as number) > OUT_OF_REACH) row++;
  return row;
}

/** Side gap along one loop at the face's height (m), nx: the outermost column below the face, holes filled from beside. */
function footAlong(state: CutState, wall: WallState, loop: number, face: number): Float64Array {
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
  return fillFromBeside(reach, Math.max(1, Math.ceil(pitch / dx)));
}

/** Each cell takes the largest value within `span` cells, so that columns wider than a cell leave no gaps. */
function fillFromBeside(values: Float64Array, span: number): Float64Array {
  const n = values.length;
  const out = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let best = Number.NEGATIVE_INFINITY;
    for (let k = -span; k <= span; k++) best = Math.max(best, values[(i + k + n) % n] as number);
    out[i] = best;
  }
  // an arc longer than the span without any column (a sharp inner corner) takes the nearest filled cell's gap
  for (let i = 0; i < n; i++) {
    if (Number.isFinite(out[i] as number)) continue;
    for (let k = 1; k < n; k++) {
      const before = out[(i - k + n) % n] as number;
      const after = out[(i + k) % n] as number;
      const found = Math.max(before, after);
      if (!Number.isFinite(found)) continue;
      out[i] = found;
      break;
    }
  }
  for (let i = 0; i < n; i++) if (!Number.isFinite(out[i] as number)) out[i] = 0;
  return out;
}
