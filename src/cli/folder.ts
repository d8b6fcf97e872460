import { lstat, mkdir, readdir, readFile, rename, rm, stat, writeFile } from 'node:fs/promises';
import { dirname, join, resolve } from 'node:path';
import { attachmentNames } from '#src/formats/job/attachments.ts';
import { ARTEFACT_NAMES, type Artefact } from '#src/run/protocol.ts';
import { CommandError, EXIT, reasonOf } from './exit.ts';
import type { JobOnDisk } from './job-file.ts';

/** Left beside the artefacts: the job as it was given; and while the folder is not whole, a word on why. */
const JOB_COPY = 'job.json';
const UNFINISHED = 'unfinished.txt';
const OWN_FILES: ReadonlySet<string> = new Set([...ARTEFACT_NAMES, JOB_COPY, UNFINISHED]);

/** A folder for results that is whole or not there: written beside itself and renamed. */
export interface ResultFolder {
  readonly path: string;
  readonly partial: string;
  /** Puts the finished files in place; an older result goes only now. */
  finish(artefacts: readonly Artefact[]): Promise<void>;
  /** Leaves the partial folder with a word on why. */
  leave(word: string): Promise<void>;
  /** Takes the partial folder away again. */
  discard(): Promise<void>;
}

const cannot = (what: string, error: unknown) =>
  new CommandError(EXIT.badInput, `${what}: ${reasonOf(error)}. Choose another folder with --out.`);

async function statusOf(path: string) {
  try {
    return await lstat(path);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'ENOENT') return undefined;
    throw cannot(`${path} cannot be used`, error);
  }
}

/** Refuses a folder that holds anything a cut did not write: replacing it would delete somebody's files. */
async function checkReplaceable(path: string): Promise<void> {
  const job = await readFile(join(path, JOB_COPY), 'utf8').catch(() => '');
  const own = new Set([...OWN_FILES, ...attachmentNames(job)]);
  const foreign = (await readdir(path)).filter((name) => !own.has(name));
  if (foreign.length === 0) return;
  const shown = foreign.slice(0, 3).join(', ') + (foreign.length > 3 ? ', ...' : '');
  throw new CommandError(
    EXIT.badInput,
    `${path} holds files that no cut wrote (${shown}), so it is not replaced. Choose another folder with --out.`,
  );
}

async function checkTarget(path: string, force: boolean): Promise<void> {
  const status = await statusOf(path);
  if (!status) return;
  if (!status.isDirectory()) {
    throw new CommandError(EXIT.badInput, `${path} exists and is not a folder. Choose another folder with --out.`);
  }
  if (!force) {
    throw new CommandError(EXIT.badInput, `${path} exists already. Give another --out, or --force to replace it.`);
  }
  await checkReplaceable(path);
}

/**
 * Makes a folder and those above it that are missing. One by one: Node's own recursive way never ends on file systems that
 * answer "does not exist" to making a folder (found on /proc with Node 20).
 */
async function makeFolder(path: string): Promise<void> {
  const parent = dirname(path);
  if (parent !== path && !(await stat(parent).catch(() => undefined))) await makeFolder(parent);
  await mkdir(path);
}

/**
 * Makes `OUT.partial/` ready to be written to, with a copy of the job and of the files it names in it.
 * @throws CommandError when OUT exists (without force), holds somebody's files, or cannot be written
 */
export async function openFolder(out: string, job: JobOnDisk, force: boolean): Promise<ResultFolder> {
  if (out === '') throw new CommandError(EXIT.badInput, '--out is empty. Name a folder for the result.');
  const path = resolve(out);
  const partial = `${path}.partial`;
  await checkTarget(path, force);
  // what an interrupted run left is ours to replace, nothing else is
  const before = await statusOf(partial);
  if (before?.isDirectory()) await checkReplaceable(partial);
  try {
    await rm(partial, { recursive: true, force: true });
    await makeFolder(partial);
    await writeFile(join(partial, JOB_COPY), job.text);
    for (const [name, bytes] of Object.entries(job.attachments)) await writeFile(join(partial, name), bytes);
    await writeFile(join(partial, UNFINISHED), 'This cut is running, or was ended without notice.\n');
  } catch (error) {
    await rm(partial, { recursive: true, force: true }).catch(() => {});
    throw cannot(`${partial} cannot be written`, error);
  }
  const discard = () => rm(partial, { recursive: true, force: true });
  return {
    path,
    partial,
    discard,
    async finish(artefacts) {
      try {
        for (const { name, bytes } of artefacts) await writeFile(join(partial, name), bytes);
        await rm(join(partial, UNFINISHED));
        await replace(partial, path);
      } catch (error) {
        await discard().catch(() => {});
        throw cannot(`The result cannot be written to ${path}`, error);
      }
    },
    async leave(word) {
      await writeFile(join(partial, UNFINISHED), `${word}\n`);
    },
  };
}

async function replace(partial: string, path: string): Promise<void> {
  if (!(await statusOf(path))) return rename(partial, path);
  const old = `${path}.${process.pid}.old.partial`;
  await rename(path, old);
  try {
    await rename(partial, path);
  } catch (error) {
    await rename(old, path);
    throw error;
  }
  await rm(old, { recursive: true, force: true });
}
