import { METRES_PER_MICROMETRE } from '#src/base/units.ts';
import { type HistoryMoment, writeHistory, writeTrace } from '#src/formats/csv.ts';
import { verdictHeadline } from '#src/formats/drawing.ts';
import type { ResolvedJob } from '#src/formats/job/resolve.ts';
import { type ResultWarning, writeResult } from '#src/formats/result.ts';
import type { Figures, FigureValues } from '#src/planning/figures.ts';
import { withBands } from '#src/planning/job-bands.ts';
import { COMBINED_NOTES, combineValues } from './combine.ts';
import { type CutTools, cutPasses, type DonePass, progressOver } from './cut-passes.ts';
import { cavityPng, type Drawable, isMeasured, sectionCurve, sectionSvg, traceSvg } from './drawings.ts';
import { answerJob, helpFor, type JobAnswer } from './estimate-job.ts';
import { makeEstimator } from './estimates.ts';
import { cutWords, type FigureWords, figuresOf } from './figures.ts';
import { openJob } from './jobs.ts';
import type { Artefact, CutDone, JobRequest, Progress, Refused } from './protocol.ts';
import { resultOf, resultWarnings, verdictOf, withoutBands } from './results.ts';
import type { CallContext } from './serve.ts';

const NOT_MEASURED: ResultWarning = {
  path: 'cavity.depthMm',
  message: 'The wall is too low to be measured below its edge chips: no entry size, and the section is not drawn.',
};

/**
 * Cuts a job: grows the cavity pass by pass, once for each replicate, measures it, works the bands out, judges and draws it.
 * The pictures and the history are the first replicate's, and so are the values of the figures.
 */
export async function cutJob(request: JobRequest, context: CallContext, tools: CutTools): Promise<CutDone | Refused> {
  const opened = openJob(request);
  if (opened.state === 'refused') return opened;
  const { job, warnings } = opened;
  context.report('progress', () => ({ ...NOT_STARTED }));
  const progress = progressOver(job, context);
  const estimator = makeEstimator();
  const answer = answerJob(job, estimator);
  await context.breathe();
  const first = await cutPasses(job, { replicate: 0, context, tools, progress, estimator });
  const last = first.at(-1) as DonePass;
  const own = wholeFigures(job, first, answer);
  const runs = [own];
  for (let replicate = 1; replicate < job.cut.replicates; replicate++) {
    runs.push(wholeFigures(job, await cutPasses(job, { replicate, context, tools, progress, estimator }), answer));
  }
  const figures = withBands(own, answer.bands.bands, runs);
  const help = helpFor(job, figures, answer, { estimator, attachments: request.attachments });
  await context.breathe();
  const time = first.reduce((sum, { measures }) => sum + measures.time, 0);
  const drawable: Drawable = { job, ...last, time };
  const result = resultOf({
    job,
    figures,
    passes: first.map((done) => (first.length === 1 ? figures : withoutBands(figuresOf(done.values, wordsOf(done))))),
    bands: answer.bands,
    verdict: verdictOf(job, figures),
    help,
    warnings: resultWarnings(warnings, [
      ...first.flatMap((done) => done.warnings),
      ...(isMeasured(drawable) ? [] : [NOT_MEASURED]),
    ]),
    voxelUm: last.cut.model.floor.dx / METRES_PER_MICROMETRE,
    magnification: Math.max(...first.map(({ cut }) => cut.model.magnification)),
  });
  const artefacts = [
    artefact('result.json', writeResult(result)),
    artefact('history.csv', writeHistory(first.flatMap(historyOf))),
    ...(await draw(drawable, context, { tools, told: progress.end() })),
  ];
  return {
    state: 'done',
    result,
    headline: verdictHeadline(result.verdict),
    help,
    artefacts,
    hash: first.map(({ hash }) => hash).join('-'),
    notes: job.notes,
  };
}

const NOT_STARTED: Progress = {
  phase: 'preparing',
  fraction: 0,
  depthMm: 0,
  timeMin: 0,
  rateMmPerMin: 0,
  secondsLeft: null,
};

function artefact(name: Artefact['name'], content: string | Uint8Array<ArrayBuffer>): Artefact {
  return { name, bytes: typeof content === 'string' ? new TextEncoder().encode(content) : content };
}

const wordsOf = ({ pass, measures, texture }: DonePass): FigureWords => cutWords(pass, measures, texture);

/** What the last measurement found of all passes together: chips and damage that are left are in the voxels. */
function asMeasured(passes: readonly DonePass[]): Partial<FigureValues> {
  const { edgeChipMaxUm, edgeChipP95Um, damageDepthUm, damageDepthLargestUm } = (passes.at(-1) as DonePass).values;
  return { edgeChipMaxUm, edgeChipP95Um, damageDepthUm, damageDepthLargestUm };
}

/** The figures of all passes together, without bands. */
function wholeFigures(job: ResolvedJob, passes: readonly DonePass[], { nominal }: JobAnswer): Figures {
  const words = wordsOf(passes.at(-1) as DonePass);
  const more = { rateBestLoadN: 'from the estimate', ...(job.passes.length > 1 && COMBINED_NOTES) };
  const { rateBestLoadN } = nominal.values;
  return figuresOf(
    { ...combineValues(passes, asMeasured(passes)), rateBestLoadN },
    { ...words, notes: { ...words.notes, ...more } },
  );
}

/** The pictures of a cut, and the trace as numbers. */
async function draw(
  drawable: Drawable,
  context: CallContext,
  { tools, told }: { readonly tools: CutTools; readonly told: Progress },
): Promise<Artefact[]> {
  const { texture } = drawable;
  const files: Artefact[] = [];
  if (texture) files.push(artefact('trace.csv', writeTrace(texture.trace)));
  const curve = sectionCurve(drawable.bricks, drawable.job);
  const section = sectionSvg(drawable, curve);
  if (section) files.push(artefact('section.svg', section));
  await context.breathe();
  const steps = cavityPng(drawable, curve, await tools.rasteriser());
  for (;;) {
    const step = steps.next();
    if (step.done) {
      if (step.value) files.push(artefact('cavity.png', step.value));
      break;
    }
    const share = step.value;
    context.report('progress', () => ({ ...told, fraction: told.fraction + (1 - told.fraction) * Math.min(1, share) }));
    await context.breathe();
  }
  if (texture) files.push(artefact('trace.svg', traceSvg(drawable, texture)));
  return files;
}

function historyOf({ cut, roughness, index }: DonePass): HistoryMoment[] {
  return cut.records.map((record, n) => ({
    pass: index + 1,
    time: record.time,
    depth: record.depth,
    rate: record.rate,
    loadSet: record.setLoad,
    loadSampled: record.sampledLoad,
    engagedGrits: record.engaged,
    gritLoadMean: record.meanLoad,
    gritLoadLargest: record.largestLoad,
    freshFraction: record.freshFraction,
    stallMargin: record.stallMargin ?? Number.NaN,
    toolLengthLost: record.toolLost,
    toolEdgeRadius: record.toolEdgeRadius,
    floorRa: roughness[n] ?? Number.NaN,
    edgeChipLargest: record.edgeChip,
    damageDepth: record.damageDepth,
  }));
}
