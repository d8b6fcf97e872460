import { existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { decodePng } from '#src/formats/png.ts';
import { readResult } from '#src/formats/result.ts';
import { scratch, spallwright } from '../support/cli.ts';
import { shallowJobText, smallJob, smallJobText } from '../support/jobs.ts';

const { path: root, remove } = scratch();
afterAll(remove);
const at = (...names: string[]) => join(root, ...names);
const bytesOf = (...names: string[]) => readFileSync(at(...names));
const text = (...names: string[]) => readFileSync(at(...names), 'utf8');
writeFileSync(at('good.job.json'), smallJobText());
writeFileSync(
  at('tight.job.json'),
  smallJobText({ cavity: { ...smallJob.cavity, depthMm: 0.01, limits: { floorRaUm: 0.01 } } }),
);
writeFileSync(at('shallow.job.json'), shallowJobText(0.01));

const ARTEFACTS = ['cavity.png', 'history.csv', 'job.json', 'result.json', 'section.svg', 'trace.csv', 'trace.svg'];

describe('a cut that is stopped', () => {
  // Ctrl-C exits with 130 and leaves the partial folder, never anything that looks like a result.
  test('exits with 130 and leaves no result', async () => {
    let told = false;
    const { code, stdout } = await spallwright(['cut', 'good.job.json', '--out', 'pocket'], root, (child, stderr) => {
      if (told || !stderr.includes('deep after')) return;
      told = true;
      child.kill('SIGINT');
    });
    expect({ code, stdout }).toEqual({ code: 130, stdout: '' });
    expect(existsSync(at('pocket'))).toBe(false);
    expect(readdirSync(at('pocket.partial')).sort()).toEqual(['job.json', 'unfinished.txt']);
  });
});

describe('a cut', () => {
  let ended: Awaited<ReturnType<typeof spallwright>>;
  beforeAll(async () => {
    ended = await spallwright(['cut', 'good.job.json', '--out', 'pocket', '--workers', '2'], root);
  });

  // The partial folder of the cut that was stopped is gone, and everything the cut makes is there.
  test('leaves every file and nothing partial', () => {
    expect(ended.code).toBe(0);
    expect(readdirSync(at('pocket')).sort()).toEqual(ARTEFACTS);
    expect(readdirSync(root).filter((name) => name.includes('.partial'))).toEqual([]);
    expect(text('pocket', 'job.json')).toBe(text('good.job.json'));
  });

  // The result is one its reader takes, of this job and seed, and the floor is where the job asked for.
  test('makes a result that can be read', () => {
    const { result, problems } = readResult(text('pocket', 'result.json'));
    expect(problems).toBeUndefined();
    expect(result?.job).toEqual(smallJob);
    expect(result?.seed).toBe(smallJob.cut.seed);
    // a step overshoots by less than a hundredth of the depth
    const depthMm = result?.figures.depthMm.value as number;
    expect(Math.abs(depthMm / smallJob.cavity.depthMm - 1)).toBeLessThan(0.01);
  });

  // Time and depth of the recorded series only grow, and it has an Ra in every row.
  test('makes a history that can be read', () => {
    const [head = '', ...rows] = text('pocket', 'history.csv').trimEnd().split('\r\n');
    const names = head.split(',');
    const series = (name: string) => rows.map((row) => Number(row.split(',')[names.indexOf(name)]));
    for (const name of ['timeMin', 'depthMm']) {
      const values = series(name);
      expect(values.every((value, k) => k === 0 || value > (values[k - 1] as number))).toBe(true);
    }
    // the first record may be of a floor that nothing has touched yet
    expect(
      series('floorRaUm')
        .slice(1)
        .every((ra) => ra > 0),
    ).toBe(true);
    expect(rows.length).toBeGreaterThan(50);
  });

  // The picture opens, is as wide as it should be, says what a pixel is, and shows more than paper.
  test('makes pictures that open', () => {
    const picture = decodePng(bytesOf('pocket', 'cavity.png'));
    expect(picture.width).toBe(1600);
    // the cavity fills no less than a quarter and no more than all of the width
    const acrossMm = (picture.pixel ?? 0) * 1600 * 1e3;
    expect(acrossMm).toBeGreaterThan(smallJob.cavity.outline.diameterMm);
    expect(acrossMm).toBeLessThan(4 * smallJob.cavity.outline.diameterMm);
    expect(new Set(new Uint32Array(picture.data.slice().buffer)).size).toBeGreaterThan(1000);
    for (const name of ['section.svg', 'trace.svg']) {
      const svg = text('pocket', name);
      expect(svg).toMatch(/^<svg /);
      expect(svg.trimEnd()).toMatch(/<\/svg>$/);
      expect(svg).not.toContain('NaN');
    }
  });

  // What is told on the way: lines on the error stream, figures on the output.
  test('tells its progress and its figures apart', () => {
    expect(ended.stderr).toMatch(/^ +\d+ % /m);
    expect(ended.stdout).toMatch(/Entry size\s+[\d.]+\s+mm/);
    expect(ended.stdout).not.toContain('deep after');
  });

  // The same job and seed give the same bytes, on one thread as on two.
  test('gives the same bytes again', async () => {
    const again = await spallwright(['cut', 'good.job.json', '--out', 'again', '--workers', '1', '--json'], root);
    expect({ code: again.code, stderr: again.stderr }).toEqual({ code: 0, stderr: '' });
    for (const name of ARTEFACTS) expect(bytesOf('again', name).equals(bytesOf('pocket', name)), name).toBe(true);
    expect(JSON.parse(again.stdout)).toEqual(JSON.parse(text('pocket', 'result.json')));
  });

  // A result is not written over by accident, and the job is not even started.
  test('into a folder that is there is refused without --force', async () => {
    const before = text('pocket', 'result.json');
    const { code, stderr } = await spallwright(['cut', 'shallow.job.json', '--out', 'pocket'], root);
    expect(code).toBe(2);
    expect(stderr).toContain('--force');
    expect(text('pocket', 'result.json')).toBe(before);
  });

  // With --force the new result takes the place of the old one as a whole, and a missed limit counts with --strict. Seed
  // and quality of the command line count before those of the job, and the result says what was used.
  test('--force replaces an earlier result, --strict tells a missed limit, --seed and --quality count', async () => {
    const options = ['--force', '--strict', '--seed', '9', '--quality', 'standard'];
    const { code } = await spallwright(['cut', 'tight.job.json', '--out', 'pocket', ...options], root);
    expect(code).toBe(1);
    const { result } = readResult(text('pocket', 'result.json'));
    const limits = [
      { id: 'floorRaUm', state: 'misses' },
      { id: 'stallMargin', state: 'meets' },
    ];
    expect(result?.verdict).toMatchObject({ overall: 'misses', limits });
    expect({ seed: result?.seed, cut: result?.job.cut }).toEqual({ seed: 9, cut: { quality: 'standard', seed: 9 } });
    expect(readdirSync(root).filter((name) => name.includes('.partial'))).toEqual([]);
  });

  // --force is for results only: a folder with anything else in it is left alone.
  test('--force leaves a folder with files of somebody else alone', async () => {
    mkdirSync(at('photos'));
    writeFileSync(at('photos', 'cat.jpg'), 'cat');
    const { code, stderr } = await spallwright(['cut', 'shallow.job.json', '--out', 'photos', '--force'], root);
    expect(code).toBe(2);
    expect(stderr).toContain('cat.jpg');
    expect(readdirSync(at('photos'))).toEqual(['cat.jpg']);
  });
});
