import { METRES_PER_MICROMETRE, MICROMETRES_PER_METRE, PASCALS_PER_MEGAPASCAL } from '#src/base/units.ts';
import type { Attachments } from '#src/formats/job/attachments.ts';
import { type ResolvedJob, type ResolvedPass, resolveJob } from '#src/formats/job/resolve.ts';
import type { JobFile } from '#src/formats/job/schema.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';
import { largestTipAmplitude, WARNING_SHARE } from '#src/physics/fatigue.ts';
import type { FigureValues } from '#src/planning/figures.ts';
import type { Lever } from '#src/planning/help.ts';
import type { Estimator } from './estimates.ts';
import { predictOvercut } from './overcut.ts';

/** Face pressures a lever moves the load between (Pa): what shops use, 0.05 to 0.5 MPa, common practice, from memory. */
const PRESSURES = [0.05 * PASCALS_PER_MEGAPASCAL, 0.5 * PASCALS_PER_MEGAPASCAL] as const;
/** Share of the stall load that is not passed, so that a change of grit lot does not stall the cut. */
const STALL_SHARE = 0.8;
/** Amplitudes machines give (um, zero-to-peak) and concentrations slurries flow at (vol%): common practice, from memory. */
const AMPLITUDES_UM = [7.5, 50] as const;
const CONCENTRATIONS = [20, 40] as const;
/** Grades offered on either side of the present one. */
const GRADES_ASIDE = 5;

type Section = 'slurry' | 'machine';

/** A job file with one setting of the last pass changed, and what it takes the place of taken out. */
function changed(file: JobFile, section: Section, set: Readonly<Record<string, unknown>>, gone: readonly string[]) {
  const put = (own: object | undefined) => {
    const left = Object.fromEntries(Object.entries(own ?? {}).filter(([name]) => !gone.includes(name)));
    return { ...left, ...set };
  };
  const passes = file.passes;
  if (!passes || passes.length === 0) return { ...file, [section]: put(file[section]) } as JobFile;
  const last = passes.length - 1;
  const listed = passes.map((pass, index) => (index === last ? { ...pass, [section]: put(pass[section]) } : pass));
  const bare = Object.fromEntries(Object.entries(file[section] ?? {}).filter(([name]) => !gone.includes(name)));
  return { ...file, [section]: bare, passes: listed } as JobFile;
}

/** The grades of the same table around one, coarse to fine; none for a grit of the job's own. */
function gradesAround(file: JobFile): string[] {
  const slurry = { ...file.slurry, ...file.passes?.at(-1)?.slurry };
  const { grit, gritMethod } = slurry;
  if (grit === undefined) return [];
  const series = stockLibrary.grits.filter(
    (record) =>
      record.grade.startsWith(grit.startsWith('#') ? '#' : 'F') &&
      (gritMethod === undefined || record.method === gritMethod),
  );
  const sizes = new Map(series.map((record) => [record.grade, record.d50Um.nominal]));
  const names = [...sizes.keys()].sort((a, b) => (sizes.get(b) ?? 0) - (sizes.get(a) ?? 0));
  const at = names.indexOf(grit);
  return at < 0 ? [] : names.slice(Math.max(0, at - GRADES_ASIDE), at + GRADES_ASIDE + 1);
}

/**
 * What an engineer can set on the last pass: grade, amplitude, load and concentration, each tried by resolving the job anew,
 * so that a tool that follows from the grit follows.
 * @param stallPressure face pressure at which the last pass stalls (Pa), which the load keeps away from; null where none is known
 */
export function leversOf(
  job: ResolvedJob,
  estimator: Estimator,
  { attachments, stallPressure }: { readonly attachments: Attachments; readonly stallPressure: number | null },
): Lever[] {
  const pass = job.passes.at(-1) as ResolvedPass;
  const { file } = job;
  const options = { predictOvercut: predictOvercut(), attachments };
  const evaluate = (file: JobFile): FigureValues =>
    estimator.estimate(resolveJob(file, stockLibrary, options), undefined, 'member').values;
  return [
    ...gradeLever(file, evaluate),
    amplitudeLever(file, pass, evaluate),
    ...loadLever(file, { pass, stallPressure }, evaluate),
    concentrationLever(file, pass, evaluate),
  ];
}

type Evaluate = (file: JobFile) => FigureValues;

function gradeLever(file: JobFile, evaluate: Evaluate): Lever[] {
  const grades = gradesAround(file);
  const now = grades.indexOf({ ...file.slurry, ...file.passes?.at(-1)?.slurry }.grit ?? '');
  if (now < 0 || grades.length < 2) return [];
  return [
    {
      name: 'the grade',
      unit: '',
      now,
      allowed: [0, grades.length - 1],
      choices: grades.map((label, value) => ({ value, label })),
      evaluate: (value) => evaluate(changed(file, 'slurry', { grit: grades[value] }, ['d50Um', 'spread', 'largestUm'])),
    },
  ];
}

function amplitudeLever(file: JobFile, { conditions }: ResolvedPass, evaluate: Evaluate): Lever {
  const sound = WARNING_SHARE * largestTipAmplitude(conditions.tool, conditions.frequency) * MICROMETRES_PER_METRE;
  const now = conditions.amplitude / METRES_PER_MICROMETRE;
  const most = Math.min(AMPLITUDES_UM[1], Math.floor(sound));
  return {
    name: 'the amplitude',
    unit: 'um',
    now,
    allowed: [Math.min(now, AMPLITUDES_UM[0]), Math.max(now, most)],
    step: 0.5,
    evaluate: (amplitudeUm) => evaluate(changed(file, 'machine', { amplitudeUm }, ['transducerAmplitudeUm', 'horn'])),
  };
}

function loadLever(
  file: JobFile,
  { pass, stallPressure }: { readonly pass: ResolvedPass; readonly stallPressure: number | null },
  evaluate: Evaluate,
): Lever[] {
  if (pass.feed !== undefined) return [];
  const now = pass.staticLoad;
  const highest = Math.min(PRESSURES[1], STALL_SHARE * (stallPressure ?? Number.POSITIVE_INFINITY));
  return [
    {
      name: 'the load',
      unit: 'N',
      now,
      allowed: [Math.min(now, PRESSURES[0] * pass.toolArea), Math.max(now, highest * pass.toolArea)],
      evaluate: (staticLoadN) => evaluate(changed(file, 'machine', { staticLoadN }, ['feedMmPerMin'])),
    },
  ];
}

function concentrationLever(file: JobFile, { conditions }: ResolvedPass, evaluate: Evaluate): Lever {
  const now = 100 * conditions.concentration;
  return {
    name: 'the concentration',
    unit: 'vol%',
    now,
    allowed: [Math.min(now, CONCENTRATIONS[0]), Math.max(now, CONCENTRATIONS[1])],
    step: 1,
    evaluate: (value) => evaluate(changed(file, 'slurry', { concentrationVolPercent: value }, [])),
  };
}
