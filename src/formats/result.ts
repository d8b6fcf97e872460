import { FIGURE_NAMES, type Figure, type FigureName, type Figures } from '#src/planning/figures.ts';
import type { Verdict } from '#src/planning/verdict.ts';
import { type IssueContext, problemsOf } from './issues.ts';
import { type JobFile, jobSchema } from './job/schema.ts';
import { roundSignificant } from './numbers.ts';
import { type Problem, readText } from './problems.ts';
import { z } from './zod.ts';

const number = z.number();
const values = z.union([number, z.array(number).min(1)]).nullable();

const figure = z.strictObject({ value: values, low: values, high: values, covers: z.string().min(1) });

const figures = z.strictObject(
  Object.fromEntries(FIGURE_NAMES.map((name) => [name, figure])) as Record<FigureName, typeof figure>,
);

const bound = z.union([number, z.array(number.nullable()).min(1)]).nullable();

const verdict = z.strictObject({
  overall: z.enum(['meets', 'at risk', 'misses', 'not judged']),
  limits: z.array(
    z.strictObject({
      id: z.string().min(1),
      limit: z.strictObject({ lower: bound, upper: bound }),
      state: z.enum(['meets', 'at risk', 'misses']),
      margin: number.nullable(),
    }),
  ),
  help: z.string().min(1).nullable(),
});

const influence = z.strictObject({
  figure: z.string().min(1),
  inputs: z.array(z.strictObject({ name: z.string().min(1), coefficient: number, firstOrder: number })),
});

const warning = z.strictObject({ path: z.string(), message: z.string().min(1) });

/** Schema version of results this program writes and reads. */
export const RESULT_VERSION = 1;

/** The result file. Units are in the names; `low` and `high` are null where there is no band. */
export const resultSchema = z.strictObject({
  spallwright: z.literal(RESULT_VERSION),
  job: jobSchema,
  figures,
  passes: z.array(z.strictObject({ title: z.string().min(1), figures })).min(1),
  verdict,
  influences: z.array(influence),
  modelError: z.string().min(1),
  warnings: z.array(warning),
  version: z.string().min(1),
  seed: z.int().min(0).max(4294967295),
  voxelUm: z.number().positive().nullable(),
  magnification: z.number().min(1),
});

/** Something the reader of a result should know; the path is of the job's field, or empty. */
export interface ResultWarning {
  readonly path: string;
  readonly message: string;
}

/** The properties that move one figure most. */
export interface FigureInfluences {
  readonly figure: string;
  readonly inputs: readonly {
    readonly name: string;
    /** Rank regression coefficient, -1 to 1, and the share of the figure's variance this property alone carries. */
    readonly coefficient: number;
    readonly firstOrder: number;
  }[];
}

/** What a cut or an estimate comes to. */
export interface Result {
  readonly spallwright: typeof RESULT_VERSION;
  /** The job as it was given. */
  readonly job: JobFile;
  readonly figures: Figures;
  readonly passes: readonly { readonly title: string; readonly figures: Figures }[];
  /** With what limits the job and what would help, in a sentence; null where there is nothing to say. */
  readonly verdict: Verdict & { readonly help: string | null };
  /** What moves each figure that has a band, strongest first. */
  readonly influences: readonly FigureInfluences[];
  /** How far the model was from published measurements, in a sentence: the bands do not cover it. */
  readonly modelError: string;
  readonly warnings: readonly ResultWarning[];
  /** Version of the program. */
  readonly version: string;
  readonly seed: number;
  /** Null where nothing was cut. */
  readonly voxelUm: number | null;
  /** Lateral magnification of the floor; 1 for none. */
  readonly magnification: number;
}

/** Significant digits of a result's figures and margins. */
const DIGITS = 6;
const INFLUENCE_DIGITS = 3;

function rounded(value: Figure['value']): Figure['value'] {
  if (value === null) return null;
  return typeof value === 'number'
    ? roundSignificant(value, DIGITS)
    : value.map((one) => roundSignificant(one, DIGITS));
}

function roundedFigures(all: Figures): Figures {
  const entries = FIGURE_NAMES.map((name): [FigureName, Figure] => {
    const { value, low, high, covers } = all[name];
    return [name, { value: rounded(value), low: rounded(low), high: rounded(high), covers }];
  });
  return Object.fromEntries(entries) as Figures;
}

/** A result with its figures and margins rounded to six significant digits, as the file has them. */
export function roundedResult(result: Result): Result {
  const limits = result.verdict.limits.map((limit) => ({
    ...limit,
    margin: limit.margin === null ? null : roundSignificant(limit.margin, DIGITS),
  }));
  return {
    ...result,
    figures: roundedFigures(result.figures),
    passes: result.passes.map((pass) => ({ title: pass.title, figures: roundedFigures(pass.figures) })),
    verdict: { ...result.verdict, limits },
    influences: result.influences.map(({ figure, inputs }) => ({
      figure,
      inputs: inputs.map(({ name, coefficient, firstOrder }) => ({
        name,
        coefficient: roundSignificant(coefficient, INFLUENCE_DIGITS),
        firstOrder: roundSignificant(firstOrder, INFLUENCE_DIGITS),
      })),
    })),
    voxelUm: result.voxelUm === null ? null : roundSignificant(result.voxelUm, DIGITS),
    magnification: roundSignificant(result.magnification, DIGITS),
  };
}

/**
 * A result as its file's text: rounded, two spaces of indent, a line break at the end; the same result gives the same
 * bytes. `readResult` gives `roundedResult` back.
 * @throws ZodError when a figure is not finite or a field is not what the schema asks for
 */
export function writeResult(result: Result): string {
  return `${JSON.stringify(resultSchema.parse(roundedResult(result)), null, 2)}\n`;
}

/** A result, or everything wrong with its file. */
export type ReadResult =
  | { readonly result: Result; readonly problems?: undefined }
  | { readonly result?: undefined; readonly problems: readonly Problem[] };

/** Reads a result file. All problems in one go; never throws. */
export function readResult(text: string): ReadResult {
  const read = readText(text, 'a result file');
  if (!read.value) return { problems: read.problems };
  const value = read.value.json;
  const parsed = resultSchema.safeParse(value);
  const context: IssueContext = { schema: resultSchema, value, places: read.places };
  const problems = [...read.problems, ...(parsed.success ? [] : problemsOf(parsed.error.issues, context))];
  return parsed.success && problems.length === 0 ? { result: parsed.data } : { problems };
}
