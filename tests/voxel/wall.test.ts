import { expect, test } from 'vitest';
import { makeOutline, nearest } from '#src/base/outline.ts';
import { type Cut, makeCut, runCut } from '#src/voxel/cut.ts';
import { OUT_OF_REACH } from '#src/voxel/kernels/contract.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import type { CutSpec } from '#src/voxel/model.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { buildBricks, removedVolume } from '#src/voxel/solid.ts';
import { SCALAR } from '#src/voxel/state.ts';
import { surfaceDepths, wallPoints } from '#src/voxel/surface.ts';
import { conditionsOf, cutSpecOf, grades } from '../support/conditions.ts';
import { seededUniform } from '../support/random.ts';

function finished(spec: CutSpec): Cut {
  const cut = makeCut(spec);
  runCut(cut, serialRunner(createFastKernel(), cut.model, cut.state), 1e6);
  return cut;
}

/** Mean side gap over the open rows between two shares of the depth (m). */
function meanGap(cut: Cut, from: number, to: number): number {
  const { field } = cut.state.walls[0] as Cut['state']['walls'][number];
  let sum = 0;
  let n = 0;
  for (let row = 0; row < field.ny; row++) {
    const share = ((row + 0.5) * field.dy) / cut.model.spec.depth;
    if (share < from || share > to) continue;
    for (let i = 0; i < field.nx; i++) {
      const h = field.heights[row * field.nx + i] as number;
      if (h <= OUT_OF_REACH) continue;
      sum -= h;
      n++;
    }
  }
  return sum / n;
}

const glass = finished(cutSpecOf({ depth: 0.5e-3 }));

test('overcut at the entry is one to three grain sizes per side, and larger than near the floor: taper', () => {
  // 0.75 to 3 d50 covers the published 1.5 to 4 d50 read as diametral or radial (from memory)
  const entry = meanGap(glass, 0.05, 0.15) / grades.F320.massMedian;
  expect(entry).toBeGreaterThan(0.75);
  expect(entry).toBeLessThan(3);
  expect(meanGap(glass, 0.05, 0.2)).toBeGreaterThan(meanGap(glass, 0.6, 0.8));
});

test('no wall opens past the largest grain plus the run-out and the chips of its last hits', () => {
  const { field } = glass.state.walls[0] as Cut['state']['walls'][number];
  const { grit, constants } = glass.model.spec.conditions;
  // past largest + run-out nothing is squeezed; chips of hits beside a cell, and at the foot, may still reach it
  const bound = grit.largest + glass.model.spec.runout * constants.runoutCap;
  const open = field.heights.filter((h) => h > OUT_OF_REACH);
  const beyond = open.filter((h) => -h > bound + 3e-6).length;
  expect(beyond / open.length).toBeLessThan(0.05);
  expect(Math.max(...open.map((h) => -h))).toBeLessThan(bound + glass.model.largestChip);
});

test('without fresh grit in the side gap the wall stays at the foot, and more of it opens the wall further', () => {
  const conditions = conditionsOf();
  const gap = (wallRenewal: number) =>
    meanGap(
      finished(
        cutSpecOf({
          conditions: { ...conditions, constants: { ...conditions.constants, wallRenewal } },
          depth: 0.2e-3,
        }),
      ),
      0,
      0.5,
    );
  const still = gap(0);
  const some = gap(0.03);
  expect(gap(0.3)).toBeGreaterThan(some);
  expect(some).toBeGreaterThan(still);
  // the foot lies between the median grain and the largest, which still passes under the edge
  expect(still).toBeGreaterThan(grades.F320.massMedian);
  expect(still).toBeLessThan(grades.F320.largest);
});

test('more run-out chips the rim deeper', () => {
  const deepest = (runout: number) => {
    const cut = finished(cutSpecOf({ runout, depth: 0.2e-3 }));
    return Math.max(...(cut.state.walls[0] as Cut['state']['walls'][number]).rim.chips);
  };
  expect(deepest(4e-6)).toBeGreaterThan(1.2 * deepest(1e-6));
});

test('voxels hold the volume of the fields to 0.1 %', () => {
  const bricks = buildBricks(glass.model, glass.state);
  const uniform = seededUniform(3);
  const { floor, walls } = glass.state;
  const wall = (walls[0] as Cut['state']['walls'][number]).field;
  const rim = (walls[0] as Cut['state']['walls'][number]).rim;
  const outline = makeOutline(glass.model.spec.tool);
  const ratio = glass.model.spec.conditions.constants.chipWidthRatio;
  // inside the outline every column's height counts as it is; outside it, points are tested one by one
  let inside = 0;
  for (let c = 0; c < floor.heights.length; c++) {
    const x = glass.model.x0 + (c % floor.nx) * floor.dx;
    const y = glass.model.y0 + Math.floor(c / floor.nx) * floor.dy;
    if (Math.hypot(x, y) <= 0.45e-3) inside -= (floor.heights[c] as number) * floor.dx * floor.dy;
  }
  const empty = (x: number, y: number, z: number) => {
    const i = Math.round((x - glass.model.x0) / floor.dx);
    const j = Math.round((y - glass.model.y0) / floor.dy);
    const near = nearest(outline, x, y);
    const row = Math.floor(z / wall.dy);
    const cell = Math.min(wall.nx - 1, Math.floor(near.s / wall.dx));
    const gap = row < wall.ny ? -(wall.heights[row * wall.nx + cell] as number) : 1;
    const open = gap < 0.5;
    if (open && near.distance < gap) return true;
    // outside the tool an open row is the wall's alone
    if (!(open && near.distance > 0) && z < -(floor.heights[j * floor.nx + i] as number)) return true;
    const deep = rim.chips[Math.min(rim.n - 1, Math.floor(near.s / rim.spacing))] as number;
    const beyond = Math.max(0, near.distance + (wall.heights[cell] as number));
    return deep > 0 && beyond < ratio * deep && z < deep * Math.sqrt(1 - (beyond / (ratio * deep)) ** 2);
  };
  let hits = 0;
  const draws = 600000;
  const ring = Math.PI * (0.8 ** 2 - 0.45 ** 2) * 1e-6;
  const height = 0.52e-3;
  for (let n = 0; n < draws; n++) {
    const r = Math.sqrt(0.45 ** 2 + uniform() * (0.8 ** 2 - 0.45 ** 2)) * 1e-3;
    const angle = 2 * Math.PI * uniform();
    if (empty(r * Math.cos(angle), r * Math.sin(angle), uniform() * height)) hits++;
  }
  const expected = inside + (hits / draws) * ring * height;
  // the ring's share is sampled to 3 sqrt(p (1 - p) / n) of its box, 0.15 % of the whole
  const sampling = (3 * Math.sqrt(0.25 / draws) * ring * height) / expected;
  expect(Math.abs(removedVolume(bricks) / expected - 1)).toBeLessThan(0.001 + sampling);
});

test('the voxels under the flat face hold the columns heights to a 255th of the pitch', () => {
  const bricks = buildBricks(glass.model, glass.state);
  const depths = surfaceDepths(bricks);
  const { heights, edges } = glass.state.floor;
  let worst = 0;
  for (let c = 0; c < heights.length; c++) {
    if (edges[c] === 0) worst = Math.max(worst, Math.abs((depths[c] as number) + (heights[c] as number)));
  }
  expect(worst).toBeLessThanOrEqual(bricks.pitch / 255);
});

test('the contour of a layer half way down is a circle of the tool plus the side gap', () => {
  const bricks = buildBricks(glass.model, glass.state);
  const points = wallPoints(bricks, 0.25e-3);
  let sum = 0;
  for (let n = 0; n < points.x.length; n++) sum += Math.hypot(points.x[n] as number, points.y[n] as number);
  const radius = sum / points.x.length;
  expect(Math.abs(radius - 0.5e-3 - meanGap(glass, 0.45, 0.55))).toBeLessThan(1e-6);
});

test('a rectangle, a slot, a hexagon and a ring cut to depth, and their walls follow their outlines', () => {
  const tools = [
    { kind: 'rectangle', length: 0.8e-3, width: 0.5e-3, cornerRadius: 0 },
    { kind: 'slot', length: 1e-3, width: 0.4e-3 },
    { kind: 'regularPolygon', sides: 6, acrossFlats: 0.7e-3, cornerRadius: 0.05e-3 },
    { kind: 'ring', outerDiameter: 1.2e-3, innerDiameter: 0.5e-3 },
  ] as const;
  for (const tool of tools) {
    const outline = makeOutline(tool);
    const cut = finished(cutSpecOf({ tool, drive: { kind: 'load', load: 0.15e6 * outline.area }, depth: 0.15e-3 }));
    expect(-(cut.state.scalars[SCALAR.floorMean] as number)).toBeGreaterThanOrEqual(0.15e-3);
    const points = wallPoints(buildBricks(cut.model, cut.state), 0.085e-3);
    // below the edge chips
    const gaps = Array.from(points.x, (x, n) => nearest(outline, x, points.y[n] as number).distance).sort(
      (a, b) => a - b,
    );
    const median = gaps[gaps.length >> 1] as number;
    expect(median).toBeGreaterThan(0.9 * grades.F320.massMedian);
    expect(median).toBeLessThan(3 * grades.F320.massMedian);
  }
});

test('grains far finer than the edge radius still open the wall: the gap is theirs, and never negative', () => {
  for (const grit of [grades.F600, grades.F1200]) {
    const cut = finished(
      cutSpecOf({ conditions: conditionsOf({ grit }), diameter: 0.3e-3, depth: 60e-6, columnBudget: 4e4 }),
    );
    const { field, rim } = cut.state.walls[0] as Cut['state']['walls'][number];
    const open = field.heights.filter((h) => h > OUT_OF_REACH);
    expect(open.length).toBeGreaterThan(0);
    expect(Math.max(...open)).toBeLessThan(0);
    // overcut of one to three grain sizes, as for coarser grit (common practice, from memory)
    const entry = meanGap(cut, 0.02, 0.2) / grit.massMedian;
    expect(entry).toBeGreaterThan(1);
    expect(entry).toBeLessThan(4);
    expect(cut.state.scalars[SCALAR.wallHits]).toBeGreaterThan(50);
    expect(Math.max(...rim.chips)).toBeGreaterThan(0);
  }
});

test('both walls of a ring open alike', () => {
  const tool = { kind: 'ring', outerDiameter: 1.2e-3, innerDiameter: 0.5e-3 } as const;
  const area = makeOutline(tool).area;
  const cut = finished(cutSpecOf({ tool, drive: { kind: 'load', load: 0.15e6 * area }, depth: 0.25e-3 }));
  const gaps = cut.state.walls.map(({ field }) => {
    let sum = 0;
    let n = 0;
    for (const h of field.heights) {
      if (h <= OUT_OF_REACH) continue;
      sum -= h;
      n++;
    }
    return sum / n;
  });
  // the hollow side is convex to the grains as the outer is concave: within a fifth of each other
  expect(Math.abs((gaps[1] as number) / (gaps[0] as number) - 1)).toBeLessThan(0.2);
});
