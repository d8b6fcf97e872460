import type { ProcessConstants } from './constants.ts';

/**
 * Speed at which the tool face wears back (m/s): a fixed share of the dents the grits leave in it. Every hit counts, with
 * or without a chip on the other side. Assumed form, constant fitted to wear ratios.
 * @param hitRate hits per area and time (1/(m2 s))
 * @param meanToolDent mean dent in the tool per hit (m3), `toolDent` of `contact`
 */
export function faceWearRate(hitRate: number, meanToolDent: number, constants: ProcessConstants): number {
  return constants.toolPlasticShare * hitRate * meanToolDent;
}

/** Volume of tool lost per volume of work removed. */
export function wearRatio(toolVolume: number, workVolume: number): number {
  return workVolume > 0 ? toolVolume / workVolume : 0;
}
