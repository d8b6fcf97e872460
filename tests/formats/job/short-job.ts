import { expect } from 'vitest';
import { type ReadOptions, readJob } from '#src/formats/job/read.ts';
import { type ResolvedJob, resolveJob } from '#src/formats/job/resolve.ts';
import type { Problem } from '#src/formats/problems.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';

/** A job of few lines: everything else takes its default. */
export const base = () => ({
  spallwright: 1,
  workpiece: { material: 'borosilicate_33', thicknessMm: 6 } as Record<string, unknown>,
  cavity: {
    outline: { kind: 'circle', diameterMm: 3 } as unknown,
    depthMm: 1 as unknown,
    limits: {} as Record<string, unknown>,
  },
  tool: {} as Record<string, unknown>,
  machine: { amplitudeUm: 18 } as Record<string, unknown>,
  slurry: { abrasive: 'b4c', grit: 'F320' } as Record<string, unknown>,
  cut: {} as Record<string, unknown>,
});
export type Base = ReturnType<typeof base>;

/** Problems of the short job after a change to it. */
export function problemsWith(spoil: (job: Base) => void, options: ReadOptions = {}): readonly Problem[] {
  const job = base();
  spoil(job);
  const read = readJob(JSON.stringify(job), options);
  return read.problems ?? read.warnings;
}

/** The short job after a change to it, resolved; fails when it is refused. */
export function resolvedWith(change: (job: Base) => void, options: ReadOptions = {}): ResolvedJob {
  const job = base();
  change(job);
  const read = readJob(JSON.stringify(job), options);
  if (!read.job) throw new Error(JSON.stringify(read.problems, null, 1));
  return resolveJob(read.job, stockLibrary, { ...options, checked: read.warnings });
}

/** The one problem at a path; fails when it is not there. */
export function only(problems: readonly Problem[], path: string): Problem {
  const found = problems.filter((problem) => problem.path === path);
  expect(found, `problems: ${problems.map((problem) => problem.path).join(', ')}`).toHaveLength(1);
  return found[0] as Problem;
}
