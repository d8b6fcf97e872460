import { basename } from 'node:path';
import type { Result } from '#src/formats/result.ts';
import { AbortedError, type Engine } from '#src/run/client.ts';
import type { CutDone, JobRequest } from '#src/run/protocol.ts';
import { defaultWorkers, threadedEngine } from '../engine.ts';
import { CommandError, EXIT } from '../exit.ts';
import { openFolder, type ResultFolder } from '../folder.ts';
import { onInterrupt } from '../interrupt.ts';
import { readJobFile, refusal } from '../job-file.ts';
import { type Meter, meterOn, silent } from '../progress.ts';
import { bandNote, figureTable } from '../table.ts';

/** What `cut` is asked for. */
export interface CutOptions {
  readonly out: string;
  readonly force: boolean;
  readonly json: boolean;
  readonly strict: boolean;
  readonly seed?: number;
  readonly workers?: number;
  readonly quality?: NonNullable<JobRequest['quality']>;
}

/** 1 when a limit of the drawing is missed and that was to count. */
export function strictCode(result: Result, strict: boolean): number {
  return strict && result.verdict.overall === 'misses' ? EXIT.missed : EXIT.done;
}

/** Cuts a job into a folder; returns the exit code. */
export async function cut(path: string, options: CutOptions): Promise<number> {
  const onDisk = await readJobFile(path);
  const { seed, quality } = options;
  const request: JobRequest = {
    ...onDisk,
    source: basename(path),
    ...(seed !== undefined && { seed }),
    ...(quality && { quality }),
  };
  const { quickEngine } = await import('../quick-engine.ts');
  const checked = await quickEngine().call('check', request);
  if (checked.state === 'refused') throw refusal(checked.problems, path);
  const folder = await openFolder(options.out, onDisk, options.force);
  const engine = threadedEngine(options.workers ?? defaultWorkers());
  const meter = options.json ? silent : meterOn(process.stderr);
  try {
    const done = await run(engine, request, meter, folder);
    await folder.finish(done.artefacts);
    report(done, folder, options.json);
    return strictCode(done.result, options.strict);
  } finally {
    meter.end();
    engine.close();
  }
}

async function run(engine: Engine, request: JobRequest, meter: Meter, folder: ResultFolder): Promise<CutDone> {
  const stop = new AbortController();
  const release = onInterrupt(() => stop.abort());
  let share = 0;
  try {
    const done = await engine.call('cut', request, {
      signal: stop.signal,
      onProgress(progress) {
        share = progress.fraction;
        meter.show(progress);
      },
    });
    if (done.state === 'refused') throw refusal(done.problems, request.source);
    return done;
  } catch (error) {
    meter.end();
    if (!(error instanceof AbortedError)) {
      await folder.discard();
      throw error;
    }
    await folder.leave(`This cut was stopped at ${Math.floor(100 * share)} %. There is no result; cut the job again.`);
    throw new CommandError(EXIT.interrupted, `Stopped. ${folder.partial} holds the job and no result.`);
  } finally {
    release();
  }
}

function report({ result, headline, help, artefacts, notes }: CutDone, folder: ResultFolder, json: boolean): void {
  if (json) {
    process.stdout.write(`${JSON.stringify(result)}\n`);
    return;
  }
  const names = artefacts.map(({ name }) => name).join(', ');
  const warnings = result.warnings.map(({ path, message }) => `Warning${path === '' ? '' : `, ${path}`}: ${message}\n`);
  process.stdout.write(
    `${headline}\n${help === null ? '' : `${help}\n`}\n${figureTable(result)}\n\n${bandNote(result)}\n\n${[...warnings, ...notes.map((note) => `${note}\n`)].join('')}` +
      `Written to ${folder.path}: ${names}\n`,
  );
}
