import { makeOutline } from '#src/base/outline.ts';
import {
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
  SECONDS_PER_MINUTE,
} from '#src/base/units.ts';
import { type HistoryMoment, writeHistory, writeTrace } from '#src/formats/csv.ts';
import { judgeDrawing, verdictHeadline } from '#src/formats/drawing.ts';
import type { ResolvedJob } from '#src/formats/job/resolve.ts';
import type { Problem } from '#src/formats/problems.ts';
import type { Rasteriser } from '#src/formats/raster.ts';
import { type Result, type ResultWarning, roundedResult, writeResult } from '#src/formats/result.ts';
import { type Estimate, estimate } from '#src/physics/estimate.ts';
import type { Figures } from '#src/planning/figures.ts';
import { measureCut } from '#src/planning/measure.ts';
import { type Cut, cutHash, makeCut, progressOf, runCut } from '#src/voxel/cut.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { buildBricks } from '#src/voxel/solid.ts';
import { SCALAR } from '#src/voxel/state.ts';
import { allocateShared, startCrew } from './crew.ts';
import { cavityPng, type Drawable, isMeasured, sectionCurve, sectionSvg, traceSvg } from './drawings.ts';
import { cutFigures, estimateFigures } from './figures.ts';
import { cutSpecOf, openJob, takenDefaults } from './jobs.ts';
import type { Port } from './port.ts';
import type { Artefact, CutDone, Estimated, JobRequest, Progress, Refused, Remark, SoundJob } from './protocol.ts';
import type { CallContext } from './serve.ts';
import { floorRa, floorTexture } from './trace.ts';
import { version } from './version.ts';

/** Shares of a run's time: until the first step, and until the last. */
const PREPARED = 0.02;
const CUT = 0.9;

/** Checks a job and says what its defaults came to. */
export function checkJob(request: JobRequest): SoundJob | Refused {
  const opened = openJob(request);
  if (opened.state === 'refused') return opened;
  const { job, warnings } = opened;
  return { state: 'sound', warnings, defaults: takenDefaults(job), notes: job.notes };
}

function resultWarnings(problems: readonly Problem[], more: readonly ResultWarning[]): ResultWarning[] {
  return [...problems.map(({ path, message }) => ({ path, message })), ...more];
}

function resultOf(
  job: ResolvedJob,
  figures: Figures,
  warnings: readonly ResultWarning[],
  cut: Pick<Result, 'voxelUm' | 'magnification'>,
): Result {
  return roundedResult({
    spallwright: 1,
    job: job.file,
    figures,
    passes: [{ figures }],
    verdict: judgeDrawing(job.file, figures),
    warnings,
    version,
    seed: job.cut.seed,
    ...cut,
  });
}

/** The estimate of a resolved job. */
function estimateOf(job: ResolvedJob): Estimate {
  const cavity = makeOutline(job.cavity);
  return estimate({
    conditions: job.conditions,
    pressure: job.pressure,
    faceArea: job.toolArea,
    outlineArea: cavity.area,
    perimeter: cavity.perimeter,
    depth: job.depth,
    runout: job.runout,
  });
}

function remarksOf(job: ResolvedJob, e: Estimate): Remark[] {
  const um = (metres: number) => metres / METRES_PER_MICROMETRE;
  return [
    { name: 'Face pressure', value: job.pressure / 1e6, unit: 'MPa' },
    { name: 'Gap over the mean floor, closest', value: um(e.gap), unit: 'um' },
    { name: 'Grits between the faces in one cycle', value: e.engaged * job.toolArea, unit: '' },
    { name: 'Load on one grit, mean', value: e.meanLoad, unit: 'N' },
    { name: 'Load on one grit, 99.9 % below', value: e.largestLoad, unit: 'N' },
    { name: 'Chip, mean radius', value: um(e.chipRadius), unit: 'um' },
    { name: 'Chip, mean depth', value: um(e.chipDepth), unit: 'um' },
    { name: 'Removed over credited chip volume', value: e.overlap, unit: '' },
    { name: 'Share removed by dents', value: e.plasticShare, unit: '' },
    { name: 'Share removed by thrown grits', value: e.freeImpactShare, unit: '' },
  ];
}

const NOT_CARRIED: ResultWarning = {
  path: 'machine.staticLoadN',
  message: 'The grits cannot bear this load: the figures are those of the largest load they bear. Enter less.',
};
const NOTHING_REMOVED: ResultWarning = {
  path: '',
  message: 'This setting removes nothing. Raise the load or the amplitude, or take a coarser grit.',
};

const NOT_MEASURED: ResultWarning = {
  path: 'cavity.depthMm',
  message: 'The wall is too low to be measured below its edge chips: no entry size, and the section is not drawn.',
};

/** Estimates a job. */
export function estimateJob(request: JobRequest): Estimated | Refused {
  const opened = openJob(request);
  if (opened.state === 'refused') return opened;
  const { job, warnings } = opened;
  const e = estimateOf(job);
  const more = [...(e.carried ? [] : [NOT_CARRIED]), ...(e.rate > 0 ? [] : [NOTHING_REMOVED])];
  const result = resultOf(job, estimateFigures(job, e), resultWarnings(warnings, more), {
    voxelUm: null,
    magnification: 1,
  });
  return {
    state: 'done',
    result,
    headline: verdictHeadline(result.verdict),
    remarks: remarksOf(job, e),
    notes: job.notes,
  };
}

/** What a cut is run with. */
export interface CutTools {
  /** Threads that share the tiles; none for one thread. */
  readonly helpers: readonly Port[];
  readonly rasteriser: () => Promise<Rasteriser>;
}

/** Cuts a job: grows the cavity, measures it, judges it and draws it. */
export async function cutJob(request: JobRequest, context: CallContext, tools: CutTools): Promise<CutDone | Refused> {
  const opened = openJob(request);
  if (opened.state === 'refused') return opened;
  const { job, warnings } = opened;
  context.report('progress', () => ({ ...NOT_STARTED }));
  const spec = cutSpecOf(job);
  const shared = tools.helpers.length > 0;
  const cut = makeCut(spec, shared ? allocateShared : undefined);
  await context.breathe();
  const roughness = await grow(cut, context, tools.helpers);
  const hash = cutHash(cut);
  const drawable = await measure(job, cut, context);
  const figures = cutFigures(drawable.measures, drawable.texture);
  const more = isMeasured(drawable) ? [] : [NOT_MEASURED];
  const result = resultOf(job, figures, resultWarnings(warnings, more), {
    voxelUm: cut.model.floor.dx / METRES_PER_MICROMETRE,
    magnification: cut.model.magnification,
  });
  const artefacts = [
    artefact('result.json', writeResult(result)),
    artefact('history.csv', writeHistory(historyOf(cut, roughness))),
    ...(await draw(drawable, context, tools)),
  ];
  return { state: 'done', result, headline: verdictHeadline(result.verdict), artefacts, hash, notes: job.notes };
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

/** Runs the cut to its depth; returns the floor's Ra at every record (m). */
async function grow(cut: Cut, context: CallContext, helpers: readonly Port[]): Promise<number[]> {
  const crew = helpers.length > 0 ? startCrew(cut, helpers) : null;
  const runner = crew ?? serialRunner(createFastKernel(), cut.model, cut.state);
  const roughness: number[] = [];
  const start = context.now();
  try {
    for (let done = false; !done; ) {
      done = runCut(cut, runner, 1);
      if (cut.records.length > roughness.length) roughness.push(floorRa(cut));
      context.report('progress', () => progressNow(cut, context.now() - start));
      await context.breathe();
    }
  } finally {
    crew?.close();
  }
  return roughness;
}

/** How far a cut is that has run for some milliseconds. */
function progressNow(cut: Cut, elapsed: number): Progress {
  const share = progressOf(cut);
  const s = cut.state.scalars;
  const time = s[SCALAR.time] as number;
  const depth = -(s[SCALAR.floorMean] as number);
  const ahead = (1 - share) / share + (1 - CUT) / (CUT - PREPARED) / share;
  return {
    phase: 'cutting',
    fraction: PREPARED + (CUT - PREPARED) * share,
    depthMm: depth / METRES_PER_MILLIMETRE,
    timeMin: time / SECONDS_PER_MINUTE,
    rateMmPerMin: (cut.records.at(-1)?.rate ?? 0) / METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
    secondsLeft: share > 0.01 ? (elapsed / 1000) * ahead : null,
  };
}

async function measure(job: ResolvedJob, cut: Cut, context: CallContext): Promise<Drawable> {
  const told: Progress = { ...progressNow(cut, 0), phase: 'measuring', fraction: CUT, secondsLeft: null };
  context.report('progress', () => told);
  const bricks = buildBricks(cut.model, cut.state);
  await context.breathe();
  const measures = measureCut(cut, bricks, job.cavity);
  await context.breathe();
  return { job, cut, bricks, measures, texture: floorTexture(cut) };
}

/** The pictures of a cut, and the trace as numbers. */
async function draw(drawable: Drawable, context: CallContext, tools: CutTools): Promise<Artefact[]> {
  const { cut, texture } = drawable;
  const told: Progress = { ...progressNow(cut, 0), phase: 'drawing', secondsLeft: null };
  const files: Artefact[] = [];
  if (texture) files.push(artefact('trace.csv', writeTrace(texture.trace)));
  const curve = sectionCurve(drawable.bricks);
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
    context.report('progress', () => ({ ...told, fraction: CUT + (1 - CUT) * Math.min(1, share) }));
    await context.breathe();
  }
  if (texture) files.push(artefact('trace.svg', traceSvg(drawable, texture)));
  return files;
}

function historyOf(cut: Cut, roughness: readonly number[]): HistoryMoment[] {
  return cut.records.map((record, index) => ({
    pass: 1,
    time: record.time,
    depth: record.depth,
    rate: record.rate,
    loadSet: record.setLoad,
    loadSampled: record.sampledLoad,
    engagedGrits: record.engaged,
    gritLoadMean: record.meanLoad,
    gritLoadLargest: record.largestLoad,
    freshFraction: record.freshFraction,
    stallMargin: Number.NaN,
    toolLengthLost: record.toolLost,
    toolEdgeRadius: record.toolEdgeRadius,
    floorRa: roughness[index] ?? Number.NaN,
    edgeChipLargest: record.edgeChip,
    damageDepth: record.damageDepth,
  }));
}
