import { nominalSizes, type OutlineSpec } from '#src/base/outline.ts';
import {
  DEGREES_PER_RADIAN,
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  SECONDS_PER_MINUTE,
} from '#src/base/units.ts';
import type { Exit, SlurrySupply, ToolLife } from '#src/physics/pass.ts';
import type { Conditions } from '#src/physics/records.ts';
import type { Bore } from '#src/physics/slurry/grid.ts';
import type { ToolFace } from '#src/physics/tool-face.ts';
import type { JobRanges } from '#src/planning/inputs.ts';
import type { Library } from '../library.ts';
import { isRefused, type Problem, RefusedError } from '../problems.ts';
import type { Attachments } from './attachments.ts';
import { checkDraft } from './check.ts';
import { DEFAULTS } from './defaults.ts';
import type { PartialJob } from './desk.ts';
import { type Draft, draftJob, type Stock } from './draft.ts';
import { type PassDraft, type PredictOvercut, ruleOfThumbOvercut } from './pass-draft.ts';
import { rangesOf } from './ranges.ts';
import type { JobFile, LimitsFile } from './schema.ts';

/** The drawing's limits in SI; what the drawing leaves open is undefined. */
export interface Limits {
  /** Deviations of every entry size (m). */
  readonly entrySizeUpper?: number;
  readonly entrySizeLower?: number;
  /** Half-angle per side (rad). */
  readonly taper?: number;
  readonly floorFlatness?: number;
  readonly cornerRadius?: number;
  readonly floorRa?: number;
  readonly edgeChip?: number;
  readonly damageDepth?: number;
  /** s */
  readonly time?: number;
}

/** How the cut is computed: either a quality, or a voxel edge of the user's own (m). */
export interface CutSettings {
  readonly quality: 'preview' | 'standard' | 'fine' | undefined;
  readonly voxel: number | undefined;
  readonly seed: number;
  readonly replicates: number;
}

/** One pass ready to be estimated or cut: SI throughout, every default taken. */
export interface ResolvedPass {
  readonly title: string;
  readonly conditions: Conditions;
  readonly tool: OutlineSpec;
  /** Area of the tool's face, its bores taken off (m2). */
  readonly toolArea: number;
  readonly edgeRadius: number;
  readonly face: ToolFace;
  readonly bores: readonly Bore[];
  readonly supply: SlurrySupply;
  readonly toolLife: ToolLife;
  /** How it comes out at the other side; undefined where it does not. */
  readonly exit: (Exit & { readonly thickness: number }) | undefined;
  /** Depth of the tool's tip at the end (m). */
  readonly depth: number;
  /** Static load (N); under a feed, the load it is expected to take. */
  readonly staticLoad: number;
  /** Feed of a feed-controlled machine (m/s). */
  readonly feed: number | undefined;
  /** Static load over the tool's area (Pa). */
  readonly pressure: number;
  readonly runout: number;
  /** Work left for the passes after it (m), the lesser of per side and on the floor; undefined for the last pass. */
  readonly stock: number | undefined;
  /** Overcut per side the tool was, or would have been, made smaller by (m). */
  readonly predictedOvercut: number;
  /** Smallest gap between the tool and the wall as drawn (m). */
  readonly sideGap: number;
  /** What is not known exactly about this pass. */
  readonly ranges: JobRanges;
}

/** A job ready to be estimated or cut: SI throughout, every default taken. */
export interface ResolvedJob {
  /** The file it came from, as it was given. */
  readonly file: JobFile;
  readonly title: string;
  readonly stock: Stock;
  /** As drawn; the origin is the middle of the box around an outline that was drawn. */
  readonly cavity: OutlineSpec;
  /** As drawn; the workpiece's thickness where it goes through (m). */
  readonly depth: number;
  readonly through: boolean;
  /** Sizes of the cavity as drawn, one per dimension (m). */
  readonly sizes: readonly number[];
  readonly limits: Limits;
  /** In order; at least one. */
  readonly passes: readonly ResolvedPass[];
  /** Of the last pass. */
  readonly ranges: JobRanges;
  readonly cut: CutSettings;
  /** Paths of the fields that took their default. */
  readonly defaultsUsed: readonly string[];
  /** What was worked out for a default that depends on the rest of the job, one sentence each. */
  readonly notes: readonly string[];
  readonly warnings: readonly Problem[];
  /** Of the last pass, as are those below. */
  readonly conditions: Conditions;
  readonly tool: OutlineSpec;
  readonly toolArea: number;
  readonly edgeRadius: number;
  readonly predictedOvercut: number;
  readonly sideGap: number;
  readonly staticLoad: number;
  readonly feed: number | undefined;
  readonly pressure: number;
  readonly runout: number;
}

/** What resolving a job may be given. */
export interface ResolveOptions {
  /** Overcut for a tool without an outline; without this, a rule of thumb. */
  readonly predictOvercut?: PredictOvercut;
  /** Files that stand beside the job, by name (`attachmentNames`): drawings and reliefs. */
  readonly attachments?: Attachments;
  /** Warnings of `readJob` with the same options: then `resolveJob` does not check again. */
  readonly checked?: readonly Problem[];
}

/** Works a job out in SI and checks its settings together. All problems, refusals and warnings; never throws. */
export function examineJob(
  job: PartialJob,
  library: Library,
  { predictOvercut = ruleOfThumbOvercut, attachments = {}, checked }: ResolveOptions = {},
): { readonly draft: Draft; readonly problems: readonly Problem[] } {
  const draft = draftJob(job, { library, predictOvercut, attachments });
  return { draft, problems: checked ?? [...draft.problems, ...checkDraft(draft)] };
}

/** A pass of which nothing is missing. */
function resolvedPass({ library }: Draft, draft: PassDraft): ResolvedPass | undefined {
  const { conditions, tool, face, bores, supply, depth, staticLoad, gap, faceArea } = draft;
  if (!conditions || !tool || !face || !bores || !supply) return undefined;
  if (depth === undefined || staticLoad === undefined || gap === undefined || faceArea === undefined) return undefined;
  return {
    title: draft.view.own.title ?? '',
    conditions,
    tool: tool.spec,
    toolArea: faceArea,
    edgeRadius: draft.edgeRadius,
    face,
    bores,
    supply,
    toolLife: draft.toolLife,
    exit: draft.exit,
    depth,
    staticLoad,
    feed: draft.feed,
    pressure: staticLoad / faceArea,
    runout: draft.runout,
    stock: draft.stock,
    predictedOvercut: draft.overcut ?? 0,
    sideGap: gap,
    ranges: rangesOf(draft.view.job, conditions, library),
  };
}

/**
 * A job in SI, defaults taken and named.
 * @throws RefusedError with every problem when the job is refused (a job from `readJob` with the same options is not)
 * @param options those `readJob` was given; with its warnings as `checked` they are not looked for again
 */
export function resolveJob(file: JobFile, library: Library, options: ResolveOptions = {}): ResolvedJob {
  const { draft, problems } = examineJob(file, library, options);
  const { cavity, depth, stock } = draft;
  const passes = draft.passes.flatMap((pass) => resolvedPass(draft, pass) ?? []);
  const last = passes[passes.length - 1];
  const whole = cavity && stock && depth !== undefined && last && passes.length === draft.passes.length;
  if (isRefused(problems) || !whole) throw new RefusedError(problems, file.title ?? 'job');
  return {
    file,
    title: file.title ?? '',
    stock,
    cavity: cavity.outline.spec,
    depth,
    through: draft.through,
    sizes: nominalSizes(cavity.outline.spec),
    limits: limitsOf(file.cavity.limits ?? {}),
    passes,
    ranges: last.ranges,
    cut: cutOf(file),
    defaultsUsed: [...draft.defaultsUsed, ...cutDefaults(file)],
    notes: [...draft.notes, ...coreNotes(passes)],
    warnings: problems,
    ...ofLastPass(last),
  };
}

/** What bores leave behind. */
function coreNotes(passes: readonly ResolvedPass[]): string[] {
  const most = Math.max(...passes.map(({ bores }) => bores.length));
  if (most === 0 || passes.at(-1)?.exit) return [];
  const each = most === 1 ? 'The bore leaves a core' : `Each of the ${most} bores leaves a core`;
  return [`${each} standing on the floor, which has to be broken off or cut away.`];
}

function ofLastPass(pass: ResolvedPass) {
  const { conditions, tool, toolArea, edgeRadius, predictedOvercut, sideGap } = pass;
  const { staticLoad, feed, pressure, runout } = pass;
  return { conditions, tool, toolArea, edgeRadius, predictedOvercut, sideGap, staticLoad, feed, pressure, runout };
}

function cutOf({ cut }: JobFile): CutSettings {
  const voxelUm = cut?.voxelUm;
  return {
    quality: voxelUm === undefined ? (cut?.quality ?? DEFAULTS['cut.quality']) : undefined,
    voxel: voxelUm === undefined ? undefined : voxelUm * METRES_PER_MICROMETRE,
    seed: cut?.seed ?? DEFAULTS['cut.seed'],
    replicates: cut?.replicates ?? DEFAULTS['cut.replicates'],
  };
}

function cutDefaults({ cut }: JobFile): string[] {
  const paths: string[] = [];
  if (cut?.voxelUm === undefined && cut?.quality === undefined) paths.push('cut.quality');
  if (cut?.seed === undefined) paths.push('cut.seed');
  if (cut?.replicates === undefined) paths.push('cut.replicates');
  return paths;
}

/** File name of each limit, its name in SI, ratio to SI. */
const LIMITS = [
  ['entrySizeUpperMm', 'entrySizeUpper', METRES_PER_MILLIMETRE],
  ['entrySizeLowerMm', 'entrySizeLower', METRES_PER_MILLIMETRE],
  ['taperDeg', 'taper', 1 / DEGREES_PER_RADIAN],
  ['floorFlatnessUm', 'floorFlatness', METRES_PER_MICROMETRE],
  ['cornerRadiusMm', 'cornerRadius', METRES_PER_MILLIMETRE],
  ['floorRaUm', 'floorRa', METRES_PER_MICROMETRE],
  ['edgeChipUm', 'edgeChip', METRES_PER_MICROMETRE],
  ['damageDepthUm', 'damageDepth', METRES_PER_MICROMETRE],
  ['timeMin', 'time', SECONDS_PER_MINUTE],
] as const satisfies readonly (readonly [keyof LimitsFile, keyof Limits, number])[];

function limitsOf(file: LimitsFile): Limits {
  const limits: { -readonly [K in keyof Limits]: Limits[K] } = {};
  for (const [name, own, ratio] of LIMITS) {
    const value = file[name];
    if (value !== undefined) limits[own] = value * ratio;
  }
  return limits;
}
