import { exp } from '#src/base/math.ts';
import {
  METRES_PER_MICROMETRE,
  PASCAL_ROOT_METRES_PER_MEGAPASCAL_ROOT_METRE,
  PASCALS_PER_GIGAPASCAL,
} from '#src/base/units.ts';
import type { Abrasive, ToolMaterial, WorkMaterial } from '#src/physics/records.ts';
import {
  abrasiveOf,
  findGrade,
  findMaterial,
  type GritSizes,
  gritSizesOf,
  LARGEST_OVER_D3,
  type Library,
  toolMaterialOf,
} from '../library.ts';
import { type Desk, orDefault, type PartialJob, refuse } from './desk.ts';

/** Workpiece properties by file name: name in SI records, ratio to SI. */
export const WORK_PROPERTIES = [
  ['youngsModulusGPa', 'youngsModulus', PASCALS_PER_GIGAPASCAL],
  ['poisson', 'poisson', 1],
  ['hardnessGPa', 'hardness', PASCALS_PER_GIGAPASCAL],
  ['toughnessMPaSqrtM', 'toughness', PASCAL_ROOT_METRES_PER_MEGAPASCAL_ROOT_METRE],
  ['smallCrackToughnessMPaSqrtM', 'smallCrackToughness', PASCAL_ROOT_METRES_PER_MEGAPASCAL_ROOT_METRE],
  ['densityKgM3', 'density', 1],
] as const;

type Workpiece = NonNullable<PartialJob['workpiece']>;
type WorkProperty = (typeof WORK_PROPERTIES)[number][0];

/** The nominal value of an own property as the job gives it, in the unit of its name. */
export function ownProperty(workpiece: Workpiece, name: WorkProperty): number | undefined {
  const given = workpiece[name];
  return typeof given === 'object' ? given.nominal : given;
}

/** The workpiece material: from the library, changed and added to by the job's own properties. */
export function workOf(desk: Desk, workpiece: Workpiece, library: Library) {
  const id = workpiece.material;
  const answer = id === undefined ? undefined : findMaterial(library.materials, id);
  const record = answer?.found;
  if (id !== undefined && answer?.found === undefined) {
    unknownName(
      desk,
      { path: 'workpiece.material', value: id, nearest: answer?.nearest, what: 'workpiece material' },
      library.materials,
    );
    return {};
  }
  const work: Record<string, number> = {};
  for (const [name, own, ratio] of WORK_PROPERTIES) {
    const value = ownProperty(workpiece, name) ?? record?.properties[name].nominal;
    if (value !== undefined) work[own] = value * ratio;
    else {
      const message = 'Missing. Name a library material in workpiece.material, or give every property of your own.';
      refuse(desk, `workpiece.${name}`, undefined, 'a number, or nominal with min and max', message);
    }
  }
  const whole = WORK_PROPERTIES.every(([, own]) => work[own] !== undefined);
  return { work: whole ? (work as unknown as WorkMaterial) : undefined, record };
}

interface Miss {
  readonly path: string;
  readonly value: string;
  readonly nearest: string | undefined;
  readonly what: string;
}

function unknownName(desk: Desk, miss: Miss, known: readonly { readonly id: string }[]): undefined {
  const help = miss.nearest === undefined ? 'Enter one of the allowed names.' : `Did you mean ${miss.nearest}?`;
  const allowed = known.map((record) => record.id).join(', ');
  return refuse(desk, miss.path, miss.value, allowed, `The library holds no ${miss.what} of this name. ${help}`);
}

/** The tool's material. */
export function toolMaterialFor(desk: Desk, job: PartialJob, library: Library): ToolMaterial | undefined {
  const id = orDefault(desk, 'tool.material', job.tool?.material);
  const answer = findMaterial(library.tools, id);
  if (answer.found) return toolMaterialOf(answer.found);
  return unknownName(
    desk,
    { path: 'tool.material', value: id, nearest: answer.nearest, what: 'tool material' },
    library.tools,
  );
}

/** The abrasive. */
export function abrasiveFor(desk: Desk, job: PartialJob, library: Library): Abrasive | undefined {
  const id = job.slurry?.abrasive;
  if (id === undefined) return undefined;
  const answer = findMaterial(library.abrasives, id);
  if (answer.found) return abrasiveOf(answer.found);
  return unknownName(
    desk,
    { path: 'slurry.abrasive', value: id, nearest: answer.nearest, what: 'abrasive' },
    library.abrasives,
  );
}

type Slurry = NonNullable<PartialJob['slurry']>;

/** The size law's numbers: of the grade, or the job's own. */
export function gritFor(desk: Desk, slurry: Slurry, library: Library): GritSizes | undefined {
  const { grit, gritMethod, d50Um, spread, largestUm } = slurry;
  if (grit === undefined && d50Um === undefined) {
    const message = 'The grit is missing. Give a grade in slurry.grit, or slurry.d50Um with slurry.spread.';
    return refuse(desk, 'slurry.grit', undefined, 'a grade, F4 to F2000 or #240 to #8000', message);
  }
  if (grit === undefined) return ownGrit(desk, slurry);
  for (const [name, value] of Object.entries({ d50Um, spread, largestUm })) {
    if (value === undefined) continue;
    refuse(
      desk,
      `slurry.${name}`,
      value,
      'nothing beside a grade',
      `The grade ${grit} says this already. Keep the grade, or d50Um and spread.`,
    );
  }
  const answer = findGrade(library, grit, gritMethod);
  if (answer.found) return gritSizesOf(answer.found);
  const table = gritMethod === undefined ? '' : ` in the table of ${gritMethod}`;
  const coated = /^P\d/i.test(grit) ? ' P grades are for coated abrasives and are graded otherwise.' : '';
  const help = answer.nearest === undefined ? 'Enter a grade of the allowed ones.' : `Did you mean ${answer.nearest}?`;
  const allowed = 'F4 to F2000 (FEPA, ISO 8486), #240 to #8000 (JIS R 6001)';
  return refuse(
    desk,
    'slurry.grit',
    grit,
    allowed,
    `The library holds no grade of this name${table}.${coated} ${help}`,
  );
}

/** Standard normal quantile of the 3 % by mass that exceed d3. */
export const Z_D3 = 1.8808;

function ownGrit(desk: Desk, slurry: Slurry): GritSizes | undefined {
  const { gritMethod, d50Um = 0, spread, largestUm } = slurry;
  if (gritMethod !== undefined) {
    refuse(desk, 'slurry.gritMethod', gritMethod, 'nothing beside d50Um', 'A method belongs to a grade. Take it out.');
  }
  if (spread === undefined) {
    return refuse(
      desk,
      'slurry.spread',
      undefined,
      '0.02 to 1.5',
      'Missing: a grit of your own needs d50Um and spread.',
    );
  }
  const massMedian = d50Um * METRES_PER_MICROMETRE;
  if (largestUm === undefined) {
    desk.defaultsUsed.push('slurry.largestUm');
    return { massMedian, spread, largest: LARGEST_OVER_D3 * massMedian * exp(Z_D3 * spread) };
  }
  if (largestUm <= d50Um) {
    return refuse(
      desk,
      'slurry.largestUm',
      largestUm,
      `more than ${d50Um} um`,
      'The largest grain is not above the median.',
    );
  }
  return { massMedian, spread, largest: largestUm * METRES_PER_MICROMETRE };
}
