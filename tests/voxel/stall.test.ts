import { expect, test } from 'vitest';
import { estimate } from '#src/physics/estimate.ts';
import { CARRIERS } from '#src/physics/slurry/viscosity.ts';
import { measureCut } from '#src/planning/measure.ts';
import { cutHash, endOf, makeCut, runCut } from '#src/voxel/cut.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { buildBricks } from '#src/voxel/solid.ts';
import { restoreState, saveState } from '#src/voxel/state.ts';
import { conditionsOf, cutSpecOf, works } from '../support/conditions.ts';
import { finishedCut, settingOf } from '../support/cut-run.ts';
import { waterFace } from '../support/slurry.ts';

const conditions = conditionsOf({ work: works.sodaLime });
const bare = cutSpecOf({ conditions, diameter: 2e-3, depth: 0.15e-3, columnsPerRadius: 1 });
/** Oil renews badly enough for a small tool to stall. */
const slurry = { ...waterFace(conditions, bare.tool), carrier: CARRIERS.oil };
const area = (Math.PI / 4) * 2e-3 ** 2;
const pressed = (pressure: number) => ({ ...bare, slurry, drive: { kind: 'load', load: pressure * area } as const });
/** Stall at the entry and at depth, of the mean field (Pa). */
const at = (depth: number) => estimate({ ...settingOf(bare), depth, slurry }).stallPressure as number;
const between = (at(1e-6) + at(0.15e-3)) / 2;
const cut = finishedCut(pressed(between));

test('a load between the stall at the entry and that at depth stalls the cut on the way, at a depth it tells', () => {
  const end = endOf(cut);
  expect(end.stalled).toBe(true);
  expect(end.stallDepth).toBeGreaterThan(0.01e-3);
  expect(end.stallDepth).toBeLessThan(0.145e-3);
  expect(Math.abs(at(end.stallDepth as number) / between - 1)).toBeLessThan(0.02);
});

test('a stalled cut is not chased: where next to nothing is left of the rate it ends at the depth of the stall', () => {
  const { stallDepth, gaveUp, depth } = endOf(cut);
  expect(gaveUp).toBe(true);
  expect(Math.abs(depth / (stallDepth as number) - 1)).toBeLessThan(0.01);
  expect(depth).toBeLessThan(bare.depth);
  expect(cut.records.at(-1)?.stalled).toBe(true);
  expect(cut.records.slice(0, -1).every(({ stalled }) => !stalled)).toBe(true);
  expect(measureCut(cut, buildBricks(cut.model, cut.state), bare.tool).stalledAt).toBe(stallDepth);
});

test('where more is left it goes on with the starved face, at a load that is not reached and a lower rate', () => {
  const wide = cutSpecOf({ conditions, diameter: 6e-3, depth: 14e-6, columnsPerRadius: 1, columnBudget: 1e5 });
  const water = waterFace(conditions, wide.tool);
  const stall = estimate({ ...settingOf(wide), depth: 1e-6, slurry: water }).stallPressure as number;
  const load = (pressure: number) => ({ kind: 'load', load: (pressure * Math.PI * 6e-3 ** 2) / 4 }) as const;
  const starved = finishedCut({ ...wide, slurry: water, drive: load(1.3 * stall) });
  const sound = finishedCut({ ...wide, slurry: water, drive: load(0.7 * stall) });
  expect(endOf(starved).stalled).toBe(true);
  expect(starved.records.length).toBeGreaterThan(5);
  for (const { sampledLoad, setLoad } of starved.records) expect(sampledLoad).toBeLessThan(0.9 * setLoad);
  expect(starved.records.at(-1)?.rate).toBeLessThan(sound.records.at(-1)?.rate as number);
});

test('a load far above the stall, and one that no fresh grit carries, end without an error and say so', () => {
  const heavy = endOf(finishedCut({ ...pressed(3e6), depth: 4e-6 }));
  expect(heavy.stalled).toBe(true);
  expect(heavy.stallDepth).toBe(0);
  const fresh = endOf(finishedCut({ ...cutSpecOf({ pressure: 1e9, depth: 5e-6, diameter: 0.6e-3 }) }));
  expect(fresh.stalled).toBe(true);
});

test('a stalled cut resumes to the bits of a whole one', () => {
  const first = makeCut(pressed(between));
  const runner = serialRunner(createFastKernel(), first.model, first.state);
  while (!endOf(first).stalled) runCut(first, runner, 1);
  const resumed = makeCut(pressed(between));
  restoreState(resumed.state, saveState(first.state));
  while (!runCut(resumed, serialRunner(createFastKernel(), resumed.model, resumed.state), 50));
  expect(cutHash(resumed)).toBe(cutHash(cut));
});
