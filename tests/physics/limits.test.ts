import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { publishedConstants } from '#src/physics/constants.ts';
import { crushProbability, pointLoad, weibullSizeRatio } from '#src/physics/crushing.ts';
import { edgeChip, edgeChipDistance, edgeChipLoad, exitLigament, scallopDepth } from '#src/physics/edge-chip.ts';
import { barStress, judgeAmplitude, largestTipAmplitude, TITANIUM_STRAIN_LIMIT } from '#src/physics/fatigue.ts';
import { BOUNDARY_ENERGY, smallCrackToughness } from '#src/physics/toughness.ts';
import { lowCarbonSteel } from './samples.ts';

describe('edge chips (Chai and Lawn 2007, 9.3 from memory)', () => {
  it('need 6.975 N at 0.1 mm in glass and 415.9 N at 0.5 mm in alumina', () => {
    expect(edgeChipLoad(0.75e6, 0.1e-3, publishedConstants)).toBeCloseTo(6.975, 3);
    expect(edgeChipLoad(4e6, 0.5e-3, publishedConstants)).toBeCloseTo(415.9, 1);
  });

  it.each([
    [0.1, 5.9],
    [0.5, 17.3],
    [1, 27.39],
    [2, 43.5],
  ])('a load of %d N chips glass from %d um', (load, distance) => {
    expect(Math.abs((edgeChipDistance(0.75e6, load, publishedConstants) * 1e6) / distance - 1)).toBeLessThan(0.005);
  });

  it('load and distance are inverse to each other', () => {
    fc.assert(
      fc.property(fc.double({ min: 1e-7, max: 1e-2, noNaN: true }), (h) => {
        const back = edgeChipDistance(1e6, edgeChipLoad(1e6, h, publishedConstants), publishedConstants);
        expect(Math.abs(back / h - 1)).toBeLessThan(1e-12);
      }),
      { seed: 11 },
    );
  });

  it('leave a scallop three depths wide and five long, deepest in its middle and nothing beyond its ends', () => {
    const chip = edgeChip(20e-6, publishedConstants);
    expect(chip.width).toBeCloseTo(60e-6, 15);
    expect(chip.breadth).toBeCloseTo(100e-6, 15);
    expect(scallopDepth(chip, 0)).toBe(20e-6);
    expect(scallopDepth(chip, 50e-6)).toBe(0);
    expect(scallopDepth(chip, 30e-6)).toBeCloseTo(16e-6, 15);
  });

  it('break out through a last 0.2443 mm under 10 N at 40 MPa, whatever the tool (plate theory)', () => {
    expect(exitLigament(10, 40e6) * 1e3).toBeCloseTo(0.2443, 4);
    expect(exitLigament(20, 40e6) / exitLigament(5, 40e6)).toBeCloseTo(2, 12);
  });
});

describe('crushing', () => {
  it('splits a 100 um grain of 500 MPa at 5.56 N (Hiramatsu and Oka 1966, from memory)', () => {
    expect(pointLoad(500e6, 100e-6)).toBeCloseTo(5.556, 3);
  });

  it('makes grains of 50 um 17 to 50 times as strong as 20 mm ones for moduli 6.3 to 4.6 (powder data of 1979)', () => {
    expect(weibullSizeRatio(50e-6, 20e-3, 6.3)).toBeCloseTo(17.3, 0);
    expect(weibullSizeRatio(50e-6, 20e-3, 4.6)).toBeCloseTo(49.8, 0);
  });

  it('crushes 63 % at the crushing load and none without load', () => {
    expect(crushProbability(2, 2, 4)).toBeCloseTo(1 - Math.exp(-1), 12);
    expect(crushProbability(0, 2, 4)).toBe(0);
  });
});

describe('fatigue of the tool bar', () => {
  const titanium = {
    ...lowCarbonSteel,
    youngsModulus: 113.9e9,
    density: 113.9e9 / (5070 * 5070),
    fatigueStrength: 496e6,
    strainLimit: TITANIUM_STRAIN_LIMIT,
  };

  it('stresses a titanium half-wave bar to 141.2 MPa at 50 um and 20 kHz', () => {
    expect(barStress(titanium, 50e-6, 20e3) / 1e6).toBeCloseTo(141.2, 0);
  });

  it('lets titanium run to 100.9, 80.7 and 50.4 um at 20, 25 and 40 kHz, 0.25 % strain (Wuchinich 2004)', () => {
    const limit = (f: number) => largestTipAmplitude(titanium, f) * 1e6;
    expect(limit(20e3)).toBeCloseTo((0.0025 * 5070 * 1e6) / (2 * Math.PI * 20e3), 6);
    expect(limit(20e3)).toBeCloseTo(100.9, 1);
    expect(limit(25e3)).toBeCloseTo(80.7, 1);
    expect(limit(40e3)).toBeCloseTo(50.4, 1);
  });

  it.each([
    ['steel', 200, 7870, 40, 32, 20],
    ['aluminium bronze', 185, 7598, 49, 39, 25],
    ['marine bronze', 150, 8399, 39, 31, 20],
  ])('%s at its fatigue strength reaches the tabulated amplitudes', (name, strength, density, at20, at25, at40) => {
    const modulus = { steel: 205.5e9, 'aluminium bronze': 117e9, 'marine bronze': 110e9 }[name] as number;
    const bar = { ...lowCarbonSteel, youngsModulus: modulus, density, fatigueStrength: strength * 1e6 };
    for (const [f, printed] of [
      [20e3, at20],
      [25e3, at25],
      [40e3, at40],
    ] as const) {
      // printed to the micrometre
      expect(Math.abs(largestTipAmplitude(bar, f) * 1e6 - printed)).toBeLessThan(0.7);
    }
  });

  it('is refused above the smooth limit and warned of above half of it', () => {
    const limit = largestTipAmplitude(lowCarbonSteel, 20e3);
    expect(judgeAmplitude(lowCarbonSteel, 0.4 * limit, 20e3).answer).toBe('fine');
    expect(judgeAmplitude(lowCarbonSteel, 0.6 * limit, 20e3).answer).toBe('warn');
    expect(judgeAmplitude(lowCarbonSteel, 1.1 * limit, 20e3).answer).toBe('refuse');
  });
});

describe('small-crack toughness', () => {
  it('is K_Ic for glass and crystal, the boundary for sintered ceramics, the mean for cermets', () => {
    const boundary = Math.sqrt(BOUNDARY_ENERGY * 385e9);
    expect(smallCrackToughness('glass', 0.75e6, 70e9)).toBe(0.75e6);
    expect(smallCrackToughness('crystal', 2.2e6, 400e9)).toBe(2.2e6);
    expect(smallCrackToughness('ceramic', 3.7e6, 385e9)).toBe(boundary);
    // tungsten carbide with 6 % cobalt
    expect(smallCrackToughness('cermet', 10.5e6, 620e9)).toBeCloseTo(Math.sqrt(Math.sqrt(8 * 620e9) * 10.5e6), 3);
  });

  it('never exceeds the long-crack toughness', () => {
    const kinds = ['glass', 'crystal', 'ceramic', 'toughened-ceramic', 'glass-ceramic', 'cermet'] as const;
    fc.assert(
      fc.property(
        fc.constantFrom(...kinds),
        fc.double({ min: 0.3e6, max: 15e6, noNaN: true }),
        fc.double({ min: 20e9, max: 700e9, noNaN: true }),
        (kind, k, e) => smallCrackToughness(kind, k, e) <= k,
      ),
      { seed: 12 },
    );
  });
});
