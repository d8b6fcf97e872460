import { makeOutline, type Outline, type OutlineSpec, offsetSpec } from '#src/base/outline.ts';
import {
  HERTZ_PER_KILOHERTZ,
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
  MICROMETRES_PER_METRE,
} from '#src/base/units.ts';
import { publishedConstants } from '#src/physics/constants.ts';
import { estimateTables, pressureForRate } from '#src/physics/estimate.ts';
import { gritLaw } from '#src/physics/grit-law.ts';
import type { Abrasive, Conditions, ToolMaterial, WorkMaterial } from '#src/physics/records.ts';
import type { GritSizes, Library, WorkpieceRecord } from '../library.ts';
import { formatNumber } from '../numbers.ts';
import type { Problem } from '../problems.ts';
import { DEFAULT_MARGIN, DEFAULT_PRESSURE } from './defaults.ts';
import { type Desk, orDefault, type PartialJob, refuse } from './desk.ts';
import { abrasiveFor, gritFor, toolMaterialFor, workOf } from './matter.ts';
import { outlineFaults, outlineSpecOf } from './outline-file.ts';
import type { OutlineFile } from './schema.ts';

/**
 * Predicted overcut per side (m), for the tool's outline where the job gives none.
 * @param depth depth of the cavity (m)
 * @param runout lateral run-out of the tool (m)
 */
export type PredictOvercut = (conditions: Conditions, depth: number, runout: number) => number;

/**
 * Rule of thumb: 1.9 median grains, at most what the largest grain leaves. Found in the cut (1.7 to 2.1 d50 at the entry of
 * glass, walls that close on the largest grain plus the run-out).
 */
export const ruleOfThumbOvercut: PredictOvercut = ({ grit }, _depth, runout) =>
  Math.min(1.9 * grit.massMedian, grit.largest + runout);

/** A job in SI as far as it could be worked out; what depends on a bad field is undefined. */
export interface Draft {
  readonly job: PartialJob;
  readonly library: Library;
  readonly work: WorkMaterial | undefined;
  readonly workRecord: WorkpieceRecord | undefined;
  readonly toolMaterial: ToolMaterial | undefined;
  readonly abrasive: Abrasive | undefined;
  readonly grit: GritSizes | undefined;
  /** Zero-to-peak at the tool face (m). */
  readonly amplitude: number;
  readonly frequency: number;
  readonly conditions: Conditions | undefined;
  readonly cavity: Outline | undefined;
  readonly depth: number | undefined;
  readonly tool: Outline | undefined;
  /** Predicted overcut per side (m). */
  readonly overcut: number | undefined;
  readonly edgeRadius: number;
  readonly runout: number;
  /** Static load (N): the one given, the default, or what the feed is expected to take. */
  readonly staticLoad: number | undefined;
  /** Feed of a feed-controlled machine (m/s). */
  readonly feed: number | undefined;
  readonly stock: Stock | undefined;
  /** Paths of the fields that took their default. */
  readonly defaultsUsed: readonly string[];
  /** Found while working it out: unknown names, missing properties, outlines that contradict themselves. */
  readonly problems: readonly Problem[];
}

/** The block that is cut, with the middle of the cavity from the middle of its entry face (m). */
export interface Stock {
  readonly length: number;
  readonly width: number;
  readonly thickness: number;
  readonly cavityX: number;
  readonly cavityY: number;
}

/** Works a job out in SI, as far as its fields allow. Never throws. */
export function draftJob(job: PartialJob, library: Library, predictOvercut: PredictOvercut): Draft {
  const desk: Desk = { problems: [], defaultsUsed: [] };
  const { work, record: workRecord } = workOf(desk, job.workpiece ?? {}, library);
  const toolMaterial = toolMaterialFor(desk, job, library);
  const abrasive = abrasiveFor(desk, job, library);
  const grit = gritFor(desk, job.slurry ?? {}, library);
  const driven = {
    amplitude: orDefault(desk, 'machine.amplitudeUm', job.machine?.amplitudeUm) * METRES_PER_MICROMETRE,
    frequency: orDefault(desk, 'machine.frequencyKHz', job.machine?.frequencyKHz) * HERTZ_PER_KILOHERTZ,
    concentration: orDefault(desk, 'slurry.concentrationVolPercent', job.slurry?.concentrationVolPercent) / 100,
  };
  const conditions: Conditions | undefined =
    work && toolMaterial && abrasive && grit
      ? { work, tool: toolMaterial, abrasive, grit: gritLaw(grit), ...driven, constants: publishedConstants }
      : undefined;
  for (const path of ['slurry.carrier', 'slurry.delivery', 'slurry.renewal'] as const) {
    orDefault(desk, path, job.slurry?.[path.slice(7) as 'carrier' | 'delivery' | 'renewal']);
  }
  const runout = orDefault(desk, 'machine.lateralRunoutUm', job.machine?.lateralRunoutUm) * METRES_PER_MICROMETRE;
  const depth = job.cavity?.depthMm === undefined ? undefined : job.cavity.depthMm * METRES_PER_MILLIMETRE;
  const cavity = outlineFor(desk, 'cavity.outline', job.cavity?.outline);
  const overcut = conditions && depth !== undefined ? predictOvercut(conditions, depth, runout) : undefined;
  const tool = toolFor(desk, job, cavity, overcut);
  return {
    job,
    library,
    work,
    workRecord,
    toolMaterial,
    abrasive,
    grit,
    amplitude: driven.amplitude,
    frequency: driven.frequency,
    conditions,
    cavity,
    depth,
    tool,
    overcut,
    edgeRadius: orDefault(desk, 'tool.edgeRadiusMm', job.tool?.edgeRadiusMm) * METRES_PER_MILLIMETRE,
    runout,
    staticLoad: loadFor(desk, job, tool, conditions),
    feed: feedOf(job),
    stock: stockFor(desk, job.workpiece ?? {}, cavity, depth),
    defaultsUsed: desk.defaultsUsed,
    problems: desk.problems,
  };
}

type PartialOutline = NonNullable<PartialJob['cavity']>['outline'];
type Workpiece = NonNullable<PartialJob['workpiece']>;

/** Whether nothing of the outline was taken out for being wrong. */
function isWhole(file: PartialOutline): file is OutlineFile {
  if (file === undefined) return false;
  const needed: Record<OutlineFile['kind'], readonly string[]> = {
    circle: ['diameterMm'],
    rectangle: ['lengthMm', 'widthMm'],
    slot: ['lengthMm', 'widthMm'],
    regularPolygon: ['sides', 'acrossFlatsMm'],
    ring: ['outerDiameterMm', 'innerDiameterMm'],
  };
  const names = file.kind === undefined ? undefined : needed[file.kind];
  return names?.every((name) => (file as Record<string, unknown>)[name] !== undefined) ?? false;
}

function outlineFor(desk: Desk, path: string, file: PartialOutline): Outline | undefined {
  if (!isWhole(file)) return undefined;
  const faults = outlineFaults(file);
  for (const { field, value, allowed, message } of faults) refuse(desk, `${path}.${field}`, value, allowed, message);
  return faults.length > 0 ? undefined : makeOutline(outlineSpecOf(file));
}

function toolFor(
  desk: Desk,
  job: PartialJob,
  cavity: Outline | undefined,
  overcut: number | undefined,
): Outline | undefined {
  if (job.tool?.outline !== undefined) return outlineFor(desk, 'tool.outline', job.tool.outline);
  if (!cavity || overcut === undefined) return undefined;
  desk.defaultsUsed.push('tool.outline');
  const spec = insideBy(cavity.spec, overcut);
  if (spec) return makeOutline(spec);
  const shown = formatNumber(overcut * MICROMETRES_PER_METRE, 3);
  const message = `Nothing is left of the tool: this grit opens the cavity by ${shown} um a side. Take a finer grit.`;
  return refuse(
    desk,
    'cavity.outline',
    job.cavity?.outline,
    `wider than ${formatNumber(2e3 * overcut, 3)} mm`,
    message,
  );
}

/** The outline moved inward, or undefined when nothing is left of it. */
export function insideBy(spec: OutlineSpec, distance: number): OutlineSpec | undefined {
  try {
    return offsetSpec(spec, -distance);
  } catch {
    return undefined;
  }
}

function feedOf({ machine }: PartialJob): number | undefined {
  const feed = machine?.feedMmPerMin;
  return feed === undefined ? undefined : feed * METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE;
}

function loadFor(
  desk: Desk,
  job: PartialJob,
  tool: Outline | undefined,
  conditions: Conditions | undefined,
): number | undefined {
  const feed = feedOf(job);
  const given = job.machine?.staticLoadN;
  if (feed !== undefined && given !== undefined) {
    const message = 'A machine is driven by a load or by a feed, not by both. Take one of the two out.';
    return refuse(desk, 'machine.feedMmPerMin', job.machine?.feedMmPerMin, 'staticLoadN or feedMmPerMin', message);
  }
  if (given !== undefined) return given;
  if (feed !== undefined) return tool && conditions && loadOfFeed(desk, job, feed, { tool, conditions });
  desk.defaultsUsed.push('machine.staticLoadN');
  return tool && DEFAULT_PRESSURE * tool.area;
}

/** The load fresh grit takes to sink at the feed. */
function loadOfFeed(
  desk: Desk,
  job: PartialJob,
  feed: number,
  { tool, conditions }: { readonly tool: Outline; readonly conditions: Conditions },
): number | undefined {
  const pressure = pressureForRate(estimateTables(conditions), feed);
  if (pressure !== undefined) return pressure * tool.area;
  const message = 'No load the grits bear sinks the tool at this feed. Enter less.';
  return refuse(desk, 'machine.feedMmPerMin', job.machine?.feedMmPerMin, 'what the grits can cut', message);
}

function stockFor(
  desk: Desk,
  workpiece: Workpiece,
  cavity: Outline | undefined,
  depth: number | undefined,
): Stock | undefined {
  const x = orDefault(desk, 'workpiece.cavityXMm', workpiece.cavityXMm) * METRES_PER_MILLIMETRE;
  const y = orDefault(desk, 'workpiece.cavityYMm', workpiece.cavityYMm) * METRES_PER_MILLIMETRE;
  const size = (name: 'lengthMm' | 'widthMm' | 'thicknessMm', otherwise: number) => {
    const given = workpiece[name];
    if (given !== undefined) return given * METRES_PER_MILLIMETRE;
    desk.defaultsUsed.push(`workpiece.${name}`);
    return otherwise;
  };
  if (!cavity || depth === undefined) return undefined;
  const { xMin, xMax, yMin, yMax } = cavity.bounds;
  const margin = Math.max(DEFAULT_MARGIN, depth);
  return {
    length: size('lengthMm', 2 * (Math.max(Math.abs(xMin + x), Math.abs(xMax + x)) + margin)),
    width: size('widthMm', 2 * (Math.max(Math.abs(yMin + y), Math.abs(yMax + y)) + margin)),
    thickness: size('thicknessMm', depth + margin),
    cavityX: x,
    cavityY: y,
  };
}
