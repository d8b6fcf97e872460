import { cos, exp, log, normalDensity, normalDistribution, normalQuantile, PI, pow, sin } from '#src/base/math.ts';
import type { ProcessConstants } from './constants.ts';
import type { WorkMaterial } from './records.ts';

/** Coefficients of the lateral chip and the radial crack under one grit, from `craterLaw`. SI. */
export interface CraterLaw {
  /** c = radius P^(5/8) sqrt(1 - (P0/P)^(1/4)) (m). */
  readonly radius: number;
  /** b = depth P^(1/2) (m). */
  readonly depth: number;
  /** Median lateral threshold P0 (N). */
  readonly thresholdMedian: number;
  /** Standard deviation of ln P0. */
  readonly thresholdScatter: number;
  /** c_r = crack P^(2/3) (m). */
  readonly crack: number;
}

/** Means over the threshold scatter, per hit: hits that raise no chip count as zeros. */
export interface MeanChip {
  /** Probability that the hit is above its threshold. */
  probability: number;
  /** m3; detachment, lift-off and blunting not included. */
  volume: number;
  /** m; divide by `probability` for the mean over the chips. */
  depth: number;
  /** m; divide by `probability` for the mean over the chips. */
  radius: number;
}

/**
 * Lateral crack radius and threshold of Marshall, Lawn and Evans, J. Am. Ceram. Soc. 65 (1982) 561 (from memory): the
 * radius constant is that of the clamped plate, A = 3/(4 pi), sqrt(0.025 / sqrt(A)) = 0.226, while the threshold keeps
 * A = 3/4. The mixture is deliberate: both numbers are the ones in use for grits under an ultrasonic tool, and the
 * threshold with A = 3/(4 pi) would lie above nearly every grit's load in glass. Depth in the form of the rotary
 * ultrasonic literature with a fitted constant. Radial crack: Anstis, Chantikul, Lawn and Marshall, J. Am. Ceram. Soc.
 * 64 (1981) 533 (from memory). All with the small-crack toughness.
 */
export function craterLaw(work: WorkMaterial, constants: ProcessConstants): CraterLaw {
  const { youngsModulus: modulus, hardness, smallCrackToughness: toughness } = work;
  const cot = cos(constants.tipHalfAngle) / sin(constants.tipHalfAngle);
  const brittleness = toughness / hardness;
  return {
    radius: (constants.crackRadius * pow(cot, 5 / 12) * pow(modulus, 3 / 8)) / Math.sqrt(toughness * hardness),
    depth: (constants.crackDepth * pow(cot, 1 / 3) * Math.sqrt(modulus)) / hardness,
    thresholdMedian:
      constants.thresholdFactor *
      pow(cot, -2 / 3) *
      (brittleness * brittleness * brittleness * toughness) *
      (modulus / hardness),
    thresholdScatter: constants.thresholdScatter,
    crack: pow((constants.radialCrack * Math.sqrt(modulus / hardness)) / toughness, 2 / 3),
  };
}

/** Chip radius c under a load, for one threshold (m); 0 at and below it. */
export function chipRadius(law: CraterLaw, load: number, threshold: number): number {
  if (!(load > threshold) || !(load > 0)) return 0;
  const root = Math.sqrt(load);
  const eighth = Math.sqrt(Math.sqrt(root));
  const onset = 1 - Math.sqrt(Math.sqrt(Math.max(0, threshold) / load));
  return law.radius * root * eighth * Math.sqrt(onset);
}

/** Chip depth b under a load (m). */
export function chipDepth(law: CraterLaw, load: number): number {
  return load > 0 ? law.depth * Math.sqrt(load) : 0;
}

/** Volume of the half-ellipsoid of radius c and depth b under a load, for one threshold (m3). */
export function chipVolume(law: CraterLaw, load: number, threshold: number): number {
  const c = chipRadius(law, load, threshold);
  return (2 / 3) * PI * c * c * chipDepth(law, load);
}

/** Half length of the radial crack under a load (m): the damage it leaves. */
export function radialCrack(law: CraterLaw, load: number): number {
  return load > 0 ? law.crack * pow(load, 2 / 3) : 0;
}

/** ln(P / median P0) in standard deviations of ln P0; +-Infinity for no scatter. */
export function aboveThreshold(law: CraterLaw, load: number): number {
  const excess = log(load / law.thresholdMedian);
  if (law.thresholdScatter > 0) return excess / law.thresholdScatter;
  return excess > 0 ? Number.POSITIVE_INFINITY : Number.NEGATIVE_INFINITY;
}

/** Probability that a hit of this load is above its threshold. */
export function chipProbability(law: CraterLaw, load: number): number {
  return load > 0 ? probabilityAt(aboveThreshold(law, load)) : 0;
}

function probabilityAt(z: number): number {
  if (z > 9) return 1;
  return z < -9 ? 0 : normalDistribution(z);
}

/**
 * Mean over the scatter of 1 - (P0/P)^(1/4), zero where P0 > P. (P0/P)^(1/4) is log-normal, so the mean is closed:
 * Phi(z) - exp(-t z + t^2/2) Phi(z - t), z = ln(P / P0m) / sigma, t = sigma / 4.
 */
function meanOnset(scatter: number, z: number): number {
  const t = scatter / 4;
  return Math.max(0, probabilityAt(z) - exp(t * (t / 2 - z)) * probabilityAt(z - t));
}

/** Mean chip volume per hit of this load, over the threshold scatter (m3). */
export function meanChipVolume(law: CraterLaw, load: number): number {
  if (!(load > 0)) return 0;
  if (!(law.thresholdScatter > 0)) return chipVolume(law, load, law.thresholdMedian);
  const z = aboveThreshold(law, load);
  if (z < -6) return 0;
  const full = fullRadius(law, load);
  return (2 / 3) * PI * full * full * chipDepth(law, load) * meanOnset(law.thresholdScatter, z);
}

/** Twelve-point Gauss-Legendre rule on [-1, 1], positive half (Abramowitz and Stegun table 25.4). */
const NODES = [
  0.1252334085114689, 0.3678314989981802, 0.5873179542866175, 0.7699026741943047, 0.9041172563704749,
  0.9815606342467192,
];
const WEIGHTS = [
  0.2491470458134028, 0.2334925365383548, 0.2031674267230659, 0.1600783285433462, 0.1069393259953184,
  0.0471753363865118,
];

/**
 * Mean over the scatter of sqrt(1 - (P0/P)^(1/4)). The square root at the threshold is taken out by measuring thresholds
 * from it as a square, P0 = P exp(-sigma t^2); two panels of twelve points each.
 */
export function meanRootOnset(scatter: number, z: number): number {
  const from = Math.sqrt(Math.max(0, z - 7));
  const to = Math.sqrt(Math.max(0, z + 7));
  const half = (to - from) / 4;
  let sum = 0;
  for (let panel = 0; panel < 2; panel++) {
    const middle = from + half * (2 * panel + 1);
    for (let i = 0; i < 12; i++) {
      const k = i >> 1;
      const t = middle + half * (i % 2 === 0 ? (NODES[k] as number) : -(NODES[k] as number));
      const onset = 1 - exp((-scatter / 4) * t * t);
      sum += (WEIGHTS[k] as number) * 2 * t * normalDensity(z - t * t) * Math.sqrt(onset);
    }
  }
  return half * sum;
}

/** Radius of a chip far above its threshold (m). */
export function fullRadius(law: CraterLaw, load: number): number {
  const root = Math.sqrt(load);
  return law.radius * root * Math.sqrt(Math.sqrt(root));
}

/** Mean chip radius per hit of this load, over the threshold scatter (m). */
export function meanChipRadius(law: CraterLaw, load: number): number {
  if (!(load > 0)) return 0;
  if (!(law.thresholdScatter > 0)) return chipRadius(law, load, law.thresholdMedian);
  const z = aboveThreshold(law, load);
  if (z < -6) return 0;
  return fullRadius(law, load) * meanRootOnset(law.thresholdScatter, z);
}

/** Probability, volume, depth and radius of the chip of one hit of this load, averaged over the threshold scatter. */
export function meanChip(law: CraterLaw, load: number): MeanChip {
  const probability = chipProbability(law, load);
  return {
    probability,
    volume: meanChipVolume(law, load),
    depth: probability * chipDepth(law, load),
    radius: meanChipRadius(law, load),
  };
}

/** Thresholds P0 at the mid-quantiles (i + 0.5) / n of their scatter, smallest first (N). */
export function thresholdQuantiles(law: CraterLaw, n: number): Float64Array {
  return Float64Array.from(
    { length: n },
    (_, i) => law.thresholdMedian * exp(law.thresholdScatter * normalQuantile((i + 0.5) / n)),
  );
}
