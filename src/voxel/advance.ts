import { gritsPerArea } from '#src/physics/population.ts';
import { book, check, FIRST_STEPS, gapUnder } from './book.ts';
import { checkExit } from './exit.ts';
import { type Field, STEP } from './kernels/contract.ts';
import { balanceAll, stripRuns } from './load.ts';
import { ADVANCE, type CutModel, RENEW_EVERY, WALL_EVERY } from './model.ts';
import { renewIfDue } from './renew.ts';
import type { TileRunner } from './runner.ts';
import { ENDED, SCALAR } from './scalars.ts';
import type { CutState } from './state.ts';
import { openRows } from './wall.ts';

export { loadCounts, StateError, totals } from './book.ts';

/** Cycles of each of the first steps, while the rate is not known yet. */
const FIRST_CYCLES = 50;
/** Most a step may outlast the one before. */
const GROWTH = 2;

/** Way of the tip still to go (m); a machine that does not make up for the length lost counts it as sunk. */
function wayLeft(model: CutModel, state: CutState): number {
  const s = state.scalars;
  const { toolLife } = model.spec;
  const lost = toolLife && !toolLife.compensated ? (s[SCALAR.toolLost] as number) : 0;
  return model.endDepth + (s[SCALAR.floorMean] as number) - lost;
}

/** True once the cut is over: the tip has travelled the depth asked for, or the cut has ended before it. */
export function isDone(model: CutModel, state: CutState): boolean {
  return (state.scalars[SCALAR.ended] as number) !== ENDED.not || wayLeft(model, state) <= 0;
}

/** One step of the cut: balance the load, set the step, hit every tile, book what happened, check the state. */
export function advance(model: CutModel, state: CutState, runner: TileRunner): void {
  renewIfDue(model, state);
  if ((state.scalars[SCALAR.ended] as number) !== ENDED.not) return;
  balanceAll(model, state);
  if ((state.scalars[SCALAR.ended] as number) !== ENDED.not) return;
  const cycles = cyclesOf(model, state);
  setSteps(model, state, cycles);
  runner.run();
  book(model, state, cycles);
  checkTool(model, state);
  checkExit(model, state);
  check(model, state);
}

/** Ends the cut where the tool has lost all the length it may lose. */
function checkTool(model: CutModel, state: CutState): void {
  const s = state.scalars;
  const most = model.spec.toolLife?.length;
  if (most !== undefined && (s[SCALAR.toolLost] as number) >= most) s[SCALAR.ended] = ENDED.ranOut;
}

/** Cycles of the next step: an advance of a fifth of the load's e-fold height, never past the depth asked for. */
function cyclesOf(model: CutModel, state: CutState): number {
  const s = state.scalars;
  const rate = s[SCALAR.ratePerCycle] as number;
  if (!(rate > 0)) return 1;
  const left = wayLeft(model, state);
  const wanted = Math.max(1, Math.min((ADVANCE * (s[SCALAR.efold] as number)) / rate, left / rate));
  const cycles = Math.min(wanted, GROWTH * (s[SCALAR.lastCycles] as number));
  return (s[SCALAR.step] as number) < FIRST_STEPS ? Math.min(FIRST_CYCLES, cycles) : cycles;
}

/** What is common to the step numbers of all fields. */
interface CommonStep {
  readonly step: number;
  readonly time: number;
  readonly renew: number;
  readonly even: number;
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

  const floorRow = (field: Field, row: Float64Array, at: { face: number; gap: number; m: number; key: number }) => {
    row[STEP.face] = at.face - expected / 2;
    row[STEP.lambda] =
      ((gritsPerArea(conditions, at.gap) * field.dx * field.dy * field.block * field.block) / at.m) * cycles;
    row[STEP.magnification] = at.m;
    row[STEP.key1] = at.key;
    row[STEP.rows] = field.ny;
    row[STEP.active] = 1;
    setCommon(row, model, common);
  };
  floorRow(state.floor, state.floorStep, {
    face: s[SCALAR.face] as number,
    gap: gapUnder(model, state),
    m: model.magnification,
    key: model.keys.floor,
  });
  state.stripStep[STEP.active] = 0;
  if (state.strip && stripRuns(model, state)) {
    floorRow(state.strip, state.stripStep, {
      face: s[SCALAR.stripFace] as number,
      gap: (s[SCALAR.stripFace] as number) - (s[SCALAR.stripMean] as number),
      m: 1,
      key: model.keys.strip,
    });
  }
  setWalls(model, state, common);
}

function setCommon(row: Float64Array, model: CutModel, common: CommonStep): void {
  row[STEP.step] = common.step;
  row[STEP.time] = common.time;
  row[STEP.key0] = model.key0;
  row[STEP.renew] = common.renew;
  row[STEP.even] = common.even;
}

function setWalls(model: CutModel, state: CutState, common: CommonStep): void {
  const s = state.scalars;
  const active = common.step % WALL_EVERY === WALL_EVERY - 1;
  if (active) openRows(model, state);
  const { concentration, grit } = model.spec.conditions;
  const d30 = grit.meanVolumeDiameter;
  // grains in the side gap per square metre of wall and metre of gap
  const perVolume = (6 * concentration * (s[SCALAR.wallFresh] as number)) / (Math.PI * d30 * d30 * d30);
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
    row[STEP.rows] = wall.opened.reduce((most, rows) => Math.max(most, rows), 0);
  });
  if (active) s[SCALAR.cyclesSinceWall] = 0;
}
