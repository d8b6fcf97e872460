import { basename } from 'node:path';
import type { Estimated, JobRequest } from '#src/run/protocol.ts';
import { readJobFile, refusal } from '../job-file.ts';
import { quickEngine } from '../quick-engine.ts';
import { bandNote, columns, figureTable, plain } from '../table.ts';
import { strictCode } from './cut.ts';

/** What `estimate` is asked for. */
export interface EstimateOptions {
  readonly json: boolean;
  readonly strict: boolean;
}

/** Estimates a job; returns the exit code. */
export async function estimate(path: string, { json, strict }: EstimateOptions): Promise<number> {
  const request: JobRequest = { ...(await readJobFile(path)), source: basename(path) };
  const answer = await quickEngine().call('estimate', request);
  if (answer.state === 'refused') throw refusal(answer.problems, path);
  process.stdout.write(json ? `${JSON.stringify(answer.result)}\n` : report(answer, path));
  return strictCode(answer.result, strict);
}

function report({ result, headline, help, passes, notes }: Estimated, path: string): string {
  const title = result.job.title ?? basename(path);
  const warnings = result.warnings.map(({ path: at, message }) => `Warning${at === '' ? '' : `, ${at}`}: ${message}`);
  return [
    `Estimate of "${title}". ${headline}${help === null ? '' : `\n${help}`}`,
    figureTable(result),
    bandNote(result),
    ...passes.map(({ title: pass, remarks }) => {
      const rows = remarks.map(({ name, value, unit }) => [name, plain(value, 3), unit]);
      return `How ${passes.length > 1 ? `"${pass}"` : 'it'} cuts\n${columns(rows, [1])}`;
    }),
    ...(warnings.length > 0 ? [warnings.join('\n')] : []),
    ...(notes.length > 0 ? [notes.join('\n')] : []),
    'Confirm predictions by a trial cut before production.\n',
  ].join('\n\n');
}
