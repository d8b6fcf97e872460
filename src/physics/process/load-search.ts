import {
  BROKEN,
  type CurvePlaces,
  type CurvePoint,
  faceAt,
  HIGHEST_PRESSURE,
  isBeyond,
  placeOf,
  pointBetween,
  SLOWER,
  type SlurrySetting,
} from './slurry-curve.ts';

/**
 * A load curve at one depth of which only the points asked for are worked out, on the same steps of gap as the whole curve
 * and with the same answers. It is walked from the largest grain down in strides of a few steps, each step where pressure or
 * rate fall, since the exchange breaks down within a step or two; a pressure is then found by halving the stride it lies in.
 */
export interface LoadSearch {
  readonly setting: SlurrySetting;
  readonly places: CurvePlaces;
  readonly depth: number;
  readonly points: (CurvePoint | undefined)[];
  readonly shares: Float64Array;
  readonly walk: Walk;
}

/** How far a curve has been walked. */
interface Walk {
  /** Steps that bear more than any before them, in order. */
  readonly records: number[];
  /** The stall or the end has been reached, and which. */
  ended: boolean;
  stalls: boolean;
}

/** Longest and shortest stride, and the share of useful hits below which the short one is taken. */
const LONG = 4;
const SHORT = 2;
const CROWDED = 0.9;
/** Share of the best rate at which a rate that falls without a stall is no longer followed. */
const FALLEN = 0.7;

export function loadSearch(setting: SlurrySetting, places: CurvePlaces, depth: number): LoadSearch {
  return {
    setting,
    places,
    depth,
    points: new Array<CurvePoint | undefined>(places.last + 1).fill(undefined),
    shares: new Float64Array(places.sums.population.length),
    walk: { records: [1], ended: false, stalls: false },
  };
}

/** The point at a step of gap. */
export function pointOf(search: LoadSearch, step: number): CurvePoint {
  const known = search.points[step];
  if (known) return known;
  const point = faceAt(search.setting, placeOf(search.places, step), search.depth, search.shares);
  search.points[step] = point;
  return point;
}

/** Whether nothing further in is looked at. */
function ends(search: LoadSearch, step: number): boolean {
  if (step >= search.places.last || pointOf(search, step).pressure > HIGHEST_PRESSURE) return true;
  return isBeyond(placeOf(search.places, step), search.shares);
}

function topOf({ walk }: LoadSearch): number {
  return walk.records.at(-1) as number;
}

/** Walks on by one stride. */
function advance(search: LoadSearch): void {
  const { walk, places } = search;
  const here = topOf(search);
  const top = pointOf(search, here);
  if (ends(search, here) || top.rate < FALLEN * bestRate(search)) {
    walk.ended = true;
    return;
  }
  const crowded = (top.zones.at(-1)?.useful ?? 0) < CROWDED;
  const next = Math.min(places.last, here + (crowded ? SHORT : LONG));
  const point = pointOf(search, next);
  if (point.pressure > top.pressure && point.rate > top.rate) walk.records.push(next);
  else stepOn(search, here, next);
}

/** Walks step by step from one record to at least `next` and until there is another, or the exchange has broken down. */
function stepOn(search: LoadSearch, from: number, next: number): void {
  const { walk } = search;
  let top = pointOf(search, from);
  for (let step = from + 1; ; step++) {
    const point = pointOf(search, step);
    const more = point.pressure > top.pressure;
    if (point.rate < (more ? SLOWER : BROKEN) * top.rate) {
      walk.stalls = true;
      walk.ended = true;
      return;
    }
    if (more) {
      walk.records.push(step);
      top = point;
    }
    if (more && step >= next) return;
    if (ends(search, step)) {
      walk.stalls = point.rate < SLOWER * top.rate;
      walk.ended = true;
      return;
    }
  }
}

function bestRate(search: LoadSearch): number {
  return search.walk.records.reduce((best, step) => Math.max(best, pointOf(search, step).rate), 0);
}

/** Pressure at which the exchange breaks down (Pa); Infinity where it does not below the highest looked at. */
export function stallOf(search: LoadSearch): number {
  while (!search.walk.ended) advance(search);
  return search.walk.stalls ? pointOf(search, topOf(search)).pressure : Number.POSITIVE_INFINITY;
}

/** A point that bears a pressure, or the starved face where none does. */
export interface WorkingPoint {
  readonly point: CurvePoint;
  readonly carried: boolean;
  /** The pressure is above the stall. */
  readonly stalled: boolean;
  /** The step at or after the point. */
  readonly step: number;
}

/** First step in (low, high] that bears a pressure, given that `high` does and `low` does not. */
function halve(search: LoadSearch, pressure: number, low: number, high: number): number {
  let [under, over] = [low, high];
  while (over - under > 1) {
    const middle = (under + over) >> 1;
    if (pointOf(search, middle).pressure >= pressure) over = middle;
    else under = middle;
  }
  return over;
}

/** The point of a pressure between `step`, which bears it, and the last step before it that does not. */
function between(search: LoadSearch, pressure: number, step: number): CurvePoint {
  const high = pointOf(search, step);
  const low = step > 1 ? pointOf(search, step - 1) : high;
  return low.pressure < pressure && high.pressure > low.pressure ? pointBetween(low, high, pressure) : high;
}

/** The point of the largest gap that bears a pressure; past the stall the starved face that does, or the nearly closed one. */
export function workingPoint(search: LoadSearch, pressure: number): WorkingPoint {
  const { walk } = search;
  const bears = (step: number) => pointOf(search, step).pressure >= pressure;
  while (!walk.ended && !bears(topOf(search))) advance(search);
  const k = walk.records.findIndex(bears);
  if (k < 0) return starvedPoint(search, pressure);
  const high = walk.records[k] as number;
  const step = k === 0 ? high : halve(search, pressure, walk.records[k - 1] as number, high);
  return { point: between(search, pressure, step), carried: true, stalled: false, step };
}

/** Past the last record the pressure may come back as the gap closes on crowded grit: strides, then halving. */
function starvedPoint(search: LoadSearch, pressure: number): WorkingPoint {
  const { last } = search.places;
  const { stalls } = search.walk;
  const top = topOf(search);
  let step = top;
  let before = top;
  while (step < last) {
    before = step;
    step = Math.min(last, step + LONG);
    if (pointOf(search, step).pressure >= pressure) {
      const found = halve(search, pressure, before, step);
      return { point: between(search, pressure, found), carried: true, stalled: stalls, step: found };
    }
    if (ends(search, step)) break;
  }
  return { point: pointOf(search, step), carried: false, stalled: stalls, step: top };
}

/** The point of the highest rate up to the stall: the best load. Undefined where the rate rises as far as it is followed. */
export function bestOf(search: LoadSearch): CurvePoint | undefined {
  stallOf(search);
  const { records, stalls } = search.walk;
  const top = topOf(search);
  const rateAt = (step: number) => pointOf(search, step).rate;
  let best = records.reduce((at, step) => (rateAt(step) > rateAt(at) ? step : at));
  while (best > 1 && rateAt(best - 1) > rateAt(best)) best--;
  while (best < top && rateAt(best + 1) > rateAt(best)) best++;
  return best === top && !stalls ? undefined : pointOf(search, best);
}
