import { MICROMETRES_PER_METRE, MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import { DEFAULT_PRESSURE, DEFAULTS } from '#src/formats/job/defaults.ts';
import type { PredictOvercut } from '#src/formats/job/draft.ts';
import { outlineText } from '#src/formats/job/outline-file.ts';
import { readJob } from '#src/formats/job/read.ts';
import { type ResolvedJob, resolveJob } from '#src/formats/job/resolve.ts';
import type { JobFile } from '#src/formats/job/schema.ts';
import { formatNumber } from '#src/formats/numbers.ts';
import type { Problem } from '#src/formats/problems.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';
import { estimate, estimateTables } from '#src/physics/estimate.ts';
import type { CutSpec } from '#src/voxel/model.ts';
import type { JobRequest, Refused, TakenDefault } from './protocol.ts';

/** A job that holds, in SI, with what was found doubtful. */
export interface OpenedJob {
  readonly state: 'open';
  readonly job: ResolvedJob;
  readonly warnings: readonly Problem[];
}

/**
 * Overcut for a tool without an outline: what the estimate says of the entry at the default face pressure. The pressure
 * enters through the time the wall is exposed only, and the overcut grows with the logarithm of that.
 */
export function predictOvercut(): PredictOvercut {
  const known = new Map<string, number>();
  return (conditions, depth, runout) => {
    const key = JSON.stringify([conditions, depth, runout]);
    const before = known.get(key);
    if (before !== undefined) return before;
    const one = { faceArea: 1e-6, outlineArea: 1e-6, perimeter: 4e-3, pressure: DEFAULT_PRESSURE };
    const { overcutEntry } = estimate({ conditions, depth, runout, ...one }, estimateTables(conditions));
    known.set(key, overcutEntry);
    return overcutEntry;
  };
}

/** A job file with the seed and quality of the request in place of its own. */
function overridden(file: JobFile, { seed, quality }: JobRequest): JobFile {
  if (seed === undefined && quality === undefined) return file;
  const { voxelUm, ...cut } = file.cut ?? {};
  const keepVoxel = quality === undefined && voxelUm !== undefined;
  return {
    ...file,
    cut: {
      ...cut,
      ...(keepVoxel && { voxelUm }),
      ...(quality !== undefined && { quality }),
      ...(seed !== undefined && { seed }),
    },
  };
}

/** Reads, checks and resolves a job. */
export function openJob(request: JobRequest): OpenedJob | Refused {
  const options = { predictOvercut: predictOvercut() };
  const read = readJob(request.text, options);
  if (!read.job) return { state: 'refused', problems: read.problems };
  const job = resolveJob(overridden(read.job, request), stockLibrary, options);
  return { state: 'open', job, warnings: read.warnings };
}

/** Columns per mean chip radius and most columns of the floor, by quality. */
const QUALITIES = {
  preview: { columnsPerRadius: 1, columnBudget: 0.25e6 },
  standard: { columnsPerRadius: 2, columnBudget: 2e6 },
  fine: { columnsPerRadius: 3, columnBudget: 8e6 },
} as const;

/** What is to be cut, for the voxel engine. */
export function cutSpecOf(job: ResolvedJob): CutSpec {
  const { quality, voxel, seed } = job.cut;
  return {
    conditions: job.conditions,
    tool: job.tool,
    edgeRadius: job.edgeRadius,
    drive: job.feed === undefined ? { kind: 'load', load: job.staticLoad } : { kind: 'feed', feed: job.feed },
    depth: job.depth,
    runout: job.runout,
    seed,
    pass: 0,
    replicate: 0,
    ...QUALITIES[quality ?? 'standard'],
    ...(voxel !== undefined && { pitch: voxel }),
  };
}

const mm = (metres: number) => `${formatNumber(metres * MILLIMETRES_PER_METRE, 4)} mm`;

/** Values of the defaults that follow from the rest of the job. */
function followed(job: ResolvedJob): Readonly<Record<string, string>> {
  return {
    'tool.outline': outlineText(job.tool),
    'machine.staticLoadN': `${formatNumber(job.staticLoad, 4)} N`,
    'workpiece.lengthMm': mm(job.stock.length),
    'workpiece.widthMm': mm(job.stock.width),
    'workpiece.thicknessMm': mm(job.stock.thickness),
    'slurry.largestUm': `${formatNumber(job.conditions.grit.largest * MICROMETRES_PER_METRE, 4)} um`,
  };
}

const UNITS: readonly (readonly [suffix: string, unit: string])[] = [
  ['Mm', 'mm'],
  ['Um', 'um'],
  ['KHz', 'kHz'],
  ['VolPercent', 'vol%'],
];

/** The defaults a job took, with their values. */
export function takenDefaults(job: ResolvedJob): TakenDefault[] {
  const own = followed(job);
  return job.defaultsUsed.map((path) => {
    const plain = (DEFAULTS as Readonly<Record<string, string | number>>)[path];
    const unit = UNITS.find(([suffix]) => path.endsWith(suffix))?.[1] ?? '';
    return { path, value: own[path] ?? `${plain ?? ''} ${unit}`.trim() };
  });
}
