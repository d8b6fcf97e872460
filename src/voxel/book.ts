import { gritsPerArea } from '#src/physics/population.ts';
import { toolShare } from '#src/physics/tool-wear.ts';
import {
  type Field,
  LOAD_BIN_FIRST_EXPONENT,
  LOAD_BINS,
  LOAD_BINS_PER_OCTAVE,
  STEP,
  SUM,
  SUMS,
} from './kernels/contract.ts';
import type { CutModel } from './model.ts';
import { SCALAR } from './scalars.ts';
import type { CutState } from './state.ts';

/** Steps over which the rate is a plain mean, while the first grains are spreading over the floor. */
export const FIRST_STEPS = 20;
/** Weight of a new step in the smoothed rate. */
const SMOOTHING = 0.05;

/** Raised when a step leaves the state impossible: names the quantity, the place and the step. */
export class StateError extends Error {
  override readonly name = 'StateError';
}

/** Adds up a field's tile sums in tile order. */
export function totals(field: Field): Float64Array {
  const total = new Float64Array(SUMS);
  for (let tile = 0; tile < field.tilesX * field.tilesY; tile++) {
    for (let k = 0; k < SUMS; k++) {
      const value = field.sums[tile * SUMS + k] as number;
      if (k === SUM.largestLoad) total[k] = Math.max(total[k] as number, value);
      else total[k] = (total[k] as number) + value;
    }
  }
  return total;
}

/** Hits of a field by load over the whole cut, LOAD_BINS. */
export function loadCounts(field: Field): Float64Array {
  const out = new Float64Array(LOAD_BINS);
  for (let k = 0; k < field.loads.length; k++) {
    const bin = k % LOAD_BINS;
    out[bin] = (out[bin] as number) + (field.loads[k] as number);
  }
  return out;
}

/** Lower edge of bin k of the load histogram (N). */
export function loadBinEdge(k: number): number {
  const octave = Math.floor(k / LOAD_BINS_PER_OCTAVE);
  return 2 ** (LOAD_BIN_FIRST_EXPONENT + octave) * (1 + (k % LOAD_BINS_PER_OCTAVE) / LOAD_BINS_PER_OCTAVE);
}

/** Load that a share of the floor's hits stay below (N), interpolated inside the histogram's bin. */
export function loadQuantile(field: Field, share: number): number {
  const counts = loadCounts(field);
  let left = share * counts.reduce((sum, n) => sum + n, 0);
  for (let k = 0; k < counts.length; k++) {
    const n = counts[k] as number;
    if (n > 0 && left <= n) return loadBinEdge(k) + (left / n) * (loadBinEdge(k + 1) - loadBinEdge(k));
    left -= n;
  }
  return 0;
}

/** Books what the tiles of a step have done. */
export function book(model: CutModel, state: CutState, cycles: number): void {
  const s = state.scalars;
  const { conditions, drive } = model.spec;
  const add = (k: number, value: number) => {
    s[k] = (s[k] as number) + value;
  };
  const sums = totals(state.floor);
  // free impacts lower every reachable column evenly, so the flat face's part goes by area
  const even = state.floorStep[STEP.even] as number;
  const step = s[SCALAR.step] as number;
  if (!model.partial) smoothRate(state, (sums[SUM.faceRemoved] as number) / state.faceArea + even, cycles);
  // of a face in partial contact the balance tells the advance; until then it is where it was expected
  const lowered = model.partial
    ? cycles * (s[SCALAR.ratePerCycle] as number)
    : (sums[SUM.faceRemoved] as number) / state.faceArea + even;
  s[SCALAR.lastCycles] = cycles;
  add(SCALAR.floorMean, -lowered);
  if (drive.kind === 'load') add(SCALAR.face, -lowered);
  else add(SCALAR.face, (-drive.feed * cycles) / conditions.frequency);
  if (state.strip && state.stripStep[STEP.active] === 1) {
    const strip = totals(state.strip);
    const area = state.strip.nx * state.strip.ny * state.strip.dx * state.strip.dy;
    const down = (strip[SUM.faceRemoved] as number) / area + even;
    add(SCALAR.stripMean, -down);
    add(SCALAR.stripFace, -down);
  }
  bookSums(state, sums, cycles, add);
  bookTool(model, state, cycles, add);
  if ((state.walls[0]?.step[STEP.active] ?? 0) === 1) {
    for (const wall of state.walls) {
      const its = totals(wall.field);
      add(SCALAR.wallHits, its[SUM.engaged] as number);
      add(SCALAR.wallRemoved, (its[SUM.chipRemoved] as number) + (its[SUM.dentRemoved] as number));
    }
  }
  s[SCALAR.step] = step + 1;
  add(SCALAR.cycles, cycles);
}

/** Mean gap between face and floor where they are in contact (m). */
export function gapUnder(model: CutModel, { scalars }: CutState): number {
  if (model.partial) return scalars[SCALAR.contactGap] as number;
  return (scalars[SCALAR.face] as number) - (scalars[SCALAR.floorMean] as number);
}

/** Takes an advance over some cycles into the smoothed rate. */
export function smoothRate(state: CutState, lowered: number, cycles: number): void {
  const s = state.scalars;
  // sums and not ratios are smoothed, so that a step without a hit does not stretch the next
  const keep = (s[SCALAR.step] as number) < FIRST_STEPS ? 1 : 1 - SMOOTHING;
  s[SCALAR.smoothLowered] = keep * (s[SCALAR.smoothLowered] as number) + lowered;
  s[SCALAR.smoothCycles] = keep * (s[SCALAR.smoothCycles] as number) + cycles;
  s[SCALAR.ratePerCycle] = (s[SCALAR.smoothLowered] as number) / (s[SCALAR.smoothCycles] as number);
}

function bookSums(state: CutState, sums: Float64Array, cycles: number, add: (k: number, v: number) => void): void {
  const s = state.scalars;
  const at = (k: number) => sums[k] as number;
  add(SCALAR.candidates, at(SUM.candidates));
  add(SCALAR.engaged, at(SUM.engaged));
  add(SCALAR.impacts, at(SUM.impacts));
  add(SCALAR.recentImpacts, at(SUM.impacts));
  add(SCALAR.chips, at(SUM.chips));
  add(SCALAR.credited, at(SUM.credited));
  add(SCALAR.overlap, at(SUM.overlap));
  add(SCALAR.chipRemoved, at(SUM.chipRemoved));
  add(SCALAR.dentRemoved, at(SUM.dentRemoved));
  add(SCALAR.freeRemoved, at(SUM.freeRemoved));
  add(SCALAR.impulse, at(SUM.impulse));
  add(SCALAR.load, at(SUM.load));
  add(SCALAR.chipRadius, at(SUM.radius));
  add(SCALAR.chipDepth, at(SUM.depth));
  add(SCALAR.recentImpulse, at(SUM.impulse));
  add(SCALAR.recentEngaged, at(SUM.engaged));
  add(SCALAR.recentLoad, at(SUM.load));
  add(SCALAR.recentTime, cycles);
  s[SCALAR.largestLoad] = Math.max(s[SCALAR.largestLoad] as number, at(SUM.largestLoad));
  s[SCALAR.recentLargestLoad] = Math.max(s[SCALAR.recentLargestLoad] as number, at(SUM.largestLoad));
}

/** Length the tip and volume the face lose in this step, from the expected dents in the face. */
function bookTool(model: CutModel, state: CutState, cycles: number, add: (k: number, v: number) => void): void {
  const s = state.scalars;
  const { conditions } = model.spec;
  const gap = gapUnder(model, state);
  const volume =
    toolShare(conditions.tool, conditions.constants) *
    gritsPerArea(conditions, gap) *
    (s[SCALAR.toolDents] as number) *
    state.floor.dx *
    state.floor.dy *
    cycles;
  add(SCALAR.toolVolume, volume);
  const contact = s[SCALAR.contactArea] as number;
  if (contact > 0) add(SCALAR.toolLost, volume / contact);
}

/** Finite and in range: what is cheap to hold after every step. Conservation and monotony are held by tests. */
export function check(model: CutModel, state: CutState): void {
  const s = state.scalars;
  const step = s[SCALAR.step] as number;
  const fail = (what: string) => {
    throw new StateError(`${what} at step ${step}`);
  };
  for (const [name, k] of Object.entries(SCALAR)) {
    if (!Number.isFinite(s[k] as number)) fail(`${name} is ${s[k]}`);
  }
  if ((s[SCALAR.floorMean] as number) > 1e-12) fail(`the floor rose to ${s[SCALAR.floorMean]} m`);
  const ledger = (s[SCALAR.credited] as number) - (s[SCALAR.overlap] as number) - (s[SCALAR.chipRemoved] as number);
  if (Math.abs(ledger) > 1e-6 * (s[SCALAR.credited] as number)) fail(`the volume ledger is off by ${ledger} m3`);
  if (step % 64 === 0) {
    const block = state.floor.bounds.findIndex((bound) => !(bound <= 1e-9));
    if (block >= 0) fail(`the bound of block ${block} is ${state.floor.bounds[block]} m`);
  }
  if ((s[SCALAR.cycles] as number) > 1e12 * model.spec.conditions.frequency) fail('the cut does not end');
}
