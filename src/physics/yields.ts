import { pow } from '#src/base/math.ts';
import type { ProcessConstants } from './constants.ts';
import type { Conditions } from './records.ts';

/**
 * Share of hits by grits of diameter d that can remove anything: a grit that the tool's return does not lift by about
 * its own size falls back into its own dent. 1 / (1 + (c_m d / 2A)^2); 0 without amplitude. Assumed form, fitted constant.
 */
export function liftOff(d: number, amplitude: number, constants: ProcessConstants): number {
  if (!(amplitude > 0)) return 0;
  const ratio = (constants.liftOff * d) / (2 * amplitude);
  return 1 / (1 + ratio * ratio);
}

/**
 * Share of hits that a grit near the work's own hardness still makes with a sharp tip: 1 / (1 + (H_w / (r H_a))^n),
 * Vickers hardness of the work against Knoop hardness of the grit. Assumed.
 */
export function blunting(workHardness: number, gritHardness: number, constants: ProcessConstants): number {
  return 1 / (1 + pow(workHardness / (constants.bluntingRatio * gritHardness), constants.bluntingPower));
}

/**
 * Share of hits that remove: lift-off times blunting. It marks hits and multiplies counts and volumes; a hit that
 * removes nothing still carries its load.
 */
export function hitYield(conditions: Conditions, d: number): number {
  const { amplitude, constants, work, abrasive } = conditions;
  return liftOff(d, amplitude, constants) * blunting(work.hardness, abrasive.hardness, constants);
}
