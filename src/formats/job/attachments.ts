import { type Desk, refuse } from './desk.ts';

/** Files that stand beside a job, by name. */
export type Attachments = Readonly<Record<string, Uint8Array>>;

/** Most files one job may name. */
const MOST_FILES = 64;
/** Deepest place in a job where a file is named. */
const DEEPEST = 12;

/**
 * Names of the files a job's text refers to (drawings and reliefs), for whoever reads them from beside the job. A text that is no
 * JSON refers to none; names are as they stand and not yet checked to be plain. Never throws.
 */
export function attachmentNames(text: string): string[] {
  const names = new Set<string>();
  const walk = (value: unknown, depth: number): void => {
    if (typeof value !== 'object' || value === null || depth > DEEPEST || names.size >= MOST_FILES) return;
    if (Array.isArray(value)) {
      if (typeof value[0] === 'object') for (const item of value) walk(item, depth + 1);
      return;
    }
    const { kind, file } = value as { kind?: unknown; file?: unknown };
    if ((kind === 'drawing' || kind === 'relief') && typeof file === 'string') names.add(file);
    for (const item of Object.values(value)) walk(item, depth + 1);
  };
  try {
    walk(JSON.parse(text), 0);
  } catch {
    return [];
  }
  return [...names];
}

/** The bytes of a file a field names; refused when it was not handed in. */
export function attachmentOf(desk: Desk, path: string, name: string): Uint8Array | undefined {
  const bytes = Object.hasOwn(desk.attachments, name) ? desk.attachments[name] : undefined;
  if (bytes !== undefined) return bytes;
  const known = Object.keys(desk.attachments);
  const allowed =
    known.length > 0 ? `a file beside the job: ${known.slice(0, 20).join(', ')}` : 'a file beside the job';
  return refuse(desk, path, name, allowed, 'This file is not there. Put it beside the job, under this very name.');
}
