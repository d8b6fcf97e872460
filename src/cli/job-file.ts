import { open } from 'node:fs/promises';
import { formatProblems, type Problem } from '#src/formats/problems.ts';
import { CommandError, EXIT, reasonOf } from './exit.ts';

/** Largest job file that is read (bytes). */
const LARGEST = 10e6;

/**
 * Reads a job file's text.
 * @throws CommandError when there is none, it is a folder, too large, or not text in UTF-8
 */
export async function readJobFile(path: string): Promise<string> {
  const bytes = await readLimited(path);
  if (bytes.includes(0)) throw new CommandError(EXIT.badInput, `${path} is not a text file. Give a job file in JSON.`);
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    throw new CommandError(EXIT.badInput, `${path} is not text in UTF-8. Save the job file in UTF-8.`);
  }
}

async function readLimited(path: string): Promise<Uint8Array> {
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
      throw new CommandError(EXIT.badInput, `${path} is larger than ${LARGEST / 1e6} MB. A job file has a few kB.`);
    }
    return buffer.subarray(0, length);
  } catch (error) {
    if (error instanceof CommandError) throw error;
    throw new CommandError(EXIT.badInput, `${path} cannot be read: ${reasonOf(error)}.`);
  } finally {
    await file?.close();
  }
}

/** The error of a refused job. */
export function refusal(problems: readonly Problem[], path: string): CommandError {
  return new CommandError(EXIT.badInput, formatProblems(problems, path), { problems });
}
