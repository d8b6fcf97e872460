import { METRES_PER_MICROMETRE, METRES_PER_MILLIMETRE, PASCALS_PER_MEGAPASCAL } from '#src/base/units.ts';
import { LIMIT_WORDS, verdictHeadline } from '#src/formats/drawing.ts';
import type { ResolvedJob } from '#src/formats/job/resolve.ts';
import { formatNumber } from '#src/formats/numbers.ts';
import type { ResultWarning } from '#src/formats/result.ts';
import type { Figures } from '#src/planning/figures.ts';
import { helpSentence } from '#src/planning/help.ts';
import { bandsOf, type JobBands, withBands } from '#src/planning/job-bands.ts';
import { COMBINED_NOTES } from './combine.ts';
import { type Estimator, type JobEstimate, makeEstimator, type PassEstimate } from './estimates.ts';
import { estimateWords, figuresOf } from './figures.ts';
import { openJob } from './jobs.ts';
import { leversOf } from './levers.ts';
import type { Estimated, JobRequest, PassRemarks, Refused } from './protocol.ts';
import { resultOf, resultWarnings, verdictOf, withoutBands } from './results.ts';

/** The mean-field answer of a job with its bands and what would help. */
export interface JobAnswer {
  readonly nominal: JobEstimate;
  readonly bands: JobBands;
  readonly figures: Figures;
}

/** Estimates a job and the spread of its figures over what is not known of it. */
export function answerJob(job: ResolvedJob, estimator: Estimator): JobAnswer {
  const nominal = estimator.estimate(job);
  const last = job.passes.at(-1);
  if (!last) throw new RangeError('a job has at least one pass');
  const evaluate = (conditions: typeof last.conditions) =>
    conditions === last.conditions ? nominal.values : estimator.estimate(job, conditions, 'member').values;
  const bands = bandsOf({ conditions: last.conditions, ranges: last.ranges, seed: job.cut.seed, evaluate });
  const words = estimateWords(last);
  const notes = job.passes.length > 1 ? { ...words.notes, ...COMBINED_NOTES } : words.notes;
  return {
    nominal,
    bands,
    figures: withBands(figuresOf(nominal.values, { ...words, ...(notes && { notes }) }), bands.bands),
  };
}

/** What limits a job and what would help; null where its drawing sets no limit. */
export function helpFor(
  job: ResolvedJob,
  figures: Figures,
  { nominal, bands }: Pick<JobAnswer, 'nominal' | 'bands'>,
  { estimator, attachments = {} }: { readonly estimator: Estimator; readonly attachments: JobRequest['attachments'] },
): string | null {
  const stall = nominal.passes.at(-1)?.estimate.stallPressure ?? null;
  return helpSentence(
    verdictOf(job, figures),
    leversOf(job, estimator, { attachments, stallPressure: stall }),
    figures,
    {
      words: LIMIT_WORDS,
      sensitivities: bands.sensitivities,
      nominal: nominal.values,
    },
  );
}

const um = (metres: number) => metres / METRES_PER_MICROMETRE;
const mm = (metres: number) => formatNumber(metres / METRES_PER_MILLIMETRE, 3);

function remarksOf({ pass, estimate: e }: PassEstimate): PassRemarks {
  const remarks = [
    { name: 'Face pressure', value: pass.pressure / PASCALS_PER_MEGAPASCAL, unit: 'MPa' },
    { name: 'Gap over the mean floor, closest', value: um(e.gap), unit: 'um' },
    { name: 'Grits between the faces in one cycle', value: e.engaged * pass.toolArea, unit: '' },
    { name: 'Load on one grit, mean', value: e.meanLoad, unit: 'N' },
    { name: 'Load on one grit, 99.9 % below', value: e.largestLoad, unit: 'N' },
    { name: 'Chip, mean radius', value: um(e.chipRadius), unit: 'um' },
    { name: 'Chip, mean depth', value: um(e.chipDepth), unit: 'um' },
    { name: 'Removed over credited chip volume', value: e.overlap, unit: '' },
    { name: 'Share removed by dents', value: e.plasticShare, unit: '' },
    { name: 'Share removed by thrown grits', value: e.freeImpactShare, unit: '' },
    { name: 'Share of grains not yet crushed', value: e.freshFraction, unit: '' },
    ...(e.stallPressure === null
      ? []
      : [{ name: 'Face pressure of the stall', value: e.stallPressure / PASCALS_PER_MEGAPASCAL, unit: 'MPa' }]),
  ];
  return { title: pass.title, remarks };
}

const NOTHING_REMOVED: ResultWarning = {
  path: '',
  message: 'This setting removes nothing. Raise the load or the amplitude, or take a coarser grit.',
};

/** Path of a setting of a pass, in the job or in its list of passes. */
export function settingPath(job: ResolvedJob, index: number, path: string): string {
  return job.file.passes && job.file.passes.length > 0 ? `passes[${index}].${path}` : path;
}

/** Share of the depth a cavity may end short of before it is said. */
const TOLD_SHORT = 0.005;

/** A pass whose tool wears shorter without the machine making up for it; nothing where it comes to its depth. */
export function shortWarnings(job: ResolvedJob, index: number, depth: number): ResultWarning[] {
  const pass = job.passes[index];
  if (!pass || pass.toolLife.compensated || depth > (1 - TOLD_SHORT) * pass.depth) return [];
  const message = `The tool wears shorter and nothing makes up for it: the cavity ends at ${mm(depth)} mm instead of ${mm(pass.depth)} mm. Let the machine make up for the wear, or ask for more depth.`;
  return [{ path: settingPath(job, index, 'tool.wearCompensated'), message }];
}

/** What the estimate warns of, pass by pass. */
export function estimateWarnings(job: ResolvedJob, { passes }: JobEstimate): ResultWarning[] {
  return passes.flatMap(({ pass, estimate: e }, index): ResultWarning[] => {
    const load = settingPath(job, index, 'machine.staticLoadN');
    const stallN = e.stallPressure === null ? '' : ` of ${formatNumber(e.stallPressure * pass.toolArea, 3)} N`;
    return [
      ...(e.rate > 0 ? [] : [NOTHING_REMOVED]),
      ...(e.stalled
        ? [{ path: load, message: `The load is above the stall${stallN}: the slurry no longer renews. Enter less.` }]
        : []),
      ...(e.carried || e.stalled
        ? []
        : [
            { path: load, message: 'The grits cannot bear this load: the figures are those of the largest they bear.' },
          ]),
      ...(e.ranOut ? [] : shortWarnings(job, index, e.depthReached)),
      ...(e.ranOut
        ? [
            {
              path: settingPath(job, index, 'tool.wearLengthMm'),
              message: `The tool is used up at a depth of ${mm(e.depthReached)} mm. Take a longer or harder one, or dress it on the way.`,
            },
          ]
        : []),
    ];
  });
}

/** Estimates a job. */
export function estimateJob(request: JobRequest): Estimated | Refused {
  const opened = openJob(request);
  if (opened.state === 'refused') return opened;
  const { job, warnings } = opened;
  const estimator = makeEstimator();
  const answer = answerJob(job, estimator);
  const { nominal, bands, figures } = answer;
  const help = helpFor(job, figures, answer, { estimator, attachments: request.attachments });
  const result = resultOf({
    job,
    figures,
    passes: nominal.passes.map(({ pass, values }) =>
      job.passes.length === 1 ? figures : withoutBands(figuresOf(values, estimateWords(pass))),
    ),
    bands,
    verdict: verdictOf(job, figures),
    help,
    warnings: resultWarnings(warnings, estimateWarnings(job, nominal)),
    voxelUm: null,
    magnification: 1,
  });
  return {
    state: 'done',
    result,
    headline: verdictHeadline(result.verdict),
    help,
    passes: nominal.passes.map(remarksOf),
    notes: job.notes,
  };
}
