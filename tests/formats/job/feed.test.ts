import { describe, expect, test } from 'vitest';
import { makeOutline } from '#src/base/outline.ts';
import { resolveJob } from '#src/formats/job/resolve.ts';
import type { JobFile } from '#src/formats/job/schema.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';
import { estimate } from '#src/physics/estimate.ts';
import { only, problemsWith } from './short-job.ts';

const fed = (feedMmPerMin: number): JobFile => ({
  spallwright: 1,
  workpiece: { material: 'soda_lime' },
  cavity: { outline: { kind: 'circle', diameterMm: 3 }, depthMm: 1 },
  machine: { amplitudeUm: 18, feedMmPerMin },
  slurry: { abrasive: 'b4c', grit: 'F320' },
});

describe('a feed-controlled machine', () => {
  test('is expected to take the load at which fresh grit sinks at its feed', () => {
    const job = resolveJob(fed(1.5), stockLibrary);
    expect(job.feed).toBeCloseTo(1.5e-3 / 60, 12);
    const cavity = makeOutline(job.cavity);
    const { rate } = estimate({
      conditions: job.conditions,
      pressure: job.pressure,
      faceArea: job.toolArea,
      outlineArea: cavity.area,
      perimeter: cavity.perimeter,
      depth: job.depth,
      runout: job.runout,
    });
    // the load is solved for to 1e-4 of itself, and the rate is about linear in it
    expect(Math.abs(rate / (1.5e-3 / 60) - 1)).toBeLessThan(1e-3);
    expect(job.notes.some((note) => note.startsWith('The feed is expected to take a load of '))).toBe(true);
  });

  test('a faster feed takes more load', () => {
    expect(resolveJob(fed(3), stockLibrary).staticLoad).toBeGreaterThan(resolveJob(fed(1.5), stockLibrary).staticLoad);
  });

  test('a load and a feed at once are refused, and so is a feed no grit can cut', () => {
    const both = only(
      problemsWith((job) => Object.assign(job.machine, { feedMmPerMin: 1, staticLoadN: 1 })),
      'machine.feedMmPerMin',
    );
    expect(both).toMatchObject({ severity: 'refuse', value: 1 });
    expect(both.message).toMatch(/Take one of the two out/);
    const slow = only(
      problemsWith((job) => {
        Object.assign(job.machine, { feedMmPerMin: 100, amplitudeUm: 0.2 });
      }),
      'machine.feedMmPerMin',
    );
    expect(slow).toMatchObject({ severity: 'refuse', value: 100 });
  });
});
