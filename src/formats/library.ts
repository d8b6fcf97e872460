import {
  METRES_PER_MICROMETRE,
  PASCAL_ROOT_METRES_PER_MEGAPASCAL_ROOT_METRE,
  PASCALS_PER_GIGAPASCAL,
  PASCALS_PER_MEGAPASCAL,
} from '#src/base/units.ts';
import type { Abrasive, GritLaw, ToolMaterial, WorkMaterial } from '#src/physics/records.ts';
import { nearestName } from './nearest.ts';
import { z } from './zod.ts';

const status = z.enum(['seen', 'memory']);

/** A property with its range, in the unit its name states. */
const property = z
  .strictObject({
    nominal: z.number().nonnegative(),
    min: z.number().nonnegative(),
    max: z.number().nonnegative(),
    status,
    source: z.string().min(1),
  })
  .refine((p) => p.min <= p.nominal && p.nominal <= p.max, 'nominal must lie between min and max');

const record = <P extends z.ZodRawShape>(properties: P) =>
  z.strictObject({
    id: z.string().regex(/^[a-z0-9_]+$/),
    name: z.string().min(1),
    class: z.string().min(1),
    properties: z.strictObject(properties),
  });

const workpieceRecord = record({
  youngsModulusGPa: property,
  poisson: property,
  hardnessGPa: property,
  toughnessMPaSqrtM: property,
  smallCrackToughnessMPaSqrtM: property,
  densityKgM3: property,
  strengthMPa: property,
  edgeToughnessNPerMm: property,
});

const toolRecord = record({
  youngsModulusGPa: property,
  poisson: property,
  hardnessGPa: property,
  densityKgM3: property,
  tensileStrengthMPa: property,
  fatigueStrengthMPa: property,
  strainLimit: property.optional(),
  fractureStrain: property.optional(),
});

const abrasiveRecord = record({
  densityKgM3: property,
  youngsModulusGPa: property,
  poisson: property,
  knoopHardnessGPa: property,
  toughnessMPaSqrtM: property,
  crushStrengthMPa: property,
  crushSizeExponent: property,
  crushWeibull: property,
});

const size = z.number().positive();
const percent = z.number().min(0).max(100);

const gritRecord = z.strictObject({
  grade: z.string().regex(/^[F#]\d+$/),
  method: z.enum(['photosedimentometer', 'sedimentationTube', 'electricalResistance', 'sieve']),
  standard: z.string(),
  family: z.enum(['macro', 'micro', 'precision micro']),
  d50Um: z.strictObject({ nominal: size, min: size.nullable(), max: size.nullable() }),
  largestUm: size.nullable(),
  d3Um: size.nullable(),
  lowFraction: z.number().gt(0).lt(1).nullable(),
  lowUm: size.nullable(),
  sieves: z
    .strictObject({
      sieve1Um: size,
      sieve2Um: size,
      sieve2MaxPercent: percent,
      sieve3Um: size,
      sieve3MinPercent: percent.nullable(),
      sieve4Um: size.nullable(),
      sieve34MinPercent: percent,
      sieve5Um: size,
      sieve5MaxPercent: percent.nullable(),
    })
    .nullable(),
  lognormal: z.strictObject({
    medianUm: size,
    spread: size,
    coarseSpread: size.nullable(),
    fineSpread: size.nullable(),
  }),
  numberMedianUm: size,
  meanVolumeDiameterUm: size,
  sauterDiameterUm: size,
  rosinRammler: z.strictObject({ exponent: size, size632Um: size }).nullable(),
  status,
  source: z.string().min(1),
});

const file = <K extends string, I extends z.ZodType>(kind: K, item: I) =>
  z.strictObject({ spallwright: z.literal(1), kind: z.literal(kind), note: z.string(), items: z.array(item).min(1) });

const schemas = {
  materials: file('workpiece materials', workpieceRecord),
  tools: file('tool materials', toolRecord),
  abrasives: file('abrasives', abrasiveRecord),
  grits: file('grits', gritRecord),
};

/** One property of a library record: nominal, min and max in the unit of its name, where it is from. */
export type Property = z.infer<typeof property>;
export type WorkpieceRecord = z.infer<typeof workpieceRecord>;
export type ToolRecord = z.infer<typeof toolRecord>;
export type AbrasiveRecord = z.infer<typeof abrasiveRecord>;
export type GritRecord = z.infer<typeof gritRecord>;
export type GritMethod = GritRecord['method'];

/** Everything the library knows, as written in its files (units in the names). */
export interface Library {
  readonly materials: readonly WorkpieceRecord[];
  readonly tools: readonly ToolRecord[];
  readonly abrasives: readonly AbrasiveRecord[];
  readonly grits: readonly GritRecord[];
}

/** The four library files as read from JSON, unchecked. */
export type LibraryFiles = Record<keyof Library, unknown>;

/**
 * Checks the four library files and returns their records.
 * @throws ZodError naming every field that is missing, unknown, of the wrong type or out of order
 * @throws RangeError when an id, or a grade with its method, is there twice
 */
export function loadLibrary(files: LibraryFiles): Library {
  const library: Library = {
    materials: schemas.materials.parse(files.materials).items,
    tools: schemas.tools.parse(files.tools).items,
    abrasives: schemas.abrasives.parse(files.abrasives).items,
    grits: schemas.grits.parse(files.grits).items,
  };
  const once = (names: string[]) => {
    const twice = names.find((name, index) => names.indexOf(name) !== index);
    if (twice !== undefined) throw new RangeError(`the library holds "${twice}" twice`);
  };
  once(library.materials.map((item) => item.id));
  once(library.tools.map((item) => item.id));
  once(library.abrasives.map((item) => item.id));
  once(library.grits.map((item) => `${item.grade} ${item.method}`));
  return library;
}

/** A record found, or the nearest name there is (none when nothing is like it). */
export type Found<T> = { readonly found: T } | { readonly found?: undefined; readonly nearest?: string };

/** The record of this id in one of the library's lists; ids and names both count towards the nearest one. */
export function findMaterial<T extends { readonly id: string; readonly name: string }>(
  records: readonly T[],
  id: string,
): Found<T> {
  const found = records.find((record) => record.id === id);
  if (found) return { found };
  const names = new Map<string, string>();
  for (const record of records) names.set(record.id, record.id);
  for (const record of records) names.set(record.name, record.id);
  const nearest = nearestName(id, names.keys());
  return nearest === undefined ? {} : { nearest: names.get(nearest) as string };
}

/** The methods a bare grade stands for, in order: the F tables by light and by sieve, the # table by resistance. */
const BARE_METHODS: readonly GritMethod[] = ['photosedimentometer', 'sieve', 'electricalResistance'];

/**
 * The record of a grade. Without a method an F grade is the photosedimentometer table (F230 and finer) or the sieve table
 * (F220 and coarser), and a # grade the electrical-resistance table. Case and spaces do not matter.
 */
export function findGrade(library: Library, grade: string, method?: GritMethod): Found<GritRecord> {
  const wanted = grade.replace(/\s/g, '').toUpperCase();
  const methods = method === undefined ? BARE_METHODS : [method];
  const candidates = library.grits.filter((record) => methods.includes(record.method));
  const found = candidates.find((record) => record.grade === wanted);
  if (found) return { found };
  const nearest = nearestGrade(wanted, candidates);
  return nearest === undefined ? {} : { nearest };
}

/** Grades are numbers: the nearest is the one of the same letter nearest in number, else nearest as a word. */
function nearestGrade(wanted: string, candidates: readonly GritRecord[]): string | undefined {
  const parts = /^([A-Z#]?)(\d{1,6})$/.exec(wanted);
  if (!parts)
    return nearestName(
      wanted,
      candidates.map((record) => record.grade),
    );
  const letter = parts[1] === '#' ? '#' : 'F';
  const number = Math.log(Math.max(1, Number(parts[2])));
  let best: string | undefined;
  let least = Infinity;
  for (const { grade } of candidates) {
    const away = Math.abs(Math.log(Number(grade.slice(1))) - number) + (grade.startsWith(letter) ? 0 : 100);
    if (away < least) {
      best = grade;
      least = away;
    }
  }
  return best;
}

/** A workpiece record's nominal properties in SI. */
export function workMaterialOf({ properties: p }: WorkpieceRecord): WorkMaterial {
  return {
    youngsModulus: p.youngsModulusGPa.nominal * PASCALS_PER_GIGAPASCAL,
    poisson: p.poisson.nominal,
    hardness: p.hardnessGPa.nominal * PASCALS_PER_GIGAPASCAL,
    toughness: p.toughnessMPaSqrtM.nominal * PASCAL_ROOT_METRES_PER_MEGAPASCAL_ROOT_METRE,
    smallCrackToughness: p.smallCrackToughnessMPaSqrtM.nominal * PASCAL_ROOT_METRES_PER_MEGAPASCAL_ROOT_METRE,
    density: p.densityKgM3.nominal,
  };
}

/** A tool record's nominal properties in SI. */
export function toolMaterialOf(record: ToolRecord): ToolMaterial {
  const p = record.properties;
  return {
    youngsModulus: p.youngsModulusGPa.nominal * PASCALS_PER_GIGAPASCAL,
    poisson: p.poisson.nominal,
    hardness: p.hardnessGPa.nominal * PASCALS_PER_GIGAPASCAL,
    density: p.densityKgM3.nominal,
    fatigueStrength: p.fatigueStrengthMPa.nominal * PASCALS_PER_MEGAPASCAL,
    metal: record.class === 'metal',
    ...(p.strainLimit ? { strainLimit: p.strainLimit.nominal } : {}),
    ...(p.fractureStrain ? { fractureStrain: p.fractureStrain.nominal } : {}),
  };
}

/** An abrasive record's nominal properties in SI. */
export function abrasiveOf({ properties: p }: AbrasiveRecord): Abrasive {
  return {
    density: p.densityKgM3.nominal,
    hardness: p.knoopHardnessGPa.nominal * PASCALS_PER_GIGAPASCAL,
    crushStrength: p.crushStrengthMPa.nominal * PASCALS_PER_MEGAPASCAL,
    crushSizeExponent: p.crushSizeExponent.nominal,
    crushWeibull: p.crushWeibull.nominal,
  };
}

/** A size law's three numbers (m). */
export type GritSizes = Pick<GritLaw, 'massMedian' | 'spread' | 'largest'>;

/** Largest grain over d3 where a standard gives no largest grain. Assumed. */
export const LARGEST_OVER_D3 = 1.3;

/**
 * The size law of a grade in SI: the widest log-normal that conforms, cut off at the standard's largest grain, or at
 * 1.3 d3 where it has none (a sieved grade: what passes sieve 1).
 */
export function gritSizesOf(record: GritRecord): GritSizes {
  const largestUm = record.largestUm ?? LARGEST_OVER_D3 * (record.d3Um as number);
  return {
    massMedian: record.lognormal.medianUm * METRES_PER_MICROMETRE,
    spread: record.lognormal.spread,
    largest: largestUm * METRES_PER_MICROMETRE,
  };
}
