import { bench, describe } from 'vitest';
import { makeOutline } from '#src/base/outline.ts';
import { estimate, estimateTables, loadCurve } from '#src/physics/estimate.ts';
import { makeCut, runCut } from '#src/voxel/cut.ts';
import type { Kernel } from '#src/voxel/kernels/contract.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { createReferenceKernel } from '#src/voxel/kernels/reference/kernel.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { buildBricks } from '#src/voxel/solid.ts';
import { restoreState, saveState } from '#src/voxel/state.ts';
import { conditionsOf, cutSpecOf } from '../support/conditions.ts';
import { settingOf } from '../support/cut-run.ts';

/** A cut brought to a settled floor, then put back before each sample: seeded, warmed, restored. */
function settled(kernel: Kernel, precision: 32 | 64) {
  const cut = makeCut(cutSpecOf({ diameter: 2e-3, depth: 1e-3, precision }));
  const runner = serialRunner(kernel, cut.model, cut.state);
  runCut(cut, runner, 60);
  const saved = saveState(cut.state);
  return () => {
    restoreState(cut.state, saved);
    runCut(cut, runner, 8);
  };
}

describe('eight steps of a settled 2 mm floor', () => {
  const fast = settled(createFastKernel(), 32);
  const reference = settled(createReferenceKernel(), 64);
  bench('fast kernel', fast, { time: 1500 });
  bench('reference kernel', reference, { time: 1500 });
});

describe('estimate', () => {
  const spec = cutSpecOf({ diameter: 12.7e-3, depth: 5e-3 });
  const setting = settingOf(spec);
  const tables = estimateTables(conditionsOf());
  bench('one setting, tables included', () => void estimate(setting), { time: 1500 });
  bench('one setting on shared tables', () => void estimate(setting, tables), { time: 1500 });
  bench('a load curve of ten pressures on shared tables', () => {
    loadCurve(
      tables,
      Array.from({ length: 10 }, (_, k) => 2e4 * (k + 1)),
    );
  });
});

describe('from fields to voxels', () => {
  const cut = makeCut(cutSpecOf({ diameter: 2e-3, depth: 0.1e-3 }));
  runCut(cut, serialRunner(createFastKernel(), cut.model, cut.state), 1e6);
  bench('bricks of a 2 mm cavity', () => void buildBricks(cut.model, cut.state), { time: 1500 });
  bench('outline of a slot', () => void makeOutline({ kind: 'slot', length: 5e-3, width: 1e-3 }));
});
