import { MICROMETRES_PER_METRE, MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import { DEFAULTS } from '#src/formats/job/defaults.ts';
import { outlineText } from '#src/formats/job/outline-file.ts';
import { readJob } from '#src/formats/job/read.ts';
import { type ResolvedJob, type ResolvedPass, resolveJob } from '#src/formats/job/resolve.ts';
import type { JobFile } from '#src/formats/job/schema.ts';
import { formatNumber } from '#src/formats/numbers.ts';
import type { Problem } from '#src/formats/problems.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';
import type { SlurryFace } from '#src/physics/estimate.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import type { Cut } from '#src/voxel/cut.ts';
import type { CutSpec } from '#src/voxel/model.ts';
import { predictOvercut } from './overcut.ts';
import type { JobRequest, Refused, TakenDefault } from './protocol.ts';

/** A job that holds, in SI, with what was found doubtful. */
export interface OpenedJob {
  readonly state: 'open';
  readonly job: ResolvedJob;
  readonly warnings: readonly Problem[];
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
  const options = { predictOvercut: predictOvercut(), attachments: request.attachments ?? {} };
  const read = readJob(request.text, options);
  if (!read.job) return { state: 'refused', problems: read.problems };
  const job = resolveJob(overridden(read.job, request), stockLibrary, { ...options, checked: read.warnings });
  return { state: 'open', job, warnings: read.warnings };
}

/** Columns per mean chip radius and most columns of the floor, by quality. */
const QUALITIES = {
  preview: { columnsPerRadius: 1, columnBudget: 0.25e6 },
  standard: { columnsPerRadius: 2, columnBudget: 2e6 },
  fine: { columnsPerRadius: 3, columnBudget: 8e6 },
} as const;

/** What one pass of one replicate is to cut, for the voxel engine, on what the passes before it left. */
export function cutSpecOf(
  job: ResolvedJob,
  at: {
    readonly pass: number;
    readonly replicate: number;
    /** The pass before, as it was cut. */
    readonly earlier: { readonly bricks: BrickField; readonly cut: Cut } | null;
    readonly slurry: SlurryFace;
  },
): CutSpec {
  const { quality, voxel, seed } = job.cut;
  const pass = job.passes[at.pass] as ResolvedPass;
  return {
    conditions: pass.conditions,
    tool: pass.tool,
    bores: pass.bores,
    edgeRadius: pass.edgeRadius,
    drive: pass.feed === undefined ? { kind: 'load', load: pass.staticLoad } : { kind: 'feed', feed: pass.feed },
    depth: pass.depth,
    runout: pass.runout,
    seed,
    pass: at.pass,
    replicate: at.replicate,
    slurry: at.slurry,
    face: pass.face,
    before: at.earlier?.bricks ?? null,
    stripBefore: at.earlier?.cut.state.strip ?? null,
    toolLife: pass.toolLife,
    ...(pass.exit && { exit: pass.exit }),
    ...QUALITIES[quality ?? 'standard'],
    ...(voxel !== undefined && { pitch: voxel }),
  };
}

const mm = (metres: number) => `${formatNumber(metres * MILLIMETRES_PER_METRE, 4)} mm`;

/** Values of the defaults that follow from the rest of the job. */
function followed(job: ResolvedJob): Readonly<Record<string, string>> {
  const last = job.passes.at(-1) as ResolvedPass;
  return {
    'tool.outline': outlineText(last.tool),
    'machine.staticLoadN': `${formatNumber(last.staticLoad, 4)} N`,
    'workpiece.lengthMm': mm(job.stock.length),
    'workpiece.widthMm': mm(job.stock.width),
    'workpiece.thicknessMm': mm(job.stock.thickness),
    'slurry.largestUm': `${formatNumber(last.conditions.grit.largest * MICROMETRES_PER_METRE, 4)} um`,
    ...(last.exit && { 'machine.exitFromMm': mm(last.exit.from) }),
    ...Object.fromEntries(job.passes.map((pass, k) => [`passes[${k}].tool.outline`, outlineText(pass.tool)])),
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
    const plain = (DEFAULTS as Readonly<Record<string, string | number | boolean>>)[path];
    const unit = UNITS.find(([suffix]) => path.endsWith(suffix))?.[1] ?? '';
    return { path, value: own[path] ?? `${plain ?? ''} ${unit}`.trim() };
  });
}
