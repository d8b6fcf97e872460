import { open } from 'node:fs/promises';
import { dirname, join } from 'node:path';
import { type Attachments, attachmentNames } from '#src/formats/job/attachments.ts';
import { formatProblems, type Problem } from '#src/formats/problems.ts';
import { CommandError, EXIT, reasonOf } from './exit.ts';

/** Largest file that is read (bytes). */
const LARGEST = 10e6;

/** A job as it lies on disk: its text, and the files beside it that it names. */
export interface JobOnDisk {
  readonly text: string;
  readonly attachments: Attachments;
}

/**
 * Reads a job and the files it names from beside it. A file that is not there is left out: the check says where it is named.
 * @throws CommandError when there is no job, it is a folder, too large, or not text in UTF-8, or a file cannot be read
 */
export async function readJobFile(path: string): Promise<JobOnDisk> {
  const text = await readJobText(path);
  const attachments: Record<string, Uint8Array> = {};
  // only plain names: a job from elsewhere must not fetch files from anywhere
  for (const name of attachmentNames(text).filter(isPlainName)) {
    const bytes = await readLimited(join(dirname(path), name), 'A drawing or relief').catch((error: unknown) => {
      if (error instanceof MissingFileError) return undefined;
      throw error;
    });
    if (bytes) attachments[name] = bytes;
  }
  return { text, attachments };
}

/** A name of a file in the same folder, and not a hidden one. */
function isPlainName(name: string): boolean {
  return name.length <= 200 && /^[^./\\:][^/\\:]*$/.test(name);
}

class MissingFileError extends CommandError {}

async function readJobText(path: string): Promise<string> {
  const bytes = await readLimited(path, 'A job file');
  if (bytes.includes(0)) throw new CommandError(EXIT.badInput, `${path} is not a text file. Give a job file in JSON.`);
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    throw new CommandError(EXIT.badInput, `${path} is not text in UTF-8. Save the job file in UTF-8.`);
  }
}

async function readLimited(path: string, what: string): Promise<Uint8Array> {
  let file: Awaited<ReturnType<typeof open>> | undefined;
  try {
    file = await open(path, 'r');
    const status = await file.stat();
    if (status.isDirectory()) throw new CommandError(EXIT.badInput, `${path} is a folder. Give a job file.`);
    // a pipe or device has no size to trust, so no more than the limit is read either way
    const buffer = Buffer.alloc(Math.min(LARGEST + 1, status.isFile() ? status.size + 1 : LARGEST + 1));
    let length = 0;
    while (length < buffer.length) {
      const { bytesRead } = await file.read(buffer, length, buffer.length - length, null);
      if (bytesRead === 0) break;
      length += bytesRead;
    }
    if (length > LARGEST) {
      throw new CommandError(EXIT.badInput, `${path} is larger than ${LARGEST / 1e6} MB. ${what} has a few kB.`);
    }
    return buffer.subarray(0, length);
  } catch (error) {
    if (error instanceof CommandError) throw error;
    const gone = (error as NodeJS.ErrnoException).code === 'ENOENT';
    throw new (gone ? MissingFileError : CommandError)(EXIT.badInput, `${path} cannot be read: ${reasonOf(error)}.`);
  } finally {
    await file?.close();
  }
}

/** The error of a refused job. */
export function refusal(problems: readonly Problem[], path: string): CommandError {
  return new CommandError(EXIT.badInput, formatProblems(problems, path), { problems });
}
