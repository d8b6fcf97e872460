import { PI, sinCos } from '#src/base/math.ts';

/** Twiddle factors of a transform of `size` points; those of the stage with half-length k lie at k .. 2k - 1. */
export interface FourierPlan {
  readonly size: number;
  readonly cos: Float64Array;
  readonly sin: Float64Array;
}

/** Smallest power of two not below n. */
export function powerOfTwoFrom(n: number): number {
  let size = 1;
  while (size < n) size *= 2;
  return size;
}

/** @throws RangeError unless `size` is a power of two. */
export function fourierPlan(size: number): FourierPlan {
  if (powerOfTwoFrom(size) !== size) throw new RangeError(`a transform needs a power of two of points, not ${size}`);
  const cos = new Float64Array(Math.max(size, 2));
  const sin = new Float64Array(Math.max(size, 2));
  const half = size / 2;
  for (let k = 0; k < half; k++) {
    const turn = sinCos((-2 * PI * k) / size);
    cos[half + k] = turn.cos;
    sin[half + k] = turn.sin;
  }
  for (let span = half / 2; span >= 1; span /= 2) {
    for (let k = 0; k < span; k++) {
      cos[span + k] = cos[2 * span + 2 * k];
      sin[span + k] = sin[2 * span + 2 * k];
    }
  }
  return { size, cos, sin };
}

/**
 * Discrete Fourier transform in place, unscaled; the spectrum comes out in bit-reversed order, in which products of
 * spectra can be taken as they stand (decimation in frequency, Gentleman and Sande 1966, from memory).
 */
export function forward(plan: FourierPlan, re: Float64Array, im: Float64Array): void {
  const { size, cos, sin } = plan;
  for (let span = size >> 1; span >= 1; span >>= 1) {
    for (let start = 0; start < size; start += 2 * span) {
      for (let k = 0; k < span; k++) {
        const a = start + k;
        const b = a + span;
        const dr = re[a] - re[b];
        const di = im[a] - im[b];
        const c = cos[span + k];
        const s = sin[span + k];
        re[a] += re[b];
        im[a] += im[b];
        re[b] = dr * c - di * s;
        im[b] = dr * s + di * c;
      }
    }
  }
}

/** Inverse of `forward`: takes the bit-reversed spectrum, gives the sequence times `size` (the caller scales). */
export function inverse(plan: FourierPlan, re: Float64Array, im: Float64Array): void {
  const { size, cos, sin } = plan;
  for (let span = 1; span < size; span <<= 1) {
    for (let start = 0; start < size; start += 2 * span) {
      for (let k = 0; k < span; k++) {
        const a = start + k;
        const b = a + span;
        const c = cos[span + k];
        const s = -sin[span + k];
        const tr = re[b] * c - im[b] * s;
        const ti = re[b] * s + im[b] * c;
        re[b] = re[a] - tr;
        im[b] = im[a] - ti;
        re[a] += tr;
        im[a] += ti;
      }
    }
  }
}
