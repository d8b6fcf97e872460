import { expect, test } from 'vitest';
import { estimate } from '#src/physics/estimate.ts';
import { cutHash, makeCut, runCut, stallMarginOf } from '#src/voxel/cut.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { restoreState, SCALAR, saveState } from '#src/voxel/state.ts';
import { conditionsOf, cutSpecOf, works } from '../support/conditions.ts';
import { settingOf, steadyCut } from '../support/cut-run.ts';
import { waterFace } from '../support/slurry.ts';

const UM = 1e-6;
const conditions = conditionsOf({ work: works.sodaLime });

test('with the slurry balanced, cut and estimate agree well below the stall, and both are slower than with fresh grit', () => {
  for (const pressure of [0.15e6, 0.4e6]) {
    const bare = cutSpecOf({ conditions, diameter: 3e-3, pressure, depth: 60 * UM });
    const slurry = waterFace(conditions, bare.tool);
    const cut = steadyCut({ ...bare, slurry }, 20 * UM);
    const mean = estimate({ ...settingOf(bare), slurry });
    expect(mean.stallMargin ?? 0).toBeGreaterThan(0.4);
    expect(Math.abs(cut.load - 1)).toBeLessThan(0.02);
    expect(Math.abs(cut.rate / mean.rate - 1)).toBeLessThan(0.2);
    expect(Math.abs(cut.engaged / mean.engaged - 1)).toBeLessThan(0.2);
    expect(Math.abs(cut.sa / mean.floorRa - 1)).toBeLessThan(0.25);
    expect(cut.rate).toBeLessThan(0.95 * estimate(settingOf(bare)).rate);
  }
});

test('a cut whose slurry is renewed on the way resumes to the bits of a whole one', () => {
  const bare = cutSpecOf({ conditions, depth: 40 * UM });
  const spec = { ...bare, slurry: waterFace(conditions, bare.tool) };
  const whole = makeCut(spec);
  runCut(whole, serialRunner(createFastKernel(), whole.model, whole.state), 1e6);
  const first = makeCut(spec);
  runCut(first, serialRunner(createFastKernel(), first.model, first.state), 31);
  const resumed = makeCut(spec);
  restoreState(resumed.state, saveState(first.state));
  runCut(resumed, serialRunner(createFastKernel(), resumed.model, resumed.state), 1e6);
  expect(cutHash(resumed)).toBe(cutHash(whole));
  expect(resumed.state.scalars[SCALAR.freshShare]).toBeLessThan(1);
  // a 1 mm tool has no stall below the highest pressure followed
  expect(stallMarginOf(whole)).toBeNull();
});
