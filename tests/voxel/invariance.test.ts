import { expect, test } from 'vitest';
import { makeOutline, type PathSpec } from '#src/base/outline.ts';
import { measureCut } from '#src/planning/measure.ts';
import { buildBricks } from '#src/voxel/solid.ts';
import { cutSpecOf } from '../support/conditions.ts';
import { finishedCut } from '../support/cut-run.ts';

const MM = 1e-3;
/** An L, so that nothing about it is symmetric (mm). */
const corners = [
  [-0.4, -0.3],
  [0.4, -0.3],
  [0.4, 0],
  [0, 0],
  [0, 0.3],
  [-0.4, 0.3],
] as const;

function figuresOf(place: (x: number, y: number) => readonly [number, number], seed = 1) {
  const points = corners.map(([x, y]) => place(x * MM, y * MM));
  const [start, ...rest] = points as [readonly [number, number], ...(readonly [number, number])[]];
  const pieces = [...rest, start].map(([x, y]) => ({ kind: 'line' as const, x, y }));
  const tool: PathSpec = { kind: 'path', loops: [{ x: start[0], y: start[1], pieces }] };
  const load = 0.15e6 * makeOutline(tool).area;
  const cut = finishedCut(cutSpecOf({ tool, seed, drive: { kind: 'load', load }, depth: 0.2 * MM }));
  return measureCut(cut, buildBricks(cut.model, cut.state), tool);
}

const plain = figuresOf((x, y) => [x, y]);
const others = [2, 3].map((seed) => figuresOf((x, y) => [x, y], seed));

test('an outline turned by a quarter, or moved by part of a column or by millimetres, gives the figures of another seed', () => {
  const moved = [
    figuresOf((x, y) => [-y, x]),
    figuresOf((x, y) => [x + 1.37e-6, y + 2.9e-6]),
    figuresOf((x, y) => [x + 3.1 * MM, y - 1.7 * MM]),
  ];
  const pick = [
    (m: typeof plain) => m.rateMean,
    (m: typeof plain) => m.removedVolume,
    (m: typeof plain) => m.damageDepth,
    (m: typeof plain) => m.toolWearRatio,
    (m: typeof plain) => m.overcutEntry,
    (m: typeof plain) => m.chipWidth.p95,
  ];
  // spread of three seeds about their mean, in shares; a figure of rare events (chips) spreads most
  const widest = [0.02, 0.02, 0.02, 0.04, 0.1, 0.2];
  pick.forEach((figure, k) => {
    const mean = [plain, ...others].reduce((sum, m) => sum + figure(m) / 3, 0);
    for (const m of [plain, ...others, ...moved]) {
      expect(Math.abs(figure(m) / mean - 1)).toBeLessThan(widest[k] as number);
    }
  });
  const turned = moved[0] as typeof plain;
  const grain = 29.2e-6;
  expect(Math.abs((turned.entrySize[1] as number) - (plain.entrySize[0] as number))).toBeLessThan(grain);
  expect(Math.abs((turned.entrySize[0] as number) - (plain.entrySize[1] as number))).toBeLessThan(grain);
});
