import { nominalSizes, type OutlineSpec } from '#src/base/outline.ts';
import {
  DEGREES_PER_RADIAN,
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  PASCALS_PER_MEGAPASCAL,
  SECONDS_PER_MINUTE,
} from '#src/base/units.ts';
import type { Conditions } from '#src/physics/records.ts';
import type { Library } from '../library.ts';
import { formatNumber } from '../numbers.ts';
import { isRefused, type Problem, RefusedError } from '../problems.ts';
import { checkDraft } from './check.ts';
import { DEFAULT_PRESSURE, DEFAULTS } from './defaults.ts';
import { type Draft, draftJob, type PredictOvercut, ruleOfThumbOvercut, type Stock } from './draft.ts';
import { sideGap } from './fit.ts';
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

/** A job ready to be estimated or cut: SI throughout, every default taken. */
export interface ResolvedJob {
  /** The file it came from, as it was given. */
  readonly file: JobFile;
  readonly title: string;
  readonly conditions: Conditions;
  readonly stock: Stock;
  /** As drawn. */
  readonly cavity: OutlineSpec;
  readonly depth: number;
  /** Sizes of the cavity as drawn, one per dimension (m). */
  readonly sizes: readonly number[];
  readonly limits: Limits;
  readonly tool: OutlineSpec;
  /** Area of the tool's face (m2). */
  readonly toolArea: number;
  readonly edgeRadius: number;
  /** Overcut per side the tool was, or would have been, made smaller by (m). */
  readonly predictedOvercut: number;
  /** Smallest gap between the tool and the wall as drawn (m). */
  readonly sideGap: number;
  /** Static load (N); under a feed, the load it is expected to take. */
  readonly staticLoad: number;
  /** Feed of a feed-controlled machine (m/s). */
  readonly feed: number | undefined;
  /** Static load over the tool's area (Pa). */
  readonly pressure: number;
  readonly runout: number;
  readonly cut: CutSettings;
  /** Paths of the fields that took their default. */
  readonly defaultsUsed: readonly string[];
  /** What was worked out for a default that depends on the rest of the job, one sentence each. */
  readonly notes: readonly string[];
  readonly warnings: readonly Problem[];
}

/** What resolving a job may be given. */
export interface ResolveOptions {
  /** Overcut for a tool without an outline; without this, a rule of thumb. */
  readonly predictOvercut?: PredictOvercut;
}

/** Works a job out in SI and checks its settings together. All problems, refusals and warnings; never throws. */
export function examineJob(
  job: Parameters<typeof draftJob>[0],
  library: Library,
  { predictOvercut = ruleOfThumbOvercut }: ResolveOptions = {},
): { readonly draft: Draft; readonly problems: Problem[] } {
  const draft = draftJob(job, library, predictOvercut);
  return { draft, problems: [...draft.problems, ...checkDraft(draft)] };
}

/**
 * A job in SI, defaults taken and named.
 * @throws RefusedError with every problem when the job is refused (a job from `readJob` is not)
 */
export function resolveJob(file: JobFile, library: Library, options: ResolveOptions = {}): ResolvedJob {
  const { draft, problems } = examineJob(file, library, options);
  const { conditions, cavity, depth, tool, overcut, staticLoad, stock } = draft;
  const whole = conditions && cavity && tool && stock && depth !== undefined && staticLoad !== undefined;
  if (isRefused(problems) || !whole) throw new RefusedError(problems, file.title ?? 'job');
  return {
    file,
    title: file.title ?? '',
    conditions,
    stock,
    cavity: cavity.spec,
    depth,
    sizes: nominalSizes(cavity.spec),
    limits: limitsOf(file.cavity.limits ?? {}),
    tool: tool.spec,
    toolArea: tool.area,
    edgeRadius: draft.edgeRadius,
    predictedOvercut: overcut ?? 0,
    sideGap: overcut !== undefined && draft.defaultsUsed.includes('tool.outline') ? overcut : sideGap(cavity, tool),
    staticLoad,
    feed: draft.feed,
    pressure: staticLoad / tool.area,
    runout: draft.runout,
    cut: cutOf(file),
    defaultsUsed: [...draft.defaultsUsed, ...cutDefaults(file)],
    notes: notesOf(draft),
    warnings: problems,
  };
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

function notesOf({ defaultsUsed, staticLoad, feed, overcut }: Draft): string[] {
  const notes: string[] = [];
  if (feed !== undefined && staticLoad !== undefined) {
    notes.push(`The feed is expected to take a load of ${formatNumber(staticLoad, 3)} N.`);
  }
  if (defaultsUsed.includes('tool.outline') && overcut !== undefined) {
    const shown = formatNumber(overcut / METRES_PER_MICROMETRE, 3);
    notes.push(`The tool is the cavity less a predicted overcut of ${shown} um per side.`);
  }
  if (defaultsUsed.includes('machine.staticLoadN') && staticLoad !== undefined) {
    const newtons = formatNumber(staticLoad, 3);
    const pressure = formatNumber(DEFAULT_PRESSURE / PASCALS_PER_MEGAPASCAL, 3);
    notes.push(`The load is ${newtons} N, a face pressure of ${pressure} MPa, since none was given.`);
  }
  return notes;
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
