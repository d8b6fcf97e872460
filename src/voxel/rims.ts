import { exitChipAt, exitGap } from './exit.ts';
import { earlierChips } from './left.ts';
import type { CutModel, WallModel } from './model.ts';
import { SCALAR } from './scalars.ts';
import type { CutState, WallState } from './state.ts';

/** A rim unrolled: arc length, chip depth down or up the wall and chip width on the face (m), all loops in turn. */
export interface RimProfile {
  readonly arc: Float64Array;
  readonly depth: Float64Array;
  readonly width: Float64Array;
}

/** Chips of each cell of a rim (m). */
type CellChips = (plan: WallModel, wall: WallState) => { depth: ArrayLike<number>; width: ArrayLike<number> };

function unrolled(model: CutModel, state: CutState, chipsOf: CellChips): RimProfile {
  const own = state.walls.filter((_, k) => k < model.toolLoops && !model.walls[k]?.pilot);
  const total = own.reduce((sum, wall) => sum + wall.rim.n, 0);
  const arc = new Float64Array(total);
  const depth = new Float64Array(total);
  const width = new Float64Array(total);
  let n = 0;
  let start = 0;
  own.forEach((wall, loop) => {
    const chips = chipsOf(model.walls[loop] as WallModel, wall);
    for (let k = 0; k < wall.rim.n; k++, n++) {
      arc[n] = start + (k + 0.5) * wall.rim.spacing;
      depth[n] = chips.depth[k] as number;
      width[n] = chips.width[k] as number;
    }
    start += wall.rim.n * wall.rim.spacing;
  });
  return { arc, depth, width };
}

/** The entry rim along the tool's own outline, with what the chips of earlier passes have left beyond it. */
export function rimProfile(model: CutModel, state: CutState): RimProfile {
  const ratio = model.spec.conditions.constants.chipWidthRatio;
  const { before } = model.spec;
  return unrolled(model, state, (plan, wall) => {
    const depth = Float64Array.from(wall.rim.chips);
    const width = depth.map((deep) => deep * ratio);
    if (!before) return { depth, width };
    const earlier = earlierChips(plan, wall, before);
    return {
      depth: depth.map((deep, n) => Math.max(deep, earlier.depth[n] as number)),
      width: width.map((wide, n) => Math.max(wide, earlier.width[n] as number)),
    };
  });
}

/** The exit rim along the tool's own outline; null where the cut has not come out. */
export function exitRimProfile(model: CutModel, state: CutState): RimProfile | null {
  if (!((state.scalars[SCALAR.brokeThrough] as number) > 0)) return null;
  return unrolled(model, state, (_plan, wall) => {
    const cells = Array.from({ length: wall.rim.n }, (_, n) => {
      const cell = Math.min(wall.field.nx - 1, Math.floor(((n + 0.5) * wall.rim.spacing) / wall.field.dx));
      // no chip where the wall does not come out
      const out = Number.isFinite(exitGap(model, wall, cell));
      return out ? exitChipAt(state, wall, n) : { width: 0, depth: 0 };
    });
    return { depth: cells.map(({ depth }) => depth), width: cells.map(({ width }) => width) };
  });
}
