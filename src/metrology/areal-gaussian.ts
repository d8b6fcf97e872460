import type { HeightField } from '#src/base/field.ts';
import { type FourierPlan, forward, fourierPlan, inverse, powerOfTwoFrom } from './fft.ts';
import { gaussianTaps } from './gaussian.ts';
import { fitPlane, planeAt, withoutPlane } from './plane.ts';

/** Convolves lines of `length` pairs (height, weight) with the Gaussian of one nesting index. */
interface LineFilter {
  readonly plan: FourierPlan;
  readonly spectrum: Float64Array;
  readonly re: Float64Array;
  readonly im: Float64Array;
}

function makeLineFilter(length: number, spacing: number, cutoff: number): LineFilter {
  const taps = gaussianTaps(spacing, cutoff, Math.max(1, length - 1));
  const size = powerOfTwoFrom(length + taps.length - 1);
  const plan = fourierPlan(size);
  const spectrum = new Float64Array(size);
  taps.forEach((weight, d) => {
    spectrum[d] = weight;
    if (d > 0) spectrum[(size - d) % size] = weight;
  });
  const im = new Float64Array(size);
  forward(plan, spectrum, im);
  return { plan, spectrum, re: new Float64Array(size), im };
}

/** Filters `count` pairs that lie `stride` apart from `start`, in place; a line without weight is left as it is. */
function filterLine(filter: LineFilter, height: Float64Array, weight: Float64Array, line: Line): void {
  const { plan, spectrum, re, im } = filter;
  re.fill(0);
  im.fill(0);
  let any = false;
  for (let k = 0, at = line.start; k < line.count; k++, at += line.stride) {
    re[k] = height[at];
    im[k] = weight[at];
    any ||= weight[at] !== 0;
  }
  if (!any) return;
  forward(plan, re, im);
  for (let k = 0; k < plan.size; k++) {
    re[k] *= spectrum[k];
    im[k] *= spectrum[k];
  }
  inverse(plan, re, im);
  for (let k = 0, at = line.start; k < line.count; k++, at += line.stride) {
    height[at] = re[k] / plan.size;
    weight[at] = im[k] / plan.size;
  }
}

interface Line {
  readonly start: number;
  readonly stride: number;
  readonly count: number;
}

/**
 * Low-pass areal Gaussian filter of ISO 16610-61, nesting index `cutoff` (m), separable. Cells without a surface (NaN)
 * carry no weight and stay NaN; beside them and at the border the remaining weights are renormalised (zero-order
 * regression). The least-squares plane is taken off before and put back after, so a plane passes unchanged everywhere.
 * Sampling as in `meanLine`.
 * @throws RangeError when the cutoff is not positive or the field has no plane (`fitPlane`).
 */
export function arealMean(field: HeightField, cutoff: number): HeightField & { readonly z: Float64Array } {
  if (!(cutoff > 0 && Number.isFinite(cutoff)))
    throw new RangeError(`a nesting index must be positive, not ${cutoff} m`);
  const { nx, ny, dx, dy } = field;
  const plane = fitPlane(field);
  const levelled = withoutPlane(field, plane);
  const weight = levelled.z.map((height) => (Number.isFinite(height) ? 1 : 0));
  const height = levelled.z.map((value) => (Number.isFinite(value) ? value : 0));
  const rows = makeLineFilter(nx, dx, cutoff);
  for (let j = 0; j < ny; j++) filterLine(rows, height, weight, { start: j * nx, stride: 1, count: nx });
  const columns = makeLineFilter(ny, dy, cutoff);
  for (let i = 0; i < nx; i++) filterLine(columns, height, weight, { start: i, stride: nx, count: ny });
  for (let j = 0, k = 0; j < ny; j++) {
    for (let i = 0; i < nx; i++, k++) {
      const surface = Number.isFinite(field.z[k]);
      height[k] = surface ? height[k] / weight[k] + planeAt(plane, field.x0 + i * dx, field.y0 + j * dy) : Number.NaN;
    }
  }
  return { ...levelled, z: height };
}

/** What the areal mean surface of `cutoff` leaves (the areal L-filter); errors as in `arealMean`. */
export function arealHighPass(field: HeightField, cutoff: number): HeightField & { readonly z: Float64Array } {
  const mean = arealMean(field, cutoff);
  return { ...mean, z: mean.z.map((height, k) => field.z[k] - height) };
}
