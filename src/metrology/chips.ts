import { weightedQuantile } from './order.ts';

/** Chips along a rim, by arc length: `width` on the entry face, `depth` down the wall (m); NaN where not measured. */
export interface RimChips {
  /** Arc length of every sample (m), ascending within [0, perimeter). */
  readonly s: Float64Array;
  readonly perimeter: number;
  readonly width: Float64Array;
  readonly depth: Float64Array;
}

export interface ChipFigures {
  readonly largest: number;
  /** Arc length at which the largest lies (m), the first of equals. */
  readonly at: number;
  /** Half and 95 % of the rim stay at or below these (m). */
  readonly p50: number;
  readonly p95: number;
  /** Mean over the rim (m). */
  readonly mean: number;
  /** Share of the rim that was measured, and share of that with a chip at all. */
  readonly measured: number;
  readonly chipped: number;
  readonly distribution: Distribution;
}

/** Share of the rim in each bin: bin k holds edges[k] <= value < edges[k + 1], the last one its upper edge too. */
export interface Distribution {
  readonly edges: Float64Array;
  readonly share: Float64Array;
}

const DEFAULT_BINS = 20;

/** Length of rim each sample stands for: half the way to either neighbour, the rim being closed. */
function shares({ s, perimeter }: RimChips): Float64Array {
  const n = s.length;
  return s.map((_, i) => {
    const before = i > 0 ? s[i - 1] : s[n - 1] - perimeter;
    const after = i < n - 1 ? s[i + 1] : s[0] + perimeter;
    return (after - before) / 2;
  });
}

function distributionOf(values: Float64Array, weights: Float64Array, bins: number): Distribution {
  let top = 0;
  let total = 0;
  values.forEach((value, i) => {
    if (weights[i] > 0) top = Math.max(top, value);
    total += weights[i];
  });
  const width = (top > 0 ? top : 1e-6) / bins;
  const edges = Float64Array.from({ length: bins + 1 }, (_, k) => k * width);
  const share = new Float64Array(bins);
  values.forEach((value, i) => {
    if (weights[i] > 0) share[Math.min(bins - 1, Math.floor(value / width))] += weights[i] / total;
  });
  return { edges, share };
}

function figuresOf(values: Float64Array, rim: RimChips, bins: number): ChipFigures {
  const lengths = shares(rim);
  const weights = lengths.map((length, i) => (Number.isFinite(values[i]) ? length : 0));
  let total = 0;
  let chipped = 0;
  let sum = 0;
  let largest = Number.NaN;
  let at = Number.NaN;
  values.forEach((value, i) => {
    if (!(weights[i] > 0)) return;
    total += weights[i];
    sum += weights[i] * value;
    if (value > 0) chipped += weights[i];
    if (!(value <= largest)) [largest, at] = [value, rim.s[i]];
  });
  return {
    largest,
    at,
    p50: weightedQuantile(values, weights, 0.5),
    p95: weightedQuantile(values, weights, 0.95),
    mean: sum / total,
    measured: total / rim.perimeter,
    chipped: chipped / total,
    distribution: distributionOf(values, weights, bins),
  };
}

/**
 * Figures of the edge chips of one rim: width on the entry face and depth down the wall, each on its own (a wide chip
 * need not be a deep one). Percentiles are by length of rim, not by number of samples. Samples that are NaN are left out
 * and show in `measured`; a rim with none measured gives NaN.
 * @throws RangeError when the arrays differ in length, are empty, or the arc lengths do not ascend within the perimeter.
 */
export function edgeChips(rim: RimChips, bins = DEFAULT_BINS): { width: ChipFigures; depth: ChipFigures } {
  const { s, perimeter, width, depth } = rim;
  const n = s.length;
  if (n === 0 || width.length !== n || depth.length !== n)
    throw new RangeError(`a rim of ${n} places has ${width.length} widths and ${depth.length} depths`);
  const ordered = s.every((place, i) => place >= 0 && place < perimeter && (i === 0 || place > s[i - 1]));
  if (!ordered) throw new RangeError('arc lengths along a rim must ascend from 0 to below its perimeter');
  return { width: figuresOf(width, rim, bins), depth: figuresOf(depth, rim, bins) };
}
