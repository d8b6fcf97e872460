import { basename } from 'node:path';
import { formatProblems } from '#src/formats/problems.ts';
import type { SoundJob } from '#src/run/protocol.ts';
import { EXIT } from '../exit.ts';
import { readJobFile, refusal } from '../job-file.ts';
import { quickEngine } from '../quick-engine.ts';
import { columns } from '../table.ts';

/** Checks a job; returns the exit code. */
export async function check(path: string, { json }: { readonly json: boolean }): Promise<number> {
  const answer = await quickEngine().call('check', { ...(await readJobFile(path)), source: basename(path) });
  if (answer.state === 'refused') throw refusal(answer.problems, path);
  const { state, ...found } = answer;
  process.stdout.write(json ? `${JSON.stringify({ sound: state === 'sound', ...found })}\n` : report(answer, path));
  return EXIT.done;
}

function report({ warnings, defaults, notes }: SoundJob, path: string): string {
  const rows = defaults.map(({ path: at, value }) => [at, value]);
  return `${[
    'The job is sound.',
    ...(warnings.length > 0 ? [formatProblems(warnings, path)] : []),
    ...(rows.length > 0 ? [`Left out, and taken as:\n${columns(rows)}`] : ['Nothing is left to defaults.']),
    ...(notes.length > 0 ? [notes.join('\n')] : []),
  ].join('\n\n')}\n`;
}
