import type { Problem } from '../problems.ts';
import type { Attachments } from './attachments.ts';
import { DEFAULTS } from './defaults.ts';
import type { JobFile } from './schema.ts';

/** A job whose bad fields were taken out: anything may be missing. */
export type PartialJob = Whittled<JobFile>;
export type Whittled<T> = T extends readonly unknown[]
  ? T
  : T extends object
    ? { [K in keyof T]?: Whittled<T[K]> | undefined }
    : T;

/** Where the steps of working a job out report problems and note defaults. */
export interface Desk {
  readonly problems: Problem[];
  readonly defaultsUsed: string[];
  /** What was worked out, one sentence each. */
  readonly notes: string[];
  /** Files that stand beside the job. */
  readonly attachments: Attachments;
  /** Where a field of the pass in hand stands: in the pass itself or in the job. */
  readonly at: (path: string) => string;
}

/** A desk without anything on it. */
export function emptyDesk(attachments: Attachments = {}, at: (path: string) => string = (path) => path): Desk {
  return { problems: [], defaultsUsed: [], notes: [], attachments, at };
}

/** Reports a refusal. */
export function refuse(desk: Desk, path: string, value: unknown, allowed: string, message: string): undefined {
  desk.problems.push({ path: desk.at(path), value, allowed, message, severity: 'refuse' });
  return undefined;
}

/** Reports a warning. */
export function warn(desk: Desk, path: string, value: unknown, allowed: string, message: string): undefined {
  desk.problems.push({ path: desk.at(path), value, allowed, message, severity: 'warn' });
  return undefined;
}

/** The given value, or the default of its path, which is noted. */
export function orDefault<K extends keyof typeof DEFAULTS, T>(
  desk: Desk,
  path: K,
  value: T | undefined,
): T | (typeof DEFAULTS)[K] {
  if (value !== undefined) return value;
  desk.defaultsUsed.push(path);
  return DEFAULTS[path];
}
