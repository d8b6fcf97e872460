import { acos, PI } from '#src/base/math.ts';

/**
 * Grits of one size under a tool that moves as a sine, plastic spheres, load over the loading half only. Derived; it
 * shows what Shaw's mean speed leaves out, and gives Cook's formula to 6 % (2 pi for 5.9).
 */

/** Share of a period between touch and closest approach for a penetration `ratio` = delta / A, 0 to 2. */
export function loadingShare(ratio: number): number {
  return acos(1 - ratio) / (2 * PI);
}

/** The same at the mean speed of the tool, as Shaw 1956 has it: delta / (4 A). */
export function meanSpeedShare(ratio: number): number {
  return ratio / 4;
}

/** Removal of plastic spheres in the limit of shallow dents (m3/s): sqrt(2) pi f (F / H) sqrt(d A / (1 + lambda)). */
export function singleSizeRate(setting: {
  readonly frequency: number;
  readonly force: number;
  readonly hardness: number;
  readonly d: number;
  readonly amplitude: number;
  readonly hardnessRatio: number;
}): number {
  const { frequency, force, hardness, d, amplitude, hardnessRatio } = setting;
  return Math.SQRT2 * PI * frequency * (force / hardness) * Math.sqrt((d * amplitude) / (1 + hardnessRatio));
}
