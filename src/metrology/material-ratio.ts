import { fitLine } from './linear.ts';

/**
 * Material-ratio curve: heights (m) from the highest down; entry i of n stands at the material ratio (i + 1/2)/n. Made
 * from a profile or from an areal surface alike.
 */
export type MaterialRatioCurve = Float64Array;

/** The curve of these heights; NaN are left out. @throws RangeError when none is left. */
export function materialRatioCurve(heights: Float32Array | Float64Array): MaterialRatioCurve {
  // the sort puts NaN last
  const sorted = Float64Array.from(heights).sort();
  const missing = sorted.findIndex((height) => Number.isNaN(height));
  const curve = (missing < 0 ? sorted : sorted.slice(0, missing)).reverse();
  if (curve.length === 0) throw new RangeError('no heights to take a material ratio from');
  return curve;
}

/** Rmr at a height (m above the mean line): fraction of the surface at or above it. */
export function ratioAtHeight(curve: MaterialRatioCurve, height: number): number {
  let low = 0;
  let high = curve.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (curve[middle] >= height) low = middle + 1;
    else high = middle;
  }
  return low / curve.length;
}

/** Height (m) at a material ratio (0 to 1), linear between the points; the highest and the lowest beyond them. */
export function heightAtRatio(curve: MaterialRatioCurve, ratio: number): number {
  const n = curve.length;
  const at = Math.min(Math.max(ratio * n - 0.5, 0), n - 1);
  const k = Math.min(Math.floor(at), Math.max(n - 2, 0));
  const next = curve[Math.min(k + 1, n - 1)];
  return curve[k] + (at - k) * (next - curve[k]);
}

/** Rmr(c): fraction at or above the level `depth` (m) below the height at `referenceRatio` (0: the highest peak). */
export function materialRatio(curve: MaterialRatioCurve, depth: number, referenceRatio = 0): number {
  return ratioAtHeight(curve, heightAtRatio(curve, referenceRatio) - depth);
}

/** Rdc: height between two material ratios, p less than q (m). */
export function ratioHeight(curve: MaterialRatioCurve, p: number, q: number): number {
  return heightAtRatio(curve, p) - heightAtRatio(curve, q);
}

export interface CoreParameters {
  /** Core height, reduced peak height, reduced valley depth (m). */
  readonly rk: number;
  readonly rpk: number;
  readonly rvk: number;
  /** Material ratios (0 to 1) at the upper and the lower bound of the core. */
  readonly rmrk1: number;
  readonly rmrk2: number;
  /** The two bounds (m above the mean line). */
  readonly upper: number;
  readonly lower: number;
}

/** First window of 40 % over which the curve falls least, as indices. Differences below 1e-12 of the range are ties. */
function flattestWindow(curve: MaterialRatioCurve): { from: number; to: number } {
  const n = curve.length;
  const width = Math.max(1, Math.round(0.4 * n));
  const tie = 1e-12 * (curve[0] - curve[n - 1]);
  let from = 0;
  let least = curve[0] - curve[width];
  for (let i = 1; i + width < n; i++) {
    const fall = curve[i] - curve[i + width];
    if (fall < least - tie) {
      least = fall;
      from = i;
    }
  }
  return { from, to: from + width };
}

/** Share of the surface above `level` (with the crossing interpolated) and the area above it (m). */
function aboveLevel(curve: MaterialRatioCurve, level: number): { ratio: number; area: number } {
  const n = curve.length;
  if (!(curve[0] > level)) return { ratio: 0, area: 0 };
  let area = 0;
  let k = 0;
  for (; k < n && curve[k] > level; k++) area += (curve[k] - level) / n;
  if (k === n) return { ratio: 1, area };
  return { ratio: (k - 0.5 + (curve[k - 1] - level) / (curve[k - 1] - curve[k])) / n, area };
}

/**
 * Rk, Rpk, Rvk, Rmrk1, Rmrk2 of an S-shaped material-ratio curve: least-squares line in the 40 % window of smallest
 * secant slope, read at 0 and 100 %; reduced heights are those of right triangles of the same area (ISO 13565-2, from
 * memory; ISO 21920-2 keeps the construction).
 * @throws RangeError for fewer than five heights.
 */
export function coreParameters(curve: MaterialRatioCurve): CoreParameters {
  const n = curve.length;
  if (n < 5) throw new RangeError(`the core of a material-ratio curve needs five heights at least, not ${n}`);
  const { from, to } = flattestWindow(curve);
  const window = curve.subarray(from, to + 1);
  const line = fitLine(
    Array.from(window, (_, i) => (from + i + 0.5) / n),
    window,
  );
  // a bound within rounding of an end of the curve is that end
  const tie = 1e-12 * (curve[0] - curve[n - 1]);
  const snap = (level: number, end: number) => (Math.abs(level - end) <= tie ? end : level);
  const upper = snap(line.level - line.slope * line.at, curve[0]);
  const lower = snap(line.level + line.slope * (1 - line.at), curve[n - 1]);
  const peaks = aboveLevel(curve, upper);
  const valleys = aboveLevel(curve.map((height) => -height).reverse(), -lower);
  return {
    rk: upper - lower,
    rpk: peaks.ratio > 0 ? (2 * peaks.area) / peaks.ratio : 0,
    rvk: valleys.ratio > 0 ? (2 * valleys.area) / valleys.ratio : 0,
    rmrk1: peaks.ratio,
    rmrk2: 1 - valleys.ratio,
    upper,
    lower,
  };
}
