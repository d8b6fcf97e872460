import { expect, test } from 'vitest';
import { measureCut } from '#src/planning/measure.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import { type Cut, cutHash, makeCut, runCut } from '#src/voxel/cut.ts';
import { OUT_OF_REACH } from '#src/voxel/kernels/contract.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import type { CutSpec } from '#src/voxel/model.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { buildBricks, removedVolume } from '#src/voxel/solid.ts';
import { restoreState, SCALAR, saveState } from '#src/voxel/state.ts';
import { surfaceDepths } from '#src/voxel/surface.ts';
import { conditionsOf, cutSpecOf, grades } from '../support/conditions.ts';
import { finishedCut, steadyCut } from '../support/cut-run.ts';

const UM = 1e-6;

/** Roughing with F220, and a finishing tool of this diameter with F320 in its cavity. */
const roughing = finishedCut(
  cutSpecOf({ conditions: conditionsOf({ grit: grades.F220 }), diameter: 0.8e-3, depth: 0.2e-3 }),
);
const roughed = buildBricks(roughing.model, roughing.state);
const finishing = (changes: Partial<CutSpec> & { diameter?: number } = {}): CutSpec =>
  cutSpecOf({
    diameter: 1.1e-3,
    depth: 0.22e-3,
    pass: 1,
    drive: { kind: 'load', load: 0.1 },
    before: roughed,
    ...changes,
  });
const finish = finishedCut(finishing());
const finished = buildBricks(finish.model, finish.state);

test('what two passes remove adds up under the flat face to 0.1 %, and no column is fuller after the second', () => {
  const { model, state } = finish;
  const begun = makeCut(model.spec).state.floor.heights;
  const after = surfaceDepths(finished);
  let taken = 0;
  let grown = 0;
  let worst = 0;
  for (let c = 0; c < begun.length; c++) {
    const i = Math.round((model.x0 + (c % model.floor.nx) * model.floor.dx - finished.x0) / finished.pitch);
    const j = Math.round((model.y0 + Math.floor(c / model.floor.nx) * model.floor.dy - finished.y0) / finished.pitch);
    const depth = after[j * finished.nx + i] as number;
    worst = Math.max(worst, -(begun[c] as number) - depth);
    if ((state.floor.edges[c] as number) > 0) continue;
    taken += (begun[c] as number) - (state.floor.heights[c] as number);
    grown += depth + (begun[c] as number);
  }
  expect(Math.abs(grown / taken - 1)).toBeLessThan(1e-3);
  // fractions are stored in 255 parts of a voxel
  expect(worst).toBeLessThan(finished.pitch / 100);
  expect(removedVolume(finished)).toBeGreaterThan(removedVolume(roughed));
});

test('an earlier cavity laid under a cut that removes next to nothing keeps its volume to 0.1 %, at any pitch', () => {
  for (const pitch of [undefined, 0.77 * roughed.pitch, 1.4 * roughed.pitch]) {
    const spec = finishing({ depth: 1e-9, ...(pitch !== undefined && { pitch }) });
    const { model, state } = makeCut(spec);
    const same = buildBricks(model, state);
    expect(Math.abs(removedVolume(same) / removedVolume(roughed) - 1)).toBeLessThan(1e-3);
  }
});

test('a finishing pass takes the damage of the roughing where its stock is deeper than that, and says where it is not', () => {
  const left = measureCut(finish, finished, finish.model.spec.tool).earlierDamage;
  // 150 um of stock on the side less the roughing's overcut: no crack of 0.1 mm is left in the wall; 20 um on the floor
  expect(left?.wall.share).toBe(0);
  expect(left?.floor.share).toBeGreaterThan(0.05);
  expect(left?.floor.deepest).toBeGreaterThan(0);
  const deep = finishedCut(finishing({ depth: 0.32e-3 }));
  const gone = measureCut(deep, buildBricks(deep.model, deep.state), finish.model.spec.tool).earlierDamage;
  expect(gone?.floor.share).toBe(0);
  expect(measureCut(roughing, roughed, roughing.model.spec.tool).earlierDamage).toBeNull();
});

test('a pass in an empty cavity is the pass in untouched work: rate and load agree though it starts on a surface', () => {
  const empty: BrickField = { ...roughed, table: new Int32Array(roughed.table.length).fill(-1), count: 0 };
  const spec = cutSpecOf({ diameter: 1.5e-3, depth: 60 * UM });
  const plain = steadyCut(spec, 20 * UM);
  const laid = steadyCut({ ...spec, before: empty, pitch: plain.cut.model.floor.dx }, 20 * UM);
  // two cuts of 1e5 hits each, good to 1.5 % apiece
  expect(Math.abs(laid.rate / plain.rate - 1)).toBeLessThan(0.04);
  expect(Math.abs(laid.load - 1)).toBeLessThan(0.02);
  expect(laid.cut.state.scalars[SCALAR.contactArea]).toBe(laid.cut.model.outline.area);
});

test('the same tool again is through the cavity it left in no time, and its wall opens on from where it was', () => {
  const first = finishedCut(cutSpecOf({ depth: 0.15e-3 }));
  const before = buildBricks(first.model, first.state);
  const again = makeCut(cutSpecOf({ depth: 0.25e-3, pass: 1, before }));
  const { scalars, walls, floor } = again.state;
  // its edge meets the fillet first
  expect(scalars[SCALAR.startDepth]).toBeGreaterThan(0.05e-3);
  const start = floor.heights.slice();
  const wall = walls[0] as Cut['state']['walls'][number];
  const own = first.state.walls[0] as Cut['state']['walls'][number];
  const rows = (field: typeof wall.field) => Math.floor(0.04e-3 / field.dy);
  const gap = ({ field }: typeof wall) => {
    const open = Array.from(field.heights.subarray(0, rows(field) * field.nx)).filter((h) => h > OUT_OF_REACH);
    return -open.reduce((sum, h) => sum + h, 0) / open.length;
  };
  const runner = serialRunner(createFastKernel(), again.model, again.state);
  while ((scalars[SCALAR.openRows] as number) === 0) runCut(again, runner, 1);
  expect(-(scalars[SCALAR.floorMean] as number)).toBeGreaterThan(0.14e-3);
  expect(scalars[SCALAR.time]).toBeLessThan(0.1 * (first.state.scalars[SCALAR.time] as number));
  // voxels show the wall to about a voxel
  expect(Math.abs(gap(wall) - gap(own))).toBeLessThan(1.5 * before.pitch);
  runCut(again, runner, 1e6);
  expect(floor.heights.every((h, c) => h <= (start[c] as number))).toBe(true);
});

test('a second pass in pieces, or resumed, gives the bits of a whole one', () => {
  const spec = finishing({ depth: 60 * UM });
  const whole = finishedCut(spec);
  const first = makeCut(spec);
  runCut(first, serialRunner(createFastKernel(), first.model, first.state), 33);
  const resumed = makeCut(spec);
  restoreState(resumed.state, saveState(first.state));
  while (!runCut(resumed, serialRunner(createFastKernel(), resumed.model, resumed.state), 7));
  expect(cutHash(resumed)).toBe(cutHash(whole));
});
