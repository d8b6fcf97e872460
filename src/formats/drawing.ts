import type { OutlineSpec } from '#src/base/outline.ts';
import { nominalSizes } from '#src/base/outline.ts';
import { METRES_PER_MICROMETRE, METRES_PER_MILLIMETRE, MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import type { FigureName, Figures } from '#src/planning/figures.ts';
import { headline, judgeLimits, type LimitRow, type LimitWords, summary, type Verdict } from '#src/planning/verdict.ts';
import { emptyDesk } from './job/desk.ts';
import { readOutline } from './job/outline-input.ts';
import type { JobFile } from './job/schema.ts';
import { roundSignificant } from './numbers.ts';

/** What limits are called in sentences, by the figure they are held against. */
export const LIMIT_WORDS: LimitWords = {
  labels: {
    entrySizeMm: 'entry size',
    taperDeg: 'taper',
    floorFlatnessUm: 'floor flatness',
    cornerRadiusUm: 'corner radius',
    floorRaUm: 'floor Ra',
    edgeChipMaxUm: 'edge chip',
    damageDepthUm: 'damage depth',
    timeMin: 'time',
    stallMargin: 'stall margin',
  } satisfies Partial<Record<FigureName, string>>,
  apart: new Set(['stallMargin']),
};

/** Each nominal size plus a deviation (mm). A larger cavity is a smaller core, so a ring's core has it mirrored. */
function sizesWith(spec: OutlineSpec, deviationMm: number): number[] {
  return nominalSizes(spec).map((size, index) => {
    const sign = spec.kind === 'ring' && index === 1 ? -1 : 1;
    return roundSignificant(size * MILLIMETRES_PER_METRE + sign * deviationMm, 12);
  });
}

function entryRow(spec: OutlineSpec, limits: NonNullable<JobFile['cavity']['limits']>, figures: Figures): LimitRow[] {
  const { entrySizeLowerMm, entrySizeUpperMm } = limits;
  if (entrySizeLowerMm === undefined && entrySizeUpperMm === undefined) return [];
  const small = entrySizeLowerMm === undefined ? null : sizesWith(spec, entrySizeLowerMm);
  const large = entrySizeUpperMm === undefined ? null : sizesWith(spec, entrySizeUpperMm);
  if (spec.kind !== 'ring') return [{ id: 'entrySizeMm', figure: figures.entrySizeMm, lower: small, upper: large }];
  const lower = [small?.[0] ?? null, large?.[1] ?? null];
  const upper = [large?.[0] ?? null, small?.[1] ?? null];
  return [{ id: 'entrySizeMm', figure: figures.entrySizeMm, lower, upper }];
}

/** The cavity of a job whose outline stands in the job itself. @throws RangeError when it does not, or is not sound */
function cavityOf({ cavity }: JobFile): OutlineSpec {
  const read = readOutline(emptyDesk(), 'cavity.outline', cavity.outline);
  if (!read) throw new RangeError('the outline of the cavity is not in the job: hand it in');
  return read.outline.spec;
}

/**
 * The limits of a job's drawing beside the figures they are held against, in the figures' units, in drawing order.
 * @param spec the cavity's outline; needed where it is drawn in a file of its own
 */
export function limitRows(job: JobFile, figures: Figures, spec: OutlineSpec = cavityOf(job)): LimitRow[] {
  const { cavity } = job;
  const limits = cavity.limits ?? {};
  const most = (id: FigureName, upper: number | undefined): LimitRow[] =>
    upper === undefined ? [] : [{ id, figure: figures[id], lower: null, upper }];
  const radiusUm =
    limits.cornerRadiusMm === undefined
      ? undefined
      : roundSignificant((limits.cornerRadiusMm * METRES_PER_MILLIMETRE) / METRES_PER_MICROMETRE, 12);
  return [
    ...entryRow(spec, limits, figures),
    ...most('taperDeg', limits.taperDeg),
    ...most('floorFlatnessUm', limits.floorFlatnessUm),
    ...most('cornerRadiusUm', radiusUm),
    ...most('floorRaUm', limits.floorRaUm),
    ...most('edgeChipMaxUm', limits.edgeChipUm),
    ...most('damageDepthUm', limits.damageDepthUm),
    ...most('timeMin', limits.timeMin),
    ...(figures.stallMargin.value === null
      ? []
      : [{ id: 'stallMargin', figure: figures.stallMargin, lower: 0, upper: null }]),
  ];
}

/**
 * The verdict on a job's figures: every limit of its drawing, and the stall margin where it is known.
 * @param spec the cavity's outline; needed where it is drawn in a file of its own
 */
export function judgeDrawing(job: JobFile, figures: Figures, spec?: OutlineSpec): Verdict {
  return judgeLimits(limitRows(job, figures, spec));
}

/** The verdict in one line, in the words of the drawing. */
export function verdictHeadline(verdict: Verdict): string {
  return headline(verdict, LIMIT_WORDS);
}

/** How many limits are met, in a sentence. */
export function verdictSummary(verdict: Verdict): string {
  return summary(verdict, LIMIT_WORDS);
}
