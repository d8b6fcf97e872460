import type { FigureName, Figures, FigureValues } from './figures.ts';
import { fasterWords, labelOf, listed, nearestWords, openingWords, outcomeWords, remedyWords } from './help-words.ts';
import { changeWords, firstThere, type Lever, lastGood, pathsOf } from './lever.ts';
import type { FigureSensitivity } from './sensitivity.ts';
import { type HeldLimit, heldLimits, makeTrials, pushedOut, type Trial, type Trials } from './trial.ts';
import { type LimitWords, RANK, type Verdict } from './verdict.ts';

export type { Lever } from './lever.ts';

/** What a sentence of help may be given. */
export interface HelpOptions {
  /** What limits are called, and which are none of the drawing's; the figures' own names if left out. */
  readonly words?: LimitWords;
  /** What moves the figures: names the input that makes most of a band. */
  readonly sensitivities?: readonly FigureSensitivity[];
  /** The estimate as the levers stand now, where it is at hand: spares an evaluation of each lever. */
  readonly nominal?: FigureValues;
}

const NO_WORDS: LimitWords = { labels: {}, apart: new Set(['stallMargin']) };
/** Times within this share of each other are equal. */
const SAME_TIME = 0.05;
/** Share of its room a limit that is none of the drawing's keeps when the cut is made faster. */
const ROOM_KEPT = 0.5;

const OPEN = 'whether a setting closes it cannot be told from single trials';

/** What one question of help works with. */
interface Question {
  readonly limits: readonly HeldLimit[];
  readonly limiting: HeldLimit;
  readonly levers: readonly Lever[];
  readonly trials: Trials;
  readonly time: number | null;
  readonly words: LimitWords;
}

/**
 * One plain sentence, or two, on what would help, found by trying: the limiting figure (worst state, then least margin), and
 * the lever whose smallest change brings its whole band inside and pushes no other limit out; the quickest to cut of those
 * that do, of equally quick ones the smaller change. Where none does, what brings the value inside, else what comes nearest
 * and what remains. Where all limits are met, what would cut faster with all of them still met. The figures' bands go along
 * with the estimate's changes. Null when no limit has a figure that is known, or the drawing sets none.
 */
export function helpSentence(
  verdict: Verdict,
  levers: readonly Lever[],
  figures: Figures,
  { words = NO_WORDS, sensitivities = [], nominal }: HelpOptions = {},
): string | null {
  const limits = heldLimits(verdict, figures);
  const limiting = limitingOf(limits, words);
  if (limiting === null) return null;
  const time = typeof figures.timeMin.value === 'number' ? figures.timeMin.value : null;
  const question: Question = { limits, limiting, levers, trials: makeTrials(limits, figures, nominal), time, words };
  const opening = openingWords(limiting, words);
  const help = limiting.state === 'meets' ? fasterHelp(question) : remedyHelp(question);
  const source = limiting.state === 'at risk' ? sourceWords(limiting.id, sensitivities) : '';
  return `${opening}${help === '' ? '' : `: ${help}`}.${source}`;
}

/** The limit with the worst state, then the least margin, of known ones; one that is none of the drawing's must be unmet. */
export function limitingOf(limits: readonly HeldLimit[], { apart }: LimitWords): HeldLimit | null {
  const known = limits.filter(({ room }) => room !== null);
  const asked = known.filter(({ id, state }) => state !== 'meets' || !apart.has(id));
  return asked.toSorted((a, b) => RANK[b.state] - RANK[a.state] || (a.margin ?? 0) - (b.margin ?? 0))[0] ?? null;
}

type Target = 'band' | 'value';

function limitOf(trial: Trial, id: FigureName): HeldLimit {
  return trial.limits.find((limit) => limit.id === id) as HeldLimit;
}

function roomFor(limit: HeldLimit, target: Target): number {
  return (target === 'band' ? limit.room?.band : limit.margin) ?? -Infinity;
}

/** The first change of a lever in each direction that reaches the target. */
function remediesOf({ limiting, trials }: Question, lever: Lever, target: Target): Trial[] {
  return pathsOf(lever).flatMap((path) => {
    const look = (place: number) => {
      const trial = trials.at(lever, path[place] as number);
      if (trial === null) return { state: 'beyond' as const, gain: -Infinity };
      const gain = roomFor(limitOf(trial, limiting.id), target);
      return { state: gain >= 0 ? ('there' as const) : ('short' as const), gain };
    };
    const place = firstThere(path.length, look, roomFor(limiting, target));
    const trial = place < 0 ? null : trials.at(lever, path[place] as number);
    return trial === null ? [] : [trial];
  });
}

/** The quickest of some trials, of equally quick ones the smallest change; where time is the limit, that with most room. */
function bestOf(trials: readonly Trial[], limiting?: FigureName): Trial | undefined {
  const least = (trial: Trial) => Math.min(...trial.limits.map(({ room }) => room?.band ?? Infinity));
  if (limiting === 'timeMin') return trials.toSorted((a, b) => least(b) - least(a) || a.change - b.change)[0];
  const time = (trial: Trial) => trial.time ?? Infinity;
  const quickest = Math.min(...trials.map(time));
  const quick = trials.filter((trial) => time(trial) <= quickest * (1 + SAME_TIME));
  return quick.toSorted((a, b) => a.change - b.change || time(a) - time(b))[0];
}

function remedyHelp(question: Question): string {
  const { limits, limiting, levers, time, words } = question;
  if (levers.length === 0) return '';
  if (roomFor(limiting, 'value') >= 0 && !Number.isFinite(roomFor(limiting, 'band'))) return OPEN;
  const all: Trial[] = [];
  const targets: readonly Target[] = roomFor(limiting, 'value') < 0 ? ['band', 'value'] : ['band'];
  for (const target of targets) {
    const found = levers.flatMap((lever) => remediesOf(question, lever, target));
    const harmless = found.filter((trial) => pushedOut(limits, trial, limiting.id).length === 0);
    const best = bestOf(harmless, limiting.id);
    if (best !== undefined) {
      const limit = limitOf(best, limiting.id);
      return `${remedyWords(best, limit, time, words)}${leftWords(best, limiting, words)}`;
    }
    all.push(...found);
  }
  return shortHelp(question, all);
}

/** Limits beside the limiting one that a trial leaves unmet. */
function leftWords(trial: Trial, limiting: HeldLimit, words: LimitWords): string {
  const named = (state: HeldLimit['state']) =>
    trial.limits
      .filter((limit) => limit.id !== limiting.id && limit.state === state && limit.room !== null)
      .map((limit) => labelOf(limit, words));
  const missed = named('misses');
  const risky = named('at risk');
  const parts = [
    ...(missed.length > 0 ? [`${listed(missed)} would still miss`] : []),
    ...(risky.length > 0 ? [`${listed(risky)} would still be at risk`] : []),
  ];
  return parts.length === 0 ? '' : `; ${parts.join(', ')}`;
}

/** Tries how far a lever goes towards a trial that pushes another limit out before it does. */
function holdBack({ limits, limiting, trials }: Question, { lever, value }: Trial): void {
  const path = pathsOf(lever).find((values) => values.includes(value)) ?? [];
  lastGood(path.indexOf(value), (place) => {
    const trial = trials.at(lever, path[place] as number);
    return trial !== null && pushedOut(limits, trial, limiting.id).length === 0;
  });
}

/** What comes nearest where no lever does it, `harmful` those that push another limit out. */
function shortHelp(question: Question, harmful: readonly Trial[]): string {
  const { limits, limiting, trials, time, words, levers } = question;
  for (const trial of harmful) holdBack(question, trial);
  const target = Number.isFinite(roomFor(limiting, 'band')) ? 'band' : 'value';
  const room = (trial: Trial) => roomFor(limitOf(trial, limiting.id), target);
  const from = roomFor(limiting, target);
  const nearest = trials
    .all()
    .filter((trial) => room(trial) > from && pushedOut(limits, trial, limiting.id).length === 0)
    .toSorted((a, b) => room(b) - room(a) || a.change - b.change)[0];
  const least = bestOf(harmful, limiting.id);
  if (least !== undefined) {
    const out = pushedOut(limits, least, limiting.id).map(
      (limit) => `${labelOf(limit, words)} to ${outcomeWords(limit)}`,
    );
    const it = outcomeWords(limitOf(least, limiting.id));
    const harm = `${changeWords(least.lever, least.value)} would bring it to ${it} but ${listed(out)}`;
    const start = `no single setting helps without harm, ${harm}`;
    return nearest === undefined
      ? start
      : `${start}; without that, ${nearestWords(nearest, limitOf(nearest, limiting.id), time)}`;
  }
  if (nearest !== undefined) {
    const what = roomFor(limiting, 'value') < 0 ? 'it' : 'all of its band';
    return `no single setting brings ${what} inside, ${nearestWords(nearest, limitOf(nearest, limiting.id), time)}`;
  }
  const moves = trials.all().some((trial) => limitOf(trial, limiting.id).figure !== limiting.figure);
  if (!moves) return 'the estimate does not say what moves it';
  return `none of the settings tried brings it nearer (${listed(levers.map(({ name }) => name))})`;
}

/** The change that saves most time with every limit met, if it is worth it. */
function fasterHelp(question: Question): string {
  const { limits, levers, trials, time, words } = question;
  if (time === null || levers.length === 0) return '';
  const keeps = (trial: Trial) =>
    trial.limits.every((limit, index) => {
      const before = (limits[index] as HeldLimit).room?.band ?? 0;
      const kept = words.apart.has(limit.id) ? (limit.room?.band ?? 0) >= ROOM_KEPT * before : true;
      return kept && (limit.room === null || limit.state === 'meets');
    });
  const faster = (trial: Trial | null): trial is Trial => trial?.time != null && trial.time < time && keeps(trial);
  const quickest = levers.flatMap((lever) =>
    pathsOf(lever).flatMap((path) => {
      const good: Trial[] = [];
      lastGood(path.length, (place) => {
        const trial = trials.at(lever, path[place] as number);
        if (faster(trial)) good.push(trial);
        return faster(trial);
      });
      return good.toSorted((a, b) => (a.time ?? 0) - (b.time ?? 0)).slice(0, 1);
    }),
  );
  const best = bestOf(quickest.filter((trial) => (trial.time as number) <= time * (1 - SAME_TIME)));
  return best === undefined
    ? 'no single setting tried cuts faster within the limits'
    : fasterWords(
        best,
        time,
        limits.every(({ room }) => room !== null),
      );
}

/** Where most of a band comes from, as a sentence after a space; empty where it is not known. */
function sourceWords(id: FigureName, sensitivities: readonly FigureSensitivity[]): string {
  const found = sensitivities.find(({ figure }) => figure === id);
  const first = found?.influences[0];
  if (found === undefined || first === undefined) return '';
  const share = found.orderedBy === 'coefficient' ? first.coefficient * first.coefficient : first.firstOrder;
  if (!(share > 0)) return '';
  return ` ${share > 0.5 ? 'Most' : 'The largest part'} of its band comes from ${/^[A-Z]/.test(first.input) ? '' : 'the '}${first.input}.`;
}
