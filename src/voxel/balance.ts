import { log } from '#src/base/math.ts';
import { COEFFICIENT, type Field, type KernelTables, OUT_OF_REACH } from './kernels/contract.ts';
import type { GapMeans } from './tables.ts';

/** Columns of a field counted by their gap to a reference face, zone by zone. */
export interface HeightCounts {
  /** Face the gaps are measured to (m). */
  reference: number;
  /** Columns each sampled column stands for. */
  weight: number;
  /** Sampled columns under the flat face, and their mean height (m). */
  faceColumns: number;
  faceMean: number;
  /** Counts by gap, zones x bins; bin k is the gap from k to k + 1 steps. */
  readonly counts: Float64Array;
  readonly bins: number;
  /** First and one past the last occupied bin of each zone. */
  readonly first: Int32Array;
  readonly last: Int32Array;
}

/** Empty counts for these means: gaps up to twice the largest grain are told apart, longer ones share the last bin. */
export function emptyCounts(means: GapMeans): HeightCounts {
  const bins = 2 * means.entries;
  const zones = means.zones.length;
  return {
    reference: 0,
    weight: 1,
    faceColumns: 0,
    faceMean: 0,
    counts: new Float64Array(bins * zones),
    bins,
    first: new Int32Array(zones),
    last: new Int32Array(zones),
  };
}

/** What a column is counted by, worked out once a count. */
export interface Counting {
  readonly field: Field;
  readonly means: GapMeans;
  readonly out: HeightCounts;
  readonly face: number;
  /** Distance beyond the start of the curved edge that the largest grain reaches (m), and zones of it a metre. */
  readonly reach: number;
  readonly zonesPerMetre: number;
  readonly edged: boolean;
  readonly tileZones: Uint8Array | undefined;
}

/** Empties the counts and settles how columns are counted. */
export function beginCount(
  out: HeightCounts,
  field: Field,
  tables: KernelTables,
  means: GapMeans,
  at: { face: number; stride: number; tileZones?: Uint8Array | undefined },
): Counting {
  const reach =
    (tables.coefficients[COEFFICIENT.largest] as number) / 2 + (tables.coefficients[COEFFICIENT.edgeRadius] as number);
  out.counts.fill(0);
  out.first.fill(out.bins);
  out.last.fill(0);
  out.reference = at.face;
  out.weight = at.stride;
  out.faceColumns = 0;
  out.faceMean = 0;
  return {
    field,
    means,
    out,
    face: at.face,
    reach,
    zonesPerMetre: (means.zones.length - means.flat) / reach,
    edged: field.edges.length > 0,
    tileZones: at.tileZones,
  };
}

/** Counts one column that stands below the face; adds its height to `faceMean` when it lies under the flat face. */
export function countColumn(counting: Counting, c: number): void {
  const { field, means, out, face, reach } = counting;
  const h = field.heights[c] as number;
  if (h <= OUT_OF_REACH) return;
  const e = counting.edged ? (field.edges[c] as number) : 0;
  const lift = e > 0 ? means.lift : 0;
  if (e >= reach || h >= face + lift) return;
  const { flat, zones } = means;
  let zone = 0;
  if (e > 0) zone = flat + Math.min(zones.length - flat - 1, Math.floor(e * counting.zonesPerMetre));
  else if (counting.tileZones) zone = counting.tileZones[tileOf(field, c)] as number;
  if (e <= 0) {
    out.faceColumns++;
    out.faceMean += h;
  }
  const bin = Math.min(out.bins - 1, Math.floor((face - h + lift) * (1 / means.step)));
  const k = zone * out.bins + bin;
  out.counts[k] = (out.counts[k] as number) + 1;
  if (bin < (out.first[zone] as number)) out.first[zone] = bin;
  if (bin >= (out.last[zone] as number)) out.last[zone] = bin + 1;
}

/**
 * Counts every `stride`-th column that stands below `face`. Columns the tool has passed and columns beyond the reach of
 * the largest grain are left out.
 */
export function countHeights(
  out: HeightCounts,
  field: Field,
  tables: KernelTables,
  means: GapMeans,
  at: { face: number; stride: number; tileZones?: Uint8Array | undefined },
): HeightCounts {
  const counting = beginCount(out, field, tables, means, at);
  for (let c = 0; c < field.heights.length; c += at.stride) countColumn(counting, c);
  out.faceMean = out.faceColumns > 0 ? out.faceMean / out.faceColumns : 0;
  return out;
}

/** Tile of a column. */
function tileOf({ nx, tile, tilesX }: Field, column: number): number {
  return Math.floor(column / nx / tile) * tilesX + Math.floor((column % nx) / tile);
}

/** Sum over the counted columns of a mean per grain, with the face moved to `face`; the flat face's part beside it. */
export function sumOver(
  counted: HeightCounts,
  means: GapMeans,
  values: Float64Array,
  face: number,
): { all: number; flat: number } {
  const { counts, bins, first, last } = counted;
  const shift = (face - counted.reference) / means.step + 0.5;
  const end = means.entries - 1;
  let all = 0;
  let flat = 0;
  for (let zone = 0; zone < means.zones.length; zone++) {
    let sum = 0;
    const row = zone * means.entries;
    const to = Math.min(last[zone] as number, Math.ceil(end - shift));
    for (let k = first[zone] as number; k < to; k++) {
      const count = counts[zone * bins + k] as number;
      if (count === 0) continue;
      const x = Math.max(0, k + shift);
      if (x >= end) break;
      const i = Math.floor(x);
      const low = values[row + i] as number;
      sum += count * (low + (x - i) * ((values[row + i + 1] as number) - low));
    }
    all += sum;
    if (zone < means.flat) flat += sum;
  }
  return { all: all * counted.weight, flat: flat * counted.weight };
}

export interface Balance {
  /** Height of the tool face that carries the load (m). */
  readonly face: number;
  /** Height in which the load falls e-fold, l (m). */
  readonly efold: number;
}

/** What `balance` is asked for: the load, and the load per unit of the summed impulse at a face height. */
export interface BalanceQuestion {
  /** Target, in the unit of `factor` x impulse (N, or Pa where the factor is per area). */
  readonly target: number;
  /** Load per summed impulse with the face at this height: f n_A times the area a column stands for. */
  readonly factor: (face: number) => number;
  readonly start: number;
  readonly efold: number;
}

/**
 * The face height at which the expected load equals the target: Newton steps on ln load, which is close to linear in the
 * height, inside a bracket that closes. The load is expected over the size law, never sampled: the load is convex in the
 * height, so a servo on a sampled load settles too high.
 */
export function balance(counted: HeightCounts, means: GapMeans, question: BalanceQuestion): Balance {
  const load = (face: number) => sumOver(counted, means, means.impulse, face).all * question.factor(face);
  let face = question.start;
  let efold = question.efold;
  let low = Number.NEGATIVE_INFINITY;
  let high = Number.POSITIVE_INFINITY;
  for (let i = 0; i < 60; i++) {
    const ratio = load(face) / question.target;
    if (ratio > 0 && Math.abs(ratio - 1) < 1e-7) break;
    if (ratio > 1) low = face;
    else high = face;
    const wanted = ratio > 0 ? efold * log(ratio) : -4 * efold;
    let next = face + Math.max(-4 * efold, Math.min(4 * efold, wanted));
    if (next <= low || next >= high) next = (Math.max(low, face - 4 * efold) + Math.min(high, face + 4 * efold)) / 2;
    if (ratio > 0 && next !== face) {
      const there = load(next) / question.target;
      if (there > 0 && there !== ratio) {
        const slope = log(ratio / there) / (next - face);
        if (slope > 0) efold = 1 / slope;
      }
    }
    face = next;
  }
  const h = means.step;
  const slope = log(load(face - h) / load(face + h)) / (2 * h);
  return { face, efold: slope > 0 && Number.isFinite(slope) ? 1 / slope : efold };
}
