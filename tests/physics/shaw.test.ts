import { describe, expect, it } from 'vitest';
import { cookRate } from '#src/physics/cook.ts';
import { loadingShare, meanSpeedShare, singleSizeRate } from '#src/physics/exact-kinematics.ts';
import {
  coveredGrits,
  type Hammering,
  hammeringIndent,
  hammeringRate,
  jainHammeringIndent,
  jainRate,
  projectionDiameter,
  throwingIndent,
} from '#src/physics/shaw.ts';

const MM2 = 1e-6;
const MM3 = 1e-9;

/** Ghosh and Mallik, Manufacturing Science, problem 6.1: 5 mm square hole in tungsten carbide, copper tool. */
function problem61(force: number, d = 0.01e-3): Hammering {
  return {
    force,
    amplitude: 25e-6,
    grits: coveredGrits(0.5, 25 * MM2, d),
    contactDiameter: projectionDiameter(d),
    hardness: 6900e6,
    hardnessRatio: 5,
  };
}
const minutes = (volume: number, rate: number) => volume / rate / 60;

describe('Shaw 1956 as textbooks work it', () => {
  it('sinks the square hole of Ghosh and Mallik problem 6.1 in 14.262 min, which the book rounds to 13.66', () => {
    const setting = problem61(3.5);
    expect(setting.grits).toBeCloseTo((0.5 * 4 * 25) / (Math.PI * 0.01 * 0.01), 0);
    expect(hammeringIndent(setting)).toBeCloseTo(5.8152e-7, 11);
    expect(minutes(100 * MM3, hammeringRate(setting, 25e3))).toBeCloseTo(14.262, 2);
    // the book rounds the indent to 0.0006 mm and the rate to 0.122 mm3/s
    expect(100 / (0.122 * 60)).toBeCloseTo(13.66, 2);
  });

  it('sinks the same hole under 4.5 N in 11.81 min (recomputed, no published answer)', () => {
    expect(minutes(100 * MM3, hammeringRate(problem61(4.5), 25e3))).toBeCloseTo(11.812, 2);
  });

  it('is 56 % faster from copper to steel as the book neglects the one in 1 + lambda, 45.6 % with it (problem 6.2)', () => {
    const copper = problem61(3.5);
    const steel = { ...copper, hardnessRatio: 5 / 3 };
    expect(1 - (1 / 3) ** 0.75).toBeCloseTo(0.561, 3);
    expect(1 - hammeringRate(copper, 25e3) / hammeringRate(steel, 25e3)).toBeCloseTo(0.4557, 3);
  });

  it('gives the published figures of Jain for a 6 mm hole in tungsten carbide, whose amplitude symbol is doubled', () => {
    const constants = { k1: 0.3, k2: 1.8e-6, k3: 0.6 };
    const d = 15e-6;
    const hit = { force: 3.5, amplitude: 25e-6, hardness: 6.9e9, hardnessRatio: 6.9 / 1.5, d };
    const thrown = throwingIndent({ d, amplitude: 25e-6, frequency: 25e3, density: 3800, hardness: 6.9e9 });
    const hammered = jainHammeringIndent(hit, constants);
    // published 1.78e-5 and 2.192e-4 mm (from memory), three digits
    expect(thrown / 1.7846e-8).toBeCloseTo(1, 3);
    expect(hammered / 2.1921e-7).toBeCloseTo(1, 3);
    const byThrowing = jainRate(thrown, d, 25e3, constants);
    const byHammering = jainRate(hammered, d, 25e3, constants);
    // four digits printed
    expect(Math.abs(byThrowing / 4.986e-12 - 1)).toBeLessThan(0.002);
    expect(Math.abs(byHammering / 2.1465e-10 - 1)).toBeLessThan(0.002);
    expect(minutes((Math.PI / 4) * 36 * 9 * MM3, byThrowing + byHammering)).toBeCloseTo(19.31, 1);
  });

  it('is the same law in both notations: Jain with K2/d^2 grits of smooth contact equals Shaw', () => {
    const hit = { force: 3.5, amplitude: 25e-6, hardness: 6.9e9, hardnessRatio: 4.6 };
    const d = 15e-6;
    const k2 = 1.8e-6;
    const shaw = hammeringIndent({ ...hit, grits: k2 / (d * d), contactDiameter: d });
    expect(jainHammeringIndent({ ...hit, d }, { k1: 1, k2, k3: 1 })).toBeCloseTo(shaw, 18);
  });

  it('answers the lesson quiz on glass: 4.0, 7.5 and 6.0 mm3/min (Indian Institute of Technology notes, from memory)', () => {
    const rate = (scale: { d?: number; f?: number; force?: number; c?: number }) => {
      const d = 150e-6 * (scale.d ?? 1);
      const hit = {
        force: 10 * (scale.force ?? 1),
        amplitude: 20e-6,
        grits: coveredGrits(0.3 * (scale.c ?? 1), 100 * MM2, d),
        contactDiameter: projectionDiameter(d),
        hardness: 5.5e9,
        hardnessRatio: 3,
      };
      return hammeringRate(hit, 20e3 * (scale.f ?? 1));
    };
    const scaled = (scale: Parameters<typeof rate>[0]) => (6 * rate(scale)) / rate({});
    expect(scaled({ d: 100 / 150 })).toBeCloseTo(4, 6);
    expect(scaled({ f: 25 / 20 })).toBeCloseTo(7.5, 6);
    expect(scaled({ force: 1.5, c: 0.3 })).toBeCloseTo(6 * 1.5 ** 0.75 * 0.3 ** 0.25, 6);
  });

  it('needs 7.096 min for the 10 mm exercise of Ghosh and Mallik with a copper tool (derived)', () => {
    const d = 0.01e-3;
    const area = 25 * Math.PI * MM2;
    const hit = {
      force: 5,
      amplitude: 30e-6,
      grits: coveredGrits(0.5, area, d),
      contactDiameter: projectionDiameter(d),
      hardness: 7000e6,
      hardnessRatio: 5,
    };
    expect(hammeringIndent(hit) / 4.2649e-7).toBeCloseTo(1, 3);
    expect(minutes(area * 1e-3, hammeringRate(hit, 20e3))).toBeCloseTo(7.096, 2);
  });

  it('goes as d C^1/4 F^3/4 A^3/4 f H^-3/4 with projections', () => {
    const rate = (d: number, c: number, force: number, amplitude: number, hardness: number) =>
      hammeringRate(
        {
          force,
          amplitude,
          hardness,
          grits: coveredGrits(c, 25 * MM2, d),
          contactDiameter: projectionDiameter(d),
          hardnessRatio: 5,
        },
        25e3,
      );
    const at = [20e-6, 0.3, 5, 25e-6, 6e9] as const;
    const exponents = [1, 0.25, 0.75, 0.75, -0.75];
    exponents.forEach((exponent, i) => {
      const doubled = at.map((value, k) => (k === i ? 2 * value : value)) as unknown as typeof at;
      expect(Math.log2(rate(...doubled) / rate(...at))).toBeCloseTo(exponent, 6);
    });
  });
});

describe('sinusoidal tool', () => {
  it('gives Cook 1966, 2.008 mm/min for the worked setting', () => {
    const setting = { frequency: 25e3, pressure: 0.14e6, hardness: 6.9e9, gritRadius: 5e-6, amplitude: 25e-6 };
    expect(cookRate(setting) * 6e4).toBeCloseTo(2.008, 2);
  });

  it('is Cook with 2 pi for his 5.9', () => {
    const rate = singleSizeRate({
      frequency: 25e3,
      force: 0.14e6,
      hardness: 6.9e9,
      d: 10e-6,
      amplitude: 25e-6,
      hardnessRatio: 0,
    });
    const cook = cookRate({ frequency: 25e3, pressure: 0.14e6, hardness: 6.9e9, gritRadius: 5e-6, amplitude: 25e-6 });
    expect(rate / cook).toBeCloseTo((2 * Math.PI) / 5.9, 10);
  });

  it('stays in contact 28, 9, 4 and 2 times as long as the mean speed says (share of a period, derived)', () => {
    for (const [ratio, mean, exact] of [
      [0.001, 0.00025, 0.00712],
      [0.01, 0.0025, 0.0225],
      [0.05, 0.0125, 0.0505],
      [0.2, 0.05, 0.102],
    ] as const) {
      expect(meanSpeedShare(ratio)).toBeCloseTo(mean, 10);
      // three digits printed, the last of them rounded either way
      expect(loadingShare(ratio) / exact).toBeGreaterThan(0.994);
      expect(loadingShare(ratio) / exact).toBeLessThan(1.006);
    }
  });
});
