import { steadyFloor } from '#src/physics/floor.ts';
import { sizeClasses } from '#src/physics/grit-law.ts';
import { wallFreshness } from '#src/physics/wall-slurry.ts';
import { loadNow } from './load.ts';
import type { CutModel } from './model.ts';
import { ENDED, SCALAR } from './scalars.ts';
import { renewSlurry, type SlurryPlace, type SlurryState, stalledAt } from './slurry.ts';
import type { CutState } from './state.ts';
import { fillMeans } from './tables.ts';
import { freshSums, wearTool } from './wear.ts';

/** Times slurry and tool are worked out on the way down. */
const RENEWALS = 10;
/** Share of the face that must be in contact for the slurry to have its way in from the rim as over the whole face. */
const MOSTLY = 0.5;
/** Share of the rate before the stall below which a stalled cut is given up. */
const GIVEN_UP = 0.2;
/** Halvings of the way between two renewals to find the depth of a stall. */
const HALVINGS = 8;

/** Works slurry and tool out afresh where it is due; the next time after a tenth of the way asked for, or at a stall. */
export function renewIfDue(model: CutModel, state: CutState): void {
  const s = state.scalars;
  const { slurry, spec } = model;
  if (!slurry && !spec.toolLife) return;
  const depth = Math.max(0, -(s[SCALAR.floorMean] as number));
  if (depth < (s[SCALAR.nextSlurryDepth] as number)) return;
  const next = depth + (model.endDepth - (s[SCALAR.startDepth] as number)) / RENEWALS;
  s[SCALAR.nextSlurryDepth] = next;
  const worn = spec.toolLife ? wearTool(model, state, wearFloor(model, state)) : false;
  if (slurry) renewUnder(model, state, { depth, next });
  else if (worn) {
    fillMeans(state.means, spec.conditions, model.tables, [
      { shares: sizeClasses(spec.conditions.grit).fraction, useful: 1 },
    ]);
  }
  s[SCALAR.advanceCounts] = 0;
  s[SCALAR.renewedTime] = s[SCALAR.time] as number;
  s[SCALAR.renewedDepth] = depth;
}

function wearFloor(model: CutModel, state: CutState) {
  if (model.slurry) return { sums: model.slurry.tables.sums, roughness: state.scalars[SCALAR.roughness] as number };
  const sums = freshSums(model);
  const floor = steadyFloor(sums, Math.max(1, state.scalars[SCALAR.facePressure] as number));
  return { sums, roughness: floor.roughness };
}

/** Where the slurry is worked out at a depth, with the contact and the load of now. */
function placeAt(model: CutModel, state: CutState, depth: number): SlurryPlace {
  const s = state.scalars;
  // before the first balance nothing is known of the contact: it begins at the rim of what is to come
  const contact = s[SCALAR.contactArea] as number;
  return {
    depth,
    pressure: loadNow(model, state) / (contact > 0 ? contact : model.outline.area),
    rim: contact < MOSTLY * model.outline.area,
    time: s[SCALAR.time] as number,
  };
}

function renewUnder(model: CutModel, state: CutState, at: { depth: number; next: number }): void {
  const s = state.scalars;
  if (!model.slurry) return;
  const place = placeAt(model, state, at.depth);
  const came = renewSlurry(model.slurry, model.tables, { zones: state.zones, means: state.means }, place);
  s[SCALAR.stall] = came.stall === Number.POSITIVE_INFINITY ? 0 : came.stall;
  s[SCALAR.freshShare] = came.fresh;
  s[SCALAR.roughness] = came.roughness;
  s[SCALAR.bestPressure] = came.bestPressure;
  s[SCALAR.wallFresh] = freshnessOf(model, state, came);
  if (came.stalled) {
    bookStall(state, at.depth, came);
    return;
  }
  s[SCALAR.starvedGap] = 0;
  s[SCALAR.carriedRate] = came.rate;
  if (!place.rim) s[SCALAR.nextSlurryDepth] = nextOrStall(model, state, at);
}

/** Share of fresh squeezes in the side gap with the slurry that leaves the face and the debris it carries. */
function freshnessOf(model: CutModel, state: CutState, { rate, toolRate, flow }: SlurryState): number {
  const { conditions } = model.spec;
  const { carrier, constants } = (model.slurry as NonNullable<CutModel['slurry']>).face;
  const { perimeter } = model.outline;
  const contact = (state.scalars[SCALAR.contactArea] as number) || model.outline.area;
  return wallFreshness(conditions, {
    carrier,
    forcedFlow: Math.abs(flow) / perimeter,
    debrisFlow: ((rate + toolRate) * contact) / perimeter,
    constants,
  });
}

/**
 * The exchange has broken down. The cut goes on with the starved face at its low rate; it is given up where that is next to
 * nothing beside the rate before.
 */
function bookStall(state: CutState, depth: number, came: SlurryState): void {
  const s = state.scalars;
  if ((s[SCALAR.stalled] as number) === 0) {
    s[SCALAR.stalled] = 1;
    s[SCALAR.stallDepth] = depth;
  }
  const before = (s[SCALAR.carriedRate] as number) || came.best;
  const time = (s[SCALAR.time] as number) - (s[SCALAR.renewedTime] as number);
  const starving = (s[SCALAR.starvedGap] as number) > 0 && time > 0;
  const rate = starving ? (depth - (s[SCALAR.renewedDepth] as number)) / time : came.rate;
  if (rate < GIVEN_UP * before) s[SCALAR.ended] = ENDED.stalled;
  s[SCALAR.starvedGap] = came.gap;
}

/** Depth of the next renewal, or where the exchange breaks down before that. */
function nextOrStall(model: CutModel, state: CutState, { depth, next }: { depth: number; next: number }): number {
  const slurry = model.slurry as NonNullable<CutModel['slurry']>;
  const stalls = (at: number) => stalledAt(slurry, placeAt(model, state, at));
  const last = Math.min(next, model.endDepth);
  if (!stalls(last)) return next;
  let low = depth;
  let high = last;
  for (let i = 0; i < HALVINGS; i++) {
    const middle = (low + high) / 2;
    if (stalls(middle)) high = middle;
    else low = middle;
  }
  return high;
}
