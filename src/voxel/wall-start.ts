import { OUT_OF_REACH } from './kernels/contract.ts';
import type { WallModel } from './model.ts';
import type { CutState, WallState } from './state.ts';
import { fillFromBeside, roundWall } from './wall.ts';

/**
 * Offset of the wall from the outline row by row (m), (to - from) x nx: at each row's own depth the outermost column that is
 * open there, which in a cavity of earlier passes is that cavity's wall.
 */
export function feetByRow(
  state: CutState,
  plan: WallModel,
  wall: WallState,
  rows: { readonly from: number; readonly to: number },
): Float64Array {
  const { nx, dx, dy } = wall.field;
  const { columns, outside, along, ofLoop } = roundWall(state, plan);
  const { heights, dx: pitch } = state.floor;
  const { rises } = state.map;
  const count = rows.to - rows.from;
  const reach = new Float64Array(count * nx).fill(Number.NEGATIVE_INFINITY);
  for (const n of ofLoop[plan.loop] as Int32Array) {
    const column = columns[n] as number;
    const h = heights[column] as number;
    const depth = h <= OUT_OF_REACH ? Number.POSITIVE_INFINITY : -h - (rises[column] ?? 0);
    const i = Math.min(nx - 1, Math.floor((along[n] as number) / dx));
    const outer = (outside[n] as number) + pitch / 2;
    for (let row = 0; row < count && (rows.from + row + 0.5) * dy < depth; row++) {
      if (outer > (reach[row * nx + i] as number)) reach[row * nx + i] = outer;
    }
  }
  for (let row = 0; row < count; row++) {
    const own = reach.subarray(row * nx, (row + 1) * nx);
    own.set(fillFromBeside(own));
  }
  return reach;
}
