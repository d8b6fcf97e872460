import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { besselI, besselK } from '#src/physics/slurry/bessel.ts';
import {
  annulusAge,
  annulusEffectiveness,
  annulusFlow,
  annulusShare,
  discAge,
  discEffectiveness,
  eccentricFlow,
  linearDiscAge,
  plugAge,
  pumpedDiscAge,
  pumpedDiscEffectiveness,
  radialFlowAge,
  stagnationRadius,
  stripEffectiveness,
  stripShare,
} from '#src/physics/slurry/closed-forms.ts';

const relative = (value: number, wanted: number) => Math.abs(value / wanted - 1);
/** Second and first derivative of f at r by central differences, enough for 1e-6. */
const derivatives = (f: (r: number) => number, r: number) => {
  const d = 1e-3;
  return { first: (f(r + d) - f(r - d)) / (2 * d), second: (f(r + d) - 2 * f(r) + f(r - d)) / (d * d) };
};

describe('modified Bessel functions', () => {
  it('have the values at 1 that Abramowitz and Stegun table 9.8 gives (from memory)', () => {
    expect(relative(besselI(0, 1), 1.2660658777520084)).toBeLessThan(1e-14);
    expect(relative(besselI(1, 1), 0.5651591039924851)).toBeLessThan(1e-14);
    expect(relative(besselK(0, 1), 0.42102443824070834)).toBeLessThan(1e-13);
    expect(relative(besselK(1, 1), 0.6019072301972346)).toBeLessThan(1e-13);
  });

  it('satisfy I0 K1 + I1 K0 = 1/x (Abramowitz and Stegun 9.6.15) from 0.01 to 100', () => {
    fc.assert(
      fc.property(fc.double({ min: -2, max: 2, noNaN: true }), (power) => {
        const x = 10 ** power;
        const wronskian = besselI(0, x) * besselK(1, x) + besselI(1, x) * besselK(0, x);
        // sums of at most 400 terms, each right to a few units in the last place
        expect(relative(wronskian, 1 / x)).toBeLessThan(1e-12);
      }),
      { seed: 1, numRuns: 100 },
    );
  });
});

describe('closed forms of the balance', () => {
  it('give a mean share of 1 - phi^2/8 (disc) and 1 - phi^2/3 (strip) where little is lost', () => {
    // the next terms are phi^4/48 and 2 phi^4/15
    expect(Math.abs(discEffectiveness(0.01) - (1 - 1e-4 / 8))).toBeLessThan(1e-8 / 40);
    expect(Math.abs(stripEffectiveness(0.01) - (1 - 1e-4 / 3))).toBeLessThan(1e-8 / 5);
    expect(discEffectiveness(0)).toBe(1);
    expect(stripEffectiveness(0)).toBe(1);
  });

  it('give 2/phi (disc) and 1/phi (strip) where only the edge is fed', () => {
    // the disc is at 2/phi (1 - 1/(2 phi))
    expect(relative(discEffectiveness(200), (2 / 200) * (1 - 1 / 400))).toBeLessThan(1e-5);
    expect(relative(stripEffectiveness(200), 1 / 200)).toBeLessThan(1e-14);
  });

  it('leave a strip with its share on the edge and 1/cosh phi in the middle', () => {
    expect(stripShare(0.5, { halfWidth: 0.5, modulus: 2 })).toBeCloseTo(1, 14);
    expect(stripShare(0, { halfWidth: 0.5, modulus: 2 })).toBeCloseTo(1 / Math.cosh(2), 14);
  });

  it('make an annulus a strip where it is thin, and lose what enters across its edges', () => {
    const thin = { inner: 100, outer: 101, m: 3 };
    // curvature changes the mean by (width / radius)^2
    expect(relative(annulusEffectiveness(thin), stripEffectiveness(1.5))).toBeLessThan(1e-4);
    expect(annulusShare(thin)(100)).toBeCloseTo(1, 9);
    expect(annulusShare(thin)(101)).toBeCloseTo(1, 9);
  });

  it('satisfy the radial balance (1/r)(r D u prime) prime = -1 for every law of dispersion', () => {
    const laws: [(r: number) => number, (r: number) => number, (r: number) => number][] = [
      [(r) => discAge(r, 1, 0.7), () => 0.7, () => 0],
      [(r) => pumpedDiscAge(r, { radius: 1, d0: 0.2, a: 1.3 }), (r) => 0.2 + 1.3 * r * r, (r) => 2.6 * r],
      [(r) => linearDiscAge(r, { radius: 1, d0: 0.2, b: 1.3 }), (r) => 0.2 + 1.3 * r, () => 1.3],
      [(r) => annulusAge(r, { inner: 0.2, outer: 1, dispersion: 0.7 }), () => 0.7, () => 0],
    ];
    for (const [age, dispersion, slope] of laws) {
      const r = 0.55;
      const { first, second } = derivatives(age, r);
      expect(dispersion(r) * (second + first / r) + slope(r) * first).toBeCloseTo(-1, 4);
      expect(age(1)).toBeCloseTo(0, 12);
    }
  });

  it('put the oldest slurry of an annulus at its stagnation radius', () => {
    const annulus = { inner: 0.2, outer: 1, dispersion: 1 };
    const r = stagnationRadius(0.2, 1);
    expect(r).toBeCloseTo(Math.sqrt(0.96 / (2 * Math.log(5))), 12);
    expect(derivatives((x) => annulusAge(x, annulus), r).first).toBeCloseTo(0, 5);
  });

  it('satisfy the radial balance with flow, and tend to the plug where dispersion is small', () => {
    const channel = { inner: 0.3, outer: 1, flow: 5, film: 0.4 };
    const conductivity = 0.6;
    const { first, second } = derivatives((r) => radialFlowAge(r, channel, conductivity), 0.6);
    const velocity = 5 / (2 * Math.PI * 0.6);
    expect(conductivity * (second + first / 0.6) - velocity * first).toBeCloseTo(-0.4, 3);
    // P = 5 / (2 pi 0.01) is 80; the age at 0.6 then differs from the plug's by 2/P
    expect(relative(radialFlowAge(0.6, channel, 0.01), plugAge(0.6, channel))).toBeLessThan(0.03);
  });

  it('give a pumped disc the mean share 2 / (1 + sqrt(1 + k/a)), what enters across the edge over the loss', () => {
    const n = Math.sqrt(1 + 3) - 1;
    // flux at R is a R^2 n / R times 2 pi R, the loss k pi R^2 times the mean, k/a = 3
    expect(pumpedDiscEffectiveness(3)).toBeCloseTo((2 * n) / 3, 14);
  });

  it('make eccentric circles concentric at no distance, and pass more the farther they are apart', () => {
    expect(eccentricFlow({ inner: 0.3, outer: 1, apart: 0 }, 1)).toBeCloseTo(annulusFlow(0.3, 1, 1), 12);
    expect(eccentricFlow({ inner: 0.3, outer: 1, apart: 0.4 }, 1)).toBeGreaterThan(annulusFlow(0.3, 1, 1));
  });
});
