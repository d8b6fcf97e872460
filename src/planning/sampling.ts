import { exp, log, normalQuantile } from '#src/base/math.ts';
import { philox, streamKey } from '#src/base/philox.ts';

/**
 * Designed samples of the properties of one job: Sobol's sequence (1967) in Gray-code order (Antonov and Saleev 1979)
 * with the direction numbers of Joe and Kuo, "Constructing Sobol sequences with better two-dimensional projections",
 * SIAM J. Sci. Comput. 30 (2008) 2635, and a random digital shift, so that every point is uniform and a seed names the
 * sample. Own code: the packages on offer read their tables from disk and cannot run in a window.
 */

/** Most inputs a sample can have. */
export const SAMPLE_DIMENSIONS = 24;

/**
 * Degree, inner coefficients of the primitive polynomial and first odd numbers m of dimensions 2 to 24 (Joe and Kuo).
 */
const JOE_KUO: readonly (readonly [degree: number, coefficients: number, first: readonly number[]])[] = [
  [1, 0, [1]],
  [2, 1, [1, 3]],
  [3, 1, [1, 3, 1]],
  [3, 2, [1, 1, 1]],
  [4, 1, [1, 1, 3, 3]],
  [4, 4, [1, 3, 5, 13]],
  [5, 2, [1, 1, 5, 5, 17]],
  [5, 4, [1, 1, 5, 5, 5]],
  [5, 7, [1, 1, 7, 11, 19]],
  [5, 11, [1, 1, 5, 1, 1]],
  [5, 13, [1, 1, 1, 3, 11]],
  [5, 14, [1, 3, 5, 5, 31]],
  [6, 1, [1, 3, 3, 9, 7, 49]],
  [6, 13, [1, 1, 1, 15, 21, 21]],
  [6, 16, [1, 3, 1, 13, 27, 49]],
  [6, 19, [1, 1, 1, 15, 7, 5]],
  [6, 22, [1, 3, 1, 15, 13, 25]],
  [6, 25, [1, 1, 5, 5, 19, 61]],
  [7, 1, [1, 3, 7, 11, 23, 15, 103]],
  [7, 4, [1, 3, 7, 13, 13, 15, 69]],
  [7, 7, [1, 1, 3, 13, 7, 35, 63]],
  [7, 8, [1, 3, 5, 9, 1, 25, 53]],
  [7, 14, [1, 3, 1, 13, 9, 35, 107]],
];

const BITS = 32;
const UNIT = 1 / 4294967296;

/** Direction numbers of dimension `d` (0-based) as 32-bit fractions, most significant first. */
function directions(d: number): Int32Array {
  const v = new Int32Array(BITS);
  if (d === 0) return v.map((_, j) => 1 << (BITS - 1 - j));
  const [degree, coefficients, first] = JOE_KUO[d - 1] as (typeof JOE_KUO)[number];
  for (let j = 0; j < BITS; j++) {
    if (j < degree) {
      v[j] = (first[j] as number) << (BITS - 1 - j);
      continue;
    }
    const back = v[j - degree] as number;
    let bits = back ^ (back >>> degree);
    for (let k = 1; k < degree; k++) {
      if ((coefficients >>> (degree - 1 - k)) & 1) bits ^= v[j - k] as number;
    }
    v[j] = bits;
  }
  return v;
}

/** What names a designed sample. */
export interface SampleDesign {
  /** Points; a power of two is balanced best. */
  readonly count: number;
  /** Inputs, at most `SAMPLE_DIMENSIONS`. */
  readonly dimensions: number;
  /** Of the digital shift; without one the sequence is the published one, its first point at the origin. */
  readonly seed?: number;
}

/**
 * Points of Sobol's sequence in (0, 1)^k, `count` x `dimensions`, one point after the other. The first points of a
 * longer sample are those of a shorter one of the same seed. The shift flips the digits of a dimension by one random
 * word (Cranley and Patterson's idea in base two; Owen 2020 on why the first point stays), which keeps the net's
 * balance. Values lie in the middle of cells of 2^-32. Throws a RangeError for counts and dimensions it cannot serve.
 */
export function sobolSample({ count, dimensions, seed }: SampleDesign): Float64Array {
  if (!(Number.isInteger(count) && count >= 0 && count < 2 ** 31)) {
    throw new RangeError(`a sample needs a whole number of points below 2^31: ${count}`);
  }
  if (!(Number.isInteger(dimensions) && dimensions >= 1 && dimensions <= SAMPLE_DIMENSIONS)) {
    throw new RangeError(`a sample has 1 to ${SAMPLE_DIMENSIONS} inputs: ${dimensions}`);
  }
  const sample = new Float64Array(count * dimensions);
  const word = new Uint32Array(4);
  for (let d = 0; d < dimensions; d++) {
    const v = directions(d);
    let x = seed === undefined ? 0 : (philox(word, d, 0, 0, 0, streamKey(seed), 0x50b01)[0] as number) | 0;
    for (let i = 0; i < count; i++) {
      if (i > 0) x ^= v[31 - Math.clz32(i & -i)] as number;
      sample[i * dimensions + d] = ((x >>> 0) + 0.5) * UNIT;
    }
  }
  return sample;
}

/** Law of one input. Any unit; a triangular law is a property's least, nominal and largest value. */
export type InputLaw =
  | { readonly kind: 'triangular'; readonly min: number; readonly nominal: number; readonly max: number }
  | { readonly kind: 'uniform'; readonly min: number; readonly max: number }
  /** `spread` is the standard deviation of the logarithm. */
  | { readonly kind: 'log-normal'; readonly median: number; readonly spread: number };

/** Throws a RangeError for a law whose numbers are out of order. */
export function checkLaw(law: InputLaw): void {
  const wrong = () => new RangeError(`not a law of an input: ${JSON.stringify(law)}`);
  if (law.kind === 'log-normal') {
    if (!(law.median > 0 && law.spread >= 0 && Number.isFinite(law.median + law.spread))) throw wrong();
    return;
  }
  const nominal = law.kind === 'triangular' ? law.nominal : law.min;
  if (!(law.min <= nominal && nominal <= law.max && Number.isFinite(law.max - law.min))) throw wrong();
}

/** Value below which a share `p` in [0, 1] of the law lies: the inverse of its distribution function. */
export function quantileOf(law: InputLaw, p: number): number {
  switch (law.kind) {
    case 'uniform':
      return law.min + p * (law.max - law.min);
    case 'log-normal':
      return law.spread === 0 ? law.median : law.median * exp(law.spread * normalQuantile(p));
    case 'triangular': {
      const { min, nominal, max } = law;
      const range = max - min;
      if (range === 0) return nominal;
      if (p * range < nominal - min) return Math.min(nominal, min + Math.sqrt(p * range * (nominal - min)));
      return Math.max(nominal, max - Math.sqrt((1 - p) * range * (max - nominal)));
    }
  }
}

/** Mean and variance of a law. Triangular: (a + m + b) / 3 and (a^2 + m^2 + b^2 - am - ab - mb) / 18. */
export function momentsOf(law: InputLaw): { readonly mean: number; readonly variance: number } {
  switch (law.kind) {
    case 'uniform':
      return { mean: 0.5 * (law.min + law.max), variance: (law.max - law.min) ** 2 / 12 };
    case 'log-normal': {
      const s2 = law.spread * law.spread;
      return { mean: law.median * exp(0.5 * s2), variance: law.median ** 2 * exp(s2) * (exp(s2) - 1) };
    }
    case 'triangular': {
      // by the sides, which do not cancel
      const left = law.nominal - law.min;
      const right = law.max - law.nominal;
      return {
        mean: law.nominal + (right - left) / 3,
        variance: (left * left + left * right + right * right) / 18,
      };
    }
  }
}

/** Log-normal law whose central 90 % lies between `low` and `high`, both positive. */
export function logNormalBetween(low: number, high: number): InputLaw {
  const law: InputLaw = {
    kind: 'log-normal',
    median: Math.sqrt(low) * Math.sqrt(high),
    spread: log(high / low) / (2 * normalQuantile(0.95)),
  };
  checkLaw(law);
  return law;
}

/** A sample and what it means. */
export interface LawSample {
  /** Points in (0, 1)^k, `count` x k, one point after the other. */
  readonly unit: Float64Array;
  /** The same points as values of the inputs, same order. */
  readonly values: Float64Array;
}

/** A designed sample of independent inputs: column d of the values follows `laws[d]`. */
export function sampleLaws(laws: readonly InputLaw[], count: number, seed: number): LawSample {
  for (const law of laws) checkLaw(law);
  const dimensions = laws.length;
  const unit = sobolSample({ count, dimensions, seed });
  const values = unit.map((p, i) => quantileOf(laws[i % dimensions] as InputLaw, p));
  return { unit, values };
}

/** Point `i` of a sample of `dimensions` inputs, as a view. */
export function pointOf(sample: Float64Array, dimensions: number, i: number): Float64Array {
  return sample.subarray(i * dimensions, (i + 1) * dimensions);
}
