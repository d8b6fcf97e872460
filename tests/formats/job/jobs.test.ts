import { readdirSync, readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { attachmentNames } from '#src/formats/job/attachments.ts';
import { readJob } from '#src/formats/job/read.ts';
import { resolveJob } from '#src/formats/job/resolve.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';

const folder = new URL('../../../resources/jobs/', import.meta.url);
const load = (name: string) => {
  const text = readFileSync(new URL(name, folder), 'utf8');
  const files = attachmentNames(text).map(
    (file) => [file, new Uint8Array(readFileSync(new URL(file, folder)))] as const,
  );
  const options = { attachments: Object.fromEntries(files) };
  const read = readJob(text, options);
  if (!read.job) throw new Error(JSON.stringify(read.problems));
  return { job: resolveJob(read.job, stockLibrary, options), warnings: read.warnings };
};

describe('the jobs that come with the program', () => {
  const names = readdirSync(folder).filter((name) => name.endsWith('.job.json'));

  test('are eleven, the demo among them', () => {
    expect(names.toSorted()).toEqual([
      'alumina-pocket.job.json',
      'demo.job.json',
      'drawn-lever-pocket.job.json',
      'fused-silica-ring.job.json',
      'glass-20mm-bored.job.json',
      'glass-20mm-solid.job.json',
      'quartz-pocket.job.json',
      'quartz-slot-backed.job.json',
      'quartz-slot-open.job.json',
      'si3n4-two-pass.job.json',
      'soda-lime-handbook.job.json',
    ]);
  });

  test.each(names)('%s resolves without a refusal or a warning, at 0.1 to 0.15 MPa on the tool face', (name) => {
    const { job, warnings } = load(name);
    expect(warnings).toEqual([]);
    for (const pass of job.passes) {
      expect(pass.pressure).toBeGreaterThanOrEqual(0.1e6);
      expect(pass.pressure).toBeLessThanOrEqual(0.15e6);
    }
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

  test('the pocket in silicon nitride is roughed undersize and shallow, then finished to size with a finer grit', () => {
    const { passes, depth } = load('si3n4-two-pass.job.json').job;
    const [rough, fine] = passes;
    if (!rough || !fine) throw new Error('two passes');
    expect(passes).toHaveLength(2);
    expect(rough.stock).toBeCloseTo(60e-6, 12);
    expect(rough.depth).toBeCloseTo(depth - 60e-6, 12);
    expect(fine.depth).toBe(depth);
    // what the roughing opens stays the stock short of what the finishing opens
    expect(rough.sideGap - rough.predictedOvercut - (fine.sideGap - fine.predictedOvercut)).toBeCloseTo(60e-6, 12);
    expect(fine.conditions.grit.massMedian).toBeLessThan(rough.conditions.grit.massMedian);
  });

  test('the two through-slots differ by their backing alone', () => {
    const backed = load('quartz-slot-backed.job.json').job;
    const open = load('quartz-slot-open.job.json').job;
    expect(backed.passes[0]?.exit).toMatchObject({ backing: true, thickness: 0.4 * 1e-3 });
    expect(open.passes[0]?.exit).toEqual({ ...backed.passes[0]?.exit, backing: false });
    expect(open.depth).toBe(open.stock.thickness);
  });

  // Two eyes of 1.8 and 0.9 mm radius, 4 mm apart, joined by outer tangents: 1.8 + 4 + 0.9 mm long, 3.6 mm wide.
  test('the lever is read from its drawing, moved to its middle, and keeps its post', () => {
    const { cavity, sizes, tool } = load('drawn-lever-pocket.job.json').job;
    if (cavity.kind !== 'path' || tool.kind !== 'path') throw new Error(cavity.kind);
    expect(cavity.loops).toHaveLength(2);
    expect(tool.loops).toHaveLength(2);
    expect(sizes[0]).toBeCloseTo(6.7e-3, 9);
    expect(sizes[1]).toBeCloseTo(3.6e-3, 9);
  });

  test('the two large tools are alike but for seven bores and what is pumped through them', () => {
    const solid = load('glass-20mm-solid.job.json').job;
    const bored = load('glass-20mm-bored.job.json').job;
    expect(bored.tool).toEqual(solid.tool);
    expect(bored.passes[0]?.bores).toHaveLength(7);
    expect(solid.toolArea - bored.toolArea).toBeCloseTo(7 * Math.PI * 0.75e-3 ** 2, 12);
    expect(bored.passes[0]?.supply.delivery).toEqual({ kind: 'throughTool', pressure: 50e3 });
    expect(solid.passes[0]?.supply.delivery).toEqual({ kind: 'flooded' });
  });
});
