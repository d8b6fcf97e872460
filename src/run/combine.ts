import { MICROMETRES_PER_METRE } from '#src/base/units.ts';
import type { ResolvedPass } from '#src/formats/job/resolve.ts';
import { elementsOf, type FigureValues, shapedLike } from '#src/planning/figures.ts';

type Value = FigureValues[keyof FigureValues];

/** One pass with its values, and what it took off beyond the pass before it (m): per side and off the floor. */
export interface ValuedPass {
  readonly pass: ResolvedPass;
  readonly values: FigureValues;
  readonly taken: Taken;
}

/** Work a pass took off around and under the cavity it found (m); none for the first. */
export interface Taken {
  readonly side: number;
  readonly floor: number;
}

const sum = (values: readonly Value[]) =>
  values.reduce<number>((all, value) => all + ((value as number | null) ?? 0), 0);

function most(values: readonly Value[]): Value {
  const known = values.flatMap(elementsOf).filter(Number.isFinite);
  return known.length > 0 ? Math.max(...known) : null;
}

function least(values: readonly Value[]): Value {
  const known = values.flatMap(elementsOf).filter(Number.isFinite);
  return known.length > 0 ? Math.min(...known) : null;
}

/** What is left of an earlier pass's chips or cracks after the later ones have taken so much off (um). */
function left(passes: readonly ValuedPass[], of: (values: FigureValues) => Value, by: (taken: Taken) => number): Value {
  return most(
    passes.map(({ values }, index) => {
      const value = of(values);
      if (typeof value !== 'number') return null;
      const taken = passes.slice(index + 1).reduce((all, later) => all + by(later.taken), 0);
      return Math.max(0, value - taken * MICROMETRES_PER_METRE);
    }),
  );
}

/** Ends of a rate over all passes: the first's start and the last's end. */
function rateOver(passes: readonly ValuedPass[]): Value {
  const first = elementsOf(passes[0]?.values.rateMmPerMin ?? null);
  const last = elementsOf(passes.at(-1)?.values.rateMmPerMin ?? null);
  return first.length > 0 && last.length > 0 ? [first[0] as number, last.at(-1) as number] : null;
}

/**
 * The job's values from those of its passes. Sizes, form and roughness are the last pass's; times and impacts add up; chips
 * and damage of an earlier pass count by what the later ones left of them; tools are judged each by itself, so the worst
 * is told; the stall margin is the least. Of a single pass, its own values.
 * @param whole values the job has as a whole where they differ from the last pass's (a cut's, measured on all passes)
 */
export function combineValues(passes: readonly ValuedPass[], whole: Partial<FigureValues> = {}): FigureValues {
  const last = (passes.at(-1) as ValuedPass).values;
  if (passes.length === 1) return { ...last, ...whole };
  const all = (name: keyof FigureValues) => passes.map(({ values }) => values[name]);
  const volume = sum(passes.map(({ values }) => (values.mrrMm3PerMin as number) * (values.timeMin as number)));
  const time = sum(all('timeMin'));
  return {
    ...last,
    timeMin: time,
    rateMmPerMin: rateOver(passes),
    mrrMm3PerMin: time > 0 ? volume / time : null,
    edgeChipMaxUm: left(
      passes,
      (v) => v.edgeChipMaxUm,
      ({ side }) => side,
    ),
    edgeChipP95Um: left(
      passes,
      (v) => v.edgeChipP95Um,
      ({ side }) => side,
    ),
    damageDepthUm: left(
      passes,
      (v) => v.damageDepthUm,
      ({ floor }) => floor,
    ),
    damageDepthLargestUm: left(
      passes,
      (v) => v.damageDepthLargestUm,
      ({ floor }) => floor,
    ),
    toolWearLengthMm: most(all('toolWearLengthMm')),
    toolSideLossUm: most(all('toolSideLossUm')),
    stallMargin: least(all('stallMargin')),
    impacts: sum(all('impacts')),
    ...whole,
  };
}

/** Notes beside the job's values where there are several passes. */
export const COMBINED_NOTES = {
  damageDepthUm: 'what the last pass left or made',
  damageDepthLargestUm: 'what the last pass left or made',
  edgeChipMaxUm: 'what the last pass left or made',
  toolWearLengthMm: 'the pass that wears its tool most',
  toolSideLossUm: 'the pass that wears its tool most',
  toolEdgeRadiusUm: 'of the last pass',
  stallMargin: 'the pass nearest to its stall',
  rateBestLoadN: 'of the last pass',
} as const satisfies Partial<Record<keyof FigureValues, string>>;

/** Elementwise larger of two sizes (or smaller, for a core), as wide as the widest pass opened it. */
export function widest(a: Value, b: Value, core: readonly boolean[]): Value {
  const first = elementsOf(a);
  const second = elementsOf(b);
  if (first.length !== second.length) return first.length > 0 ? a : b;
  return shapedLike(
    a,
    first.map((size, n) => (core[n] ? Math.min(size, second[n] as number) : Math.max(size, second[n] as number))),
  );
}
