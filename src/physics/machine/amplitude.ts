import { PI } from '#src/base/math.ts';
import { LOADING_FACTOR } from './practice.ts';

/** What makes the amplitude at the tool. */
export interface AmplitudeChain {
  /** Gain of the horn (1). */
  readonly gain: number;
  /** Loaded over free amplitude (1); 0.9 unless given, 0.8 to 0.95 assumed. */
  readonly loadingFactor?: number;
}

/** Amplitude at the tool under load (m, zero-to-peak): transducer amplitude times gain times loading factor. */
export function tipAmplitude(transducerAmplitude: number, chain: AmplitudeChain): number {
  return transducerAmplitude * chain.gain * (chain.loadingFactor ?? LOADING_FACTOR.nominal);
}

/** Transducer amplitude (m, zero-to-peak) that gives an amplitude at the tool under load. */
export function transducerAmplitudeFor(amplitude: number, chain: AmplitudeChain): number {
  return amplitude / (chain.gain * (chain.loadingFactor ?? LOADING_FACTOR.nominal));
}

/** Peak speed (m/s) and acceleration (m/s2) of a sine of an amplitude (m, zero-to-peak). */
export function peakMotion(
  amplitude: number,
  frequency: number,
): { readonly speed: number; readonly acceleration: number } {
  const omega = 2 * PI * frequency;
  return { speed: omega * amplitude, acceleration: omega * omega * amplitude };
}
