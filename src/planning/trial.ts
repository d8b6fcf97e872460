import { moved, sourceOf } from './carry.ts';
import {
  elementsOf,
  FIGURE_NAMES,
  type Figure,
  type FigureName,
  type Figures,
  type FigureValues,
  shapedLike,
} from './figures.ts';
import { changeOf, type Lever } from './lever.ts';
import { judgeLimit, type LimitRow, type LimitVerdict, RANK, type Room, roomOf, type Verdict } from './verdict.ts';

/** A limit of a verdict with the figure it is held against. */
export interface HeldLimit extends LimitVerdict {
  readonly id: FigureName;
  readonly figure: Figure;
  /** Null without a value. */
  readonly room: Room | null;
}

function isFigure(id: string): id is FigureName {
  return (FIGURE_NAMES as readonly string[]).includes(id);
}

function held(row: LimitRow): HeldLimit {
  return { ...judgeLimit(row), id: row.id as FigureName, figure: row.figure, room: roomOf(row) };
}

/** The limits of a verdict with their figures; those that are held against no figure are left out. */
export function heldLimits({ limits }: Pick<Verdict, 'limits'>, figures: Figures): HeldLimit[] {
  return limits.flatMap(({ id, limit }) => (isFigure(id) ? [held({ id, figure: figures[id], ...limit })] : []));
}

/** What the figures are expected to be with one lever at another value. */
export interface Trial {
  readonly lever: Lever;
  readonly value: number;
  /** See `changeOf`. */
  readonly change: number;
  /** All limits, judged anew. */
  readonly limits: readonly HeldLimit[];
  /** Machining time in the unit of the figure; null where it is not known. */
  readonly time: number | null;
}

/**
 * A figure as the estimate has it move, value and band alike; null where the estimate goes nowhere. One the estimate has
 * no law for, own or related, stays.
 */
function movedFigure(name: FigureName, figure: Figure, before: FigureValues, after: FigureValues): Figure | null {
  const source = sourceOf(name, figure.value, (other) => before[other]);
  if (figure.value === null || source === null) return figure;
  const from = elementsOf(before[source.name]);
  const to = elementsOf(after[source.name]);
  if (to.length !== from.length || !to.every(Number.isFinite)) return null;
  const along = (ends: Figure['value']) =>
    ends === null
      ? null
      : shapedLike(
          ends,
          elementsOf(ends).map((end, e) => moved(end, from[e] as number, to[e] as number, source.scale)),
        );
  return { ...figure, value: along(figure.value), low: along(figure.low), high: along(figure.high) };
}

/** Evaluates levers against one state of the figures; every value of a lever once. */
export interface Trials {
  /** Null where the value cannot be set, or nothing comes of it. */
  readonly at: (lever: Lever, value: number) => Trial | null;
  /** Everything tried that came out. */
  readonly all: () => readonly Trial[];
}

/**
 * Trials of some limits and figures.
 * @param nominal the estimate as every lever stands now; without it the first trial of a lever also evaluates that
 */
export function makeTrials(limits: readonly HeldLimit[], figures: Figures, nominal?: FigureValues): Trials {
  const befores = new Map<Lever, FigureValues | null>();
  const tried = new Map<Lever, Map<number, Trial | null>>();
  const make = (lever: Lever, value: number): Trial | null => {
    if (!befores.has(lever)) befores.set(lever, nominal ?? attempt(lever, lever.now));
    const before = befores.get(lever) ?? null;
    const after = before === null ? null : attempt(lever, value);
    if (before === null || after === null) return null;
    const time = movedFigure('timeMin', figures.timeMin, before, after)?.value;
    if (time === undefined) return null;
    const rows = limits.map((limit) => ({ limit, figure: movedFigure(limit.id, limit.figure, before, after) }));
    if (rows.some(({ figure }) => figure === null)) return null;
    return {
      lever,
      value,
      change: changeOf(lever, value),
      limits: rows.map(({ limit, figure }) => held({ id: limit.id, figure: figure as Figure, ...limit.limit })),
      time: typeof time === 'number' ? time : null,
    };
  };
  return {
    at: (lever, value) => {
      const own = tried.get(lever) ?? new Map<number, Trial | null>();
      tried.set(lever, own);
      const known = own.get(value);
      if (known !== undefined) return known;
      const trial = make(lever, value);
      own.set(value, trial);
      return trial;
    },
    all: () => [...tried.values()].flatMap((own) => [...own.values()]).filter((trial) => trial !== null),
  };
}

function attempt(lever: Lever, value: number): FigureValues | null {
  try {
    return lever.evaluate(value);
  } catch {
    return null;
  }
}

/** Limits beside one that fare worse than they do now. */
export function pushedOut(now: readonly HeldLimit[], trial: Trial, beside: FigureName): HeldLimit[] {
  return trial.limits.filter((limit, index) => {
    const before = now[index] as HeldLimit;
    return limit.id !== beside && RANK[limit.state] > RANK[before.state];
  });
}
