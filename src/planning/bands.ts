import { atan, exp, log, PI, sinCos } from '#src/base/math.ts';

/**
 * Bands: the central share, 90 % unless asked otherwise, of what is expected for one cavity over material properties,
 * grit lot and seed. A band does not contain the error of the model. Aim throughout: the share of future cavities
 * inside the band is the stated one on average over samples, also for few members.
 */

/** How deviations add up: as ratios (logarithms; positive figures) or as differences. */
export type BandScale = 'ratio' | 'difference';

export interface BandOptions {
  /** Ratio unless given; falls back to differences, and says so, where a value is not positive. */
  readonly scale?: BandScale;
  /** What was varied, in words. */
  readonly sources?: readonly string[];
}

/** A band, in the unit of the values. */
export interface Band {
  /** Null when there is none; `covers` then says why. May be infinite: a cut that stalls takes for ever. */
  readonly low: number | null;
  readonly high: number | null;
  readonly median: number | null;
  /** Members that came out, infinite ones included. */
  readonly used: number;
  /** Members that did not (NaN). */
  readonly failed: number;
  /** What the band covers, in words. */
  readonly covers: string;
}

/** Words for the usual sources of spread. */
export const PROPERTY_SOURCES = ['material properties', 'grit lot'] as const;
/** Word for what replicates vary. */
export const SEED_SOURCE = 'seed';

const WITHOUT_MODEL = 'model error not included';
/** Points that stand for a prediction when two are added. */
const LAW_POINTS = 64;

/**
 * Distribution function of Student's law for a whole number of degrees of freedom: the finite trigonometric series,
 * Abramowitz and Stegun 26.7.3 and 26.7.4, from memory.
 */
export function studentDistribution(t: number, freedom: number): number {
  return 0.5 + 0.5 * Math.sign(t) * centralShare(atan(Math.abs(t) / Math.sqrt(freedom)), freedom);
}

/** Probability of |T| <= sqrt(freedom) tan(angle). */
function centralShare(angle: number, freedom: number): number {
  const { sin, cos } = sinCos(angle);
  const odd = freedom % 2 === 1;
  let term = odd ? cos : 1;
  let sum = freedom === 1 ? 0 : term;
  for (let n = odd ? 3 : 2; n <= freedom - 2; n += 2) {
    term *= (cos * cos * (n - 1)) / n;
    sum += term;
  }
  return odd ? (2 / PI) * (angle + sin * sum) : sin * sum;
}

/**
 * Inverse of Student's distribution function, p in (0, 1), by bisection of the angle. Throws for fractional freedom.
 */
export function studentQuantile(p: number, freedom: number): number {
  if (!(Number.isInteger(freedom) && freedom >= 1)) {
    throw new RangeError(`Student's law here needs whole degrees of freedom, one or more: ${freedom}`);
  }
  const share = Math.abs(2 * p - 1);
  let low = 0;
  let high = PI / 2;
  for (let i = 0; i < 60; i++) {
    const middle = 0.5 * (low + high);
    if (centralShare(middle, freedom) < share) low = middle;
    else high = middle;
  }
  const { sin, cos } = sinCos(0.5 * (low + high));
  return (Math.sign(2 * p - 1) * Math.sqrt(freedom) * sin) / cos;
}

/** Least number of members from which their own order gives the band: 2 / (1 - share) - 1, 19 for 90 %. */
export function fewestForOrder(share: number): number {
  // a hair below, so that rounding does not ask for one more
  return Math.ceil(2 / (1 - share) - 1 - 1e-9);
}

/** The value at place `position` (1 the first) of sorted values, straight between neighbours, the ends beyond them. */
function atPosition(sorted: Float64Array, position: number): number {
  const place = Math.min(Math.max(position, 1), sorted.length) - 1;
  const i = Math.floor(place);
  const a = sorted[i] as number;
  const b = sorted[Math.min(i + 1, sorted.length - 1)] as number;
  const t = place - i;
  if (t === 0 || a === b) return a;
  // next to an infinite neighbour the line is infinite at once
  if (Number.isFinite(a) && Number.isFinite(b)) return a + t * (b - a);
  return Number.isFinite(a) || a === b ? b : a;
}

/**
 * Sample quantile at place p (n + 1), type 6 of Hyndman and Fan, Am. Stat. 50 (1996) 361 (Weibull 1939). The share of
 * a continuous law below the i-th of n values is i / (n + 1) on average whatever the law, so a band between two such
 * places holds its share on average.
 */
export function quantile(values: Iterable<number>, p: number): number {
  const sorted = Float64Array.from(values).sort();
  return sorted.length === 0 ? Number.NaN : atPosition(sorted, p * (sorted.length + 1));
}

interface Gathered {
  readonly values: Float64Array;
  readonly failed: number;
}

function gather(values: readonly number[]): Gathered {
  const came = values.filter((v) => !Number.isNaN(v));
  return { values: Float64Array.from(came).sort(), failed: values.length - came.length };
}

function noBand({ values, failed }: Gathered, why: string): Band {
  return { low: null, high: null, median: null, used: values.length, failed, covers: `no band: ${why}` };
}

function checkShare(share: number): void {
  if (!(share > 0 && share < 1)) throw new RangeError(`the share of a band lies between 0 and 1: ${share}`);
}

const percent = (share: number) => `${Number((100 * share).toPrecision(3))} %`;
const list = (words: readonly string[]) =>
  words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} and ${words.at(-1)}`;
const counted = (n: number, one: string, many: string) => `${n} ${n === 1 ? one : many}`;

/** Deviations on one scale and back. */
interface Scale {
  readonly of: (value: number) => number;
  readonly back: (value: number) => number;
  readonly fellBack: boolean;
}

function scaleFor(wanted: BandScale, values: Iterable<number>): Scale {
  const plain = (v: number) => v;
  if (wanted === 'difference') return { of: plain, back: plain, fellBack: false };
  for (const v of values) if (!(v > 0)) return { of: plain, back: plain, fellBack: true };
  return { of: log, back: exp, fellBack: false };
}

function meanAndDeviation(values: Float64Array): { readonly mean: number; readonly deviation: number } {
  const n = values.length;
  const mean = values.reduce((sum, v) => sum + v, 0) / n;
  const squares = values.reduce((sum, v) => sum + (v - mean) * (v - mean), 0);
  return { mean, deviation: Math.sqrt(squares / Math.max(1, n - 1)) };
}

/** Where one more value may lie, as the inverse of its distribution function, and how that was found. */
interface Prediction {
  readonly at: (p: number) => number;
  readonly by: 'order' | 'range' | 'student';
}

/**
 * What sorted values say of one more: their order from `fewestForOrder` on; for fewer the mean plus s sqrt(1 + 1/n)
 * times Student's law of n - 1 degrees of freedom, exact on average for a normal law; their range where few are not
 * all finite.
 */
function predict(sorted: Float64Array, share: number): Prediction {
  const n = sorted.length;
  const byOrder = (p: number) => atPosition(sorted, p * (n + 1));
  if (n === 1 || n >= fewestForOrder(share)) return { at: byOrder, by: 'order' };
  if (!sorted.every(Number.isFinite)) return { at: byOrder, by: 'range' };
  const { mean, deviation } = meanAndDeviation(sorted);
  const reach = deviation * Math.sqrt(1 + 1 / n);
  return { at: (p) => (reach === 0 ? mean : mean + reach * studentQuantile(p, n - 1)), by: 'student' };
}

/** Equally likely points of a prediction; a single one where it has no spread. */
function pointsOf({ at }: Prediction): Float64Array {
  const points = Float64Array.from({ length: LAW_POINTS }, (_, i) => at((i + 0.5) / LAW_POINTS));
  return points[0] === points[LAW_POINTS - 1] ? points.slice(0, 1) : points;
}

/** Failed members may all belong to one tail: more of them than a tail's share leave the band unknown. */
function tooManyFailed({ values, failed }: Gathered, share: number): boolean {
  return failed > ((1 - share) / 2) * (values.length + failed);
}

/**
 * Central band of values that are each one possible cavity. From `fewestForOrder` members on by their order (see
 * `quantile`); below, down to two, by Student's law about the mean, since the range of few is too narrow: five runs
 * span a share of 4/6 on average, not 90 %. NaN members are counted and left out, and no band is given when they
 * exceed one tail's share, since they might all lie there. Infinite members keep their place in the order; among few
 * they make the band the values' range.
 */
export function bandOf(values: readonly number[], share = 0.9, options: BandOptions = {}): Band {
  checkShare(share);
  const gathered = gather(values);
  const n = gathered.values.length;
  if (n < 2) return noBand(gathered, n === 0 ? 'nothing came out' : 'a single value shows no spread');
  if (tooManyFailed(gathered, share)) return noBand(gathered, `${gathered.failed} of ${values.length} failed`);
  const sources = options.sources ?? [...PROPERTY_SOURCES, SEED_SOURCE];
  const tell = (note: string) =>
    words({ share, sources, parts: [counted(n, 'value', 'values') + note, ...failedWords(gathered.failed)] });
  const tail = (1 - share) / 2;
  // by their order values need no scale
  const wanted = n >= fewestForOrder(share) ? 'difference' : (options.scale ?? 'ratio');
  const scale = scaleFor(wanted, gathered.values);
  const { at, by } = predict(gathered.values.map(scale.of), share);
  const differences = scale.fellBack ? ', as differences' : '';
  const notes = {
    order: '',
    range: ', their range, since some are infinite',
    student: `, widened by Student's law for so few${differences}`,
  };
  return {
    low: scale.back(at(tail)),
    high: scale.back(at(1 - tail)),
    median: scale.back(at(0.5)),
    used: n,
    failed: gathered.failed,
    covers: tell(notes[by]),
  };
}

function failedWords(failed: number): string[] {
  return failed === 0 ? [] : [`${failed} failed and left out`];
}

function words(told: {
  readonly share: number;
  readonly sources: readonly string[];
  readonly parts: readonly string[];
}): string {
  const what = told.sources.length === 0 ? '' : ` over ${list(told.sources)}`;
  return [`central ${percent(told.share)} for one cavity${what}`, ...told.parts, WITHOUT_MODEL].join('; ');
}

/** Values of one figure, all in one unit, NaN where a member failed. */
export interface Spreads {
  /** The estimate at nominal properties. */
  readonly nominal: number;
  /** The estimate over a designed sample of properties and grit lot. */
  readonly members: readonly number[];
  /** The cut at nominal properties, one per seed; empty when nothing was cut. */
  readonly replicates: readonly number[];
}

/**
 * Band of one cavity from both spreads: the replicates' mean, plus a member's deviation from the nominal estimate,
 * plus a replicate's deviation. The two deviations are taken as independent: all pairs of 64 points of each are formed
 * and their quantiles taken. Few replicates enter by Student's law, s sqrt(1 + 1/m) wide, which counts that m runs
 * know neither mean nor spread well: it errs on the wide side (with both spreads alike it holds 94 in 100 with three
 * runs, 91 with five, and two runs make it almost three times as wide as it could be); one run adds nothing and the
 * words say so. With the members' spread nil this is `bandOf` of the runs, and with the replicates' nil `bandOf` of
 * the members. Infinite replicates make the band reach there; members that failed are as in `bandOf`, and a failed
 * replicate leaves no band.
 */
export function combinedBand(spreads: Spreads, share = 0.9, options: BandOptions = {}): Band {
  checkShare(share);
  const members = gather(spreads.members);
  const replicates = gather(spreads.replicates);
  const gathered = { values: members.values, failed: members.failed + replicates.failed };
  if (!Number.isFinite(spreads.nominal)) return noBand(gathered, 'the nominal estimate is not finite');
  if (members.values.length < 2) return noBand(gathered, 'too few estimates over the properties');
  if (tooManyFailed(members, share)) return noBand(gathered, `${members.failed} of ${spreads.members.length} failed`);
  if (replicates.failed > 0) {
    return noBand(gathered, `${replicates.failed} of ${spreads.replicates.length} runs failed`);
  }
  const finite = replicates.values.filter(Number.isFinite);
  const endless = replicates.values.filter((v) => !Number.isFinite(v));
  const scale = scaleFor(options.scale ?? 'ratio', [spreads.nominal, ...members.values, ...finite]);
  const from = scale.of(spreads.nominal);
  const moved = predict(
    members.values.map((v) => scale.of(v) - from),
    share,
  );
  const seeded = predict(finite.length === 0 ? Float64Array.of(from) : finite.map(scale.of), share);
  const sum = sumOf(moved, seeded);
  const at = (p: number) => scale.back(sum(p));
  const tail = (1 - share) / 2;
  const reach = [at(tail), at(1 - tail), ...endless];
  return {
    low: finite.length === 0 && endless.length > 0 ? Math.min(...endless) : Math.min(...reach),
    high: Math.max(...reach),
    median: finite.length === 0 && endless.length > 0 ? Math.max(...endless) : at(0.5),
    used: members.values.length,
    failed: members.failed,
    covers: combinedWords({ share, members, replicates, endless: endless.length, fellBack: scale.fellBack, options }),
  };
}

/**
 * Inverse distribution function of the sum of two independent predictions: of all pairs, exact where one has no
 * spread.
 */
function sumOf(a: Prediction, b: Prediction): (p: number) => number {
  const first = pointsOf(a);
  const second = pointsOf(b);
  if (second.length === 1) return (p) => a.at(p) + (second[0] as number);
  if (first.length === 1) return (p) => b.at(p) + (first[0] as number);
  const sums = new Float64Array(first.length * second.length);
  first.forEach((x, i) => {
    second.forEach((y, j) => {
      sums[i * second.length + j] = x + y;
    });
  });
  sums.sort();
  // each sum stands for the middle of its step
  return (p) => atPosition(sums, p * sums.length + 0.5);
}

function combinedWords(told: {
  readonly share: number;
  readonly members: Gathered;
  readonly replicates: Gathered;
  readonly endless: number;
  readonly fellBack: boolean;
  readonly options: BandOptions;
}): string {
  const { share, members, replicates, endless, fellBack, options } = told;
  const runs = replicates.values.length;
  const sources = [...(options.sources ?? PROPERTY_SOURCES), ...(runs > 1 ? [SEED_SOURCE] : [])];
  const parts = [
    [counted(members.values.length, 'estimate', 'estimates'), ...(runs > 0 ? [counted(runs, 'run', 'runs')] : [])].join(
      ' and ',
    ),
    ...failedWords(members.failed),
    ...(endless > 0 ? [`${counted(endless, 'run', 'runs')} without end`] : []),
    ...(fellBack ? ['as differences'] : []),
    ...(runs > 1 ? [] : [runs === 1 ? 'seed not covered by a single run' : 'seed not covered without a run']),
  ];
  return words({ share, sources, parts });
}
