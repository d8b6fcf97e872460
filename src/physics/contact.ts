import { atan2, exp, log, PI, sinCos } from '#src/base/math.ts';
import type { Conditions } from './records.ts';

/** Power of the crush cap on the volume of a dent: dent volume goes as load^1.3 between rounded end and sharp tip. */
export const CAP_ON_DENT = 1.3;
/** The kinematics stop here: a grit squeezed by twice the amplitude never leaves contact. */
const LARGEST_OVERLAP = 1.999;
const CRUSH_REFERENCE = 100e-6;

/** Coefficients of the contact of one grit, from `contactLaw`. SI. */
export interface ContactLaw {
  readonly workHardness: number;
  /** Hardness of the tool face at work, hardened for soft metals (Pa). */
  readonly toolHardness: number;
  /** alpha and pi c_d of Ac(h) = alpha h^2 + pi c_d d h. */
  readonly tipArea: number;
  readonly tipEnd: number;
  readonly amplitude: number;
  readonly angularFrequency: number;
  /** Crushing load F_c = crushScale d^crushPower (N). */
  readonly crushScale: number;
  readonly crushPower: number;
  readonly crushWeibull: number;
}

/** One grit between work and tool at closest approach. All zero without overlap. */
export interface GritContact {
  /** Depth of the grit in the work and in the tool (m); they add up to the overlap. */
  workIndent: number;
  toolIndent: number;
  /** Largest load over the cycle, capped by what the grit can bear (N). */
  load: number;
  /** Load before the cap (N). */
  uncappedLoad: number;
  /** Time integral of the load over the loading half of one cycle (N s). */
  impulse: number;
  /** Volume of the dent in the work and in the tool (m3). */
  workDent: number;
  toolDent: number;
}

/** A fresh record for `contact` to fill. */
export function emptyContact(): GritContact {
  return { workIndent: 0, toolIndent: 0, load: 0, uncappedLoad: 0, impulse: 0, workDent: 0, toolDent: 0 };
}

/** The coefficients of `contact` under these conditions. */
export function contactLaw(conditions: Conditions): ContactLaw {
  const { work, tool, abrasive, constants } = conditions;
  const hardens = tool.metal && tool.hardness < constants.toolHardeningLimit;
  return {
    workHardness: work.hardness,
    toolHardness: tool.hardness * (hardens ? constants.toolHardening : 1),
    tipArea: constants.tipAreaFactor,
    tipEnd: PI * constants.tipRoundness,
    amplitude: conditions.amplitude,
    angularFrequency: 2 * PI * conditions.frequency,
    crushScale: constants.crushFactor * abrasive.crushStrength * exp(abrasive.crushSizeExponent * log(CRUSH_REFERENCE)),
    crushPower: 2 - abrasive.crushSizeExponent,
    crushWeibull: abrasive.crushWeibull,
  };
}

/**
 * Load at which 63 % of grains of diameter d crush (N): strength F/d^2 with a size effect, sigma = sigma_100
 * (100 um / d)^b. Strength as load over d^2, so the 0.9 of Hiramatsu and Oka (Int. J. Rock Mech. Min. Sci. 3 (1966) 89)
 * is part of the tabulated strength.
 */
export function crushLoad(law: ContactLaw, d: number): number {
  return d > 0 ? law.crushScale * exp(law.crushPower * log(d)) : 0;
}

/**
 * Depth in the work of a grit of diameter d squeezed by `overlap` between work and tool (m): the root of
 * H_w Ac(h) = H_t Ac(overlap - h), Ac(h) = alpha h^2 + pi c_d d h. The condition is a quadratic, solved in the form that
 * does not cancel.
 */
export function workIndentOf(law: ContactLaw, d: number, overlap: number): number {
  const end = law.tipEnd * d;
  const square = law.tipArea * (law.workHardness - law.toolHardness);
  const linear = end * (law.workHardness + law.toolHardness) + 2 * law.tipArea * law.toolHardness * overlap;
  const constant = law.toolHardness * (law.tipArea * overlap + end) * overlap;
  const depth = (2 * constant) / (linear + Math.sqrt(Math.max(0, linear * linear + 4 * square * constant)));
  return Math.min(overlap, depth);
}

/** Sum over k >= first of (-1)^k coefficient(k) u^(2k+1) / (2k+1)!, for the short-contact series below. */
function oddSeries(u: number, first: number, coefficient: (k: number) => number): number {
  let term = u;
  let sum = 0;
  for (let k = 1; k <= 10; k++) {
    term *= (-u * u) / (2 * k * (2 * k + 1));
    if (k >= first) sum += term * coefficient(k);
  }
  return sum;
}

/**
 * Equivalent time of the loading half for a load linear in the depth (`linear`) and quadratic in it (`square`): impulse
 * over peak load (s). Sinusoidal tool, y = A cos(w t): with cos(theta) = 1 - overlap / A,
 * linear = A (sin theta - theta cos theta) / (overlap w),
 * square = A^2 (theta (cos^2 theta + 1/2) - (3/2) sin theta cos theta) / (overlap^2 w). Short contacts by series, since
 * both brackets cancel. Derived.
 */
export function contactTimes(law: ContactLaw, overlap: number): { linear: number; square: number } {
  const { amplitude, angularFrequency } = law;
  if (!(overlap > 0) || !(amplitude > 0)) return { linear: 0, square: 0 };
  const ratio = Math.min(overlap / amplitude, LARGEST_OVERLAP);
  const theta = 2 * atan2(Math.sqrt(ratio / 2), Math.sqrt(1 - ratio / 2));
  let linear: number;
  let square: number;
  if (theta < 0.5) {
    linear = oddSeries(theta, 1, (k) => -2 * k);
    square = oddSeries(2 * theta, 2, (k) => (2 * k + 1) / 4 - 0.75);
  } else {
    const { sin, cos } = sinCos(theta);
    linear = sin - theta * cos;
    square = theta * (cos * cos + 0.5) - 1.5 * sin * cos;
  }
  return { linear: linear / (ratio * angularFrequency), square: square / (ratio * ratio * angularFrequency) };
}

/** Time from touch to closest approach of a grit squeezed by `overlap` (s). */
export function loadingTime(law: ContactLaw, overlap: number): number {
  if (!(overlap > 0) || !(law.amplitude > 0)) return 0;
  const ratio = Math.min(overlap / law.amplitude, LARGEST_OVERLAP);
  return (2 * atan2(Math.sqrt(ratio / 2), Math.sqrt(1 - ratio / 2))) / law.angularFrequency;
}

/**
 * One grit of diameter d squeezed by `overlap` = d - gap at closest approach. Total: an overlap or a diameter that is
 * not positive gives zeros. A grit carries no more than it bears: P = P0 [1 + (P0 / F_c)^m]^(-1/m), with the impulse
 * cut alike and the dents by the power 1.3; `workIndent` and `toolIndent` are of the whole grit. Fills and returns
 * `out`. Derived; the crush cap is assumed.
 */
export function contact(law: ContactLaw, d: number, overlap: number, out: GritContact): GritContact {
  if (!(overlap > 0) || !(d > 0)) return clear(out);
  const end = law.tipEnd * d;
  const workIndent = workIndentOf(law, d, overlap);
  const toolIndent = overlap - workIndent;
  const sharp = law.tipArea * workIndent;
  const uncapped = law.workHardness * (sharp + end) * workIndent;
  const share = sharp / (sharp + end);
  const times = contactTimes(law, overlap);
  const logCap = logCrushCap(law, d, uncapped);
  const cap = logCap === 0 ? 1 : exp(logCap);
  const dentCap = logCap === 0 ? 1 : exp(CAP_ON_DENT * logCap);
  out.workIndent = workIndent;
  out.toolIndent = toolIndent;
  out.uncappedLoad = uncapped;
  out.load = cap * uncapped;
  out.impulse = out.load * (share * times.square + (1 - share) * times.linear);
  out.workDent = dentCap * workIndent * workIndent * (sharp / 3 + end / 2);
  out.toolDent = dentCap * toolIndent * toolIndent * ((law.tipArea * toolIndent) / 3 + end / 2);
  return out;
}

/** ln of the crush cap y = [1 + (P0 / F_c)^m]^(-1/m). */
function logCrushCap(law: ContactLaw, d: number, uncapped: number): number {
  const excess = law.crushWeibull * (log(uncapped / law.crushScale) - law.crushPower * log(d));
  if (excess < -37) return 0;
  if (excess > 37) return -excess / law.crushWeibull;
  return -log(1 + exp(excess)) / law.crushWeibull;
}

function clear(out: GritContact): GritContact {
  out.workIndent = 0;
  out.toolIndent = 0;
  out.load = 0;
  out.uncappedLoad = 0;
  out.impulse = 0;
  out.workDent = 0;
  out.toolDent = 0;
  return out;
}
