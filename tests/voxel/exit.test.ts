import { expect, test } from 'vitest';
import { measureCut } from '#src/planning/measure.ts';
import { solidAt } from '#src/voxel/bricks.ts';
import { endOf } from '#src/voxel/cut.ts';
import { OUT_OF_REACH } from '#src/voxel/kernels/contract.ts';
import { buildBricks, removedVolume } from '#src/voxel/solid.ts';
import { SCALAR } from '#src/voxel/state.ts';
import { conditionsOf, cutSpecOf, grades, works } from '../support/conditions.ts';
import { finishedCut } from '../support/cut-run.ts';

const THICKNESS = 0.4e-3;
const UM = 1e-6;

const plate = (exit: { backing: boolean; loadShare: number; from: number }, changes = {}) => {
  const conditions = conditionsOf({ work: works.quartz });
  const spec = { conditions, pressure: 0.3e6, depth: THICKNESS, exit: { ...exit, thickness: THICKNESS }, ...changes };
  const cut = finishedCut(cutSpecOf(spec));
  const bricks = buildBricks(cut.model, cut.state);
  return { cut, bricks, measures: measureCut(cut, bricks, cut.model.spec.tool) };
};
const free = plate({ backing: false, loadShare: 1, from: 0 });
const eased = plate({ backing: false, loadShare: 0.3, from: 0.15e-3 });
const backed = plate({ backing: true, loadShare: 0.3, from: 0.15e-3 });

test('without a backing the last ligament breaks out, thicker under more load, and takes a ring with it', () => {
  for (const { cut, measures } of [free, eased]) {
    const broke = cut.state.scalars[SCALAR.brokeThrough] as number;
    expect(broke).toBeGreaterThan(0.8 * THICKNESS);
    expect(broke).toBeLessThan(THICKNESS);
    expect(endOf(cut).through).toBe(true);
    expect(measures.depth).toBe(THICKNESS);
    // ring of the ligament's thickness at least (common practice, from memory)
    expect(measures.exitChip?.width).toBeGreaterThan(THICKNESS - broke);
  }
  const ligament = ({ cut }: typeof free) => THICKNESS - (cut.state.scalars[SCALAR.brokeThrough] as number);
  // a ligament as thin as its deepest crack breaks under any load; steps of a fifth of the load's e-fold height
  expect(ligament(eased)).toBeLessThan(ligament(free) + 1 * UM);
  const heavy = plate({ backing: false, loadShare: 1, from: 0 }, { pressure: 2e6, diameter: 2e-3, columnBudget: 1e5 });
  expect(ligament(heavy)).toBeGreaterThan(1.2 * ligament(free));
});

test('with a backing the cut goes on through the exit face until the tool is out at its full width', () => {
  const { cut, measures } = backed;
  expect(-(cut.state.scalars[SCALAR.floorMean] as number)).toBeGreaterThan(THICKNESS + cut.model.spec.edgeRadius);
  expect(endOf(cut).through).toBe(true);
  expect(measures.exitChip?.width).toBeGreaterThan(0);
  expect(measures.exitChip?.width).toBeLessThanOrEqual(free.measures.exitChip?.width as number);
});

test('the load is taken back before the exit, and the hits add up to what is set', () => {
  const near = eased.cut.records.filter(({ depth }) => depth > THICKNESS - 0.14e-3 && depth < THICKNESS - 0.02e-3);
  const far = eased.cut.records.filter(({ depth }) => depth < THICKNESS - 0.16e-3);
  const full = far[0]?.setLoad as number;
  expect(near.length).toBeGreaterThan(5);
  for (const { setLoad } of near) expect(setLoad).toBeCloseTo(0.3 * full, 9);
  const sampled = near.slice(2).reduce((sum, { sampledLoad }) => sum + sampledLoad / (near.length - 2), 0);
  // some 1e4 hits: good to a few per cent
  expect(Math.abs(sampled / (0.3 * full) - 1)).toBeLessThan(0.05);
});

test('bricks outside the plate are air, the hole goes right through, and the exit has a size but no floor', () => {
  for (const { cut, bricks, measures } of [free, backed]) {
    const middle = [Math.round(-bricks.x0 / bricks.pitch), Math.round(-bricks.y0 / bricks.pitch)] as const;
    const below = Math.ceil(THICKNESS / bricks.pitch);
    for (let k = 0; k < below; k++) expect(solidAt(bricks, ...middle, k)).toBe(0);
    expect(solidAt(bricks, 2, 2, 3)).toBe(255);
    expect(solidAt(bricks, 2, 2, below)).toBe(0);
    expect(bricks.nz * bricks.pitch).toBeGreaterThanOrEqual(THICKNESS * (1 - 1e-9));
    // a cylinder of the tool at least, one of the tool and three grains of overcut at most, and the chips' rings
    const cylinder = (r: number) => Math.PI * r * r * THICKNESS;
    const chip = measures.exitChip as { width: number; depth: number };
    const ring = 2 * Math.PI * (0.6e-3 + chip.width) * chip.width * chip.depth;
    expect(removedVolume(bricks)).toBeGreaterThan(cylinder(0.5e-3));
    expect(removedVolume(bricks)).toBeLessThan(cylinder(0.5e-3 + 3 * grades.F320.massMedian) + ring);
    expect(measures.floorSize[0]).toBeGreaterThan(1e-3);
    expect(measures.floorSize[0]).toBeLessThan(1e-3 + 6 * grades.F320.massMedian);
    for (const value of [measures.floorFlatness, measures.cornerRadius, measures.floorHump]) expect(value).toBeNaN();
    const open = cut.state.walls[0]?.field.heights.filter((h) => h > OUT_OF_REACH) ?? [];
    expect(open.length).toBeGreaterThan(0);
  }
});

test('a pilot breaks through first and the shoulder follows it to the depth asked for', () => {
  const face = { kind: 'stepped', pilot: { kind: 'circle', diameter: 0.5e-3 }, step: 0.3e-3 } as const;
  const { cut, bricks } = plate({ backing: false, loadShare: 1, from: 0 }, { face, depth: THICKNESS + 0.05e-3 });
  expect(cut.state.scalars[SCALAR.brokeThrough]).toBeGreaterThan(0.8 * THICKNESS);
  expect(-(cut.state.scalars[SCALAR.floorMean] as number)).toBeGreaterThan(THICKNESS + 0.04e-3);
  const i = Math.round((0.4e-3 - bricks.x0) / bricks.pitch);
  const j = Math.round(-bricks.y0 / bricks.pitch);
  const shoulder = THICKNESS + 0.05e-3 - 0.3e-3;
  expect(solidAt(bricks, i, j, Math.floor((shoulder - 20 * UM) / bricks.pitch))).toBe(0);
  expect(solidAt(bricks, i, j, Math.floor((shoulder + 20 * UM) / bricks.pitch))).toBe(255);
});
