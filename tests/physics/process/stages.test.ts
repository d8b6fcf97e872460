import { describe, expect, it } from 'vitest';
import { type Estimate, estimate, estimateTables, memberTables } from '#src/physics/estimate.ts';
import { FACE_AREA, faceOf, flooded, glass, pumped, settingWith } from './faces.ts';

const tables = estimateTables(glass);
const at = (over: Parameters<typeof settingWith>[0] = {}) => estimate(settingWith(over), tables);
const whole = at();
const share = (a: number, b: number) => Math.abs(a / b - 1);

describe('stages of the way down', () => {
  it('add up to the whole where nothing changes between them', () => {
    const cuts = [0, 0.3e-3, 2e-3, 7e-3, 12.7e-3];
    const stages = cuts.slice(1).map((to, k) => ({ from: cuts[k] as number, to, area: FACE_AREA, slurry: flooded }));
    const parts = at({ stages });
    // three nodes over the whole against two in each of four parts
    for (const key of ['time', 'toolWearLength', 'rate', 'toolWearRatio'] as const)
      expect(share(parts[key], whole[key])).toBeLessThan(0.003);
    for (const key of ['rateStart', 'rateEnd', 'gap', 'floorRa', 'damageDepth'] as const)
      expect(parts[key]).toBeCloseTo(whole[key], 12);
    expect(parts.stallMargin).toBeCloseTo(whole.stallMargin ?? 0, 12);
    for (const key of ['overcutEntry', 'overcutFloor'] as const)
      expect(share(parts[key], whole[key])).toBeLessThan(1e-3);
  });

  it('are summed with three depths as with sixty, to half a per cent, also through the fast first millimetre', () => {
    for (const depth of [0.2e-3, 3e-3, 25e-3]) {
      const fine = Array.from({ length: 30 }, (_, k) => ({
        from: depth * (k / 30) ** 2,
        to: depth * ((k + 1) / 30) ** 2,
        area: FACE_AREA,
        slurry: flooded,
      }));
      expect(share(at({ depth }).time, at({ depth, stages: fine }).time)).toBeLessThan(0.005);
    }
  });

  it('under one load press harder where less is in contact: a shelf of a quarter of the area sinks faster', () => {
    const stages = [
      { from: 0, to: 5e-3, area: FACE_AREA / 4, slurry: flooded },
      { from: 5e-3, to: 12.7e-3, area: FACE_AREA, slurry: flooded },
    ];
    const shelf = at({ stages, pressure: 0.05e6 });
    const full = at({ pressure: 0.05e6 });
    expect(shelf.time).toBeLessThan(full.time);
    expect(shelf.rateStart).toBeGreaterThan(2 * full.rateStart);
    expect(shelf.rateEnd).toBeCloseTo(full.rateEnd, 12);
    // the stall is nearest on the shelf: four times the pressure
    expect(shelf.stallMargin ?? 1).toBeLessThan(full.stallMargin ?? 0);
  });

  it('of fresh grit take the depth over the rate of each', () => {
    const { slurry: _, ...bare } = settingWith();
    const rateAt = (pressure: number) => estimate({ ...bare, pressure }, tables).rate;
    const stages = [
      { from: 0, to: 1e-3, area: FACE_AREA / 2 },
      { from: 1e-3, to: 3e-3, area: FACE_AREA },
    ];
    const both = estimate({ ...bare, depth: 3e-3, stages }, tables);
    expect(both.time / (1e-3 / rateAt(0.2e6) + 2e-3 / rateAt(0.1e6))).toBeCloseTo(1, 12);
    expect(both.stallMargin).toBeNull();
    expect(both.freshFraction).toBe(1);
  });

  it('are refused where they leave a gap, overlap, end elsewhere or have no area', () => {
    const stage = (from: number, to: number, area = FACE_AREA) => ({ from, to, area });
    for (const stages of [
      [stage(0, 1e-3), stage(2e-3, 12.7e-3)],
      [stage(0, 5e-3), stage(4e-3, 12.7e-3)],
      [stage(0, 5e-3)],
      [stage(0, 12.7e-3, 0)],
      [],
    ])
      expect(() => at({ stages })).toThrow(RangeError);
  });
});

it('load and pressure say the same: newtons over the face', () => {
  const { pressure: _, ...rest } = settingWith();
  const byLoad = estimate({ ...rest, load: 0.1e6 * FACE_AREA }, tables);
  expect(share(byLoad.rate, whole.rate)).toBeLessThan(1e-12);
  expect(() => estimate(rest, tables)).toThrow(RangeError);
});

it('a member of a band has the rate and time of the full estimate to half a per cent, and its stall to one', () => {
  for (const slurry of [flooded, faceOf(pumped(1e5))]) {
    const full = estimate(settingWith({ slurry }), estimateTables(glass, undefined, 256));
    const member = estimate(settingWith({ slurry }), memberTables(glass));
    for (const key of ['rate', 'time', 'rateEnd', 'toolWearLength', 'overcutEntry', 'floorRa'] as const)
      expect(share(member[key], full[key])).toBeLessThan(0.005);
    expect(share(member.stallPressure ?? 0, full.stallPressure ?? 1)).toBeLessThan(0.01);
  }
});

describe('a tool that gets shorter', () => {
  const depthOf = (result: Estimate) => result.depthReached;

  it('reaches the depth where the machine makes up for it', () => {
    expect(depthOf(whole)).toBe(12.7e-3);
    expect(whole.ranOut).toBe(false);
  });

  it('stops short by what it has lost where the machine does not: depth and loss add up to the way set', () => {
    const short = at({ toolLife: { compensated: false } });
    expect(short.depthReached).toBeLessThan(12.7e-3);
    expect((short.depthReached + short.toolWearLength) / 12.7e-3).toBeCloseTo(1, 4);
    expect(short.ranOut).toBe(false);
  });

  it('ends the cut when its length is gone, at the depth where it is', () => {
    const length = whole.toolWearLength / 3;
    const out = at({ toolLife: { compensated: true, length } });
    expect(out.ranOut).toBe(true);
    expect(out.toolWearLength / length).toBeCloseTo(1, 3);
    expect(out.depthReached).toBeLessThan(0.5 * 12.7e-3);
    expect(out.time).toBeLessThan(whole.time / 2);
    const enough = at({ toolLife: { compensated: true, length: 2 * whole.toolWearLength } });
    expect(enough.ranOut).toBe(false);
    expect(enough.time).toBe(whole.time);
  });

  it('is rounder at its edge and leaves a rounder corner, the more it has lost', () => {
    const shallow = at({ depth: 2e-3 });
    expect(whole.toolEdgeRadius).toBeGreaterThan(shallow.toolEdgeRadius);
    expect(shallow.toolEdgeRadius).toBeGreaterThan(30e-6);
    expect(whole.cornerRadius - shallow.cornerRadius).toBeCloseTo(
      whole.toolEdgeRadius - shallow.toolEdgeRadius + (whole.gap - shallow.gap) / 2,
      12,
    );
    expect(whole.toolSideLoss).toBeGreaterThan(0);
  });
});

describe('a through-cut', () => {
  const exit = { backing: false, loadShare: 0.3, from: 0.5e-3, thickness: 12.7e-3 };

  it('takes longer with the load taken back, and breaks out thinner', () => {
    const eased = at({ exit });
    const full = at({ exit: { ...exit, loadShare: 1 } });
    expect(full.time).toBeCloseTo(whole.time, -1);
    expect(eased.time).toBeGreaterThan(full.time);
    // at 0.3 of the load the last 0.5 of 12.7 mm take about three times as long: 8 %
    expect(eased.time / full.time).toBeLessThan(1.2);
    expect(eased.exit?.ligament ?? 1).toBeLessThan(full.exit?.ligament ?? 0);
  });

  it('breaks nothing out with a backing, and nothing at all where it stays blind', () => {
    expect(at({ exit: { ...exit, backing: true } }).exit?.ligament).toBe(0);
    expect(at({ exit: { ...exit, thickness: 13e-3 } }).exit).toBeNull();
    expect(whole.exit).toBeNull();
  });
});

describe('rim and floor of a shallow cavity', () => {
  it('have no edge chips while the wall has not opened', () => {
    const shallow = at({ depth: 25e-6 });
    expect(shallow.edgeChipLargest.depth).toBeNaN();
    expect(at({ depth: 100e-6 }).edgeChipLargest.depth).toBeGreaterThan(0);
  });

  it('narrow by the fillet: the floor size of a cavity no deeper than it lies inside the wall', () => {
    const shallow = at({ depth: 100e-6, edgeRadius: 80e-6 });
    const sharp = at({ depth: 100e-6, edgeRadius: 0 });
    expect(shallow.overcutFloor).toBeLessThan(sharp.overcutFloor - 20e-6);
    expect(shallow.taper).toBeNaN();
    const deep = at({ edgeRadius: 80e-6 });
    expect(share(deep.overcutFloor, at({ edgeRadius: 0 }).overcutFloor)).toBeLessThan(0.01);
  });

  it('get less overcut from a thick carrier, which frees fewer grains at the wall', () => {
    const thick = { ...flooded, carrier: { viscosity: 5e-3, density: 998 } };
    expect(at({ slurry: thick, pressure: 0.03e6 }).overcutEntry).toBeLessThan(at({ pressure: 0.03e6 }).overcutEntry);
  });
});
