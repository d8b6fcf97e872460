import type { Conditions } from '#src/physics/records.ts';
import { type Band, combinedBand } from './bands.ts';
import { bandScale, sourceOf } from './carry.ts';
import {
  elementsOf,
  FIGURE_NAMES,
  type Figure,
  type FigureName,
  type Figures,
  type FigureValues,
  NO_BAND,
  shapedLike,
} from './figures.ts';
import { type JobRanges, type VariedInput, variedInputs, withInputs } from './inputs.ts';
import { type LawSample, pointOf, sampleLaws } from './sampling.ts';
import { type FigureSensitivity, sensitivities } from './sensitivity.ts';

/** Members of a job's sample unless asked otherwise: three times sixteen, so that the net stays balanced. */
export const MEMBERS = 48;

/** Rows below which inputs of the net move together, and it cannot be told which of them moves a figure. */
const LEAST_ROWS = 32;

/** Relative differences between members that are rounding. */
const ROUNDING = 1e-9;

/** One figure over the sample of a job's properties. */
export interface FigureBand {
  /** Ends of the band, shaped like the nominal; both null when there is none, one null when it is open there. */
  readonly low: Figure['value'];
  readonly high: Figure['value'];
  readonly covers: string;
  /** The estimate at nominal properties; null when it has no such figure. */
  readonly nominal: Figure['value'];
  /** The members' estimates, one list per element of the nominal; NaN where a member failed. */
  readonly members: readonly (readonly number[])[];
  /** What was varied, in words. */
  readonly sources: readonly string[];
}

export type FigureBands = Readonly<Record<FigureName, FigureBand>>;

/** What a sample of a job's properties says. */
export interface JobBands {
  readonly bands: FigureBands;
  /** What moves each figure, of the figures that move; of several sizes the first. */
  readonly sensitivities: readonly FigureSensitivity[];
  /** Members that threw, and what the first of them said. */
  readonly failed: number;
  readonly failure: string | null;
}

export interface JobBandsOptions {
  readonly conditions: Conditions;
  readonly ranges: JobRanges;
  /** `MEMBERS` unless given. */
  readonly members?: number;
  readonly seed: number;
  /** The figures under some conditions: null, or a number that is not finite, where there is none. */
  readonly evaluate: (conditions: Conditions) => FigureValues;
}

/**
 * The central 90 % of every figure over a job's properties and grit lot, and what moves it: one Sobol sample of triangular
 * laws, every figure of a member from the same evaluation. A member that throws counts as failed, one that has no time never ends. An estimate at nominal
 * properties that throws, throws.
 * @throws RangeError when a range is not in order
 */
export function bandsOf({ conditions, ranges, members = MEMBERS, seed, evaluate }: JobBandsOptions): JobBands {
  const nominal = evaluate(conditions);
  const inputs = variedInputs(conditions, ranges);
  const laws = inputs.map(({ range }) => ({
    kind: 'triangular' as const,
    min: range.low,
    nominal: range.nominal,
    max: range.high,
  }));
  if (inputs.length === 0) {
    const bands = byName((name) => ({ ...NOTHING_VARIED, nominal: finiteValue(nominal[name]) }));
    return { bands, sensitivities: [], failed: 0, failure: null };
  }
  const sample = sampleLaws(laws, members, seed);
  const { values, failures } = evaluateAll(sample, (point) => evaluate(withInputs(conditions, inputs, point)), inputs);
  const sources = [...new Set(inputs.map(({ source }) => source))];
  const bands = byName((name) => figureBand(name, finiteValue(nominal[name]), values, sources));
  return {
    bands,
    sensitivities: movements(sample, inputs, bands),
    failed: failures.length,
    failure: failures[0] ?? null,
  };
}

const NOTHING_VARIED = {
  low: null,
  high: null,
  covers: 'no band: no property of this job has a range',
  members: [],
  sources: [],
} as const;

function byName<T>(of: (name: FigureName) => T): Readonly<Record<FigureName, T>> {
  return Object.fromEntries(FIGURE_NAMES.map((name) => [name, of(name)])) as Record<FigureName, T>;
}

function finiteValue(value: Figure['value']): Figure['value'] {
  return elementsOf(value).every(Number.isFinite) ? value : null;
}

function evaluateAll(
  sample: LawSample,
  evaluate: (point: Float64Array) => FigureValues,
  { length: dimensions }: readonly VariedInput[],
): { readonly values: (FigureValues | null)[]; readonly failures: string[] } {
  const failures: string[] = [];
  const values = Array.from({ length: sample.values.length / dimensions }, (_, i) => {
    try {
      return evaluate(pointOf(sample.values, dimensions, i));
    } catch (error) {
      failures.push(error instanceof Error ? error.message : String(error));
      return null;
    }
  });
  return { values, failures };
}

function figureBand(
  name: FigureName,
  nominal: Figure['value'],
  values: readonly (FigureValues | null)[],
  sources: readonly string[],
): FigureBand {
  if (nominal === null) {
    return { low: null, high: null, covers: 'no band: not in the estimate', nominal, members: [], sources };
  }
  const elements = elementsOf(nominal);
  const missing = name === 'timeMin' ? Infinity : Number.NaN;
  const element = (all: FigureValues | null, e: number) =>
    all === null ? Number.NaN : (elementsOf(all[name])[e] ?? missing);
  const members = elements.map((_, e) => values.map((all) => element(all, e)));
  const own = elements.map((value, e) =>
    combinedBand({ nominal: value, members: members[e] as number[], replicates: [] }, 0.9, {
      scale: bandScale(name),
      sources,
    }),
  );
  const ends = endsOf(own, nominal);
  return { ...ends, covers: ends.covers + endlessWords(members), nominal, members, sources };
}

/** Bands of a figure's elements as the figure has them: an end that is infinite is open. */
function endsOf(bands: readonly Band[], like: Figure['value']): Pick<Figure, 'low' | 'high' | 'covers'> {
  const lows = bands.map(({ low }) => low);
  const highs = bands.map(({ high }) => high);
  const without = bands.find(({ low }) => low === null);
  const covers = (without ?? bands[0])?.covers ?? 'no band: no value';
  if (without || bands.length === 0) return { low: null, high: null, covers };
  const whole = (ends: readonly (number | null)[]) =>
    ends.every((end) => Number.isFinite(end)) ? shapedLike(like, ends as number[]) : null;
  const low = whole(lows);
  const high = whole(highs);
  if (low === null && high === null) return { low, high, covers: 'no band: hardly any estimate comes to an end' };
  return { low, high, covers: high === null ? `${covers}; open above` : covers };
}

/** How many members never come to an end, after the rest of the words. */
function endlessWords(members: readonly (readonly number[])[]): string {
  const endless = Math.max(0, ...members.map((own) => own.filter((value) => value === Infinity).length));
  return endless === 0 ? '' : `; ${endless} of ${members[0]?.length} never come to an end`;
}

function movements(sample: LawSample, inputs: readonly VariedInput[], bands: FigureBands): FigureSensitivity[] {
  const outputs = FIGURE_NAMES.flatMap((name): [string, readonly number[]][] => {
    const first = bands[name].members[0] ?? [];
    const came = first.filter((value) => !Number.isNaN(value));
    const moves = came.some((value) => !(Math.abs(value - (came[0] as number)) <= ROUNDING * Math.abs(value)));
    return moves && came.length >= Math.max(LEAST_ROWS, inputs.length + 2) ? [[name, first]] : [];
  });
  return sensitivities({ unit: sample.unit, inputs: inputs.map(({ name }) => name) }, Object.fromEntries(outputs));
}

/** Whether figures are those of the estimate at nominal properties: no known value differs. */
function areNominal(figures: Figures, bands: FigureBands): boolean {
  return FIGURE_NAMES.every((name) => {
    const own = elementsOf(figures[name].value);
    const estimated = elementsOf(bands[name].nominal);
    return own.every((value, e) => estimated[e] === value);
  });
}

/**
 * Figures with their bands. Those of the estimate at nominal properties keep their values and take the bands as they are.
 * Those of a cut take the estimate's deviations, as ratios where the figure is one that scales, about the mean of the
 * runs, and the spread of the runs where there are several (`combinedBand`); a figure the estimate has no law for takes
 * them from a related one, and says so. What a figure's `covers` says beside the lack of a band stays. A value
 * outside its band widens it.
 * @param replicates all runs of the cut, these figures' own included; without it figures that are not the estimate's are
 * a single run's
 */
export function withBands(figures: Figures, bands: FigureBands, replicates?: readonly Figures[]): Figures {
  const runs = replicates ?? (areNominal(figures, bands) ? [] : [figures]);
  return byName((name) => {
    const figure = figures[name];
    if (figure.value === null) return figure;
    const ends = runs.length === 0 ? bands[name] : carriedEnds(name, figures, bands, runs);
    const covers = joined(ends.covers, figure.covers);
    return { value: figure.value, ...reaching(figure.value, ends), covers };
  });
}

/** Ends that hold the value: a skewed range may leave the nominal, and few runs one of them, outside the central share. */
function reaching(value: Figure['value'], { low, high }: Pick<Figure, 'low' | 'high'>): Pick<Figure, 'low' | 'high'> {
  const own = elementsOf(value);
  const held = (ends: Figure['value'], further: (a: number, b: number) => number) =>
    ends === null
      ? null
      : shapedLike(
          ends,
          elementsOf(ends).map((end, e) => further(end, own[e] as number)),
        );
  return { low: held(low, Math.min), high: held(high, Math.max) };
}

function carriedEnds(
  name: FigureName,
  figures: Figures,
  bands: FigureBands,
  runs: readonly Figures[],
): Pick<Figure, 'low' | 'high' | 'covers'> {
  const { value } = figures[name];
  const source = sourceOf(name, value, (other) => bands[other].nominal);
  if (source === null) return { low: null, high: null, covers: 'no band: the estimate has no law for it' };
  const { nominal, members, sources, covers } = bands[source.name];
  if (members.length === 0) return { low: null, high: null, covers };
  const own = elementsOf(value).map((_, e) =>
    combinedBand(
      {
        nominal: elementsOf(nominal)[e] as number,
        members: members[e] as number[],
        replicates: runs.map((run) => elementsOf(run[name].value)[e] ?? Number.NaN),
      },
      0.9,
      { scale: source.scale, sources },
    ),
  );
  const ends = endsOf(own, value);
  const more = source.words === '' || ends.low === null ? '' : `; ${source.words}`;
  return { ...ends, covers: ends.covers + endlessWords(members) + more };
}

/** What a band covers, and what was said of the figure beside having none. */
function joined(covers: string, before: string): string {
  const notes = before === NO_BAND ? '' : before.startsWith(`${NO_BAND}; `) ? before.slice(NO_BAND.length + 2) : before;
  return notes === '' ? covers : `${covers}; ${notes}`;
}
