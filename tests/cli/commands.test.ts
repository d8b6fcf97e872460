import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, describe, expect, test } from 'vitest';
import { readResult } from '#src/formats/result.ts';
import { FIGURE_NAMES } from '#src/planning/figures.ts';
import { scratch, spallwright } from '../support/cli.ts';
import { smallJob, smallJobText } from '../support/jobs.ts';

const { path: root, remove } = scratch();
afterAll(remove);
const limits = (values: object) => smallJobText({ cavity: { ...smallJob.cavity, limits: values } });
writeFileSync(join(root, 'good.job.json'), smallJobText());
writeFileSync(join(root, 'tight.job.json'), limits({ floorRaUm: 0.01 }));
writeFileSync(join(root, 'wide.job.json'), limits({ floorRaUm: 90 }));
writeFileSync(
  join(root, 'ten-lines.job.json'),
  JSON.stringify({
    spallwright: 1,
    workpiece: { material: 'soda_lime' },
    cavity: { outline: { kind: 'circle', diameterMm: 5 }, depthMm: 2 },
    slurry: { abrasive: 'sic_green', grit: 'F280' },
  }),
);

describe('estimate', () => {
  // One JSON object and nothing else: a result that its own reader takes.
  test('--json prints one result and nothing else', async () => {
    const { code, stdout, stderr } = await spallwright(['estimate', 'good.job.json', '--json'], root);
    expect({ code, stderr }).toEqual({ code: 0, stderr: '' });
    expect(stdout.trimEnd().split('\n').length).toBe(1);
    const { result, problems } = readResult(stdout);
    expect(problems).toBeUndefined();
    expect(Object.keys(result?.figures ?? {})).toEqual([...FIGURE_NAMES]);
    expect(result?.voxelUm).toBeNull();
  });

  // Every figure has a unit in the table, and what is not known says so.
  test('prints figures with their units', async () => {
    const { code, stdout } = await spallwright(['estimate', 'tight.job.json'], root);
    expect(code).toBe(0);
    expect(stdout).toMatch(/Machining time\s+[\d.]+\s+min/);
    expect(stdout).toMatch(/Entry size\s+[\d.]+\s+mm/);
    expect(stdout).toMatch(/Floor Ra\s+[\d.]+\s+um\s+[\d.]+ to [\d.]+\s+at most 0.01\s+misses/);
    expect(stdout).toContain('Misses: floor Ra');
  });

  // A missed limit changes the exit code only where that was asked for.
  test('--strict exits with 1 when a limit is missed, and with 0 when none is', async () => {
    const codes = [];
    for (const args of [['tight.job.json'], ['tight.job.json', '--strict'], ['wide.job.json', '--strict']]) {
      codes.push((await spallwright(['estimate', ...args], root)).code);
    }
    expect(codes).toEqual([0, 1, 0]);
  });

  // Sensible defaults: a job without tool, machine and cut runs.
  test('takes a job of ten lines', async () => {
    const { code } = await spallwright(['estimate', 'ten-lines.job.json'], root);
    expect(code).toBe(0);
  });
});

describe('check', () => {
  // A sound job is said to be sound, and every default it takes is named with its value.
  test('says that a job is sound and what its defaults are', async () => {
    const { code, stdout, stderr } = await spallwright(['check', 'good.job.json'], root);
    expect({ code, stderr }).toEqual({ code: 0, stderr: '' });
    expect(stdout).toContain('The job is sound.');
    expect(stdout).toMatch(/machine\.frequencyKHz\s+20 kHz/);
    expect(stdout).toMatch(/slurry\.concentrationVolPercent\s+30 vol%/);
    expect(stdout).toMatch(/tool\.outline\s+circle [\d.]+ mm/);
  });

  test('--json prints one object', async () => {
    const { stdout } = await spallwright(['check', 'good.job.json', '--json'], root);
    expect(JSON.parse(stdout)).toMatchObject({ sound: true, warnings: [] });
  });
});

describe('libraries', () => {
  // What the program ships fits its own schemas.
  test('--check finds them sound', async () => {
    const { code, stdout } = await spallwright(['libraries', '--check'], root);
    expect(code).toBe(0);
    expect(stdout).toMatch(/materials \d+, tools \d+, abrasives \d+, grits \d+/);
  });

  test('lists names that a job may hold', async () => {
    const { stdout } = await spallwright(['libraries'], root);
    for (const name of ['borosilicate_33', 'low_carbon_steel', 'b4c', 'F320']) expect(stdout).toContain(name);
  });
});

describe('help', () => {
  test.each([[['--help']], [['cut', '--help']]])('%j explains itself on the output and exits with 0', async (args) => {
    const { code, stdout, stderr } = await spallwright(args, root);
    expect({ code, stderr }).toEqual({ code: 0, stderr: '' });
    expect(stdout).toContain('Usage: spallwright');
  });

  test('--version is the version of the package', async () => {
    const { stdout } = await spallwright(['--version'], root);
    expect(stdout).toMatch(/^\d+\.\d+\.\d+\n$/);
  });
});
