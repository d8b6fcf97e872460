import { PI } from '#src/base/math.ts';
import { type AmplitudeVerdict, barSpeed, barStress, judgeAmplitude, largestTipAmplitude } from '../fatigue.ts';
import type { ToolMaterial } from '../records.ts';
import { type HornShape, hornWave, resonantWaveNumber, strainShapeFactor } from './waves.ts';

/** A half-wave horn between transducer and tool. */
export interface Horn {
  readonly shape: HornShape;
  /** At the transducer (m). */
  readonly inputDiameter: number;
  /** At the tool (m); not larger than the input. */
  readonly outputDiameter: number;
  readonly material: ToolMaterial;
  /**
   * Stress at a fillet or thread over the smooth stress, 1 unless given. Fillet of a stepped horn: 1.3 to 1.8, from
   * memory; the fillet also lowers the gain.
   */
  readonly stressConcentration?: number;
}

/** What a profile does, whatever its size and metal. */
export interface HornCharacter {
  /** Amplitude at the tool over amplitude at the transducer, no tool fixed (1). */
  readonly gain: number;
  /** Resonant length over half a wavelength of a bar, c / 2f (1). */
  readonly lengthFactor: number;
  /** Amplitude the smooth horn allows over that of a plain bar, phi = v_tip / (c strain) (1). */
  readonly shapeFactor: number;
}

/**
 * Gain, length and strain of a half-wave horn of diameter ratio N = D_in / D_out >= 1. Stepped: N^2, 1, 1. Exponential:
 * N, sqrt(1 + (ln N / pi)^2). Conical: the gain tends to 4.603 as N grows. Textbook forms, from memory, derived again;
 * thin horns, no loss. Throws a RangeError for N below 1.
 */
export function hornCharacter(shape: HornShape, diameterRatio: number): HornCharacter {
  const k = resonantWaveNumber(shape, diameterRatio);
  return {
    gain: Math.abs(hornWave(shape, diameterRatio, k).tip),
    lengthFactor: k / PI,
    shapeFactor: strainShapeFactor(shape, diameterRatio, k),
  };
}

/** D_in / D_out of a horn. */
export function diameterRatio(horn: Horn): number {
  return horn.inputDiameter / horn.outputDiameter;
}

/** Length at which the horn alone resonates (m). */
export function resonantLength(horn: Horn, frequency: number): number {
  const { lengthFactor } = hornCharacter(horn.shape, diameterRatio(horn));
  return (lengthFactor * barSpeed(horn.material)) / (2 * frequency);
}

/** How much more amplitude the horn bears than a plain smooth bar of its metal: phi over the stress concentration. */
function relief(horn: Horn): number {
  const { shapeFactor } = hornCharacter(horn.shape, diameterRatio(horn));
  return shapeFactor / (horn.stressConcentration ?? 1);
}

/** Largest amplitude at the tool end, zero-to-peak, that the horn's metal bears (m): phi c strain / (omega K_t). */
export function largestHornAmplitude(horn: Horn, frequency: number): number {
  return relief(horn) * largestTipAmplitude(horn.material, frequency);
}

/** Peak stress in the horn at an amplitude (m, zero-to-peak) at its tool end (Pa): E omega A K_t / (c phi). */
export function hornStress(horn: Horn, amplitude: number, frequency: number): number {
  return barStress(horn.material, amplitude, frequency) / relief(horn);
}

/** Peak strain in the horn at an amplitude (m, zero-to-peak) at its tool end (1). */
export function hornStrain(horn: Horn, amplitude: number, frequency: number): number {
  return hornStress(horn, amplitude, frequency) / horn.material.youngsModulus;
}

/** Judges an amplitude (m, zero-to-peak) at the tool end against fatigue of the horn. */
export function judgeHorn(horn: Horn, amplitude: number, frequency: number): AmplitudeVerdict {
  const factor = relief(horn);
  const verdict = judgeAmplitude(horn.material, amplitude / factor, frequency);
  return { ...verdict, limit: verdict.limit * factor };
}
