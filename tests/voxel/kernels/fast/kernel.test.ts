import { expect, test } from 'vitest';
import { SUM, SUMS } from '#src/voxel/kernels/contract.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { createReferenceKernel } from '#src/voxel/kernels/reference/kernel.ts';
import { buildTables } from '#src/voxel/tables.ts';
import { kernelSpec, testFloor, testStep } from '../../../specs/kernel.ts';
import { conditionsOf } from '../../../support/conditions.ts';
import { seededNormal } from '../../../support/random.ts';

kernelSpec(createFastKernel, 32);

test('from the same floor and draws, the fast kernel does what the reference does, hit by hit', () => {
  const tables = buildTables(conditionsOf(), { edgeRadius: 30e-6, runout: 2e-6 }).kernel;
  const normal = seededNormal(9);
  const heights = Float32Array.from({ length: 128 * 128 }, () => 1.4e-6 * normal() - 0.5e-3);
  const rough = (i: number, j: number) => heights[j * 128 + i] as number;
  const fast = testFloor(32, rough);
  const reference = testFloor(64, rough);
  const step = testStep(-0.5e-3 + 51e-6, 60);
  for (let tile = 0; tile < 4; tile++) {
    createFastKernel().hitFloor(fast, tables, step, tile);
    createReferenceKernel().hitFloor(reference, tables, step, tile);
  }
  for (let tile = 0; tile < 4; tile++) {
    for (const sum of [SUM.candidates, SUM.engaged, SUM.chips]) {
      expect(fast.sums[tile * SUMS + sum]).toBe(reference.sums[tile * SUMS + sum]);
    }
    // float32 heights round at 3e-11 m half a millimetre down, and loads change by a part in 1e5 with that
    for (const sum of [SUM.load, SUM.impulse, SUM.credited, SUM.radius, SUM.depth, SUM.dentRemoved]) {
      const expected = reference.sums[tile * SUMS + sum] as number;
      expect(Math.abs((fast.sums[tile * SUMS + sum] as number) - expected)).toBeLessThan(1e-4 * expected);
    }
  }
  let worst = 0;
  fast.heights.forEach((h, k) => {
    worst = Math.max(worst, Math.abs(h - (reference.heights[k] as number)));
  });
  // a chip's depth times a part in 1e5, and the rounding of float32 heights
  expect(worst).toBeLessThan(3e-10);
});
