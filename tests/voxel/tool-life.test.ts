import { expect, test } from 'vitest';
import { cutHash, endOf, makeCut, runCut } from '#src/voxel/cut.ts';
import { COEFFICIENT } from '#src/voxel/kernels/contract.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { restoreState, SCALAR, saveState } from '#src/voxel/state.ts';
import { conditionsOf, cutSpecOf, works } from '../support/conditions.ts';
import { finishedCut } from '../support/cut-run.ts';

const UM = 1e-6;
/** Alumina wears the tool fastest. */
const alumina = conditionsOf({ work: works.alumina });
const spec = cutSpecOf({ conditions: alumina, pressure: 0.3e6, depth: 0.15e-3, toolLife: { compensated: true } });
const worn = finishedCut(spec);

test('the edge rounds as the tool loses length, and the worn edge is the one the floor is cut by', () => {
  const radii = worn.records.map(({ toolEdgeRadius }) => toolEdgeRadius);
  expect(radii.at(-1)).toBeGreaterThan(spec.edgeRadius);
  radii.forEach((radius, k) => {
    expect(radius).toBeGreaterThanOrEqual(radii[k - 1] ?? 0);
  });
  const radius = worn.state.scalars[SCALAR.edgeRadius] as number;
  expect(worn.state.zones.zones[0]?.coefficients[COEFFICIENT.edgeRadius]).toBe(radius);
  expect(worn.state.means.lift).toBe(radius);
  expect(worn.state.scalars[SCALAR.sideLoss]).toBeGreaterThan(0);
  // the edge begins to curve further in by what it has grown and by what the side has lost
  const fresh = makeCut(spec).state;
  expect(worn.state.faceArea).toBeLessThan(fresh.faceArea);
  const moved = radius - spec.edgeRadius + (worn.state.scalars[SCALAR.sideLoss] as number);
  const c = fresh.floor.edges.findIndex((edge) => edge > 40 * UM && edge < 50 * UM);
  expect((worn.state.floor.edges[c] as number) - (fresh.floor.edges[c] as number)).toBeCloseTo(moved, 9);
});

test('length that is not made up for leaves the floor shallower by itself', () => {
  const shallow = finishedCut({ ...spec, toolLife: { compensated: false } });
  const lost = shallow.state.scalars[SCALAR.toolLost] as number;
  expect(lost).toBeGreaterThan(3 * UM);
  // the last step may run on by a fifth of the load's e-fold height
  expect(Math.abs(endOf(shallow).depth + lost - spec.depth)).toBeLessThan(1 * UM);
  expect(endOf(worn).depth).toBeGreaterThanOrEqual(spec.depth);
});

test('a tool that runs out ends the cut there and says so', () => {
  const cut = finishedCut({ ...spec, toolLife: { compensated: true, length: 2 * UM } });
  const end = endOf(cut);
  expect(end.ranOut).toBe(true);
  expect(end.depth).toBeLessThan(spec.depth);
  const lost = cut.state.scalars[SCALAR.toolLost] as number;
  expect(lost).toBeGreaterThanOrEqual(2 * UM);
  expect(lost).toBeLessThan(2.2 * UM);
  expect(endOf(worn).ranOut).toBe(false);
});

test('a cut whose tool wears resumes to the bits of a whole one, the edge as it was when saved', () => {
  const first = makeCut(spec);
  const runner = serialRunner(createFastKernel(), first.model, first.state);
  while ((first.state.scalars[SCALAR.edgeRadius] as number) === spec.edgeRadius) runCut(first, runner, 1);
  const resumed = makeCut(spec);
  restoreState(resumed.state, saveState(first.state));
  runCut(resumed, serialRunner(createFastKernel(), resumed.model, resumed.state), 1e6);
  expect(cutHash(resumed)).toBe(cutHash(worn));
});
