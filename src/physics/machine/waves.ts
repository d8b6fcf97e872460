import { cos, exp, log, PI, sinCos } from '#src/base/math.ts';
import { acosh, cosh, fallsThroughZero, oscillation, peakOnUnit, sinh } from './elementary.ts';

/**
 * Plane longitudinal waves in a horn of unit length: (S u')' + k^2 S u = 0, u the displacement, S the cross-section,
 * both ends free. With w = D u, D the diameter, every smooth horn here obeys w'' + (k^2 - b^2) w = 0 with a constant
 * b^2 = D''/D, so that one formula serves them all. Webster 1919; the horns' forms as in the textbooks, from memory;
 * derived again here. Thin horns only: no lateral inertia, diameters below about a quarter of the wavelength.
 */

/** Profiles of a half-wave horn. `uniform` is a plain bar; `stepped` has its step at the node, in the middle. */
export type HornShape = 'uniform' | 'stepped' | 'exponential' | 'conical' | 'catenoidal';

/** All shapes, in the order of rising complication. */
export const HORN_SHAPES: readonly HornShape[] = ['uniform', 'stepped', 'exponential', 'conical', 'catenoidal'];

/** A smooth profile over its unit length, input end at z = 0, output end at z = 1. */
interface Profile {
  /** b^2 = D''/D (1). */
  readonly bend: number;
  /** D over its value at the input end. */
  readonly diameter: (z: number) => number;
  /** D'/D. */
  readonly slope: (z: number) => number;
}

/** Throws for a ratio of diameters that is not one of a horn. */
export function checkRatio(ratio: number): void {
  if (!(ratio >= 1 && ratio < 1e6)) {
    throw new RangeError(`the input diameter over the output diameter must lie between 1 and 1e6: ${ratio}`);
  }
}

function profileOf(shape: Exclude<HornShape, 'stepped'>, ratio: number): Profile {
  switch (shape) {
    case 'uniform':
      return { bend: 0, diameter: () => 1, slope: () => 0 };
    case 'exponential': {
      const b = log(ratio);
      return { bend: b * b, diameter: (z) => exp(-b * z), slope: () => -b };
    }
    case 'conical': {
      const fall = (ratio - 1) / ratio;
      return { bend: 0, diameter: (z) => 1 - fall * z, slope: (z) => -(ratio - 1) / (1 + (ratio - 1) * (1 - z)) };
    }
    case 'catenoidal': {
      const b = acosh(ratio);
      const slope = (z: number) => (-b * sinh(b * (1 - z))) / cosh(b * (1 - z));
      return { bend: b * b, diameter: (z) => cosh(b * (1 - z)) / ratio, slope };
    }
  }
}

/** The free wave started at the input end with unit displacement, over unit length, at wave number k. */
export interface HornWave {
  /** Displacement at the output end over that at the input end (negative past the node). */
  readonly tip: number;
  /** Strain at the output end times the length, same scale. */
  readonly tipStrain: number;
}

/** The wave of `HornWave` at wave number times length `k` (rad). */
export function hornWave(shape: HornShape, ratio: number, k: number): HornWave {
  if (shape === 'stepped') {
    // two halves; displacement and force go through the step
    const { sin: s, cos: c } = sinCos(k / 2);
    const areas = ratio * ratio;
    return { tip: c * c - areas * s * s, tipStrain: -k * (1 + areas) * s * c };
  }
  const profile = profileOf(shape, ratio);
  const q = k * k - profile.bend;
  const start = profile.slope(0);
  const { even, odd } = oscillation(q);
  const w = even + start * odd;
  const wSlope = start * even - q * odd;
  const narrowed = profile.diameter(1);
  return { tip: w / narrowed, tipStrain: (wSlope - profile.slope(1) * w) / narrowed };
}

/**
 * Wave number times length of the half-wave resonance (rad), both ends free: pi for a bar and a stepped horn;
 * sqrt(pi^2 + ln^2 N) exponential; tan x = x / (1 + N x^2 / (N - 1)^2) in [pi, 3 pi / 2) conical; catenoidal
 * sqrt(x^2 + arccosh^2 N) with x tan x = -arccosh N sqrt(1 - 1/N^2) in (pi / 2, pi]. Each root is the only one of its
 * bracket, so bisection cannot miss it, for any N from 1 on.
 */
export function resonantWaveNumber(shape: HornShape, ratio: number): number {
  checkRatio(ratio);
  if (ratio === 1 || shape === 'uniform' || shape === 'stepped') return PI;
  if (shape === 'exponential') return Math.sqrt(PI * PI + log(ratio) * log(ratio));
  if (shape === 'conical') {
    const square = (ratio - 1) * (ratio - 1);
    const balance = (x: number) => (square + ratio * x * x) * sinCos(x).sin - square * x * cos(x);
    return fallsThroughZero(balance, PI, 1.5 * PI);
  }
  const b = acosh(ratio);
  const pull = b * Math.sqrt((1 - 1 / ratio) * (1 + 1 / ratio));
  const x = fallsThroughZero((y) => y * sinCos(y).sin + pull * cos(y), PI / 2, PI);
  return Math.sqrt(x * x + b * b);
}

/**
 * Speed of the tip over sound speed times the largest strain in the horn, phi (1), at wave number times length `k`: how
 * much more amplitude the profile allows than a plain bar of the same metal.
 */
export function strainShapeFactor(shape: HornShape, ratio: number, k: number): number {
  checkRatio(ratio);
  // the thin half of a stepped horn is a quarter-wave bar
  if (ratio === 1 || shape === 'uniform' || shape === 'stepped') return 1;
  const profile = profileOf(shape, ratio);
  const start = profile.slope(0);
  const strain = (z: number) => {
    const q = (k * k - profile.bend) * z * z;
    const { even, odd } = oscillation(q);
    const w = even + start * z * odd;
    const wSlope = start * even - (k * k - profile.bend) * z * odd;
    return Math.abs(wSlope - profile.slope(z) * w) / profile.diameter(z);
  };
  return (k * Math.abs(hornWave(shape, ratio, k).tip)) / peakOnUnit(strain);
}
