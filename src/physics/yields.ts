import { PI, pow } from '#src/base/math.ts';
import type { ProcessConstants } from './constants.ts';
import type { Conditions, WorkMaterial } from './records.ts';

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

/** Flaw from which a crack starts under a dent: c* = 44.2 (K_Ic / H)^2. Lawn and Evans, J. Mater. Sci. 12 (1977) 2195, from memory. */
export function crackStart({ toughness, hardness }: WorkMaterial): number {
  const ratio = toughness / hardness;
  return 44.2 * ratio * ratio;
}

/**
 * Share of a dent's volume that leaves as debris. The lips of a dent break off where a crack can start in them; where it
 * would need a flaw larger than what is strained, the dent only pushes material aside: 1 / (1 + c* / (lipCracks a)), a the
 * contact radius of a median grain at its crushing load. Near one in glass and ceramics, most of a dent in cemented carbide, a few
 * thousandths in ductile metal. Assumed form.
 */
export function debrisShare({ work, abrasive, grit, constants }: Conditions): number {
  const d = grit.massMedian;
  const strength = abrasive.crushStrength * pow(100e-6 / d, abrasive.crushSizeExponent);
  const contact = Math.sqrt((constants.crushFactor * strength * d * d) / (PI * work.hardness));
  return constants.plasticShare / (1 + crackStart(work) / (constants.lipCracks * contact));
}
