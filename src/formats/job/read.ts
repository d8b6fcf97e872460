import { type IssueContext, problemsOf, without } from '../issues.ts';
import type { Place } from '../json.ts';
import type { Library } from '../library.ts';
import { isRefused, type Problem, readText } from '../problems.ts';
import { stockLibrary } from '../stock-library.ts';
import type { PartialJob } from './desk.ts';
import { examineJob, type ResolveOptions } from './resolve.ts';
import { type JobFile, jobSchema } from './schema.ts';

/** A job that can be resolved, with its warnings; or everything wrong with it. */
export type ReadJob =
  | { readonly job: JobFile; readonly warnings: readonly Problem[]; readonly problems?: undefined }
  | { readonly job?: undefined; readonly warnings?: undefined; readonly problems: readonly Problem[] };

/** What reading a job may be given. */
export interface ReadOptions extends ResolveOptions {
  /** Library that names are looked up in; without it, the one that comes with the program. */
  readonly library?: Library;
}

/**
 * Reads a job file. Every problem is found in one go: fields that are unknown, missing, of the wrong type or out of range,
 * and, among the fields that are right, settings that do not go together. Never throws, whatever the text.
 */
export function readJob(text: string, options: ReadOptions = {}): ReadJob {
  const read = readText(text, 'a job file');
  if (!read.value) return { problems: read.problems };
  return judge(read.value.json, options, read.places, read.problems);
}

/** Checks a job that is already a value, as `readJob` does a text. Never throws. */
export function checkJob(value: unknown, options: ReadOptions = {}): ReadJob {
  return judge(value, options, new Map(), []);
}

function judge(
  value: unknown,
  options: ReadOptions,
  places: ReadonlyMap<string, Place>,
  before: readonly Problem[],
): ReadJob {
  const parsed = jobSchema.safeParse(value);
  const context: IssueContext = { schema: jobSchema, value, places };
  const shape = [...before, ...(parsed.success ? [] : problemsOf(parsed.error.issues, context))];
  if (shape.some((problem) => problem.path === '')) return { problems: told(shape) };
  const left = parsed.success
    ? parsed.data
    : (without(value, new Set(shape.map((problem) => problem.path))) as PartialJob);
  const together = examineJob(left, options.library ?? stockLibrary, options)
    .problems.filter((problem) => !follows(problem, shape))
    .map((problem) => withPlace(problem, places));
  const problems = [...shape, ...together];
  if (!parsed.success || isRefused(problems)) return { problems: told(problems) };
  return { job: parsed.data, warnings: problems };
}

/** Most problems told in one go. */
const MOST_TOLD = 200;

function told(problems: readonly Problem[]): readonly Problem[] {
  const more = problems.length - MOST_TOLD;
  if (more <= 0) return problems;
  const message = `There are ${more} problems more. Mend these first.`;
  return [...problems.slice(0, MOST_TOLD), { path: '', value: undefined, allowed: '', message, severity: 'refuse' }];
}

/** Fields of workpiece and slurry whose being wrong never makes another field of theirs look missing. */
const APART = new Set([
  'workpiece.lengthMm',
  'workpiece.widthMm',
  'workpiece.thicknessMm',
  'workpiece.cavityXMm',
  'workpiece.cavityYMm',
  'workpiece.backing',
  'workpiece.neighbours',
  'slurry.abrasive',
  'slurry.concentrationVolPercent',
  'slurry.carrier',
  'slurry.carrierViscosityMPaS',
  'slurry.delivery',
  'slurry.deliveryPressureKPa',
  'slurry.renewal',
  'slurry.sumpLitres',
  'slurry.usedMin',
]);

/** A path as it would be in a job without a list of passes. */
function bare(path: string): string {
  return path.replace(/^passes\[\d+\]\.?/, '');
}

/** Whether a problem only follows from others: it is about the same field, or misses what stands wrong beside it. */
function follows(problem: Problem, others: readonly Problem[]): boolean {
  const own = bare(problem.path);
  const section = own.split('.')[0] as string;
  const missing = problem.value === undefined && problem.severity === 'refuse';
  return others.some(({ path }) => {
    if (path === problem.path) return true;
    const other = bare(path);
    const beside = other === '' || other === own || other === section || other.startsWith(`${section}.`);
    return missing && beside && !APART.has(other);
  });
}

function withPlace(problem: Problem, places: ReadonlyMap<string, Place>): Problem {
  const parent = problem.path.slice(0, Math.max(0, problem.path.lastIndexOf('.')));
  const place = places.get(problem.path) ?? places.get(parent);
  return place ? { ...problem, place } : problem;
}

/** A job as its file's text: two spaces of indent, a line break at the end. `readJob` gives the same job back. */
export function writeJob(job: JobFile): string {
  return `${JSON.stringify(job, null, 2)}\n`;
}
