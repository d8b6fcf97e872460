import { PI } from '#src/base/math.ts';
import type { ToolMaterial } from './records.ts';

/** Working strain to which titanium horns are run (Wuchinich 2004). */
export const TITANIUM_STRAIN_LIMIT = 0.0025;
/** Share of the smooth limit above which fillets, brazing and wet corrosion are likely to decide. Common practice. */
export const WARNING_SHARE = 0.5;

/** Sound speed along a bar (m/s). */
export function barSpeed({ youngsModulus, density }: ToolMaterial): number {
  return Math.sqrt(youngsModulus / density);
}

/** Largest strain in the bar (1): the fatigue strength over the modulus, or the material's own strain limit. */
export function strainLimit(tool: ToolMaterial): number {
  return tool.strainLimit ?? tool.fatigueStrength / tool.youngsModulus;
}

/**
 * Largest tip amplitude, zero-to-peak, of a uniform half-wave bar (m): strain at the node is omega A / c, so
 * A = strain c / omega = sigma c / (E omega). Plane longitudinal waves, derived; smooth bar, no fillet.
 */
export function largestTipAmplitude(tool: ToolMaterial, frequency: number): number {
  return (strainLimit(tool) * barSpeed(tool)) / (2 * PI * frequency);
}

/** Largest stress in a uniform half-wave bar at tip amplitude A (Pa). */
export function barStress(tool: ToolMaterial, amplitude: number, frequency: number): number {
  return (tool.youngsModulus * 2 * PI * frequency * amplitude) / barSpeed(tool);
}

/** What to do about an amplitude: fine, warn (above half of the smooth limit) or refuse (above it). */
export interface AmplitudeVerdict {
  readonly answer: 'fine' | 'warn' | 'refuse';
  /** Largest tip amplitude of a smooth bar (m). */
  readonly limit: number;
  /** Amplitude over the limit. */
  readonly share: number;
}

/** Judges a tip amplitude (m, zero-to-peak) against fatigue of the tool bar. */
export function judgeAmplitude(tool: ToolMaterial, amplitude: number, frequency: number): AmplitudeVerdict {
  const limit = largestTipAmplitude(tool, frequency);
  const share = amplitude / limit;
  if (share > 1) return { answer: 'refuse', limit, share };
  return { answer: share > WARNING_SHARE ? 'warn' : 'fine', limit, share };
}
