import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { publishedConstants } from '#src/physics/constants.ts';
import { gritLaw } from '#src/physics/grit-law.ts';
import { rimChips } from '#src/physics/rim.ts';
import { gapAfter, wallHits, wallLaw, wallRate } from '#src/physics/wall.ts';
import { base, f320 } from './samples.ts';

const runout = 2e-6;
const wall = wallLaw(base, runout);
const exposures = fc.double({ min: 0, max: 1e5, noNaN: true });

describe('the side gap', () => {
  it('starts at its foot, 1.4 d50, and ends where the largest grain passes the largest run-out', () => {
    expect(gapAfter(wall, 0)).toBeCloseTo(1.4 * 29.2e-6, 15);
    expect(wall.widest).toBeCloseTo(f320.largest + publishedConstants.runoutCap * runout, 12);
    expect(wallRate(wall, wall.widest)).toBe(0);
  });

  it('never narrows with exposure and never exceeds its end', () => {
    fc.assert(
      fc.property(exposures, exposures, (a, b) => {
        expect(gapAfter(wall, Math.max(a, b))).toBeGreaterThanOrEqual(gapAfter(wall, Math.min(a, b)));
        expect(gapAfter(wall, a)).toBeLessThanOrEqual(wall.widest);
      }),
      { seed: 41 },
    );
  });

  it('grows at the tabulated rate: the gap after two exposures a little apart differs by rate times time', () => {
    for (const exposure of [0.5, 5, 60]) {
      const gap = gapAfter(wall, exposure);
      const dt = 0.01 * exposure;
      const slope = (gapAfter(wall, exposure + dt) - gapAfter(wall, exposure - dt)) / (2 * dt);
      // linear between table entries, across which the rate changes by up to a fifth
      expect(Math.abs(slope / wallRate(wall, gap) - 1)).toBeLessThan(0.2);
    }
  });

  it('is closed to a tenth of its growth within seconds and creeps logarithmically after', () => {
    const [second, minute, hour] = [1, 60, 3600].map((t) => gapAfter(wall, t)) as [number, number, number];
    const growth = (minute - second) / Math.log(60);
    // equal factors of time give growth of one order: between a third and three times
    expect((hour - minute) / Math.log(60) / growth).toBeGreaterThan(1 / 3);
    expect((hour - minute) / Math.log(60) / growth).toBeLessThan(3);
  });

  it('stays at the foot without run-out or amplitude', () => {
    expect(gapAfter(wallLaw(base, 0), 1e6)).toBe(wallLaw(base, 0).foot);
    expect(gapAfter(wallLaw({ ...base, amplitude: 0 }, runout), 1e6)).toBeCloseTo(wall.foot, 12);
  });

  it('widens with run-out and with the share of fresh grit', () => {
    const thin = { ...base, constants: { ...publishedConstants, wallRenewal: 0.01 } };
    expect(gapAfter(wallLaw(base, 4e-6), 10)).toBeGreaterThan(gapAfter(wall, 10));
    expect(gapAfter(wallLaw(thin, runout), 10)).toBeLessThan(gapAfter(wall, 10));
  });

  it('with the law of the cut it was found in gives an entry overcut of 1.4 to 2.5 d50 (common practice 0.75 to 3)', () => {
    for (const exposure of [10, 100, 400]) {
      const ratio = gapAfter(wall, exposure) / 29.2e-6;
      expect(ratio).toBeGreaterThan(1.4);
      expect(ratio).toBeLessThan(2.5);
    }
  });
});

describe('the rim', () => {
  const perimeter = 40e-3;
  const chips = (runoutNow: number, exposure: number, length = perimeter) => {
    const law = wallLaw(base, runoutNow);
    return rimChips(base, wallHits(law, exposure), length);
  };

  it('counts the squeezes of a steady gap as grains times chance times cycles', () => {
    const { counts } = wallHits(wall, 1e-3);
    const total = counts.reduce((sum, count) => sum + count, 0);
    // 20 cycles at the foot: grains whose length lies within a run-out of the gap
    const inWindow = wall.density[Math.floor((wall.density.length - 1) / 4)] as number;
    const order = 20 * wall.grainsPerVolume * wall.foot * 2 * runout * inWindow;
    expect(total / order).toBeGreaterThan(0.2);
    expect(total / order).toBeLessThan(5);
  });

  it('chips no deeper than the largest squeeze of the largest grain can, at the weakest site', () => {
    const most = wall.loads.reduce((largest, load) => Math.max(largest, load), 0);
    const reach = (most / (9.3 * 0.75e6)) ** (2 / 3) * Math.exp((2 / 3) * 0.2 * 3);
    const { p95, largest } = chips(runout, 1e4);
    expect(largest.depth).toBeLessThanOrEqual(reach);
    expect(p95.depth).toBeLessThanOrEqual(largest.depth);
    expect(p95.depth).toBeGreaterThan(0);
  });

  it('chips deeper with exposure, run-out and length of rim', () => {
    expect(chips(runout, 100).p95.depth).toBeGreaterThan(chips(runout, 1).p95.depth);
    expect(chips(4e-6, 10).p95.depth).toBeGreaterThan(chips(runout, 10).p95.depth);
    expect(chips(runout, 10, 400e-3).largest.depth).toBeGreaterThan(chips(runout, 10).largest.depth);
  });

  it('is whole before the first hit', () => {
    expect(chips(runout, 0).largest.depth).toBe(0);
  });

  it('chips less with finer grit', () => {
    const fine = { ...base, grit: gritLaw({ massMedian: 9.3e-6, spread: 0.3798, largest: 1.3 * 19e-6 }) };
    const fineChips = rimChips(fine, wallHits(wallLaw(fine, runout), 10), perimeter);
    expect(fineChips.p95.depth).toBeLessThan(chips(runout, 10).p95.depth);
  });
});
