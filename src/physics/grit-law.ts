import { exp, log, normalDensity, normalDistribution, normalQuantile } from '#src/base/math.ts';
import type { GritLaw } from './records.ts';

/** Spacing of the size classes in ln d: sixteen classes halve the volume, forty-eight the diameter. */
export const CLASS_STEP = Math.LN2 / 48;
/** How many classes down lies half the volume. */
export const CLASSES_PER_HALF_VOLUME = 16;
/** Below this a grain counts as fines (m). */
const SMALLEST_CLASS = 0.4e-6;

/** Five-point Gauss-Legendre rule on [-1, 1], half of it (Abramowitz and Stegun 25.4.30). */
const NODES = [0, 0.5384693101056831, 0.906179845938664];
const WEIGHTS = [0.5688888888888889, 0.47862867049936647, 0.23692688505618908];

/**
 * The truncated log-normal law of a grade, number basis. The median is turned from mass to number by Hatch and Choate
 * (J. Franklin Inst. 207 (1929) 369; ln d50n = ln d50 - 3 s^2, from memory, algebra re-derived), and the law is cut off
 * at the grade's largest grain. d30 of the cut-off law is closed:
 * E[d^3 | d <= D] = exp(3 m + 9 s^2 / 2) Phi((ln D - m - 3 s^2) / s) / Phi((ln D - m) / s), m = ln d50n.
 * @param massMedian d50 by mass (m), before truncation
 * @param spread standard deviation of ln d
 * @param largest largest grain (m)
 * @throws RangeError unless all three are positive and finite
 */
export function gritLaw({ massMedian, spread, largest }: Pick<GritLaw, 'massMedian' | 'spread' | 'largest'>): GritLaw {
  for (const value of [massMedian, spread, largest]) {
    if (!(value > 0 && value < Number.POSITIVE_INFINITY)) {
      throw new RangeError(`a grit law needs positive finite sizes and spread, got ${value}`);
    }
  }
  const logMedian = log(massMedian) - 3 * spread * spread;
  const zLargest = (log(largest) - logMedian) / spread;
  const kept = normalDistribution(zLargest);
  const cube = exp(3 * logMedian + 4.5 * spread * spread) * (normalDistribution(zLargest - 3 * spread) / kept);
  return {
    massMedian,
    spread,
    largest,
    numberMedian: exp(logMedian),
    kept,
    meanVolumeDiameter: exp(log(cube) / 3),
  };
}

/** Where a diameter lies in the untruncated law, in standard deviations of ln d. */
function standardised(law: GritLaw, d: number): number {
  return log(d / law.numberMedian) / law.spread;
}

/** Probability of the standard normal law between two points, with full relative accuracy on short intervals. */
function normalBetween(from: number, to: number): number {
  if (!(to > from)) return 0;
  if (to - from > 0.5) {
    return from > 0
      ? normalDistribution(-from) - normalDistribution(-to)
      : normalDistribution(to) - normalDistribution(from);
  }
  const half = (to - from) / 2;
  const middle = from + half;
  let sum = (WEIGHTS[0] as number) * normalDensity(middle);
  for (let i = 1; i < 3; i++) {
    const offset = half * (NODES[i] as number);
    sum += (WEIGHTS[i] as number) * (normalDensity(middle - offset) + normalDensity(middle + offset));
  }
  return half * sum;
}

/** P(D > d), number basis: 1 at and below zero, 0 at and above the largest grain. */
export function numberTail(law: GritLaw, d: number): number {
  if (!(d > 0)) return 1;
  if (d >= law.largest) return 0;
  return Math.min(1, normalBetween(standardised(law, d), standardised(law, law.largest)) / law.kept);
}

/** Probability density of the diameter, number basis (1/m). */
export function numberDensity(law: GritLaw, d: number): number {
  if (!(d > 0) || d > law.largest) return 0;
  return normalDensity(standardised(law, d)) / (law.kept * law.spread * d);
}

/**
 * The diameter that a share p of the grains exceeds (m): inverse of `numberTail`, relative accuracy 1e-10 down to the
 * last of the tail. p <= 0 gives the largest grain, p >= 1 gives 0.
 */
export function numberQuantile(law: GritLaw, p: number): number {
  if (!(p > 0)) return law.largest;
  if (p >= 1) return 0;
  const zLargest = standardised(law, law.largest);
  let z = Math.min(zLargest, -normalQuantile(p * law.kept + normalDistribution(-zLargest)));
  for (let i = 0; i < 8; i++) {
    const step = (normalBetween(z, zLargest) - p * law.kept) / normalDensity(z);
    z = Math.min(zLargest, z + Math.max(-0.5, Math.min(0.5, step)));
    if (Math.abs(step) < 1e-13 * (1 + Math.abs(z))) break;
  }
  return Math.min(law.largest, law.numberMedian * exp(law.spread * z));
}

/** Size classes, largest first: geometric middle of each class (m) and its share of the number (sums to 1). */
export interface SizeClasses {
  readonly diameter: Float64Array;
  readonly fraction: Float64Array;
}

/**
 * The law in classes equally spaced in ln d (`CLASS_STEP`), from the largest grain down to
 * max(0.4 um, min(d50n e^(-3.2 s), largest / 12)). Only the few largest grains ever touch both faces, so the classes
 * resolve the tail. Grains below the last class are left out, and missing
 * from the sum of the shares: what lies above any edge is the law's own.
 */
export function sizeClasses(law: GritLaw): SizeClasses {
  const bottom = Math.max(
    Math.min(SMALLEST_CLASS, law.largest / 2),
    Math.min(law.numberMedian * exp(-3.2 * law.spread), law.largest / 12),
  );
  const count = Math.max(1, Math.ceil(log(law.largest / bottom) / CLASS_STEP));
  const diameter = new Float64Array(count);
  const fraction = new Float64Array(count);
  const zLargest = standardised(law, law.largest);
  const zStep = CLASS_STEP / law.spread;
  for (let i = 0; i < count; i++) {
    diameter[i] = law.largest * exp(-(i + 0.5) * CLASS_STEP);
    const share = normalBetween(zLargest - (i + 1) * zStep, zLargest - i * zStep);
    fraction[i] = share;
  }
  for (let i = 0; i < count; i++) fraction[i] = (fraction[i] as number) / law.kept;
  return { diameter, fraction };
}
