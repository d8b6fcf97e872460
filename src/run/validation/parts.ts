import { PI } from '#src/base/math.ts';
import type { Case, Lab } from './lab.ts';
import { bestPressure, bestRate, middleRate, on } from './looks.ts';
import { ABOVE_ONE, NO_WIDTH, type Part, type Range, words } from './record.ts';

/** A round tool of a diameter (m). */
export const round = (diameter: number): Partial<Case> => ({ outline: { kind: 'circle', diameter } });
/** Area of a round tool (m2). */
export const areaOf = (diameter: number) => (PI / 4) * diameter * diameter;

/** A sign or an order: nothing but more, or less, than one. */
export const sign = (what: string, band: Range, predict: Part['predict'], reason?: string): Part => ({
  what,
  unit: '',
  published: words(band === ABOVE_ONE ? 'above 1' : 'below 1'),
  band,
  why: NO_WIDTH,
  predict,
  ...(reason && { reason }),
});

/** Best rate half way down with a change over that without. */
export const gain =
  (changes: Partial<Case>, base: Partial<Case> = {}) =>
  (lab: Lab, amplitude: number) =>
    bestRate(on(lab, amplitude, { ...base, ...changes })) / bestRate(on(lab, amplitude, base));

/** Rate half way down with a change over that without, both at a share of the best load without. */
export const gainAt = (share: number, changes: Partial<Case>) => (lab: Lab, amplitude: number) => {
  const bench = on(lab, amplitude);
  const pressure = share * bestPressure(bench);
  return middleRate(on(lab, amplitude, changes), pressure) / middleRate(bench, pressure);
};
