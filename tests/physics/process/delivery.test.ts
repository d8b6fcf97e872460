import { describe, expect, it } from 'vitest';
import { estimate, estimateTables, makeSlurryFace } from '#src/physics/estimate.ts';
import { humpOf } from '#src/physics/process/hump.ts';
import { bestOf, loadSearch, stallOf, workingPoint } from '#src/physics/process/load-search.ts';
import { curvePlaces } from '#src/physics/process/slurry-curve.ts';
import type { SlurryFace } from '#src/physics/process/slurry-face.ts';
import { CARRIERS } from '#src/physics/slurry/viscosity.ts';
import { BORE, drawn, FLOODED, faceOf, flooded, glass, pumped, settingWith, TOOL } from './faces.ts';

const tables = estimateTables(glass);
const places = curvePlaces(tables.sums);
const searchOf = (face: SlurryFace, depth: number) => loadSearch({ ...face, conditions: glass }, places, depth);
const rateAt = (face: SlurryFace, depth: number, pressure = 0.1e6) =>
  workingPoint(searchOf(face, depth), pressure).point.rate;
const bestRate = (face: SlurryFace, depth: number) => bestOf(searchOf(face, depth))?.rate ?? Number.NaN;

const open = makeSlurryFace(glass, TOOL, [BORE], { carrier: CARRIERS.water, delivery: FLOODED }, { cells: 40 });
const suction = faceOf(drawn(5e4));
const hardSuction = faceOf(drawn(9e4));
const injection = faceOf(pumped(1e5));
const hardInjection = faceOf(pumped(3e5));

describe('slurry pumped or drawn through a bore', () => {
  it.each([6e-3, 25e-3])('sinks faster and stalls later than a solid tool at %d m of depth', (depth) => {
    for (const face of [open, suction, injection]) {
      expect(rateAt(face, depth)).toBeGreaterThan(rateAt(flooded, depth));
      expect(stallOf(searchOf(face, depth))).toBeGreaterThan(stallOf(searchOf(flooded, depth)));
    }
  });

  it.each([6e-3, 25e-3])(
    'helps the more, the harder it is moved, and more pumped than drawn, at %d m of depth',
    (depth) => {
      expect(bestRate(hardSuction, depth)).toBeGreaterThan(bestRate(suction, depth));
      expect(bestRate(hardInjection, depth)).toBeGreaterThan(bestRate(injection, depth));
      expect(bestRate(injection, depth)).toBeGreaterThan(bestRate(hardSuction, depth));
    },
  );

  it('raises the best rate of a deep hole 1.5 to 10 times when pumped at 1 to 3 bar (2 to 5, from memory)', () => {
    for (const face of [injection, hardInjection]) {
      const gain = bestRate(face, 25e-3) / bestRate(flooded, 25e-3);
      expect(gain).toBeGreaterThan(1.5);
      expect(gain).toBeLessThan(10);
    }
  });

  it('loses less of its rate to depth than a solid tool when pumped, whatever the load', () => {
    for (const pressure of [0.05e6, 0.15e6]) {
      const kept = (face: SlurryFace) => rateAt(face, 25e-3, pressure) / rateAt(face, 1e-3, pressure);
      expect(kept(injection)).toBeGreaterThan(kept(flooded));
    }
  });

  it('flows less in a deeper hole and through a closer gap, and in the direction it is moved', () => {
    const flow = (face: SlurryFace, depth: number, pressure = 0.1e6) =>
      workingPoint(searchOf(face, depth), pressure).point.flow;
    expect(flow(suction, 1e-3)).toBeLessThan(flow(suction, 25e-3));
    expect(flow(suction, 25e-3)).toBeLessThan(0);
    expect(flow(injection, 1e-3)).toBeGreaterThan(flow(injection, 25e-3));
    expect(flow(injection, 6e-3, 0.3e6)).toBeLessThan(flow(injection, 6e-3, 0.05e6));
    expect(flow(open, 6e-3)).toBe(0);
  });

  it('gains less where the carrier is thick', () => {
    const oil = { viscosity: 10e-3, density: 860 };
    const thin = rateAt(injection, 6e-3, 0.03e6);
    expect(rateAt({ ...injection, carrier: oil }, 6e-3, 0.03e6)).toBeLessThan(thin);
  });

  it('tends to the open bore as the pressure goes to zero, apart from what the bore itself exchanges', () => {
    // an idle bore passes on its own, a barely fed one is fresh at its mouth
    const weak = rateAt(faceOf(pumped(1)), 6e-3);
    expect(Math.abs(weak / rateAt(open, 6e-3) - 1)).toBeLessThan(0.1);
  });

  it('flattens the floor when drawn', () => {
    const hump = (face: SlurryFace) => {
      const search = searchOf(face, 12e-3);
      return humpOf(search, workingPoint(search, 0.1e6));
    };
    expect(hump(suction)).toBeLessThan(hump(flooded));
  });
});

describe('the hump of a 12.7 mm tool', () => {
  const humpAt = (pressure: number, face: SlurryFace = flooded) => {
    const search = searchOf(face, 6.35e-3);
    return humpOf(search, workingPoint(search, pressure));
  };

  it('is 2 to 10 um high (from memory) and grows with the load', () => {
    const humps = [0.3, 0.5, 0.7].map((part) => humpAt(part * stallOf(searchOf(flooded, 6.35e-3))));
    for (const hump of humps) {
      expect(hump).toBeGreaterThan(2e-6);
      expect(hump).toBeLessThan(10e-6);
    }
    expect([...humps].sort((a, b) => a - b)).toEqual(humps);
  });

  it('is lower under a ring and under a small tool', () => {
    const supply = { carrier: CARRIERS.water, delivery: FLOODED };
    const ring = makeSlurryFace(glass, { kind: 'ring', outerDiameter: 12.7e-3, innerDiameter: 8.7e-3 }, [], supply);
    const small = makeSlurryFace(glass, { kind: 'circle', diameter: 3e-3 }, [], supply);
    expect(humpAt(0.1e6, ring)).toBeLessThan(0.5 * humpAt(0.1e6));
    expect(humpAt(0.1e6, small)).toBeLessThan(humpAt(0.1e6));
  });
});

it('the best load of an estimate is below its stall and gives the highest rate at depth', () => {
  const { bestPressure, stallPressure } = estimate(settingWith(), tables);
  const rateEnd = (pressure: number) => estimate(settingWith({ pressure }), tables).rateEnd;
  expect(bestPressure ?? 1).toBeLessThanOrEqual(stallPressure ?? 0);
  const best = rateEnd(0.999 * (bestPressure ?? 0));
  for (const part of [0.5, 0.8, 1.3, 2]) expect(rateEnd(part * (bestPressure ?? 0))).toBeLessThan(best);
});

it('a load above the stall is reported as stalled, with a negative margin, and a finite time', () => {
  const over = estimate(settingWith({ pressure: 0.6e6 }), tables);
  expect(over.stalled).toBe(true);
  expect(over.stallMargin ?? 1).toBeLessThan(0);
  expect(Number.isFinite(over.time)).toBe(true);
  expect(estimate(settingWith(), tables).stalled).toBe(false);
});
