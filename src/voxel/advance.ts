import { gritsPerArea } from '#src/physics/population.ts';
import { balance, countHeights, type HeightCounts, sumOver } from './balance.ts';
import { type Field, LOAD_BINS, STEP, SUM, SUMS } from './kernels/contract.ts';
import { ADVANCE, type CutModel, RENEW_EVERY, WALL_EVERY } from './model.ts';
import type { TileRunner } from './runner.ts';
import { renewSlurry } from './slurry.ts';
import { type CutState, SCALAR } from './state.ts';
import { openRows, passedHeight } from './wall.ts';

/** Floor columns looked at when the load is balanced. */
const SAMPLED_COLUMNS = 40000;
/** Cycles of each of the first steps, while the rate is not known yet. */
const FIRST_STEPS = 20;
const FIRST_CYCLES = 50;
/** Most a step may outlast the one before. */
const GROWTH = 2;
/** Weight of a new step in the smoothed rate. */
const SMOOTHING = 0.05;
/** Share of the set load below which the grains are said not to carry it. */
const LEAST_BORNE = 0.98;
/** Times the slurry is worked out on the way down. */
const SLURRY_RENEWALS = 10;

/** Raised when a step leaves the state impossible: names the quantity, the place and the step. */
export class StateError extends Error {
  override readonly name = 'StateError';
}

/** True once the floor has reached the depth asked for. */
export function isDone(model: CutModel, state: CutState): boolean {
  return -(state.scalars[SCALAR.floorMean] as number) >= model.spec.depth;
}

/** One step of the cut: balance the load, set the step, hit every tile, book what happened, check the state. */
export function advance(model: CutModel, state: CutState, runner: TileRunner): void {
  const s = state.scalars;
  if (model.slurry && -(s[SCALAR.floorMean] as number) >= (s[SCALAR.nextSlurryDepth] as number))
    renewZones(model, state);
  balanceAll(model, state);
  const cycles = cyclesOf(model, state);
  setSteps(model, state, cycles);
  runner.run();
  book(model, state, cycles);
  check(model, state);
}

/** Works the slurry out afresh at the depth reached; the next time after a tenth of the depth asked for. */
function renewZones(model: CutModel, state: CutState): void {
  const s = state.scalars;
  if (!model.slurry || !state.zones) return;
  const { drive } = model.spec;
  const depth = -(s[SCALAR.floorMean] as number);
  const load = drive.kind === 'load' ? drive.load : (s[SCALAR.setLoad] as number);
  const pressure = load / model.outline.area;
  const came = renewSlurry(model.slurry, model.tables, { zones: state.zones, means: state.means }, { depth, pressure });
  s[SCALAR.nextSlurryDepth] = depth + model.spec.depth / SLURRY_RENEWALS;
  s[SCALAR.stall] = came.stall === Number.POSITIVE_INFINITY ? 0 : came.stall;
  s[SCALAR.freshShare] = came.fresh;
}

/** A stride over the columns, an odd prime, so that it shares no factor with a tile. */
function strideFor(columns: number): number {
  let n = Math.max(1, Math.floor(columns / SAMPLED_COLUMNS));
  const prime = (m: number) => {
    for (let k = 2; k * k <= m; k++) if (m % k === 0) return false;
    return true;
  };
  // an odd stride: rows are whole tiles, and tiles even
  while (n > 1 && (n === 2 || !prime(n))) n++;
  return n;
}

function balanceAll(model: CutModel, state: CutState): void {
  const s = state.scalars;
  const { drive } = model.spec;
  if (drive.kind === 'load') balanceFloor(model, state, drive.load);
  else readFloor(model, state);
  if (!state.strip) return;
  const pressure = s[SCALAR.facePressure] as number;
  if (!(pressure > 0)) return;
  const counted = count(model, state, state.strip, state.stripCounts, s[SCALAR.stripFace] as number);
  const area = state.strip.dx * state.strip.dy * counted.faceColumns * counted.weight;
  const solved = balance(counted, state.means, {
    target: pressure,
    factor: (face) => loadFactor(model, state.strip as Field, face - counted.faceMean) / area,
    start: s[SCALAR.stripFace] as number,
    efold: s[SCALAR.stripEfold] as number,
  });
  s[SCALAR.stripFace] = solved.face;
  s[SCALAR.stripEfold] = solved.efold;
  s[SCALAR.stripMean] = counted.faceMean;
}

function count(model: CutModel, state: CutState, field: Field, counts: HeightCounts, face: number): HeightCounts {
  const tileZones = field === state.floor ? model.slurry?.tileZones : stripZones(model, state);
  const stride = strideFor(field.nx * field.ny);
  return countHeights(counts, field, model.tables.kernel, state.means, { face, stride, tileZones });
}

/** The strip's tiles all lie in the middle zone of the face. */
function stripZones(model: CutModel, state: CutState): Uint8Array | undefined {
  if (!model.slurry || !state.strip) return undefined;
  const { tilesX, tilesY } = state.strip;
  return new Uint8Array(tilesX * tilesY).fill(state.means.flat >> 1);
}

/** Load (N) per summed impulse over sampled columns, at this mean gap. */
function loadFactor(model: CutModel, field: Field, gap: number): number {
  const { conditions } = model.spec;
  return conditions.frequency * gritsPerArea(conditions, gap) * field.dx * field.dy;
}

function balanceFloor(model: CutModel, state: CutState, target: number): void {
  const s = state.scalars;
  const counted = count(model, state, state.floor, state.counts, s[SCALAR.face] as number);
  const solved = balance(counted, state.means, {
    target,
    factor: (face) => loadFactor(model, state.floor, face - counted.faceMean),
    start: s[SCALAR.face] as number,
    efold: s[SCALAR.efold] as number,
  });
  s[SCALAR.face] = solved.face;
  s[SCALAR.efold] = solved.efold;
  bookFace(model, state, counted, solved.face);
}

/** With a set feed the face is where it is; the load is what it takes. */
function readFloor(model: CutModel, state: CutState): void {
  const s = state.scalars;
  const face = s[SCALAR.face] as number;
  const counted = count(model, state, state.floor, state.counts, face);
  bookFace(model, state, counted, face);
}

function bookFace(model: CutModel, state: CutState, counted: HeightCounts, face: number): void {
  const s = state.scalars;
  const factor = loadFactor(model, state.floor, face - counted.faceMean);
  const load = sumOver(counted, state.means, state.means.impulse, face);
  s[SCALAR.floorMean] = counted.faceMean;
  s[SCALAR.toolDents] = sumOver(counted, state.means, state.means.toolDent, face).all;
  const { drive } = model.spec;
  s[SCALAR.setLoad] = drive.kind === 'load' ? drive.load : load.all * factor;
  const sampled = counted.faceColumns * counted.weight * state.floor.dx * state.floor.dy;
  s[SCALAR.facePressure] = (load.flat * factor) / sampled;
  if (drive.kind === 'load' && load.all * factor < LEAST_BORNE * drive.load) {
    throw new RangeError('the grains cannot carry this load: enter less, or more or coarser grit');
  }
}

/** Cycles of the next step: an advance of a fifth of the load's e-fold height, never past the depth asked for. */
function cyclesOf(model: CutModel, state: CutState): number {
  const s = state.scalars;
  const rate = s[SCALAR.ratePerCycle] as number;
  if (!(rate > 0)) return 1;
  const left = model.spec.depth + (s[SCALAR.floorMean] as number);
  const wanted = Math.max(1, Math.min((ADVANCE * (s[SCALAR.efold] as number)) / rate, left / rate));
  const cycles = Math.min(wanted, GROWTH * (s[SCALAR.lastCycles] as number));
  return (s[SCALAR.step] as number) < FIRST_STEPS ? Math.min(FIRST_CYCLES, cycles) : cycles;
}

function setSteps(model: CutModel, state: CutState, cycles: number): void {
  const s = state.scalars;
  const { conditions } = model.spec;
  const step = s[SCALAR.step] as number;
  const renew = step % RENEW_EVERY === 0 ? 1 : 0;
  s[SCALAR.time] = (s[SCALAR.time] as number) + cycles / conditions.frequency;
  s[SCALAR.cyclesSinceRenew] = (s[SCALAR.cyclesSinceRenew] as number) + cycles;
  s[SCALAR.cyclesSinceWall] = (s[SCALAR.cyclesSinceWall] as number) + cycles;
  const even = renew === 1 ? (s[SCALAR.cyclesSinceRenew] as number) * model.freePerCycle : 0;
  if (renew === 1) s[SCALAR.cyclesSinceRenew] = 0;
  const expected = cycles * (s[SCALAR.ratePerCycle] as number);
  const common = { step, time: s[SCALAR.time] as number, renew, even };

  const floorRow = (field: Field, row: Float64Array, at: { face: number; mean: number; m: number; key: number }) => {
    const gap = at.face - at.mean;
    row[STEP.face] = at.face - expected / 2;
    row[STEP.lambda] =
      ((gritsPerArea(conditions, gap) * field.dx * field.dy * field.block * field.block) / at.m) * cycles;
    row[STEP.magnification] = at.m;
    row[STEP.key1] = at.key;
    row[STEP.rows] = field.ny;
    row[STEP.active] = 1;
    setCommon(row, model, common);
  };
  floorRow(state.floor, state.floorStep, {
    face: s[SCALAR.face] as number,
    mean: s[SCALAR.floorMean] as number,
    m: model.magnification,
    key: model.keys.floor,
  });
  if (state.strip) {
    floorRow(state.strip, state.stripStep, {
      face: s[SCALAR.stripFace] as number,
      mean: s[SCALAR.stripMean] as number,
      m: 1,
      key: model.keys.strip,
    });
  }
  setWalls(model, state, common);
}

function setCommon(
  row: Float64Array,
  model: CutModel,
  common: { step: number; time: number; renew: number; even: number },
): void {
  row[STEP.step] = common.step;
  row[STEP.time] = common.time;
  row[STEP.key0] = model.key0;
  row[STEP.renew] = common.renew;
  row[STEP.even] = common.even;
}

function setWalls(
  model: CutModel,
  state: CutState,
  common: { step: number; time: number; renew: number; even: number },
): void {
  const s = state.scalars;
  const active = common.step % WALL_EVERY === WALL_EVERY - 1;
  if (active) openRows(model, state);
  const { concentration, grit, constants } = model.spec.conditions;
  const d30 = grit.meanVolumeDiameter;
  // grains in the side gap per square metre of wall and metre of gap
  const perVolume = (6 * concentration * constants.wallRenewal) / (Math.PI * d30 * d30 * d30);
  state.walls.forEach((wall, k) => {
    const { field, step: row } = wall;
    const m = model.walls[k]?.magnification ?? 1;
    row[STEP.active] = active ? 1 : 0;
    if (!active) return;
    setCommon(row, model, { ...common, renew: 1, even: 0 });
    // no face above a wall: every open cell may be hit
    row[STEP.face] = 1;
    row[STEP.lambda] =
      ((perVolume * field.dx * field.dy * field.block * field.block) / m) * (s[SCALAR.cyclesSinceWall] as number);
    row[STEP.magnification] = m;
    row[STEP.key1] = model.keys.walls[k] as number;
    row[STEP.rows] = Math.min(field.ny, Math.floor(-passedHeight(model, state) / field.dy));
  });
  if (active) s[SCALAR.cyclesSinceWall] = 0;
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

function book(model: CutModel, state: CutState, cycles: number): void {
  const s = state.scalars;
  const { conditions, drive } = model.spec;
  const add = (k: number, value: number) => {
    s[k] = (s[k] as number) + value;
  };
  const sums = totals(state.floor);
  const at = (k: number) => sums[k] as number;
  // free impacts lower every reachable column evenly, so the flat face's part goes by area
  const even = state.floorStep[STEP.even] as number;
  const lowered = at(SUM.faceRemoved) / state.faceArea + even;
  const step = s[SCALAR.step] as number;
  // sums and not ratios are smoothed, so that a step without a hit does not stretch the next
  const keep = step < FIRST_STEPS ? 1 : 1 - SMOOTHING;
  s[SCALAR.smoothLowered] = keep * (s[SCALAR.smoothLowered] as number) + lowered;
  s[SCALAR.smoothCycles] = keep * (s[SCALAR.smoothCycles] as number) + cycles;
  s[SCALAR.ratePerCycle] = (s[SCALAR.smoothLowered] as number) / (s[SCALAR.smoothCycles] as number);
  s[SCALAR.lastCycles] = cycles;
  add(SCALAR.floorMean, -lowered);
  if (drive.kind === 'load') add(SCALAR.face, -lowered);
  else add(SCALAR.face, (-drive.feed * cycles) / conditions.frequency);
  if (state.strip) {
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

/** Length the tool loses in this step, from the expected dents in its face. */
function bookTool(model: CutModel, state: CutState, cycles: number, add: (k: number, v: number) => void): void {
  const s = state.scalars;
  const { conditions } = model.spec;
  const gap = (s[SCALAR.face] as number) - (s[SCALAR.floorMean] as number);
  const volume =
    conditions.constants.toolPlasticShare *
    gritsPerArea(conditions, gap) *
    (s[SCALAR.toolDents] as number) *
    state.floor.dx *
    state.floor.dy *
    cycles;
  add(SCALAR.toolLost, volume / model.outline.area);
}

/** Finite and in range: what is cheap to hold after every step. Conservation and monotony are held by tests. */
function check(model: CutModel, state: CutState): void {
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
