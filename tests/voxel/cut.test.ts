import { describe, expect, test } from 'vitest';
import type { Profile } from '#src/base/field.ts';
import { profileTexture } from '#src/metrology/profile-texture.ts';
import { estimate } from '#src/physics/estimate.ts';
import { cutHash, makeCut, runCut, stripProfile } from '#src/voxel/cut.ts';
import { OUT_OF_REACH } from '#src/voxel/kernels/contract.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { createReferenceKernel } from '#src/voxel/kernels/reference/kernel.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { restoreState, SCALAR, saveState } from '#src/voxel/state.ts';
import { conditionsOf, cutSpecOf, grades, works } from '../support/conditions.ts';
import { settingOf, steadyCut } from '../support/cut-run.ts';

const UM = 1e-6;

describe('the load the drawn hits add up to is the load set, within 2 %', () => {
  const cases = [
    { name: '1 mm tool, F320', spec: cutSpecOf({ depth: 120 * UM }), from: 15 * UM },
    {
      name: '1 mm tool, F220',
      spec: cutSpecOf({ conditions: conditionsOf({ grit: grades.F220 }), depth: 250 * UM }),
      from: 30 * UM,
    },
    {
      name: '1 mm tool, F600',
      spec: cutSpecOf({ conditions: conditionsOf({ grit: grades.F600 }), depth: 25 * UM, columnBudget: 3e5 }),
      from: 6 * UM,
    },
    {
      name: '12.7 mm tool, F320',
      spec: cutSpecOf({ diameter: 12.7e-3, depth: 22 * UM, columnsPerRadius: 1, columnBudget: 4e5 }),
      from: 12 * UM,
    },
    {
      name: '12.7 mm tool, F220',
      spec: cutSpecOf({
        conditions: conditionsOf({ grit: grades.F220 }),
        diameter: 12.7e-3,
        depth: 40 * UM,
        columnsPerRadius: 1,
        columnBudget: 4e5,
      }),
      from: 24 * UM,
    },
  ];
  for (const { name, spec, from } of cases) {
    test(name, () => {
      const { load, hits } = steadyCut(spec, from);
      // single impulses vary by more than their mean: the sampled mean itself is only good to a few / sqrt(hits)
      expect(hits).toBeGreaterThan(10000);
      expect(Math.abs(load - 1)).toBeLessThan(0.02);
    });
  }
});

describe('cut and estimate agree on the steady flat floor: rate and engaged grains within 20 %, Ra within 25 %', () => {
  for (const [name, work] of [
    ['soda-lime glass', works.sodaLime],
    ['quartz', works.quartz],
    ['alumina', works.alumina],
  ] as const) {
    for (const pressure of [0.1e6, 0.15e6]) {
      test(`${name} at ${pressure / 1e6} MPa`, () => {
        const conditions = conditionsOf({ work });
        const spec = cutSpecOf({ conditions, diameter: 2e-3, pressure, depth: 40 * UM });
        const cut = steadyCut(spec, 15 * UM);
        const mean = estimate(settingOf(spec));
        expect(Math.abs(cut.rate / mean.rate - 1)).toBeLessThan(0.2);
        expect(Math.abs(cut.engaged / mean.engaged - 1)).toBeLessThan(0.2);
        expect(Math.abs(cut.sa / mean.floorRa - 1)).toBeLessThan(0.25);
        // the overlap is produced by the cut, not put in; above one where shallow chips shear off taller peaks
        expect(cut.overlap).toBeGreaterThan(0.5);
        expect(cut.overlap).toBeLessThan(1.2);
      });
    }
  }
});

test('halving the pitch from half the mean chip radius changes depth against time by under 3 %', () => {
  const spec = { diameter: 3e-3, depth: 100 * UM };
  const coarse = steadyCut(cutSpecOf({ ...spec, columnsPerRadius: 2 }), 15 * UM);
  const fine = steadyCut(cutSpecOf({ ...spec, columnsPerRadius: 4, columnBudget: 8e6 }), 15 * UM);
  // the rate of a cut of 8e5 hits is itself good to about 0.7 %
  expect(Math.abs(coarse.rate / fine.rate - 1)).toBeLessThan(0.03);
  // the floor's own Sa, a looser stand-in for the trace's Ra: a 2 mm floor holds some 2e4 independent peaks
  expect(Math.abs(coarse.sa / fine.sa - 1)).toBeLessThan(0.05);
});

test('magnification 1, 4 and 16 agree within 3 % in rate and roughness', () => {
  const spec = { diameter: 5e-3, depth: 90 * UM };
  const plain = steadyCut(cutSpecOf({ ...spec }), 15 * UM);
  for (const magnification of [4, 16]) {
    const magnified = steadyCut(cutSpecOf({ ...spec, magnification }), 15 * UM);
    expect(Math.abs(magnified.rate / plain.rate - 1)).toBeLessThan(0.03);
    // M times fewer hits: at 16 the rate of 2e5 of them is good to about a per cent, Sa alike
    expect(Math.abs(magnified.sa / plain.sa - 1)).toBeLessThan(0.03);
    expect(Math.abs(magnified.load - 1)).toBeLessThan(0.02);
  }
});

test('candidates per engaged grain stay under three at the default block', () => {
  for (const grit of [grades.F220, grades.F320]) {
    const spec = cutSpecOf({ conditions: conditionsOf({ grit }), diameter: 2e-3, depth: 40 * UM });
    expect(steadyCut(spec, 15 * UM).candidatesPerHit).toBeLessThan(3);
  }
});

test('overlap depends on depth over load height only: the chip yield does not move it by more than 3 %', () => {
  const conditions = conditionsOf();
  const run = (chipYield: number) =>
    steadyCut(
      cutSpecOf({
        conditions: { ...conditions, constants: { ...conditions.constants, chipYield } },
        diameter: 2e-3,
        depth: 40 * UM,
      }),
      15 * UM,
    ).overlap;
  expect(Math.abs(run(0.3) / run(0.9) - 1)).toBeLessThan(0.03);
});

test('a cut in pieces, and one resumed from a saved state, give the bits of a whole one', () => {
  const spec = cutSpecOf({ depth: 30 * UM, withoutStrip: false });
  const whole = makeCut(spec);
  expect(runCut(whole, serialRunner(createFastKernel(), whole.model, whole.state), 1e6)).toBe(true);

  const pieces = makeCut(spec);
  const runner = serialRunner(createFastKernel(), pieces.model, pieces.state);
  while (!runCut(pieces, runner, 3));
  expect(cutHash(pieces)).toBe(cutHash(whole));

  const first = makeCut(spec);
  runCut(first, serialRunner(createFastKernel(), first.model, first.state), 21);
  const resumed = makeCut(spec);
  restoreState(resumed.state, saveState(first.state));
  runCut(resumed, serialRunner(createFastKernel(), resumed.model, resumed.state), 1e6);
  expect(cutHash(resumed)).toBe(cutHash(whole));
  expect(() => restoreState(resumed.state, saveState(first.state).slice(1))).toThrow(RangeError);
});

test('another seed or replicate gives another cut of the same rate', () => {
  const run = (change: object) => steadyCut(cutSpecOf({ diameter: 2e-3, depth: 40 * UM, ...change }), 15 * UM);
  const first = run({});
  const seed = run({ seed: 2 });
  const replicate = run({ replicate: 1 });
  expect(new Set([first, seed, replicate].map(({ cut }) => cutHash(cut))).size).toBe(3);
  // 1e5 hits, and the largest grains do most: each rate is good to about 1.5 %
  for (const other of [seed, replicate]) expect(Math.abs(other.rate / first.rate - 1)).toBeLessThan(0.05);
});

test('the columns lost what the ledger says: credited less overlap, dents and free impacts, to 1e-6', () => {
  const { cut } = steadyCut(cutSpecOf({ depth: 60 * UM }), 15 * UM);
  const { floor, scalars } = cut.state;
  let lost = 0;
  for (const h of floor.heights) if (h > OUT_OF_REACH) lost -= h;
  const volume = lost * floor.dx * floor.dy;
  const at = (k: number) => scalars[k] as number;
  const booked = at(SCALAR.credited) - at(SCALAR.overlap) + at(SCALAR.dentRemoved) + at(SCALAR.freeRemoved);
  expect(Math.abs(volume / booked - 1)).toBeLessThan(1e-6);
});

test('the reference kernel cuts at the same rate and load as the fast one', () => {
  const spec = cutSpecOf({ depth: 30 * UM });
  const fast = steadyCut(spec, 12 * UM);
  const reference = steadyCut({ ...spec, precision: 64 }, 12 * UM, createReferenceKernel());
  // the same draws on floors that differ in rounding: they part ways slowly, so the statistics agree closely
  expect(Math.abs(reference.rate / fast.rate - 1)).toBeLessThan(0.02);
  expect(Math.abs(reference.load - 1)).toBeLessThan(0.03);
});

test('a feed-controlled cut sinks at the feed once the floor has settled, whatever load it takes', () => {
  const feed = 30 * UM;
  const spec = cutSpecOf({ drive: { kind: 'feed', feed }, depth: 150 * UM });
  const { rate } = steadyCut(spec, 60 * UM);
  expect(Math.abs(rate / feed - 1)).toBeLessThan(0.02);
});

test('the history is monotone in time, depth and tool loss', () => {
  const cut = makeCut(cutSpecOf({ depth: 60 * UM }));
  runCut(cut, serialRunner(createFastKernel(), cut.model, cut.state), 1e6);
  expect(cut.records.length).toBeGreaterThan(40);
  cut.records.forEach((record, k) => {
    const before = cut.records[k - 1];
    if (!before) return;
    expect(record.time).toBeGreaterThan(before.time);
    expect(record.depth).toBeGreaterThanOrEqual(before.depth);
    expect(record.toolLost).toBeGreaterThan(before.toolLost);
    expect(record.edgeChip).toBeGreaterThanOrEqual(before.edgeChip);
  });
});

test('Ra of the trace does not depend on the pitch of the floor: halved from half the chip radius, it stays within 5 %', () => {
  const ra = (columnsPerRadius: number) => {
    const cut = makeCut(cutSpecOf({ diameter: 1.5e-3, depth: 40 * UM, columnsPerRadius, withoutStrip: false }));
    runCut(cut, serialRunner(createFastKernel(), cut.model, cut.state), 1e6);
    const rows = [0.1, 0.3, 0.5, 0.7, 0.9].map((across) => stripProfile(cut, across) as Profile);
    return rows.reduce((sum, row) => sum + profileTexture(row).parameters.ra / rows.length, 0);
  };
  expect(Math.abs(ra(2) / ra(4) - 1)).toBeLessThan(0.05);
});

describe('small tools', () => {
  test('carry the set load too, where the curved edge bears much of it: 0.3 mm and F220, four seeds', () => {
    const loads = [1, 2, 3, 4].map((seed) => {
      const conditions = conditionsOf({ grit: grades.F220 });
      return steadyCut(cutSpecOf({ conditions, diameter: 0.3e-3, depth: 200 * UM, seed }), 40 * UM).load;
    });
    // a seed's mean is itself good to about 1.5 %, the mean of four to 0.8 %
    expect(Math.abs(loads.reduce((sum, load) => sum + load / 4, 0) - 1)).toBeLessThan(0.025);
  });

  test('do not run past the depth: steps without a hit do not stretch the next ones', () => {
    const { cut } = steadyCut(cutSpecOf({ diameter: 0.12e-3, depth: 100 * UM }), 20 * UM);
    expect(-(cut.state.scalars[SCALAR.floorMean] as number)).toBeLessThan(1.1 * 100 * UM);
  });

  test('without a flat face, and pitches that lose the craters, are refused', () => {
    expect(() => makeCut(cutSpecOf({ diameter: 0.06e-3 }))).toThrow(/no flat face/);
    expect(() => makeCut(cutSpecOf({ pitch: 60e-6, magnification: 1 }))).toThrow(/loses craters/);
  });
});
