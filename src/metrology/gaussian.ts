import type { Profile } from '#src/base/field.ts';
import { exp, PI } from '#src/base/math.ts';
import { forward, fourierPlan, inverse, powerOfTwoFrom } from './fft.ts';
import { withoutLine } from './linear.ts';

/** alpha = sqrt(ln 2 / pi), which puts the 50 % transmission at the nesting index (ISO 16610-21). */
export const GAUSSIAN_ALPHA = 0.469718639349826;
/**
 * The weighting function is followed to this many nesting indices; 2.5e-11 of its weight lies outside (computed), far
 * below what any parameter can show, and the rest is renormalised.
 */
const REACH = 1.25;

/** Weighting function s(x) of nesting index `cutoff` (1/m, area 1), ISO 16610-21. */
export function gaussianWeight(x: number, cutoff: number): number {
  const scaled = x / (GAUSSIAN_ALPHA * cutoff);
  return exp(-PI * scaled * scaled) / (GAUSSIAN_ALPHA * cutoff);
}

/** Share of the amplitude of a wave of length `wavelength` that the mean line keeps: 2^-(cutoff/wavelength)^2. */
export function gaussianTransmission(wavelength: number, cutoff: number): number {
  return exp(-Math.LN2 * (cutoff / wavelength) ** 2);
}

/** Weights s(d spacing), d = 0 .. reach, unnormalised with s(0) = 1; never longer than `longest` + 1 entries. */
export function gaussianTaps(spacing: number, cutoff: number, longest: number): Float64Array {
  const reach = Math.max(1, Math.min(longest, Math.ceil((REACH * cutoff) / spacing)));
  return Float64Array.from({ length: reach + 1 }, (_, d) => {
    const scaled = (d * spacing) / (GAUSSIAN_ALPHA * cutoff);
    return exp(-PI * scaled * scaled);
  });
}

/** @throws RangeError unless the profile has at least three points, all finite, at a positive spacing. */
export function checkProfile(profile: Profile): void {
  if (!(profile.spacing > 0 && Number.isFinite(profile.spacing)))
    throw new RangeError(`the spacing of a profile must be positive, not ${profile.spacing} m`);
  if (profile.z.length < 3) throw new RangeError(`a profile needs three points at least, not ${profile.z.length}`);
  const bad = profile.z.findIndex((height) => !Number.isFinite(height));
  if (bad >= 0) throw new RangeError(`the height at point ${bad} of the profile is ${profile.z[bad]}`);
}

/** Up to this many points to either side the sums are taken as they stand instead of through the transform. */
const DIRECT_REACH = 64;

interface WeightedSums {
  readonly t0: Float64Array;
  readonly t1: Float64Array;
}

/** Weighted sums of every point, T0 = sum w(j - i) z_j and T1 = sum (j - i)/reach w(j - i) z_j, term by term. */
export function directSums(z: Float64Array, taps: Float64Array): WeightedSums {
  const n = z.length;
  const reach = taps.length - 1;
  const t0 = new Float64Array(n);
  const t1 = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let even = taps[0] * z[i];
    let odd = 0;
    const inside = Math.min(reach, i, n - 1 - i);
    for (let d = 1; d <= inside; d++) {
      even += taps[d] * (z[i + d] + z[i - d]);
      odd += taps[d] * d * (z[i + d] - z[i - d]);
    }
    // at an end only one side is left
    const side = i < n - 1 - i ? 1 : -1;
    const far = Math.min(reach, side > 0 ? n - 1 - i : i);
    for (let d = inside + 1; d <= far; d++) {
      even += taps[d] * z[i + side * d];
      odd += side * taps[d] * d * z[i + side * d];
    }
    t0[i] = even;
    t1[i] = odd / reach;
  }
  return { t0, t1 };
}

/** The same sums by the convolution theorem; both come out of one complex kernel. */
export function transformSums(z: Float64Array, taps: Float64Array): WeightedSums {
  const reach = taps.length - 1;
  const size = powerOfTwoFrom(z.length + reach);
  const plan = fourierPlan(size);
  const re = new Float64Array(size);
  const im = new Float64Array(size);
  re.set(z);
  const kernelRe = new Float64Array(size);
  const kernelIm = new Float64Array(size);
  for (let d = -reach; d <= reach; d++) {
    const slot = (d + size) % size;
    kernelRe[slot] += taps[Math.abs(d)];
    kernelIm[slot] -= (d / reach) * taps[Math.abs(d)];
  }
  forward(plan, re, im);
  forward(plan, kernelRe, kernelIm);
  for (let k = 0; k < size; k++) {
    const real = (re[k] * kernelRe[k] - im[k] * kernelIm[k]) / size;
    im[k] = (re[k] * kernelIm[k] + im[k] * kernelRe[k]) / size;
    re[k] = real;
  }
  inverse(plan, re, im);
  return { t0: re, t1: im };
}

/** Running sums of w, w d/reach and w (d/reach)^2 from -reach up to but not including d = index - reach. */
function tapMoments(taps: Float64Array): readonly [Float64Array, Float64Array, Float64Array] {
  const reach = taps.length - 1;
  const sums = [0, 1, 2].map(() => new Float64Array(2 * reach + 2)) as [Float64Array, Float64Array, Float64Array];
  for (let d = -reach; d <= reach; d++) {
    const slot = d + reach;
    const w = taps[Math.abs(d)];
    sums[0][slot + 1] = sums[0][slot] + w;
    sums[1][slot + 1] = sums[1][slot] + (w * d) / reach;
    sums[2][slot + 1] = sums[2][slot] + w * (d / reach) ** 2;
  }
  return sums;
}

/** Local first-order regression with Gaussian weights at every point. */
function regression(z: Float64Array, taps: Float64Array): Float64Array {
  const n = z.length;
  const reach = taps.length - 1;
  const { t0, t1 } = reach <= DIRECT_REACH ? directSums(z, taps) : transformSums(z, taps);
  const [p0, p1, p2] = tapMoments(taps);
  const line = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    const from = Math.max(-reach, -i) + reach;
    const to = Math.min(reach, n - 1 - i) + reach + 1;
    const s0 = p0[to] - p0[from];
    const s1 = p1[to] - p1[from];
    const s2 = p2[to] - p2[from];
    line[i] = (s2 * t0[i] - s1 * t1[i]) / (s0 * s2 - s1 * s1);
  }
  return line;
}

/**
 * Low-pass mean line of a profile: Gaussian filter of ISO 16610-21 with nesting index `cutoff` (m). Inside, this is the
 * standard's weighted mean. Within about one `cutoff` of an end the weights are those of a local straight line (first
 * moment retained, ISO/TS 16610-28, from memory), so the whole length is kept and a straight profile is its own mean
 * line to the very end. The weighting function is sampled at the points: true to 3e-8 from five points per cutoff, to
 * 0.4 % at three.
 * @throws RangeError for a profile `checkProfile` refuses or a cutoff that is not positive.
 */
export function meanLine(profile: Profile, cutoff: number): Profile {
  const residual = highPass(profile, cutoff);
  return { spacing: profile.spacing, z: profile.z.map((height, i) => height - residual.z[i]) };
}

/** What the mean line of `cutoff` leaves (the L-filter). Ends and errors as in `meanLine`. */
export function highPass(profile: Profile, cutoff: number): Profile {
  checkProfile(profile);
  if (!(cutoff > 0 && Number.isFinite(cutoff)))
    throw new RangeError(`a nesting index must be positive, not ${cutoff} m`);
  const z = withoutLine(profile.z);
  const smooth = regression(z, gaussianTaps(profile.spacing, cutoff, z.length - 1));
  return { spacing: profile.spacing, z: z.map((height, i) => height - smooth[i]) };
}

/** S-filter `shortest`, then L-filter `longest`: keeps the wavelengths between the two (m). */
export function bandPass(profile: Profile, shortest: number, longest: number): Profile {
  if (!(shortest < longest)) throw new RangeError(`no band between ${shortest} m and ${longest} m`);
  return highPass(meanLine(profile, shortest), longest);
}
