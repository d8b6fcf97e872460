import { describe, expect, it } from 'vitest';
import { estimate, estimateTables, usedPopulation } from '#src/physics/estimate.ts';
import { FACE_AREA, flooded, glass, settingWith } from './faces.ts';

const LITRE = 1e-3;
const tables = estimateTables(glass);
const { diameter, fraction } = tables.sums.rows.classes;
const use = { slurry: flooded, volume: 1 * LITRE, used: 3600, pressure: 0.1e6, area: FACE_AREA, depth: 6e-3 };
const volumeOf = (shares: Float64Array) => shares.reduce((sum, q, i) => sum + q * (diameter[i] as number) ** 3, 0);
/** Grains over 50 um, the ones that work. */
const largeOf = (shares: Float64Array) =>
  shares.reduce((sum, q, i) => ((diameter[i] as number) > 50e-6 ? sum + q : sum), 0);

describe('a charge that goes round', () => {
  it('keeps the volume of its grit: what is lost in large grains is there in small ones', () => {
    const used = usedPopulation(tables, use);
    expect(Math.abs(volumeOf(used) / volumeOf(fraction) - 1)).toBeLessThan(1e-6);
    expect(largeOf(used)).toBeLessThan(0.99 * largeOf(fraction));
    expect(used.reduce((sum, q) => sum + q, 0)).toBeGreaterThan(fraction.reduce((sum, q) => sum + q, 0));
  });

  it('loses the more, the longer it is used and the smaller it is', () => {
    const left = (over: Partial<typeof use>) => largeOf(usedPopulation(tables, { ...use, ...over }));
    expect(left({ used: 7200 })).toBeLessThan(left({}));
    expect(left({ volume: 0.3 * LITRE })).toBeLessThan(left({}));
    // only the share of the charge that is under the face ages: half the volume for half the time is the same
    expect(left({ volume: LITRE / 2, used: 1800 }) / left({})).toBeCloseTo(1, 9);
  });

  it('is as fresh as it came in when large or unused', () => {
    expect(usedPopulation(tables, { ...use, used: 0 })).toEqual(fraction);
    const large = usedPopulation(tables, { ...use, volume: 1e6 * LITRE });
    large.forEach((share, i) => {
      expect(Math.abs(share - (fraction[i] as number))).toBeLessThan(1e-5);
    });
  });

  it('is refused without a volume, or with a negative use', () => {
    expect(() => usedPopulation(tables, { ...use, volume: 0 })).toThrow(RangeError);
    expect(() => usedPopulation(tables, { ...use, used: -1 })).toThrow(RangeError);
  });
});

describe('an estimate with a used charge', () => {
  const timeOf = (volume: number, used: number) =>
    estimate(settingWith({ slurry: { ...flooded, charge: { volume, used } } }), tables).time;
  const fresh = estimate(settingWith(), tables).time;

  it('takes longer than with fresh slurry, the more so the longer it was used', () => {
    expect(timeOf(LITRE, 0)).toBeGreaterThan(fresh);
    expect(timeOf(LITRE, 4 * 3600)).toBeGreaterThan(timeOf(LITRE, 0));
  });

  it('takes the time of fresh slurry where the charge is large', () => {
    expect(timeOf(1e6 * LITRE, 0) / fresh).toBeCloseTo(1, 4);
  });

  it('takes a population given to it as it is', () => {
    const population = usedPopulation(tables, use);
    const given = estimate(settingWith({ population }), tables);
    expect(given.time).toBeGreaterThan(fresh);
    // fewer large grains bear the load only closer by
    expect(given.gap).toBeLessThan(estimate(settingWith(), tables).gap);
  });
});
