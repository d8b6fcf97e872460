import { describe, expect, it } from 'vitest';
import { lateralDepth, lateralRadiusAboveThreshold } from '#src/physics/indentation.ts';
import { type KainthSetting, kainth, plasticCrater } from '#src/physics/kainth.ts';
import { oneLayerGrits, rozenbergDensity, rozenbergMoment, rozenbergTail } from '#src/physics/rozenberg.ts';

const mean = 29.2e-6;
const area = 25 * Math.PI * 1e-6;
const glass = { youngsModulus: 70e9, hardness: 5.5e9, toughness: 0.75e6 };

/** Lateral chip with its threshold and the 0.43 form of the depth. */
function lateralChip(load: number): number {
  const c = lateralRadiusAboveThreshold(glass, load);
  return (2 / 3) * Math.PI * c * c * lateralDepth(glass, load, 'lambropoulos');
}

/** Lateral chip of the rotary literature: 0.226 for radius and depth, no threshold. */
function rotaryChip(load: number): number {
  const c = 2.814e-5 * load ** 0.625;
  return (2 / 3) * Math.PI * c * c * 8.037e-6 * Math.sqrt(load);
}

function setting(force: number, volume: KainthSetting['volume'], over: Partial<KainthSetting> = {}): KainthSetting {
  return {
    force,
    area,
    amplitude: 20e-6,
    frequency: 20e3,
    concentration: 0.3,
    meanDiameter: mean,
    hardness: 5.5e9,
    hardnessRatio: 5.5 / 2,
    volume,
    bins: 4000,
    ...over,
  };
}

describe('Rozenberg size law', () => {
  it('integrates to one, mean d_m, standard deviation d_m/3, <d^3> = 4/3 d_m^3', () => {
    const n = 20000;
    const sums = [0, 0, 0, 0];
    for (let i = 0; i < n; i++) {
      const d = ((i + 0.5) / n) * 2 * mean;
      for (let k = 0; k < 4; k++) sums[k] = (sums[k] ?? 0) + rozenbergDensity(d, mean) * d ** k * ((2 * mean) / n);
    }
    // midpoint rule with zero slope at both ends: error of order n^-2
    for (const k of [0, 1, 2, 3] as const) expect((sums[k] as number) / rozenbergMoment(k, mean)).toBeCloseTo(1, 7);
    expect(Math.sqrt(rozenbergMoment(2, 1) - 1)).toBeCloseTo(1 / 3, 12);
  });

  it('has the printed tails', () => {
    for (const [x, tail] of [
      [1.2, 0.28979],
      [1.5, 0.070557],
      [1.7, 0.012103],
      [1.8, 0.002728],
      [1.9, 1.936e-4],
    ] as const) {
      // five digits printed
      expect(Math.abs(rozenbergTail(x * mean, mean) - tail)).toBeLessThan(1e-5);
    }
  });
});

describe('Kainth-type balance with a sinusoidal tool', () => {
  it('counts 52 777 grits in one layer under a 10 mm tool', () => {
    expect(oneLayerGrits(0.3, area, mean)).toBeCloseTo(52777, -1);
  });

  // rows of a table derived for F320-like grit, 10 mm tool, soda-lime: force, gap um, active, mean and largest load, rates
  it.each([
    [2.5, 52.33, 167, 0.318, 1.63, 0.524, 2.45, 6.56],
    [5, 51.47, 273, 0.362, 1.87, 1.04, 5.31, 13.5],
    [10, 50.47, 445, 0.413, 2.13, 2.07, 11.5, 27.7],
    [20, 49.33, 727, 0.47, 2.44, 4.11, 24.7, 56.8],
  ])('at %d N floats at %d um on %d grits', (force, gap, active, meanLoad, largest, plastic, lateral, rotary) => {
    const result = kainth(setting(force, plasticCrater));
    const perMinute = (volume: KainthSetting['volume']) => (kainth(setting(force, volume)).rate / area) * 6e4;
    expect(result.gap * 1e6).toBeCloseTo(gap, 1);
    // two to four digits printed: 1 % covers their rounding
    for (const [got, printed] of [
      [result.activeGrits, active],
      [result.meanLoad, meanLoad],
      [result.largestLoad, largest],
      [perMinute(plasticCrater), plastic],
      [perMinute(lateralChip), lateral],
      [perMinute(rotaryChip), rotary],
    ] as const) {
      expect(Math.abs(got / printed - 1)).toBeLessThan(0.01);
    }
  });

  it('has the local exponents F^0.99 A^0.50 f^1 d^0.50 C^0.01 plastic and F^1.11 A^0.56 d^1.68 C^-0.11 lateral', () => {
    const rate = (volume: KainthSetting['volume'], over: Partial<KainthSetting>) =>
      kainth(setting(over.force ?? 10, volume, over)).rate;
    const exponent = (volume: KainthSetting['volume'], key: keyof KainthSetting, at: number) =>
      Math.log(rate(volume, { [key]: at * 1.02 }) / rate(volume, { [key]: at / 1.02 })) / Math.log(1.02 * 1.02);
    const cases = [
      ['force', 10, 0.99, 1.11],
      ['amplitude', 20e-6, 0.5, 0.56],
      ['frequency', 20e3, 1, 1],
      ['meanDiameter', mean, 0.5, 1.68],
      ['concentration', 0.3, 0.01, -0.11],
    ] as const;
    for (const [key, at, plastic, lateral] of cases) {
      expect(Math.abs(exponent(plasticCrater, key, at) - plastic)).toBeLessThan(0.02);
      expect(Math.abs(exponent(lateralChip, key, at) - lateral)).toBeLessThan(0.02);
    }
  });
});
