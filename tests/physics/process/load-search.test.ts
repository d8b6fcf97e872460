import { describe, expect, it } from 'vitest';
import { makeSlurryFace } from '#src/physics/estimate.ts';
import { contactRows, gapSums } from '#src/physics/gap-sums.ts';
import { bestOf, loadSearch, pointOf, stallOf, workingPoint } from '#src/physics/process/load-search.ts';
import { lowestRoot } from '#src/physics/process/lowest-root.ts';
import { bestPoint, curvePlaces, pointAt, slurryCurve } from '#src/physics/process/slurry-curve.ts';
import { CARRIERS } from '#src/physics/slurry/viscosity.ts';
import { conditionsOf, grades, works } from '../../support/conditions.ts';
import { drawn, FLOODED, pumped } from './faces.ts';

describe('the lowest root', () => {
  it('of x = a + x^2 is the smaller of the two', () => {
    // a = 0.2: (1 - sqrt(0.2)) / 2, found to 1e-4 of the excess over a slope of 1 - 2 x
    for (const a of [0.01, 0.2, 0.24]) {
      const root = (1 - Math.sqrt(1 - 4 * a)) / 2;
      const found = lowestRoot(0, (x) => a + x * x);
      expect(found).toBeLessThanOrEqual(root * (1 + 1e-9));
      expect(found / root).toBeGreaterThan(1 - 1e-4 / (1 - 2 * root));
    }
  });

  it('is not jumped where a steep rise lies beyond it', () => {
    const steep = (x: number) => 0.1 + 0.2 * x + (x > 0.2 ? 5 : 0);
    expect(lowestRoot(0, steep)).toBeCloseTo(0.125, 4);
  });

  it('starts where it is told, and stops at once where g falls short of it', () => {
    expect(lowestRoot(0.5, () => 0.1)).toBe(0.5);
  });
});

/** Settings as they come: every grade and work, tools of 1 to 19 mm, each way of delivery, amplitude and depth. */
const CASES = Array.from({ length: 24 }, (_, n) => {
  const share = (prime: number) => ((n + 1) * prime) % 1;
  const diameter = 1e-3 + 18e-3 * share(0.6180339887);
  const delivery = diameter > 5e-3 ? ([FLOODED, pumped(1e5), drawn(5e4)][n % 3] ?? FLOODED) : FLOODED;
  const conditions = conditionsOf({
    work: Object.values(works)[n % 4] ?? works.sodaLime,
    grit: Object.values(grades)[(n >> 2) % 4] ?? grades.F320,
    amplitude: 8e-6 + 30e-6 * share(0.7548776662),
    concentration: 0.1 + 0.4 * share(0.569840291),
  });
  const bores = delivery.kind === 'flooded' ? [] : [{ x: 0, y: 0, radius: diameter / 8 }];
  const supply = { carrier: CARRIERS.water, delivery };
  const face = makeSlurryFace(conditions, { kind: 'circle', diameter }, bores, supply, { cells: 40 });
  const pressure = 2e4 * 20 ** share(0.8191725134);
  return { setting: { ...face, conditions }, depth: 25e-3 * share(0.6710436067), pressure };
});

it('a searched load curve has the points, stall and best load of the whole one, from a fraction of the gaps', () => {
  let points = 0;
  for (const { setting, depth, pressure } of CASES) {
    const sums = gapSums(contactRows(setting.conditions));
    const search = loadSearch(setting, curvePlaces(sums), depth);
    const whole = slurryCurve(setting, curvePlaces(sums, 1), depth);
    const stall = stallOf(search);
    // floors every eighth gap with a parabola between, against each gap's own: a quarter of a per cent
    if (Number.isFinite(stall)) expect(Math.abs(stall / whole.stall - 1)).toBeLessThan(0.01);
    else expect(whole.stall).toBe(Number.POSITIVE_INFINITY);
    const best = bestOf(search);
    if (best) expect(Math.abs(best.rate / bestPoint(whole).rate - 1)).toBeLessThan(0.01);
    const working = workingPoint(loadSearch(setting, curvePlaces(sums), depth), pressure);
    expect(working.stalled).toBe(pressure > stall);
    if (!(pressure > 0.98 * Math.min(stall, 1e6))) {
      expect(Math.abs(working.point.rate / pointAt(whole, pressure).rate - 1)).toBeLessThan(0.01);
      expect(Math.abs(working.point.gap / pointAt(whole, pressure).gap - 1)).toBeLessThan(0.002);
    }
    points += search.points.filter(Boolean).length / CASES.length;
  }
  expect(points).toBeLessThan(160 / 3);
});

it('the same answer comes in whatever order a curve is asked', () => {
  const { setting, depth } = CASES[0] as (typeof CASES)[number];
  const sums = gapSums(contactRows(setting.conditions));
  const one = loadSearch(setting, curvePlaces(sums), depth);
  const other = loadSearch(setting, curvePlaces(sums), depth);
  const stall = stallOf(one);
  const early = workingPoint(other, 5e4);
  expect(workingPoint(one, 5e4)).toEqual(early);
  expect(stallOf(other)).toBe(stall);
  expect(pointOf(one, 40)).toEqual(pointOf(other, 40));
});
