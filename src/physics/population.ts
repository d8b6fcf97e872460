import { PI } from '#src/base/math.ts';
import type { Conditions } from './records.ts';

/**
 * Volume fraction of grit in a working gap: grits enter only the space left free, and what packs into the gap when it
 * closes bounds them. C_g = C / [1 + C (g + A) / (phi_m g)]; 0 when the gap is shut. Assumed form.
 * @param gap gap at closest approach (m)
 */
export function gapConcentration(conditions: Conditions, gap: number): number {
  const { concentration, amplitude, constants } = conditions;
  if (!(gap > 0) || !(concentration > 0)) return 0;
  return concentration / (1 + (concentration * (gap + amplitude)) / (constants.packing * gap));
}

/**
 * Grits over one square metre of face, in the film of mean height g + A: 6 C_g (g + A) / (pi d30^3), d30 of the
 * truncated law (1/m2).
 */
export function gritsPerArea(conditions: Conditions, gap: number): number {
  const d30 = conditions.grit.meanVolumeDiameter;
  const film = Math.max(0, gap) + conditions.amplitude;
  return (6 * gapConcentration(conditions, gap) * film) / (PI * d30 * d30 * d30);
}
