import type { FigureName } from './figures.ts';
import { elementsOf } from './figures.ts';
import { changeWords } from './lever.ts';
import type { HeldLimit, Trial } from './trial.ts';
import { bandAt, boundsAt, type LimitWords } from './verdict.ts';

const UNITS: readonly (readonly [ending: string, unit: string])[] = [
  ['Mm3PerMin', 'mm3/min'],
  ['MmPerMin', 'mm/min'],
  ['Um', 'um'],
  ['Mm', 'mm'],
  ['Deg', 'deg'],
  ['Min', 'min'],
  ['N', 'N'],
];

/** A number with the unit of a figure, after a space; as few as three digits, sizes to the micrometre. */
export function withUnit(name: FigureName, value: number, digits = 3): string {
  const unit = UNITS.find(([ending]) => name.endsWith(ending))?.[1] ?? '';
  return `${bare(name, value, digits)}${unit === '' ? '' : ` ${unit}`}`;
}

function bare(name: FigureName, value: number, digits = 3): string {
  const size = name === 'entrySizeMm' || name === 'floorSizeMm';
  return String(Number(size ? value.toFixed(3) : value.toPrecision(digits)) + 0);
}

/** Where a figure stands against its bounds, at the element with the least room. */
interface Standing {
  readonly value: number;
  /** End of the band at the side that has less room, the value without one. */
  readonly end: number;
  /** That end lies above what matters there, else below. */
  readonly above: boolean;
  /** How far value and end are outside, negative inside. */
  readonly valueOut: number;
  readonly endOut: number;
}

function standingOf(limit: HeldLimit): Standing {
  const element = limit.room?.element ?? 0;
  const value = elementsOf(limit.figure.value)[element] as number;
  const { low, high } = bandAt(limit.figure, element, value);
  const { lower = -Infinity, upper = Infinity } = boundsAt(limit.limit, element);
  const above = high - upper >= lower - low;
  return above
    ? { value, end: high, above, valueOut: value - upper, endOut: high - upper }
    : { value, end: low, above, valueOut: lower - value, endOut: lower - low };
}

/** What a limit is called. */
export function labelOf({ id }: HeldLimit, { labels }: LimitWords): string {
  return labels[id] ?? id;
}

const capital = (text: string) => `${text.charAt(0).toUpperCase()}${text.slice(1)}`;
const side = (above: boolean) => (above ? 'over' : 'under');

/** How the limiting figure stands, up to where the help begins: "Floor Ra is the limiting figure, 0.12 um over". */
export function openingWords(limit: HeldLimit, words: LimitWords): string {
  const { value, end, above, valueOut, endOut } = standingOf(limit);
  const start = `${capital(labelOf(limit, words))} is the limiting figure`;
  if (valueOut > 0) return `${start}, ${withUnit(limit.id, valueOut, 2)} ${side(above)}`;
  if (endOut <= 0)
    return `${start}, ${withUnit(limit.id, -endOut, 2)} inside${end === value ? '' : ' with all of its band'}`;
  const inside = `${start}, inside at ${withUnit(limit.id, value)} but`;
  if (!Number.isFinite(end)) return `${inside} with a band that is open ${above ? 'above' : 'below'}`;
  return `${inside} with a band ${above ? 'up' : 'down'} to ${bare(limit.id, end)}, ${withUnit(limit.id, endOut, 2)} ${side(above)}`;
}

/** The time a trial takes beside the time now; empty where it is not known or is what was asked about. */
function timeWords(trial: Trial, now: number | null, verb: string): string {
  if (trial.time === null || now === null) return '';
  const after = bare('timeMin', trial.time, 2);
  const before = bare('timeMin', now, 2);
  if (after === before) return ` and ${verb} as long, ${after} min`;
  return ` and ${verb} ${after} min instead of ${before}`;
}

/** What a trial makes of the limiting figure, after the change: value, and the end of its band. */
export function outcomeWords(limit: HeldLimit): string {
  const { value, end, above } = standingOf(limit);
  const most =
    end === value || !Number.isFinite(end) ? '' : `, ${above ? 'at most' : 'at least'} ${bare(limit.id, end)}`;
  return `${withUnit(limit.id, value)}${most}`;
}

/** How far a trial leaves the limiting figure outside, value or end of the band. */
export function remainderWords(limit: HeldLimit): string {
  const { value, end, above, valueOut, endOut } = standingOf(limit);
  if (valueOut > 0) return `${withUnit(limit.id, value)}, still ${withUnit(limit.id, valueOut, 2)} ${side(above)}`;
  if (!Number.isFinite(end)) return `${withUnit(limit.id, value)}, its band still open ${above ? 'above' : 'below'}`;
  return `${withUnit(limit.id, value)}, its band still ${withUnit(limit.id, endOut, 2)} ${side(above)}`;
}

/** A change that does it, and what it costs: time, or, where time is the limit, the room of the limit with the least. */
export function remedyWords(trial: Trial, limit: HeldLimit, now: number | null, words: LimitWords): string {
  const outcome = limit.state === 'meets' ? outcomeWords(limit) : remainderWords(limit);
  const start = `${changeWords(trial.lever, trial.value)} would bring it to ${outcome}`;
  if (limit.id !== 'timeMin') {
    const cost = timeWords(trial, now, 'take');
    return `${start}${cost !== '' && outcome.includes(',') ? ',' : ''}${cost}`;
  }
  const others = trial.limits.filter(
    (other) => other.id !== 'timeMin' && other.room !== null && other.state === 'meets',
  );
  const least = others.toSorted((a, b) => (a.room?.band ?? 0) - (b.room?.band ?? 0))[0];
  if (least === undefined) return start;
  const { endOut } = standingOf(least);
  return `${start}; ${labelOf(least, words)} would then have the least room, ${withUnit(least.id, -endOut, 2)}`;
}

/** A change that comes nearest, and what it costs. */
export function nearestWords(trial: Trial, limit: HeldLimit, now: number | null): string {
  const cost = limit.id === 'timeMin' ? '' : timeWords(trial, now, 'takes');
  return `${changeWords(trial.lever, trial.value)} comes nearest with ${remainderWords(limit)}${cost === '' ? '' : `,${cost}`}`;
}

/** Words joined: "a", "a and b", "a, b and c". */
export function listed(words: readonly string[]): string {
  return words.length < 2 ? words.join('') : `${words.slice(0, -1).join(', ')} and ${words.at(-1)}`;
}

/** A change that cuts faster with every limit met. */
export function fasterWords(trial: Trial, now: number, allKnown: boolean): string {
  const time = bare('timeMin', trial.time ?? Number.NaN, 2);
  const start = changeWords(trial.lever, trial.value);
  return `${start} would take ${time} min instead of ${bare('timeMin', now, 2)} and still meet every limit${allKnown ? '' : ' whose figure is known'}`;
}
