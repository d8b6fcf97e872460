import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  CLASS_STEP,
  CLASSES_PER_HALF_VOLUME,
  gritLaw,
  numberDensity,
  numberQuantile,
  numberTail,
  sizeClasses,
} from '#src/physics/grit-law.ts';
import type { GritLaw } from '#src/physics/records.ts';
import { grades } from './grades.ts';
import { f320 } from './samples.ts';

/** Any law between a tight macro grade and the widest fine one, cut off 1.5 to 8 spreads above the mass median. */
const laws = fc
  .record({
    massMedian: fc.double({ min: 1e-6, max: 5e-3, noNaN: true }),
    spread: fc.double({ min: 0.12, max: 0.6, noNaN: true }),
    cut: fc.double({ min: 1.5, max: 8, noNaN: true }),
  })
  .map(({ massMedian, spread, cut }) => gritLaw({ massMedian, spread, largest: massMedian * Math.exp(spread * cut) }));

/** Integral of f over the law by the midpoint rule in ln d, from ten spreads below the median to the largest grain. */
function mean(law: GritLaw, f: (d: number) => number, n = 20000): number {
  const low = Math.log(law.numberMedian) - 10 * law.spread;
  const high = Math.log(law.largest);
  const step = (high - low) / n;
  let sum = 0;
  for (let i = 0; i < n; i++) {
    const d = Math.exp(low + (i + 0.5) * step);
    sum += f(d) * numberDensity(law, d) * d * step;
  }
  return sum;
}

describe('mass to number (Hatch and Choate 1929, from memory)', () => {
  it.each(grades)(
    '%s by %s: median and mean-volume diameter by number',
    (_grade, _method, d50, s, median, d30, d32) => {
      const law = gritLaw({ massMedian: d50 * 1e-6, spread: s, largest: d50 * 1e-6 * Math.exp(12 * s) });
      // the spread is printed to four digits, 6 s ds <= 4e-4; the values to four digits
      expect(Math.abs((law.numberMedian * 1e6) / median - 1)).toBeLessThan(1.2e-3);
      expect(Math.abs((law.meanVolumeDiameter * 1e6) / d30 - 1)).toBeLessThan(1.2e-3);
      const squares = mean(law, (d) => d * d, 2000);
      expect(Math.abs(law.meanVolumeDiameter ** 3 / squares / (d32 * 1e-6) - 1)).toBeLessThan(2e-3);
    },
  );

  it('keeps half the mass of the untruncated law above the mass median', () => {
    const law = gritLaw({ massMedian: 29.2e-6, spread: 0.2752, largest: 29.2e-6 * Math.exp(12 * 0.2752) });
    const heavy = mean(law, (d) => (d > law.massMedian ? d ** 3 : 0));
    // the step of the integrand costs one cell of 20000
    expect(heavy / mean(law, (d) => d ** 3)).toBeCloseTo(0.5, 3);
  });
});

describe('truncation', () => {
  it('leaves a law that integrates to one and whose d30 is the integral (20 000 midpoints)', () => {
    fc.assert(
      fc.property(laws, (law) => {
        expect(mean(law, () => 1)).toBeCloseTo(1, 6);
        expect(mean(law, (d) => (d / law.meanVolumeDiameter) ** 3)).toBeCloseTo(1, 6);
      }),
      { seed: 1, numRuns: 20 },
    );
  });

  it('lowers d30, the more the closer the cut', () => {
    const at = (largest: number) => gritLaw({ massMedian: 29.2e-6, spread: 0.2752, largest }).meanVolumeDiameter;
    expect(at(40e-6)).toBeLessThan(at(54e-6));
    expect(at(54e-6)).toBeLessThan(at(100e-6));
  });

  it('refuses sizes and spreads that are not positive', () => {
    expect(() => gritLaw({ massMedian: 0, spread: 0.3, largest: 1e-4 })).toThrow(RangeError);
    expect(() => gritLaw({ massMedian: 1e-5, spread: Number.NaN, largest: 1e-4 })).toThrow(RangeError);
  });
});

describe('tail', () => {
  it('is one at zero, zero at the largest grain and falls between', () => {
    fc.assert(
      fc.property(
        laws,
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.double({ min: 0, max: 1, noNaN: true }),
        (law, a, b) => {
          const [low, high] = [Math.min(a, b) * law.largest, Math.max(a, b) * law.largest];
          expect(numberTail(law, 0)).toBe(1);
          expect(numberTail(law, law.largest)).toBe(0);
          expect(numberTail(law, low)).toBeGreaterThanOrEqual(numberTail(law, high));
        },
      ),
      { seed: 2 },
    );
  });

  it('is inverted by the quantile to 1e-9 of the probability, down to one grain in 10^12', () => {
    fc.assert(
      fc.property(laws, fc.double({ min: -12, max: -0.01, noNaN: true }), (law, exponent) => {
        const p = 10 ** exponent;
        // next to the largest grain one unit in the last place of d moves the tail by 1e-16 d q(d)
        const rounding = 4e-16 * law.largest * numberDensity(law, law.largest);
        expect(Math.abs(numberTail(law, numberQuantile(law, p)) - p)).toBeLessThan(1e-9 * p + rounding);
      }),
      { seed: 3, numRuns: 300 },
    );
  });

  it('falls at the rate of the density', () => {
    for (const d of [15e-6, 25e-6, 40e-6, 55e-6, 63e-6]) {
      const h = 1e-10;
      const slope = (numberTail(f320, d - h) - numberTail(f320, d + h)) / (2 * h);
      // second difference h^2 q''/6 and rounding of the tail over h: both below 1e-6 of q here
      expect(slope / numberDensity(f320, d)).toBeCloseTo(1, 5);
    }
  });

  it('is complete at both ends: no grain exceeds the largest, every grain exceeds zero', () => {
    expect(numberQuantile(f320, 0)).toBe(f320.largest);
    expect(numberQuantile(f320, 1)).toBe(0);
    expect(numberDensity(f320, 1.0001 * f320.largest)).toBe(0);
  });
});

describe('size classes', () => {
  it('run from the largest down, equally spaced in ln d, with half the volume sixteen classes down', () => {
    const { diameter, fraction } = sizeClasses(f320);
    expect(diameter.length).toBe(173);
    // what is missing from one lies below the last class
    const total = fraction.reduce((sum, share) => sum + share, 0);
    expect(total).toBeLessThanOrEqual(1);
    expect(total).toBeGreaterThan(1 - 1e-6);
    const [first, second, half] = [
      diameter[0] as number,
      diameter[1] as number,
      diameter[CLASSES_PER_HALF_VOLUME] as number,
    ];
    expect(first).toBeLessThan(f320.largest);
    expect(Math.log(first / second)).toBeCloseTo(CLASS_STEP, 12);
    expect((first / half) ** 3).toBeCloseTo(2, 10);
  });

  it('keep the tail for any grade, the finest and widest too: the share above any class edge is the law s own', () => {
    // #8000 by the electrical-resistance method and F2000 by the photosedimentometer lose a third of their grains below
    const laws = [
      f320,
      gritLaw({ massMedian: 1.2e-6, spread: 0.569, largest: 6e-6 }),
      gritLaw({ massMedian: 1.2e-6, spread: 0.569, largest: 4.55e-6 }),
    ];
    for (const law of laws) {
      const { fraction } = sizeClasses(law);
      let above = 0;
      for (let i = 0; i < fraction.length; i++) {
        above += fraction[i] as number;
        const edge = law.largest * Math.exp(-(i + 1) * CLASS_STEP);
        // sums of a few hundred shares in double precision
        expect(Math.abs(above / numberTail(law, edge) - 1)).toBeLessThan(1e-9);
      }
    }
  });
});
