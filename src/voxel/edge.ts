import { emptyCounts } from './balance.ts';
import type { Field } from './kernels/contract.ts';
import type { CutState } from './state.ts';
import { meansFor } from './tables.ts';

/** Makes room for means under an edge of this radius (m). */
export function fitMeans(state: CutState, radius: number): void {
  if (state.means.lift === radius) return;
  state.means = meansFor(state.means, radius);
  state.counts = emptyCounts(state.means);
  state.stripCounts = emptyCounts(state.means);
}

/** Area of a floor under the flat face (m2). */
export function flatArea(floor: Field): number {
  let columns = 0;
  for (const e of floor.edges) if (e === 0) columns++;
  return columns * floor.dx * floor.dy;
}
