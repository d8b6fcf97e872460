import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  contact,
  contactLaw,
  contactTimes,
  crushLoad,
  emptyContact,
  loadingTime,
  workIndentOf,
} from '#src/physics/contact.ts';
import type { Conditions } from '#src/physics/records.ts';
import { base, glass, lowCarbonSteel } from './samples.ts';

const law = contactLaw(base);
const diameters = fc.double({ min: 0.5e-6, max: 300e-6, noNaN: true });
const overlaps = fc.double({ min: 1e-12, max: 300e-6, noNaN: true });
const hit = (d: number, overlap: number, conditions: Conditions = base) =>
  contact(contactLaw(conditions), d, overlap, emptyContact());

/** Impulse by 4000 midpoints of the loading half, work and tool indents in proportion to the instantaneous overlap. */
function impulseByIntegration(d: number, overlap: number): number {
  const { amplitude, angularFrequency, tipArea, tipEnd, workHardness } = law;
  const h = workIndentOf(law, d, overlap);
  const time = Math.acos(1 - overlap / amplitude) / angularFrequency;
  const n = 4000;
  let sum = 0;
  for (let i = 0; i < n; i++) {
    const t = ((i + 0.5) / n) * time;
    const now = (overlap - amplitude * (1 - Math.cos(angularFrequency * t))) / overlap;
    sum += workHardness * (tipArea * (h * now) ** 2 + tipEnd * d * h * now);
  }
  return (sum * time) / n;
}

describe('one grit between work and tool', () => {
  it('presses both with the same force, and the two depths make up the overlap', () => {
    fc.assert(
      fc.property(diameters, overlaps, (d, overlap) => {
        const { workIndent, toolIndent, uncappedLoad } = hit(d, overlap);
        const area = (h: number) => law.tipArea * h * h + law.tipEnd * d * h;
        expect(Math.abs((workIndent + toolIndent) / overlap - 1)).toBeLessThan(1e-14);
        expect(Math.abs((law.toolHardness * area(toolIndent)) / uncappedLoad - 1)).toBeLessThan(1e-10);
        expect(Math.abs((law.workHardness * area(workIndent)) / uncappedLoad - 1)).toBeLessThan(1e-12);
      }),
      { seed: 21 },
    );
  });

  it('finds the same depth as six Newton steps from the sharp-tip guess', () => {
    fc.assert(
      fc.property(diameters, overlaps, (d, overlap) => {
        const { workHardness: w, toolHardness: t, tipArea, tipEnd } = law;
        const area = (h: number) => (tipArea * h + tipEnd * d) * h;
        const slope = (h: number) => 2 * tipArea * h + tipEnd * d;
        let h = overlap / (1 + Math.sqrt(w / t));
        for (let i = 0; i < 6; i++) {
          h -= (w * area(h) - t * area(overlap - h)) / (w * slope(h) + t * slope(overlap - h));
        }
        expect(Math.abs(workIndentOf(law, d, overlap) / h - 1)).toBeLessThan(1e-12);
      }),
      { seed: 22 },
    );
  });

  it('splits evenly between equals, whatever the tip', () => {
    const tool = { ...lowCarbonSteel, hardness: glass.hardness, metal: false };
    fc.assert(
      fc.property(diameters, overlaps, (d, overlap) => {
        expect(hit(d, overlap, { ...base, tool }).workIndent / overlap).toBeCloseTo(0.5, 12);
      }),
      { seed: 23 },
    );
  });

  it('hardens a soft metal tool 1.6 times and a hard one not at all', () => {
    expect(law.toolHardness).toBeCloseTo(1.6 * 1.3e9, 0);
    expect(contactLaw({ ...base, tool: { ...lowCarbonSteel, hardness: 7.2e9 } }).toolHardness).toBe(7.2e9);
  });

  it('is total: without overlap or diameter everything is zero', () => {
    for (const [d, overlap] of [
      [30e-6, 0],
      [30e-6, -1e-6],
      [0, 1e-6],
      [30e-6, Number.NaN],
    ] as const) {
      const result = contact(law, d, overlap, { ...emptyContact(), load: 9, impulse: 9 });
      expect(Object.values(result).every((value) => value === 0)).toBe(true);
    }
  });

  it('stays finite at any overlap', () => {
    fc.assert(
      fc.property(diameters, overlaps, (d, overlap) => {
        for (const value of Object.values(hit(d, overlap))) expect(Number.isFinite(value) && value >= 0).toBe(true);
      }),
      { seed: 24 },
    );
  });
});

describe('the loading half', () => {
  it('has the impulse of the sine, integrated', () => {
    for (const ratio of [1e-4, 0.01, 0.1, 0.5, 1, 1.5, 1.99]) {
      const d = 30e-6;
      const overlap = ratio * base.amplitude;
      const { impulse, load, uncappedLoad } = hit(d, overlap);
      // 4000 midpoints of a smooth integrand: 1e-7
      expect((impulse * uncappedLoad) / load / impulseByIntegration(d, overlap)).toBeCloseTo(1, 6);
    }
  });

  it('joins its series and its closed form without a step', () => {
    // theta = 0.5 lies at overlap = A (1 - cos 0.5)
    const seam = base.amplitude * (1 - Math.cos(0.5));
    const [below, above] = [contactTimes(law, seam * (1 - 1e-9)), contactTimes(law, seam * (1 + 1e-9))];
    expect(below.linear / above.linear).toBeCloseTo(1, 8);
    expect(below.square / above.square).toBeCloseTo(1, 8);
  });

  it('carries no more than the peak load over the whole loading half, and less when sharper', () => {
    fc.assert(
      fc.property(diameters, overlaps, (d, overlap) => {
        const { impulse, load } = hit(d, overlap);
        const times = contactTimes(law, overlap);
        expect(impulse).toBeLessThanOrEqual(load * loadingTime(law, overlap) * (1 + 1e-12));
        expect(times.square).toBeLessThanOrEqual(times.linear);
      }),
      { seed: 25 },
    );
  });

  it('lasts sqrt(2 overlap / A) / omega for a light touch', () => {
    const overlap = 1e-6 * base.amplitude;
    expect(loadingTime(law, overlap) / (Math.sqrt(2e-6) / law.angularFrequency)).toBeCloseTo(1, 6);
    // of which the linear load uses two thirds and the quadratic eight fifteenths
    expect(contactTimes(law, overlap).linear / loadingTime(law, overlap)).toBeCloseTo(2 / 3, 6);
    expect(contactTimes(law, overlap).square / loadingTime(law, overlap)).toBeCloseTo(8 / 15, 6);
  });
});

describe('the crush cap', () => {
  it('leaves light loads alone and never lets a grit carry more than its crushing load', () => {
    fc.assert(
      fc.property(diameters, overlaps, (d, overlap) => {
        const { load, uncappedLoad } = hit(d, overlap);
        const most = crushLoad(law, d);
        expect(load).toBeLessThanOrEqual(Math.min(uncappedLoad, most) * (1 + 1e-12));
        // P0/F_c below 0.1 with m = 4 takes less than 1e-4/4
        if (uncappedLoad < 0.1 * most) expect(load / uncappedLoad).toBeGreaterThan(1 - 2.6e-5);
      }),
      { seed: 26 },
    );
  });

  it('is the tabulated strength over d^2 at 100 um, times the factor 1.8', () => {
    expect(crushLoad(law, 100e-6)).toBeCloseTo(1.8 * 700e6 * 1e-8, 9);
    expect(Math.log2(crushLoad(law, 200e-6) / crushLoad(law, 100e-6))).toBeCloseTo(2 - 0.55, 10);
  });

  it('takes the dents by the power 1.3 of the load', () => {
    const bare = { ...base, abrasive: { ...base.abrasive, crushStrength: 1e15 } };
    const [capped, free] = [hit(60e-6, 20e-6), hit(60e-6, 20e-6, bare)];
    const y = capped.load / free.load;
    expect(y).toBeLessThan(0.9);
    expect(capped.workDent / free.workDent).toBeCloseTo(y ** 1.3, 10);
    expect(capped.toolDent / free.toolDent).toBeCloseTo(y ** 1.3, 10);
  });
});

describe('similarity', () => {
  it('scales the load with the square and the dent with the cube of all lengths', () => {
    const strong = { ...base, abrasive: { ...base.abrasive, crushStrength: 1e15 } };
    fc.assert(
      fc.property(diameters, fc.double({ min: 0.001, max: 1, noNaN: true }), (d, share) => {
        const small = hit(d, share * d, strong);
        const big = hit(3 * d, 3 * share * d, { ...strong, amplitude: 3 * base.amplitude });
        expect(big.load / small.load / 9).toBeCloseTo(1, 9);
        expect(big.impulse / small.impulse / 9).toBeCloseTo(1, 9);
        expect(big.workDent / small.workDent / 27).toBeCloseTo(1, 9);
        expect(big.toolDent / small.toolDent / 27).toBeCloseTo(1, 9);
      }),
      { seed: 27 },
    );
  });

  it('presses harder the more it is squeezed', () => {
    fc.assert(
      fc.property(diameters, overlaps, (d, overlap) => {
        const [less, more] = [hit(d, overlap), hit(d, 1.1 * overlap)];
        // at the cap both loads are the crushing load to rounding
        expect(more.load).toBeGreaterThanOrEqual(less.load * (1 - 1e-14));
        expect(more.uncappedLoad).toBeGreaterThan(less.uncappedLoad);
        expect(more.workIndent).toBeGreaterThan(less.workIndent);
        // a capped grit s impulse may fall a little, as its load turns from linear to quadratic in time
        if (more.uncappedLoad < 0.3 * crushLoad(law, d)) expect(more.impulse).toBeGreaterThan(less.impulse);
      }),
      { seed: 28 },
    );
  });
});
