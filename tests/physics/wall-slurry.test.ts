import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { publishedConstants } from '#src/physics/constants.ts';
import { slurryConstants } from '#src/physics/process/constants.ts';
import { CARRIERS } from '#src/physics/slurry/viscosity.ts';
import { gapAfter, wallLaw, wallRate } from '#src/physics/wall.ts';
import { sideFlow, wallFreshness } from '#src/physics/wall-slurry.ts';
import { base, faceArea, perimeter } from './samples.ts';

const { water } = CARRIERS;
const reference = { ...base, amplitude: 20e-6 };
const thick = (viscosity: number) => ({ viscosity, density: water.density });
const viscosities = fc.double({ min: 1e-4, max: 1, noNaN: true });
const flows = fc.double({ min: 0, max: 1e-3, noNaN: true });

describe('freshness of the grit in the side gap', () => {
  it('is the constant in clear water at the reference setting', () => {
    expect(wallFreshness(reference, { carrier: water, debrisFlow: 0 })).toBeCloseTo(publishedConstants.wallRenewal, 12);
  });

  it('falls as the viscosity of the carrier or the flow of debris rises, and rises with forced flow', () => {
    fc.assert(
      fc.property(viscosities, viscosities, flows, flows, (m1, m2, f1, f2) => {
        const thin = Math.min(m1, m2);
        const stiff = Math.max(m1, m2);
        const fresh = (viscosity: number, forcedFlow: number, debrisFlow: number) =>
          wallFreshness(base, { carrier: thick(viscosity), forcedFlow, debrisFlow });
        const least = Math.min(f1, f2);
        const most = Math.max(f1, f2);
        // the flow is solved for to 1e-3
        expect(fresh(stiff, least, 0)).toBeLessThanOrEqual(fresh(thin, least, 0) * (1 + 1e-9));
        expect(fresh(thin, most, 0)).toBeGreaterThanOrEqual(fresh(thin, least, 0) * (1 - 1e-9));
        expect(fresh(thin, least, most / 100)).toBeLessThanOrEqual(fresh(thin, least, least / 100) * (1 + 1e-3));
        expect(fresh(thin, most, most)).toBeGreaterThanOrEqual(0);
        expect(fresh(thin, most, 0)).toBeLessThan(1);
      }),
      { seed: 7 },
    );
  });

  it('in a viscous carrier goes as one over the viscosity without forced flow, and as the forced flow with it', () => {
    // Re << Re_c and share << 1: both linear, to the order of Re / Re_c and of the share, some 1 %
    const fresh = (viscosity: number, forcedFlow = 0) =>
      wallFreshness(base, { carrier: thick(viscosity), forcedFlow, debrisFlow: 0 });
    expect(fresh(0.5) / fresh(1)).toBeCloseTo(2, 1);
    expect(fresh(100, 2e-4) / fresh(100, 1e-4)).toBeCloseTo(2, 0);
  });

  it('pumps at the speed of the tool through the side gap where inertia rules', () => {
    const speed = 2 * Math.PI * base.frequency * base.amplitude;
    const gap = slurryConstants.sideGap * base.grit.massMedian;
    const flow = sideFlow(base, { carrier: thick(1e-9), debrisFlow: 0 });
    // X = 1 - Re_c / Re: 1e-6 of the viscosity of water leaves 1e-6 of its departure
    expect(flow / (speed * gap)).toBeCloseTo(1, 5);
  });

  it('is nothing where no slurry moves', () => {
    expect(wallFreshness({ ...base, amplitude: 0 }, { carrier: water, debrisFlow: 0 })).toBe(0);
  });

  it('is set by the flow where the flow is given', () => {
    const fresh = (flow: number) => wallFreshness(base, { carrier: water, sideFlow: flow, debrisFlow: 0 });
    expect(fresh(2e-6) / fresh(1e-6)).toBeCloseTo(2, 2);
  });
});

describe('the side gap in a viscous slurry', () => {
  const pace = 0.8e-3 / 60;
  const overcut = (viscosity: number, rate: number) => {
    const debrisFlow = (rate * faceArea) / perimeter;
    const freshness = wallFreshness(base, { carrier: thick(viscosity), debrisFlow });
    return gapAfter(wallLaw(base, 2e-6, freshness), 12.7e-3 / rate);
  };

  it('has less overcut as the viscosity rises, rate held (sign read in the literature: less rate and less overcut)', () => {
    const [one, three, ten, thirty] = [1e-3, 3e-3, 10e-3, 30e-3].map((mu) => overcut(mu, pace)) as number[];
    expect(three as number).toBeLessThan(one as number);
    expect(ten as number).toBeLessThan(three as number);
    expect(thirty as number).toBeLessThan(ten as number);
  });

  it('has less overcut even where the viscosity slows the cut to a third and it is exposed three times as long', () => {
    expect(overcut(30e-3, pace / 3)).toBeLessThan(overcut(1e-3, pace));
  });

  it('widens in proportion to the share of first squeezes', () => {
    const [low, high] = [wallLaw(base, 2e-6, 0.01), wallLaw(base, 2e-6, 0.03)];
    for (const gap of [42e-6, 50e-6, 60e-6]) expect(wallRate(high, gap) / wallRate(low, gap)).toBeCloseTo(3, 10);
    expect(wallRate(wallLaw(base, 2e-6), 45e-6)).toBe(wallRate(high, 45e-6));
  });
});
