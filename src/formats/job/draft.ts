import { METRES_PER_MILLIMETRE } from '#src/base/units.ts';
import type { WorkMaterial } from '#src/physics/records.ts';
import type { Library, WorkpieceRecord } from '../library.ts';
import type { Problem } from '../problems.ts';
import type { Attachments } from './attachments.ts';
import { DEFAULT_MARGIN } from './defaults.ts';
import { type Desk, emptyDesk, orDefault, type PartialJob, refuse } from './desk.ts';
import { workOf } from './matter.ts';
import { type JobOutline, readOutline } from './outline-input.ts';
import { draftPass, type PassDraft, type PredictOvercut } from './pass-draft.ts';
import { passViews } from './passes.ts';
import { neighboursSchema } from './schema.ts';

export { type PredictOvercut, ruleOfThumbOvercut } from './pass-draft.ts';

/** The block that is cut, with the middle of the cavity from the middle of its entry face (m). */
export interface Stock {
  readonly length: number;
  readonly width: number;
  readonly thickness: number;
  readonly cavityX: number;
  readonly cavityY: number;
}

/** A cavity that is there already, its middle from this one's (m). */
export interface Neighbour {
  readonly outline: JobOutline;
  readonly x: number;
  readonly y: number;
  readonly depth: number;
}

/** What all passes of a job share, in SI; what depends on a bad field is undefined. */
export interface JobFrame {
  readonly job: PartialJob;
  readonly library: Library;
  readonly work: WorkMaterial | undefined;
  readonly workRecord: WorkpieceRecord | undefined;
  readonly cavity: JobOutline | undefined;
  readonly through: boolean;
  /** Depth as drawn; the workpiece's thickness where it goes through (m). */
  readonly depth: number | undefined;
  readonly stock: Stock | undefined;
  readonly backing: boolean;
  /** In the job's order; undefined for one that is not whole. */
  readonly neighbours: readonly (Neighbour | undefined)[];
}

/** A job in SI as far as it could be worked out. */
export interface Draft extends JobFrame {
  readonly passes: readonly PassDraft[];
  /** Paths of the fields that took their default. */
  readonly defaultsUsed: readonly string[];
  readonly notes: readonly string[];
  /** Found while working it out: unknown names, missing properties, outlines that contradict themselves. */
  readonly problems: readonly Problem[];
}

/** What working a job out needs beside it. */
export interface DraftSettings {
  readonly library: Library;
  readonly predictOvercut: PredictOvercut;
  readonly attachments: Attachments;
}

/** Works a job out in SI, as far as its fields allow. Never throws. */
export function draftJob(job: PartialJob, settings: DraftSettings): Draft {
  const desk = emptyDesk(settings.attachments);
  const { work, record: workRecord } = workOf(desk, job.workpiece ?? {}, settings.library);
  const cavity = readOutline(desk, 'cavity.outline', job.cavity?.outline);
  const through = job.cavity?.through === true;
  const depth = depthOf(desk, job, through);
  const frame: JobFrame = {
    job,
    library: settings.library,
    work,
    workRecord,
    cavity,
    through,
    depth,
    stock: stockFor(desk, job.workpiece ?? {}, cavity, depth),
    backing: through && orDefault(desk, 'workpiece.backing', job.workpiece?.backing) === 'bonded',
    neighbours: neighboursOf(desk, job),
  };
  const views = passViews(job);
  const passes = views.map((view) => draftPass(frame, view, settings));
  return {
    ...frame,
    passes,
    defaultsUsed: [...new Set([...desk.defaultsUsed, ...passes.flatMap((pass) => pass.defaultsUsed)])],
    notes: [...desk.notes, ...passes.flatMap((pass) => pass.notes)],
    problems: desk.problems,
  };
}

function depthOf(desk: Desk, job: PartialJob, through: boolean): number | undefined {
  const given = job.cavity?.depthMm;
  if (!through) {
    if (given !== undefined) return given * METRES_PER_MILLIMETRE;
    const message = 'Depth is missing. Add it, or say through: true.';
    return refuse(desk, 'cavity.depthMm', undefined, '0.005 to 200 mm', message);
  }
  const thickness = job.workpiece?.thicknessMm;
  if (thickness === undefined) {
    const message = 'Workpiece thickness is missing, and a cavity that goes through is as deep as that. Add it.';
    return refuse(desk, 'workpiece.thicknessMm', undefined, '0.02 to 500 mm', message);
  }
  if (given !== undefined && given !== thickness) {
    const message = 'A cavity that goes through is as deep as the workpiece is thick. Take depthMm out, or through.';
    return refuse(desk, 'cavity.depthMm', given, `nothing, or ${thickness} mm`, message);
  }
  return thickness * METRES_PER_MILLIMETRE;
}

function neighboursOf(desk: Desk, job: PartialJob): (Neighbour | undefined)[] {
  const listed = (job.workpiece?.neighbours ?? []) as readonly unknown[];
  return listed.map((file, index) => {
    const whole = neighboursSchema.safeParse([file]).data?.[0];
    if (!whole) return undefined;
    const outline = readOutline(desk, `workpiece.neighbours[${index}].outline`, whole.outline);
    const { xMm, yMm, depthMm } = whole;
    const [x, y, depth] = [xMm, yMm, depthMm].map((mm) => mm * METRES_PER_MILLIMETRE) as [number, number, number];
    return outline && { outline, x, y, depth };
  });
}

type Workpiece = NonNullable<PartialJob['workpiece']>;

function stockFor(
  desk: Desk,
  workpiece: Workpiece,
  cavity: JobOutline | undefined,
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
  const { xMin, xMax, yMin, yMax } = cavity.outline.bounds;
  const margin = Math.max(DEFAULT_MARGIN, depth);
  return {
    length: size('lengthMm', 2 * (Math.max(Math.abs(xMin + x), Math.abs(xMax + x)) + margin)),
    width: size('widthMm', 2 * (Math.max(Math.abs(yMin + y), Math.abs(yMax + y)) + margin)),
    thickness: size('thicknessMm', depth + margin),
    cavityX: x,
    cavityY: y,
  };
}
