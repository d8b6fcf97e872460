import { elementsOf, type Figure } from './figures.ts';

export type LimitState = 'meets' | 'at risk' | 'misses';

/** One bound for every size, or one for each; null where the drawing sets none. */
export type Bound = number | readonly (number | null)[] | null;

/** A limit of the drawing beside the figure it is held against, both in one unit. */
export interface LimitRow {
  readonly id: string;
  readonly figure: Figure;
  readonly lower: Bound;
  readonly upper: Bound;
}

/** How one limit fares. */
export interface LimitVerdict {
  readonly id: string;
  readonly limit: { readonly lower: Bound; readonly upper: Bound };
  readonly state: LimitState;
  /**
   * Room between the value and the nearer bound, negative outside: a fraction of the bound, of the whole tolerance where
   * there are two, the difference itself where the bound is zero. Null when there is no value.
   */
  readonly margin: number | null;
}

/** All limits of a drawing, and the worst of them. */
export interface Verdict {
  readonly overall: LimitState | 'not judged';
  readonly limits: readonly LimitVerdict[];
}

/** States from the best, 0, to the worst. */
export const RANK: Readonly<Record<LimitState, number>> = { meets: 0, 'at risk': 1, misses: 2 };

function at(bound: Bound, index: number): number | undefined {
  if (bound === null || typeof bound === 'number') return bound ?? undefined;
  return bound[index] ?? undefined;
}

/** Whether all of the band from low to high is within the bounds, none of it, or some. */
function stateOf(low: number, high: number, lower: number, upper: number): LimitState {
  if (low >= lower && high <= upper) return 'meets';
  return low > upper || high < lower ? 'misses' : 'at risk';
}

function marginOf(value: number, lower: number | undefined, upper: number | undefined): number {
  if (lower !== undefined && upper !== undefined) {
    return Math.min(value - lower, upper - value) / (upper - lower || 1);
  }
  if (upper !== undefined) return (upper - value) / (Math.abs(upper) || 1);
  return lower === undefined ? Infinity : (value - lower) / (Math.abs(lower) || 1);
}

/** Ends of an element's band: the value twice where there is none, infinite where it is open. */
export function bandAt(figure: Figure, index: number, value: number): { readonly low: number; readonly high: number } {
  if (figure.low === null && figure.high === null) return { low: value, high: value };
  return { low: at(figure.low, index) ?? -Infinity, high: at(figure.high, index) ?? Infinity };
}

/**
 * Judges one limit. Meets when the whole band is inside (its ends included), misses when none of it is, at risk
 * otherwise; without a band the value alone decides; without a value it is at risk. Of several sizes the worst counts.
 */
export function judgeLimit({ id, figure, lower, upper }: LimitRow): LimitVerdict {
  const values = elementsOf(figure.value);
  let state: LimitState = 'meets';
  let margin = Infinity;
  values.forEach((value, index) => {
    const least = at(lower, index);
    const most = at(upper, index);
    const { low, high } = bandAt(figure, index, value);
    const own = stateOf(low, high, least ?? -Infinity, most ?? Infinity);
    if (RANK[own] > RANK[state]) state = own;
    margin = Math.min(margin, marginOf(value, least, most));
  });
  const known = values.length > 0 && values.every(Number.isFinite);
  return {
    id,
    limit: { lower, upper },
    state: known ? state : 'at risk',
    margin: known && Number.isFinite(margin) ? margin : null,
  };
}

/** How much room a figure has at the element where it has least, as `LimitVerdict.margin`, of the value and of its band. */
export interface Room {
  readonly element: number;
  readonly value: number;
  /** Of the end of the band that is nearer to its bound or further beyond it. */
  readonly band: number;
}

/** Room of a limit's figure; null without a value or a bound. */
export function roomOf({ figure, lower, upper }: LimitRow): Room | null {
  let worst: Room | null = null;
  for (const [element, value] of elementsOf(figure.value).entries()) {
    const least = at(lower, element);
    const most = at(upper, element);
    if (!Number.isFinite(value)) return null;
    if (least === undefined && most === undefined) continue;
    const { low, high } = bandAt(figure, element, value);
    const band = Math.min(marginOf(low, least, most), marginOf(high, least, most));
    const own = { element, value: marginOf(value, least, most), band };
    if (worst === null || own.band < worst.band || (own.band === worst.band && own.value < worst.value)) worst = own;
  }
  return worst;
}

/** The bounds of one element; undefined where there is none. */
export function boundsAt({ lower, upper }: Pick<LimitRow, 'lower' | 'upper'>, element: number) {
  return { lower: at(lower, element), upper: at(upper, element) };
}

/** Judges every limit; overall is the worst of them, and "not judged" when there is none. */
export function judgeLimits(rows: readonly LimitRow[]): Verdict {
  const limits = rows.map(judgeLimit);
  const overall = limits.reduce<Verdict['overall']>(
    (worst, { state }) => (worst === 'not judged' || RANK[state] > RANK[worst] ? state : worst),
    'not judged',
  );
  return { overall, limits };
}

const COUNTS = ['no', 'one', 'two', 'three', 'four', 'five', 'six', 'seven', 'eight', 'nine', 'ten'];

function inWords(count: number): string {
  return COUNTS[count] ?? String(count);
}

/** What the limits are called in sentences, and which rows are none of the drawing's. */
export interface LimitWords {
  readonly labels: Readonly<Record<string, string>>;
  /** Ids of rows that are judged beside the drawing's limits and not counted among them. */
  readonly apart: ReadonlySet<string>;
}

/**
 * The verdict in one line: "Meets the drawing: all eight limits.", "At risk: edge chip, taper", "Misses: floor Ra; at risk:
 * taper". Named with the least margin first.
 */
export function headline(verdict: Verdict, words: LimitWords): string {
  const named = (wanted: LimitState) =>
    verdict.limits
      .filter(({ state }) => state === wanted)
      .toSorted((a, b) => (a.margin ?? -Infinity) - (b.margin ?? -Infinity))
      .map(({ id }) => words.labels[id] ?? id)
      .join(', ');
  if (verdict.overall === 'misses') {
    const risky = named('at risk');
    return `Misses: ${named('misses')}${risky === '' ? '' : `; at risk: ${risky}`}`;
  }
  if (verdict.overall === 'at risk') return `At risk: ${named('at risk')}`;
  const count = ofDrawing(verdict, words).length;
  if (count === 0) return 'The drawing sets no limits.';
  return `Meets the drawing: ${count === 1 ? 'its one limit' : `all ${inWords(count)} limits`}.`;
}

/** How many limits are met, in a sentence: "Six of eight limits are met." */
export function summary(verdict: Verdict, words: LimitWords): string {
  const limits = ofDrawing(verdict, words);
  if (limits.length === 0) return 'No limit is judged.';
  const met = limits.filter(({ state }) => state === 'meets').length;
  const start = met === 0 ? 'none' : inWords(met);
  const plural = limits.length === 1 ? 'limit' : 'limits';
  const verb = met <= 1 ? 'is' : 'are';
  return `${start[0]?.toUpperCase()}${start.slice(1)} of ${inWords(limits.length)} ${plural} ${verb} met.`;
}

function ofDrawing(verdict: Verdict, words: LimitWords): readonly LimitVerdict[] {
  return verdict.limits.filter(({ id }) => !words.apart.has(id));
}
