import { judgeDrawing } from '#src/formats/drawing.ts';
import type { ResolvedJob } from '#src/formats/job/resolve.ts';
import type { Problem } from '#src/formats/problems.ts';
import { type FigureInfluences, type Result, type ResultWarning, roundedResult } from '#src/formats/result.ts';
import { type Figures, plainFigure } from '#src/planning/figures.ts';
import type { JobBands } from '#src/planning/job-bands.ts';
import type { Verdict } from '#src/planning/verdict.ts';
import { validationSummary } from './validation/summary.ts';
import { version } from './version.ts';

/** Properties told for each figure. */
const INPUTS_TOLD = 3;

/** What a result is put together from. */
export interface ResultParts {
  readonly job: ResolvedJob;
  readonly figures: Figures;
  /** Figures of each pass, in order. */
  readonly passes: readonly Figures[];
  readonly bands: JobBands;
  readonly verdict: Verdict;
  readonly help: string | null;
  readonly warnings: readonly ResultWarning[];
  readonly voxelUm: number | null;
  readonly magnification: number;
}

/** The verdict of a job's drawing on figures. */
export function verdictOf(job: ResolvedJob, figures: Figures): Verdict {
  return judgeDrawing(job.file, figures, job.cavity);
}

/** The problems of a job that were warnings, and more that came up. */
export function resultWarnings(problems: readonly Problem[], more: readonly ResultWarning[]): ResultWarning[] {
  return [...problems.map(({ path, message }) => ({ path, message })), ...more];
}

function influencesOf({ sensitivities }: JobBands): FigureInfluences[] {
  return sensitivities.map(({ figure, influences }) => ({
    figure,
    inputs: influences.slice(0, INPUTS_TOLD).map(({ input, coefficient, firstOrder }) => ({
      name: input,
      coefficient,
      firstOrder,
    })),
  }));
}

/** What is said of the bands of a pass among several. */
const WHOLE_JOB_ONLY = 'no band: bands are worked out for the whole job';

/** Figures of one pass among several: values alone. */
export function withoutBands(figures: Figures): Figures {
  const entries = Object.entries(figures).map(([name, { value, covers }]) => [
    name,
    plainFigure(value, value === null ? covers : WHOLE_JOB_ONLY),
  ]);
  return Object.fromEntries(entries) as Figures;
}

/** A result, rounded as its file has it. */
export function resultOf(parts: ResultParts): Result {
  const { job, figures, passes, bands, verdict, help, warnings, voxelUm, magnification } = parts;
  const titled = passes.map((own, index) => ({ title: job.passes[index]?.title || `pass ${index + 1}`, figures: own }));
  return roundedResult({
    spallwright: 1,
    job: job.file,
    figures,
    passes: titled,
    verdict: { ...verdict, help },
    influences: influencesOf(bands),
    modelError: validationSummary.sentence,
    warnings,
    version,
    seed: job.cut.seed,
    voxelUm,
    magnification,
  });
}
