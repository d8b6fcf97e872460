import { type ContactLaw, contact, contactLaw, crushLoad, emptyContact, type GritContact } from './contact.ts';
import {
  aboveThreshold,
  type CraterLaw,
  chipDepth,
  chipProbability,
  craterLaw,
  fullRadius,
  meanChipRadius,
  meanChipVolume,
  meanRootOnset,
} from './crater.ts';
import { type SizeClasses, sizeClasses } from './grit-law.ts';
import type { Conditions } from './records.ts';
import { debrisShare, hitYield } from './yields.ts';

/**
 * What one grit per size class does, by gap, and its sum over a population of grits. Rows are worked out when first
 * asked for, from the largest grain down, so a load that only the largest grains carry costs a few rows. A population
 * other than fresh grit (crushed, aged) sums the same rows.
 */

/** Terms kept per class and gap. Removal terms carry chip yield, plastic share, lift-off and blunting; no overlap. */
export const TERM = {
  /** N s */
  impulse: 0,
  /** N */
  load: 1,
  /** Chips that leave. */
  chips: 2,
  /** m3 */
  chipVolume: 3,
  /** Depth and radius summed over the chips that leave (m). */
  chipDepth: 4,
  chipRadius: 5,
  /** Dent volume that leaves (m3), and the same times the depth of the dent (m4). */
  dent: 6,
  dentDepth: 7,
  /** m3 */
  toolDent: 8,
  /** Load before the cap over the crushing load. */
  crushRatio: 9,
} as const;
export type Term = (typeof TERM)[keyof typeof TERM];
const TERMS = 10;

/** Gaps from the largest grain (row 0) down to none (row `count`). */
export interface ContactRows {
  readonly conditions: Conditions;
  readonly classes: SizeClasses;
  readonly crater: CraterLaw;
  /** Gap between rows (m). */
  readonly step: number;
  readonly count: number;
  /** Filled on demand: TERMS values for each engaged class, class by class. */
  readonly rows: (Float64Array | undefined)[];
  readonly contact: ContactLaw;
  readonly yields: Float64Array;
  /** `debrisShare` of the work. */
  readonly debris: number;
  /** Mean of sqrt(1 - (P0/P)^(1/4)) at ln(P / P0m) = (i / 8 - 6) sigma. */
  readonly rootOnset: Float64Array;
  readonly crushLoads: Float64Array;
}

/** Rows for these conditions, none of them worked out yet. */
export function contactRows(conditions: Conditions, count = 256): ContactRows {
  const classes = sizeClasses(conditions.grit);
  const law = contactLaw(conditions);
  return {
    conditions,
    classes,
    crater: craterLaw(conditions.work, conditions.constants),
    step: conditions.grit.largest / count,
    count,
    rows: new Array<Float64Array | undefined>(count + 1).fill(undefined),
    contact: law,
    rootOnset: Float64Array.from({ length: 8 * 18 + 1 }, (_, i) =>
      meanRootOnset(conditions.constants.thresholdScatter, i / 8 - 6),
    ),
    yields: classes.diameter.map((d) => hitYield(conditions, d)),
    debris: debrisShare(conditions),
    crushLoads: classes.diameter.map((d) => crushLoad(law, d)),
  };
}

/** The row at gap (count - k) step: TERMS values for each class longer than the gap, largest first. */
export function contactRow(rows: ContactRows, k: number): Float64Array {
  const known = rows.rows[k];
  if (known) return known;
  const gap = (rows.count - k) * rows.step;
  const { diameter } = rows.classes;
  let engaged = 0;
  while (engaged < diameter.length && (diameter[engaged] as number) > gap) engaged++;
  const row = new Float64Array(engaged * TERMS);
  const hit = emptyContact();
  for (let i = 0; i < engaged; i++) {
    const d = diameter[i] as number;
    contact(rows.contact, d, d - gap, hit);
    fillTerms(row, i, hit, rows);
  }
  rows.rows[k] = row;
  return row;
}

function fillTerms(row: Float64Array, i: number, hit: GritContact, rows: ContactRows): void {
  const { crater, conditions } = rows;
  const { chipYield, lipRadius } = conditions.constants;
  const { debris } = rows;
  const share = rows.yields[i] as number;
  const leaving = chipYield * share;
  const probability = leaving * chipProbability(crater, hit.load);
  const dent = debris * share * hit.workDent;
  const at = i * TERMS;
  row[at + TERM.impulse] = hit.impulse;
  row[at + TERM.load] = hit.load;
  row[at + TERM.chips] = probability;
  row[at + TERM.chipVolume] = leaving * meanChipVolume(crater, hit.load);
  row[at + TERM.chipDepth] = probability * chipDepth(crater, hit.load);
  row[at + TERM.chipRadius] = leaving * tabulatedRadius(rows, hit.load);
  row[at + TERM.dent] = dent;
  // the lips of a dent lower lipRadius^2 times its contact area pi a^2 = P / H, as a paraboloid twice the mean depth
  const perArea = (2 * conditions.work.hardness) / (lipRadius * lipRadius);
  const lowered = hit.load > 0 ? (perArea * debris * hit.workDent) / hit.load : 0;
  row[at + TERM.dentDepth] = dent * lowered;
  row[at + TERM.toolDent] = hit.toolDent;
  row[at + TERM.crushRatio] = hit.uncappedLoad / (rows.crushLoads[i] as number);
}

/** `meanChipRadius` from the table: the quadrature is too slow for every class and gap. */
function tabulatedRadius({ crater, rootOnset }: ContactRows, load: number): number {
  if (!(load > 0)) return 0;
  const x = 8 * (aboveThreshold(crater, load) + 6);
  if (!(x > 0)) return 0;
  const i = Math.floor(x);
  if (i >= rootOnset.length - 1) return meanChipRadius(crater, load);
  const below = rootOnset[i] as number;
  return fullRadius(crater, load) * (below + (x - i) * ((rootOnset[i + 1] as number) - below));
}

/** Sums over a population, one number share per size class, per grit in the film. */
export interface GapSums {
  readonly rows: ContactRows;
  readonly population: Float64Array;
  readonly sums: (Float64Array | undefined)[];
}

/** Sums of the rows over a population; fresh grit if none is given. */
export function gapSums(rows: ContactRows, population: Float64Array = rows.classes.fraction): GapSums {
  return { rows, population, sums: new Array<Float64Array | undefined>(rows.count + 1).fill(undefined) };
}

function sumsOfRow(sums: GapSums, k: number): Float64Array {
  const known = sums.sums[k];
  if (known) return known;
  const row = contactRow(sums.rows, k);
  const result = new Float64Array(TERMS);
  for (let i = 0; i * TERMS < row.length; i++) {
    const share = sums.population[i] as number;
    for (let t = 0; t < TERMS; t++) result[t] = (result[t] as number) + share * (row[i * TERMS + t] as number);
  }
  sums.sums[k] = result;
  return result;
}

/**
 * A term summed over the population at a gap, per grit in the film: cubic interpolation (Catmull and Rom) between rows,
 * never below zero. Zero at and above the largest grain; a gap below zero counts as none.
 */
export function sumAt(sums: GapSums, term: Term, gap: number): number {
  const { count, step } = sums.rows;
  const x = count - Math.max(0, gap) / step;
  if (!(x > 0)) return 0;
  const k = Math.min(count - 1, Math.floor(x));
  const t = x - k;
  const b = sumsOfRow(sums, k)[term] as number;
  const c = sumsOfRow(sums, k + 1)[term] as number;
  const a = k > 0 ? (sumsOfRow(sums, k - 1)[term] as number) : 0;
  const d = k + 2 <= count ? (sumsOfRow(sums, k + 2)[term] as number) : 2 * c - b;
  const slope = c - a;
  const bend = 2 * a - 5 * b + 4 * c - d;
  const twist = 3 * (b - c) + d - a;
  return Math.max(0, b + 0.5 * t * (slope + t * (bend + t * twist)));
}

/** Load of one engaged class at a gap, linear between rows (N). */
export function classLoadAt(rows: ContactRows, i: number, gap: number): number {
  const x = rows.count - Math.max(0, gap) / rows.step;
  if (!(x > 0)) return 0;
  const k = Math.min(rows.count - 1, Math.floor(x));
  const above = contactRow(rows, k)[i * TERMS + TERM.load] ?? 0;
  const below = contactRow(rows, k + 1)[i * TERMS + TERM.load] ?? 0;
  return above + (x - k) * (below - above);
}
