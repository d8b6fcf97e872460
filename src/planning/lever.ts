import type { FigureValues } from './figures.ts';

/** A setting the engineer can change. */
export interface Lever {
  /** Words with their article: "the amplitude". */
  readonly name: string;
  /** Unit of its values, as shown. */
  readonly unit: string;
  readonly now: number;
  /** Least and largest value that may be set. */
  readonly allowed: readonly [number, number];
  /** What it can be set to in steps; about a fortieth of what is allowed, a round number, if left out. */
  readonly step?: number | undefined;
  /** The values there are, in order, where it is not continuous (grades, passes); `now` is one of them. */
  readonly choices?: readonly { readonly value: number; readonly label: string }[] | undefined;
  /** Figures of the estimate with the lever at a value; throws where that cannot be set. */
  readonly evaluate: (value: number) => FigureValues;
}

/** Width of what is allowed, relative to its ends, below which a lever cannot be moved. */
const LEAST_RANGE = 1e-6;
/** Most steps a lever has from one end to the other. */
const MOST_STEPS = 10000;
const STEPS = 40;

/** The round number (1, 2 or 5 times a power of ten) at or below a positive one. */
function roundBelow(value: number): number {
  const [digits, power] = value.toExponential(15).split('e') as [string, string];
  const leading = Number(digits);
  return Number(`${leading >= 5 ? 5 : leading >= 2 ? 2 : 1}e${power}`);
}

/** Whether a number has three digits or fewer, as it is shown. */
function isRound(value: number): boolean {
  return Number(value.toPrecision(3)) === value;
}

/**
 * The values a lever can take from now, nearest first, one list for each direction: round multiples of its step and the
 * end of what is allowed where that is round or all there is, or the choices on either side.
 * @throws RangeError when the present choice is not among the choices, or the step is not positive
 */
export function pathsOf(lever: Lever): readonly (readonly number[])[] {
  const { now, choices } = lever;
  const [low, high] = lever.allowed;
  if (choices) {
    const values = choices.map(({ value }) => value);
    const place = values.indexOf(now);
    if (place < 0) throw new RangeError(`${lever.name}: ${now} is not one of its choices`);
    const may = (value: number) => value >= low && value <= high;
    return [values.slice(place + 1).filter(may), values.slice(0, place).reverse().filter(may)];
  }
  if (!(high - low > LEAST_RANGE * Math.max(Math.abs(low), Math.abs(high)))) return [[], []];
  const step = lever.step ?? roundBelow((high - low) / STEPS);
  if (!(step > 0 && (high - low) / step <= MOST_STEPS)) {
    throw new RangeError(`${lever.name}: its step does not suit its range: ${step}`);
  }
  const multiple = (n: number) => Number((n * step).toPrecision(12));
  const up: number[] = [];
  for (let n = Math.floor(Math.max(now, low) / step); multiple(n) < high; n++) {
    if (multiple(n) > now && multiple(n) >= low) up.push(multiple(n));
  }
  if (high > now && (isRound(high) || up.length === 0)) up.push(high);
  const down: number[] = [];
  for (let n = Math.ceil(Math.min(now, high) / step); multiple(n) > low; n--) {
    if (multiple(n) < now && multiple(n) <= high) down.push(multiple(n));
  }
  if (low < now && (isRound(low) || down.length === 0)) down.push(low);
  return [up, down];
}

/** How large a change is: a share of what the lever is at, or, of choices and levers at zero, of what it can do. */
export function changeOf({ now, allowed, choices }: Lever, value: number): number {
  if (choices) {
    const places = choices.map((choice) => choice.value);
    return Math.abs(places.indexOf(value) - places.indexOf(now)) / Math.max(1, places.length - 1);
  }
  return Math.abs(value - now) / (Math.abs(now) || allowed[1] - allowed[0] || 1);
}

/** The change in words: "taking the load from 60 to 75 N", "F400 instead of F320". */
export function changeWords({ name, unit, now, choices }: Lever, value: number): string {
  if (choices) {
    const label = (wanted: number) => choices.find((choice) => choice.value === wanted)?.label ?? String(wanted);
    return `${label(value)} instead of ${label(now)}`;
  }
  const shown = (number: number) => String(Number(number.toPrecision(3)));
  return `taking ${name} from ${shown(now)} to ${shown(value)}${unit === '' ? '' : ` ${unit}`}`;
}

/** How one value of a path fares: not yet there, there, or too far to be possible at all. */
export type PathState = 'short' | 'there' | 'beyond';

export interface PathPoint {
  readonly state: PathState;
  /** The larger the nearer; what the present setting has is given as `from`. */
  readonly gain: number;
}

/**
 * The first place of a path that is there, by steps that treble and then by halving; -1 when none is found. A path whose
 * first step leads away is left; where the gain has a top between two places looked at, the places around it are looked at
 * too. At most some fifteen looks for a path of a hundred.
 */
export function firstThere(length: number, look: (place: number) => PathPoint, from: number): number {
  const seen = new Map<number, PathPoint>();
  const at = (place: number) => {
    const known = seen.get(place) ?? look(place);
    seen.set(place, known);
    return known;
  };
  if (length === 0 || leadsAway(length, at, from)) return -1;
  let below = -1;
  for (let place = 0; ; place = Math.min(length - 1, 3 * place + 2)) {
    if (at(place).state !== 'short') {
      const first = firstNotShort(below, place, at);
      if (at(first).state === 'there') return first;
      break;
    }
    below = place;
    if (place === length - 1) break;
  }
  const top = aroundTop(seen, at);
  if (top < 0) return -1;
  const shorts = [...seen.keys()].filter((place) => place < top && shortAt(seen, place));
  return firstNotShort(Math.max(-1, ...shorts), top, at);
}

function shortAt(seen: ReadonlyMap<number, PathPoint>, place: number): boolean {
  return seen.get(place)?.state === 'short';
}

function leadsAway(length: number, at: (place: number) => PathPoint, from: number): boolean {
  const first = at(0);
  if (first.state !== 'short' || first.gain > from) return false;
  return first.gain < from || at(length - 1).gain <= from;
}

/** The first place above `below`, which is short, that is not; `above` is not. */
function firstNotShort(below: number, above: number, at: (place: number) => PathPoint): number {
  let low = below;
  let high = above;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (at(middle).state === 'short') low = middle;
    else high = middle;
  }
  return high;
}

const LOOKS_AROUND = 3;

/** A place that is there around the best one seen, or -1. */
function aroundTop(seen: ReadonlyMap<number, PathPoint>, at: (place: number) => PathPoint): number {
  for (let n = 0; n < LOOKS_AROUND; n++) {
    const places = [...seen.keys()].sort((a, b) => a - b);
    const gain = (place: number) => (shortAt(seen, place) ? (seen.get(place)?.gain ?? -Infinity) : -Infinity);
    const best = places.reduce((a, b) => (gain(b) > gain(a) ? b : a), places[0] as number);
    const place = places.indexOf(best);
    const beside = places[place + 1];
    if (beside === undefined || !shortAt(seen, beside)) return -1;
    const sides = [places[place - 1] ?? -1, beside].map((side) => (side + best) >> 1);
    for (const middle of sides) {
      if (middle >= 0 && !seen.has(middle) && at(middle).state === 'there') return middle;
    }
  }
  return -1;
}

const COARSE = 8;

/**
 * A place of a path up to which every one is good and not far beyond which one is not, or -1 when the first is not: by
 * steps that treble, then by halving down to an eighth of the way.
 */
export function lastGood(length: number, good: (place: number) => boolean): number {
  let low = -1;
  let high = length;
  for (let place = 0; place < length; place = 3 * place + 2) {
    if (!good(place)) {
      high = place;
      break;
    }
    low = place;
  }
  while (high - low > 1 + Math.max(0, low) / COARSE) {
    const middle = (low + high) >> 1;
    if (good(middle)) low = middle;
    else high = middle;
  }
  return low;
}
