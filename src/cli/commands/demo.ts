import { stat } from 'node:fs/promises';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { assetUrl } from '../assets.ts';
import { EXIT } from '../exit.ts';
import { cut } from './cut.ts';

/** Where the demo goes, and where its job is to be found by people. */
const OUT = join('out', 'demo');
const JOB = join('resources', 'jobs', 'demo.job.json');

/** Cuts the job that comes with the program; an earlier demo is replaced. */
export async function demo(options: { readonly workers?: number }): Promise<number> {
  process.stderr.write('Cutting the demo job: a round pocket, 3 mm wide and 1 mm deep, in borosilicate glass ...\n');
  const code = await cut(fileURLToPath(assetUrl('demo.job.json')), {
    out: OUT,
    force: true,
    json: false,
    strict: false,
    ...options,
  });
  if (code !== EXIT.done) return code;
  const known = await stat(JOB).catch(() => null);
  process.stdout.write(
    `
Look at the pictures:
  ${join(OUT, 'cavity.png')}   the cavity, cut open
  ${join(OUT, 'section.svg')}  the section with its dimensions
  ${join(OUT, 'trace.svg')}    the roughness of the floor
The figures are in ${join(OUT, 'result.json')}, and how they grew in ${join(OUT, 'history.csv')}.
Predictions are estimates: confirm them by a trial cut before production.
${known ? `\nTo cut a job of your own, copy ${JOB}, change it, and run\n  npm run --silent spallwright -- cut my.job.json --out out/mine\n` : ''}`,
  );
  return EXIT.done;
}
