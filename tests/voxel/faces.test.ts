import { expect, test } from 'vitest';
import { makeOutline } from '#src/base/outline.ts';
import { measureCut } from '#src/planning/measure.ts';
import { cutHash, makeCut, runCut } from '#src/voxel/cut.ts';
import { OUT_OF_REACH } from '#src/voxel/kernels/contract.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { piecesOf, runTask, serialRunner, tileWork } from '#src/voxel/runner.ts';
import { buildBricks } from '#src/voxel/solid.ts';
import { restoreState, SCALAR, saveState } from '#src/voxel/state.ts';
import { surfaceDepths } from '#src/voxel/surface.ts';
import { cutSpecOf, grades } from '../support/conditions.ts';
import { finishedCut } from '../support/cut-run.ts';

const UM = 1e-6;
const GRAIN = grades.F320.massMedian;

/** Mean depth of the solid by distance from the middle, between two radii (m). */
function depthBetween(bricks: ReturnType<typeof buildBricks>, from: number, to: number): number {
  const depths = surfaceDepths(bricks);
  let sum = 0;
  let n = 0;
  depths.forEach((depth, c) => {
    const r = Math.hypot(
      bricks.x0 + (c % bricks.nx) * bricks.pitch,
      bricks.y0 + Math.floor(c / bricks.nx) * bricks.pitch,
    );
    if (r < from || r >= to) return;
    sum += depth;
    n++;
  });
  return sum / n;
}

test('a cone sinks from its tip on: its contact grows, its rate falls, and the load is borne all the way', () => {
  const cut = finishedCut(cutSpecOf({ face: { kind: 'cone', angle: Math.PI / 2 }, depth: 0.42e-3 }));
  const rates = cut.records.map(({ rate }) => rate);
  const mean = (from: number, to: number) => rates.slice(from, to).reduce((sum, rate) => sum + rate / (to - from), 0);
  const n = rates.length;
  expect(mean(Math.floor(0.3 * n), Math.floor(0.4 * n))).toBeGreaterThan(2 * mean(Math.floor(0.9 * n), n));
  const areas = cut.records.map(({ contactArea }) => contactArea);
  expect(areas.at(-1)).toBeGreaterThan(3 * (areas[Math.floor(0.4 * n)] as number));
  // once more than a tenth of the face is in contact, hits are many enough to tell
  const late = cut.records.filter(({ contactArea }) => contactArea > 0.1 * cut.model.outline.area);
  const load = late.reduce((sum, { sampledLoad, setLoad }) => sum + sampledLoad / setLoad / late.length, 0);
  expect(Math.abs(load - 1)).toBeLessThan(0.03);
  expect(cut.state.scalars[SCALAR.stalled]).toBe(0);

  // the cavity is the cone: as deep as it is near the middle, one to one
  const bricks = buildBricks(cut.model, cut.state);
  const slope = (depthBetween(bricks, 90 * UM, 110 * UM) - depthBetween(bricks, 240 * UM, 260 * UM)) / (150 * UM);
  expect(Math.abs(slope - 1)).toBeLessThan(0.05);
  expect(Math.abs(depthBetween(bricks, 90 * UM, 110 * UM) - 0.32e-3)).toBeLessThan(15 * UM);
  const measures = measureCut(cut, bricks, cut.model.spec.tool);
  for (const value of [measures.floorFlatness, measures.cornerRadius, measures.taper, measures.floorSize[0]]) {
    expect(value).toBeNaN();
  }
  // no wall yet: the opening at a tenth of the depth is the cone's, twice as wide as it is high there
  expect(Math.abs((measures.entrySize[0] as number) - 2 * 0.9 * 0.42e-3)).toBeLessThan(2 * GRAIN);
});

test('a ball leaves a ball, moved down by the gap', () => {
  const cut = finishedCut(cutSpecOf({ face: { kind: 'sphere', radius: 1.5e-3 }, depth: 0.12e-3, diameter: 1e-3 }));
  const bricks = buildBricks(cut.model, cut.state);
  const sag = (r: number) => 1.5e-3 - Math.sqrt(1.5e-3 ** 2 - r ** 2);
  for (const r of [100 * UM, 200 * UM, 350 * UM]) {
    const fallen = depthBetween(bricks, 0, 40 * UM) - depthBetween(bricks, r - 10 * UM, r + 10 * UM);
    // means over a ring, of a floor rough to about 2 um
    expect(Math.abs(fallen - sag(r))).toBeLessThan(4 * UM);
  }
});

test('a stepped tool cuts its pilot first and both after, and pilot hole and cavity each have an overcut', () => {
  const pilot = { kind: 'circle', diameter: 0.5e-3 } as const;
  const face = { kind: 'stepped', pilot, step: 0.2e-3 } as const;
  const cut = finishedCut(cutSpecOf({ face, depth: 0.38e-3 }));
  const area = (depth: number) => cut.records.find((record) => record.depth > depth)?.contactArea as number;
  // what bears beside the pilot's own area is its curved edge
  expect(area(0.08e-3) / makeOutline(pilot).area).toBeGreaterThan(0.95);
  expect(area(0.08e-3) / makeOutline(pilot).area).toBeLessThan(1.25);
  expect(area(0.3e-3)).toBe(cut.model.outline.area);
  const bricks = buildBricks(cut.model, cut.state);
  expect(Math.abs(depthBetween(bricks, 0, 0.2e-3) - 0.38e-3)).toBeLessThan(5 * UM);
  expect(Math.abs(depthBetween(bricks, 0.34e-3, 0.46e-3) - 0.18e-3)).toBeLessThan(5 * UM);
  const measures = measureCut(cut, bricks, cut.model.spec.tool);
  for (const [size, tool] of [
    [measures.entrySize[0] as number, 1e-3],
    [measures.floorSize[0] as number, pilot.diameter],
  ] as const) {
    expect((size - tool) / 2).toBeGreaterThan(0.75 * GRAIN);
    expect((size - tool) / 2).toBeLessThan(3 * GRAIN);
  }
});

test('a shaped cut resumed gives the bits of a whole one, and heights never rise', () => {
  const spec = cutSpecOf({ face: { kind: 'cone', angle: 2 }, depth: 0.1e-3 });
  const whole = makeCut(spec);
  const start = whole.state.floor.heights.slice();
  runCut(whole, serialRunner(createFastKernel(), whole.model, whole.state), 1e6);
  expect(whole.state.floor.heights.every((h, c) => h <= (start[c] as number))).toBe(true);
  const first = makeCut(spec);
  runCut(first, serialRunner(createFastKernel(), first.model, first.state), 45);
  const resumed = makeCut(spec);
  restoreState(resumed.state, saveState(first.state));
  runCut(resumed, serialRunner(createFastKernel(), resumed.model, resumed.state), 1e6);
  expect(cutHash(resumed)).toBe(cutHash(whole));
});

test('tiles of one colour may be hit in any order, whatever the face and however its edge wears: the same bits', () => {
  const spec = cutSpecOf({
    face: { kind: 'stepped', pilot: { kind: 'circle', diameter: 0.5e-3 }, step: 0.03e-3 },
    depth: 0.06e-3,
    toolLife: { compensated: false },
  });
  const run = (backward: boolean) => {
    const cut = makeCut(spec);
    const kernel = createFastKernel();
    const work = tileWork(piecesOf(cut.model, cut.state));
    const runner = {
      run() {
        for (const tasks of work.colours) {
          for (const task of backward ? tasks.slice().reverse() : tasks) runTask(kernel, work, task);
        }
      },
    };
    while (!runCut(cut, runner, 100));
    return cutHash(cut);
  };
  expect(run(true)).toBe(run(false));
});

test('what the tool does not reach stays as it was: under the far part of a cone nothing is lowered, not even by thrown grains', () => {
  const spec = cutSpecOf({ face: { kind: 'cone', angle: Math.PI / 2 }, depth: 0.1e-3 });
  const cut = finishedCut(spec);
  const start = makeCut(spec).state.floor.heights;
  const { heights, nx } = cut.state.floor;
  let touched = 0;
  heights.forEach((h, c) => {
    const r = Math.hypot(
      cut.model.x0 + (c % nx) * cut.model.floor.dx,
      cut.model.y0 + Math.floor(c / nx) * cut.model.floor.dy,
    );
    // the cone is 100 um wide at the entry face; grains and chips reach a grain or two further
    if (r > 0.1e-3 + 3 * grades.F320.largest && h !== start[c]) touched++;
  });
  expect(touched).toBe(0);
});

test('several islands are cut at once, each with a wall of its own, and their sizes are those of the box around all', () => {
  const square = (cx: number, cy: number, a: number) => {
    const corners = [
      [cx + a, cy - a],
      [cx + a, cy + a],
      [cx - a, cy + a],
      [cx - a, cy - a],
    ] as const;
    return { x: cx - a, y: cy - a, pieces: corners.map(([x, y]) => ({ kind: 'line' as const, x, y })) };
  };
  const tool = { kind: 'path' as const, loops: [square(-0.5e-3, 0, 0.2e-3), square(0.5e-3, 0.1e-3, 0.25e-3)] };
  const cut = finishedCut(
    cutSpecOf({ tool, drive: { kind: 'load', load: 0.15e6 * makeOutline(tool).area }, depth: 0.15e-3 }),
  );
  const gaps = cut.state.walls.map(({ field }) => {
    const open = Array.from(field.heights).filter((h) => h > OUT_OF_REACH);
    return -open.reduce((sum, h) => sum + h / open.length, 0);
  });
  expect(gaps.length).toBe(2);
  for (const gap of gaps) {
    expect(gap).toBeGreaterThan(0.75 * GRAIN);
    expect(gap).toBeLessThan(3 * GRAIN);
  }
  const bricks = buildBricks(cut.model, cut.state);
  const { entrySize } = measureCut(cut, bricks, tool);
  // the wall's outermost points, so an overcut and its roughness on either side
  for (const [k, nominal] of [1.45e-3, 0.55e-3].entries()) {
    const over = ((entrySize[k] as number) - nominal) / 2;
    expect(over).toBeGreaterThan(GRAIN);
    expect(over).toBeLessThan(4 * GRAIN);
  }
});
