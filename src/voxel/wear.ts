import { smallestFeature } from '#src/base/outline.ts';
import { floorAt } from '#src/physics/floor.ts';
import { contactRows, type GapSums, gapSums } from '#src/physics/gap-sums.ts';
import { edgeGrowth, sideWear, type ToolPace, wearOn } from '#src/physics/tool-wear.ts';
import { wallLaw } from '#src/physics/wall.ts';
import { gapUnder } from './book.ts';
import { fitMeans, flatArea } from './edge.ts';
import { COEFFICIENT } from './kernels/contract.ts';
import { edgeTables } from './load.ts';
import type { CutModel } from './model.ts';
import { SCALAR } from './scalars.ts';
import { boundBlocks } from './start.ts';
import type { CutState } from './state.ts';
import { markUnscaled, remapEdges } from './surroundings.ts';

/** Share of the smallest feature the edge may wear to: past it the form of the tool's end is no longer a face with an edge. */
const ROUNDEST = 0.25;

/** Floor the tool's wear is worked out over: the grit and the roughness. */
export interface WearFloor {
  readonly sums: GapSums;
  readonly roughness: number;
}

/** Sums over the gap of fresh grit. */
export const freshSums = (model: CutModel): GapSums => gapSums(contactRows(model.spec.conditions));

/**
 * Wears the tool's edge and side by what the tip has lost since they were last worked out, and lays the floor's edge anew.
 * Returns whether the edge has moved.
 */
export function wearTool(model: CutModel, state: CutState, over: WearFloor): boolean {
  const s = state.scalars;
  const at = (k: number) => s[k] as number;
  const lost = at(SCALAR.toolLost) - at(SCALAR.wornLost);
  const time = at(SCALAR.time) - at(SCALAR.renewedTime);
  const sunk = -at(SCALAR.floorMean) - at(SCALAR.renewedDepth);
  if (!(lost > 0 && time > 0 && sunk > 0)) return false;
  const { conditions, runout } = model.spec;
  const faceRate = lost / time;
  const law = wallLaw(conditions, runout, at(SCALAR.wallFresh));
  const pace: ToolPace = {
    faceRate,
    ...sideWear(law, { sinkRate: sunk / time, faceRate, lost: at(SCALAR.toolLost) }),
    edgeGrowth: edgeGrowth(over.sums, floorAt(over.sums, gapUnder(model, state), over.roughness)),
  };
  const before = { lost: at(SCALAR.wornLost), edgeRadius: at(SCALAR.edgeRadius), sideLoss: at(SCALAR.sideLoss) };
  const worn = wearOn(before, pace, lost);
  s[SCALAR.wornLost] = worn.lost;
  s[SCALAR.sideLoss] = worn.sideLoss;
  s[SCALAR.edgeRadius] = Math.max(
    before.edgeRadius,
    Math.min(worn.edgeRadius, ROUNDEST * smallestFeature(model.spec.tool)),
  );
  layEdge(model, state);
  return true;
}

/** Lays the tool's edge as it is now into the floor, the tables and the means' scale; the means are to be filled. */
function layEdge(model: CutModel, state: CutState): void {
  const s = state.scalars;
  const radius = s[SCALAR.edgeRadius] as number;
  remapEdges(state.floor, state.map.outside, radius, s[SCALAR.sideLoss] as number);
  for (const zone of state.zones.zones) zone.coefficients[COEFFICIENT.edgeRadius] = radius;
  markUnscaled(model, state.floor, radius);
  boundBlocks(state.floor, edgeTables(state), s[SCALAR.face] as number);
  state.faceArea = flatArea(state.floor);
  fitMeans(state, radius);
}
