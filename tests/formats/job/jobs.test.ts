import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { readJob } from '#src/formats/job/read.ts';
import { resolveJob } from '#src/formats/job/resolve.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';

const folder = new URL('../../../resources/jobs/', import.meta.url);
const load = (name: string) => {
  const read = readJob(readFileSync(new URL(name, folder), 'utf8'));
  if (!read.job) throw new Error(JSON.stringify(read.problems));
  return { job: resolveJob(read.job, stockLibrary), warnings: read.warnings };
};

describe('the jobs that come with the program', () => {
  const names = readdirSync(folder).filter((name) => name.endsWith('.job.json'));

  test('are five, the demo among them', () => {
    expect(names.toSorted()).toEqual([
      'alumina-pocket.job.json',
      'demo.job.json',
      'fused-silica-ring.job.json',
      'quartz-pocket.job.json',
      'soda-lime-handbook.job.json',
    ]);
  });

  test.each(names)('%s resolves without a refusal or a warning, at 0.1 to 0.15 MPa on the tool face', (name) => {
    const { job, warnings } = load(name);
    expect(warnings).toEqual([]);
    expect(job.pressure).toBeGreaterThanOrEqual(0.1e6);
    expect(job.pressure).toBeLessThanOrEqual(0.15e6);
    expect(job.title).not.toBe('');
  });

  test('the demo is a round pocket, 3 mm wide and 1 mm deep, with all eight limits of a drawing', () => {
    const { job } = load('demo.job.json');
    expect(job.cavity).toEqual({ kind: 'circle', diameter: 3 * 1e-3 });
    expect(job.depth).toBe(1e-3);
    // two deviations make one limit
    expect(Object.keys(job.limits)).toHaveLength(9);
  });

  // Conditions of the handbook rate table (Benedict 1987, from memory): 12.7 mm tool and depth, F320, 20 kHz.
  test('the trial block is cut at the conditions of the handbook', () => {
    const { job } = load('soda-lime-handbook.job.json');
    expect(job.tool).toEqual({ kind: 'circle', diameter: 12.7 * 1e-3 });
    expect(job.depth).toBe(12.7 * 1e-3);
    expect(job.conditions).toMatchObject({ frequency: 20e3, amplitude: 19 * 1e-6, concentration: 0.3 });
    expect(job.stock.thickness).toBeGreaterThan(2 * job.depth);
  });

  test('the ring is 1.2 mm wide', () => {
    const { cavity } = load('fused-silica-ring.job.json').job;
    if (cavity.kind !== 'ring') throw new Error(cavity.kind);
    expect((cavity.outerDiameter - cavity.innerDiameter) / 2).toBeCloseTo(1.2e-3, 12);
  });
});
