import { describe, expect, test } from 'vitest';
import { stockLibrary } from '#src/formats/stock-library.ts';
import { LARGEST_TRANSDUCER_AMPLITUDE, USUAL_AMPLITUDE, USUAL_FREQUENCY } from '#src/physics/machine/practice.ts';
import { bestHole, HOLE, handbook, READINGS } from '#src/run/validation/lab.ts';
import { bestPressure, middleRate, on } from '#src/run/validation/looks.ts';
import { stockLab } from './support.ts';

/** Facts of the trade. Common practice, no source. */

const lab = stockLab();
const [SMALL_READING, LARGE_READING] = READINGS;

describe('facts of the trade (common practice, no source)', () => {
  test('machines work at 20 to 40 kHz, and the checks are worked out there', () => {
    expect([USUAL_FREQUENCY.min, USUAL_FREQUENCY.max]).toEqual([20e3, 40e3]);
    expect(handbook(SMALL_READING).frequency).toBeGreaterThanOrEqual(USUAL_FREQUENCY.min);
    expect(handbook(SMALL_READING).frequency).toBeLessThanOrEqual(USUAL_FREQUENCY.max);
  });

  test('a transducer alone reaches at most about 0.025 mm, so the larger reading of the handbook needs a horn', () => {
    expect(LARGEST_TRANSDUCER_AMPLITUDE).toBe(0.025e-3);
    expect(LARGE_READING).toBeGreaterThan(LARGEST_TRANSDUCER_AMPLITUDE);
    expect(USUAL_AMPLITUDE.max).toBeLessThanOrEqual(LARGEST_TRANSDUCER_AMPLITUDE);
  });

  test('under the same static load the rate falls as the cutting area grows, about inversely', () => {
    // rate x area over twofold area: within a factor 1.35 of constant, what a load exponent of 0.6 to 1.4 leaves
    const at = (diameter: number) => on(lab, SMALL_READING, { outline: { kind: 'circle', diameter } });
    const load = 0.3 * bestPressure(at(HOLE)) * HOLE * HOLE;
    const rate = (diameter: number) => middleRate(at(diameter), load / (diameter * diameter));
    const half = HOLE / Math.SQRT2;
    expect(rate(half)).toBeGreaterThan(rate(HOLE));
    const constancy = (rate(half) * half * half) / (rate(HOLE) * HOLE * HOLE);
    expect(Math.abs(Math.log(constancy))).toBeLessThan(Math.log(1.35));
  });

  test('amplitude, frequency, and the kind, size and share of the abrasive each change the rate', () => {
    const base = on(lab, SMALL_READING);
    const pressure = 0.4 * bestPressure(base);
    const rate = middleRate(base, pressure);
    const changes = [
      { amplitude: 1.2 * SMALL_READING },
      { frequency: 25e3 },
      { abrasive: 'sic_black' },
      { grade: 'F400' },
      { concentration: 0.1 },
    ];
    // 2 %: what the points of the load curve leave open
    for (const change of changes)
      expect(
        Math.abs(middleRate(on(lab, SMALL_READING, change), pressure) / rate - 1),
        JSON.stringify(change),
      ).toBeGreaterThan(0.02);
    const amplitude = on(lab, 1.2 * SMALL_READING);
    expect(middleRate(amplitude, pressure)).toBeGreaterThan(rate);
  });

  test('conducting and non-conducting work behave alike: no electrical property is known to the program', () => {
    for (const { properties } of stockLibrary.materials)
      expect(Object.keys(properties).join(' ')).not.toMatch(/resist|conduct|electr|permitt|dielectr/i);
  });

  test('tools are short-lived in hard work and long-lived in glass: wear rises from glass to quartz to tungsten carbide', () => {
    for (const amplitude of READINGS) {
      const wear = ['soda_lime', 'quartz', 'wc_6co'].map((work) => bestHole(on(lab, amplitude, { work })).wear);
      expect(wear[1]).toBeGreaterThan(2 * (wear[0] as number));
      expect(wear[2]).toBeGreaterThan(4 * (wear[1] as number));
    }
  });
});
