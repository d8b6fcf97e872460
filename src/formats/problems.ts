import { type Place, readJson } from './json.ts';

/** Something in a file that is refused, or accepted with a warning. */
export interface Problem {
  /** Path of the field, as in `workpiece.thicknessMm`; empty for the file as a whole. */
  readonly path: string;
  /** The value found there; undefined when it is missing. */
  readonly value: unknown;
  /** What may stand there, in words: a range with its unit, a list of names. */
  readonly allowed: string;
  /** What is wrong, what it means and what to do. */
  readonly message: string;
  readonly severity: 'refuse' | 'warn';
  /** Where in the text, when there is a text. */
  readonly place?: Place;
}

/** Thrown where a value is asked for that its problems forbid. */
export class RefusedError extends Error {
  readonly problems: readonly Problem[];
  constructor(problems: readonly Problem[], source: string) {
    super(formatProblems(problems, source));
    this.name = 'RefusedError';
    this.problems = problems;
  }
}

/** True when one of the problems is a refusal. */
export function isRefused(problems: readonly Problem[]): boolean {
  return problems.some((problem) => problem.severity === 'refuse');
}

const LONGEST_SHOWN = 60;

/** A value as a message shows it: JSON, cut short, on one line. */
export function showValue(value: unknown): string {
  if (value === undefined) return 'missing';
  if (typeof value === 'number') return String(value);
  let text: string;
  try {
    text = JSON.stringify(value) ?? String(value);
  } catch {
    text = String(value);
  }
  return text.length > LONGEST_SHOWN ? `${text.slice(0, LONGEST_SHOWN - 3)}...` : text;
}

/** "1 problem", "3 problems". */
export function countOf(count: number, noun: string): string {
  return `${count} ${noun}${count === 1 ? '' : 's'}`;
}

/**
 * The text a terminal shows: a heading, then one paragraph a problem, refusals first: where, the value, what is wrong and
 * what to do, and what is allowed. No trailing line break.
 * @param source name of the file, or of whatever the values are from
 */
export function formatProblems(problems: readonly Problem[], source: string): string {
  const refused = problems.filter((problem) => problem.severity === 'refuse');
  const warned = problems.filter((problem) => problem.severity === 'warn');
  const counts = [
    ...(refused.length > 0 ? [countOf(refused.length, 'problem')] : []),
    ...(warned.length > 0 ? [countOf(warned.length, 'warning')] : []),
  ];
  const heading = `${source}: ${counts.length > 0 ? counts.join(', ') : 'no problems'}`;
  return [heading, ...[...refused, ...warned].map(paragraph)].join('\n');
}

function paragraph(problem: Problem): string {
  const place = problem.place ? ` (line ${problem.place.line}, column ${problem.place.column})` : '';
  const where = problem.path === '' ? 'The file' : problem.path;
  const value = problem.path === '' && problem.value === undefined ? '' : `: ${showValue(problem.value)}`;
  const lines = [
    `  ${problem.severity === 'warn' ? 'warning, ' : ''}${where}${place}${value}`,
    `    ${problem.message}`,
  ];
  if (problem.allowed !== '') lines.push(`    Allowed: ${problem.allowed}`);
  return lines.join('\n');
}

/** Longest text read as a file (characters). */
const LONGEST_TEXT = 16_000_000;

/** A JSON file's text: its value and the problems found in reading it; no value when it is not JSON. Never throws. */
export interface ReadText {
  readonly value?: { readonly json: unknown };
  readonly problems: readonly Problem[];
  readonly places: ReadonlyMap<string, Place>;
}

/** Reads the JSON of a file. @param kind what the file is, as in "a job file" */
export function readText(text: string, kind: string): ReadText {
  const places = new Map<string, Place>();
  const refuse = (message: string, place?: Place): ReadText => ({
    problems: [
      { path: '', value: undefined, allowed: 'JSON text', message, severity: 'refuse', ...(place && { place }) },
    ],
    places,
  });
  if (text.length > LONGEST_TEXT) return refuse(`This is too long for ${kind}: ${text.length} characters.`);
  if (text.trim() === '') return refuse(`The file is empty. It should hold ${kind} in JSON.`);
  const read = readJson(text);
  if ('fault' in read) {
    const { line, column, message } = read.fault;
    return refuse(`This is not JSON: at line ${line}, column ${column}, ${message}. Mend it there.`, { line, column });
  }
  const problems = read.repeated.map(({ path, value }): Problem => {
    const place = read.places.get(path);
    return {
      path,
      value,
      allowed: 'each field once',
      message: 'This field stands there more than once, and only one value can count. Keep one of them.',
      severity: 'refuse',
      ...(place && { place }),
    };
  });
  return { value: { json: read.value }, problems, places: read.places };
}
