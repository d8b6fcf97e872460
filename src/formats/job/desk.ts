import type { Problem } from '../problems.ts';
import { DEFAULTS } from './defaults.ts';
import type { JobFile } from './schema.ts';

/** A job whose bad fields were taken out: anything may be missing. */
export type PartialJob = Whittled<JobFile>;
type Whittled<T> = T extends readonly unknown[]
  ? T
  : T extends object
    ? { [K in keyof T]?: Whittled<T[K]> | undefined }
    : T;

/** Where the steps of working a job out report problems and note defaults. */
export interface Desk {
  readonly problems: Problem[];
  readonly defaultsUsed: string[];
}

/** Reports a refusal. */
export function refuse(desk: Desk, path: string, value: unknown, allowed: string, message: string): undefined {
  desk.problems.push({ path, value, allowed, message, severity: 'refuse' });
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
