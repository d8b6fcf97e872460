/**
 * Height and slope parameters of a profile whose mean line has been removed (ISO 21920-2, from memory). Every point
 * stands for one spacing of length: integrals are means over the points (rectangle rule), which is stated with results.
 */

export interface HeightParameters {
  /** Mean and root mean square of the heights (m). */
  readonly ra: number;
  readonly rq: number;
  /** Skewness and kurtosis; NaN for a profile without height. */
  readonly rsk: number;
  readonly rku: number;
  /** Highest less lowest over the whole evaluation length (m). */
  readonly rt: number;
}

/** Ra, Rq, Rsk, Rku and Rt. @throws RangeError when there are no heights. */
export function heightParameters(z: Float64Array): HeightParameters {
  const n = z.length;
  if (n === 0) throw new RangeError('no heights to take a roughness from');
  let absolute = 0;
  let square = 0;
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const height of z) {
    absolute += Math.abs(height);
    square += height * height;
    low = Math.min(low, height);
    high = Math.max(high, height);
  }
  const rq = Math.sqrt(square / n);
  let third = 0;
  let fourth = 0;
  for (const height of z) {
    const share = height / rq;
    const second = share * share;
    third += second * share;
    fourth += second * second;
  }
  return { ra: absolute / n, rq, rsk: third / n, rku: fourth / n, rt: high - low };
}

export interface SectionParameters {
  /** Mean over the sections of highest peak, deepest valley and their sum (m). */
  readonly rp: number;
  readonly rv: number;
  readonly rz: number;
  /** Largest height of one section (m); Rmax in older standards. */
  readonly rzx: number;
  /** Height of every section (m). */
  readonly heights: readonly number[];
}

/** Rp, Rv, Rz and Rzx of a profile cut into `sections` equal lengths. @throws RangeError when a section gets no point. */
export function sectionParameters(z: Float64Array, sections: number): SectionParameters {
  if (!(Number.isInteger(sections) && sections >= 1 && sections <= z.length))
    throw new RangeError(`${z.length} points cannot be cut into ${sections} sections`);
  let rp = 0;
  let rv = 0;
  const heights: number[] = [];
  for (let section = 0; section < sections; section++) {
    const from = Math.round((section * z.length) / sections);
    const to = Math.round(((section + 1) * z.length) / sections);
    let low = Number.POSITIVE_INFINITY;
    let high = Number.NEGATIVE_INFINITY;
    for (let i = from; i < to; i++) {
      low = Math.min(low, z[i]);
      high = Math.max(high, z[i]);
    }
    rp += high / sections;
    rv -= low / sections;
    heights.push(high - low);
  }
  const rz = heights.reduce((sum, height) => sum + height, 0) / sections;
  return { rp, rv, rz, rzx: Math.max(...heights), heights };
}

/**
 * Rdq, root mean square of the local slope with the seven-point derivative of ISO 4287 (from memory), the three points at
 * either end left out. NaN for fewer than seven points.
 */
export function rootMeanSquareSlope(z: Float64Array, spacing: number): number {
  const n = z.length;
  if (n < 7) return Number.NaN;
  let square = 0;
  for (let i = 3; i < n - 3; i++) {
    const slope = z[i + 3] - z[i - 3] - 9 * (z[i + 2] - z[i - 2]) + 45 * (z[i + 1] - z[i - 1]);
    square += slope * slope;
  }
  return Math.sqrt(square / (n - 6)) / (60 * spacing);
}

/** Places (in points) where hills and dales that count meet, scanned from the first point. */
function elementBounds(z: Float64Array, upper: number, lower: number): number[] {
  const bounds: number[] = [];
  let side = 0;
  let crossing = 0;
  for (let i = 0; i < z.length; i++) {
    if (i > 0 && z[i - 1] < 0 !== z[i] < 0) crossing = i - 1 + z[i - 1] / (z[i - 1] - z[i]);
    const now = z[i] > upper ? 1 : z[i] < lower ? -1 : side;
    if (now !== side && side !== 0) bounds.push(crossing);
    side = now;
  }
  return bounds;
}

/**
 * RSm, mean width of the profile elements (m): a hill counts when it rises above a tenth of Rp, a dale when it falls
 * below a tenth of Rv; neighbours meet where the profile last crossed the mean line, and elements (hill and dale) are
 * taken one after another from either end and averaged over both directions (ISO 21920-2, from memory). Incomplete
 * elements at the ends are left out. NaN when no element is complete.
 */
export function meanElementWidth(z: Float64Array, spacing: number, { rp, rv }: { rp: number; rv: number }): number {
  if (!(rp > 0 && rv > 0)) return Number.NaN;
  let width = 0;
  let count = 0;
  for (const line of [z, z.toReversed()]) {
    const bounds = elementBounds(line, 0.1 * rp, -0.1 * rv);
    const elements = Math.floor((bounds.length - 1) / 2);
    if (elements < 1) continue;
    width += bounds[2 * elements] - bounds[0];
    count += elements;
  }
  return count > 0 ? (width / count) * spacing : Number.NaN;
}
