import { exp, log, normalDensity } from '#src/base/math.ts';
import { type ContactRows, contactRow, type GapSums, TERM } from '../gap-sums.ts';
import { CLASSES_PER_HALF_VOLUME } from '../grit-law.ts';
import { gapConcentration, gritsPerArea } from '../population.ts';
import { toolShare } from '../tool-wear.ts';

/** Floor heights a place is averaged over: -3 to 3 Sq in half steps. */
const NODES = 13;
const HEIGHTS = Float64Array.from({ length: NODES }, (_, j) => (j - 6) / 2);
const WEIGHTS = HEIGHTS.map((z) => normalDensity(z));
const WEIGHT_SUM = WEIGHTS.reduce((sum, w) => sum + w, 0);
/** Values per class in a gap row. */
const TERMS = 10;
/** Grains below this size yield instead of breaking (m): Kendall, Nature 272 (1978) 710, from memory. */
const UNBREAKABLE = 1e-6;
/** Load over the crushing load below which a grain is not tested at all. */
const LEAST_RATIO = 0.02;

/** What one grain of each size does at one gap over a rough floor, and how fast it crushes there. SI. */
export interface Place {
  readonly rows: ContactRows;
  /** Number shares of the slurry as supplied, by class. */
  readonly supplied: Float64Array;
  readonly gap: number;
  readonly film: number;
  readonly gritFraction: number;
  readonly gritsPerArea: number;
  /** Classes that touch both faces anywhere on the floor. */
  readonly engaged: number;
  /** Per class, largest first: N s, m3 of work and of tool per hit, crushings per second. */
  readonly impulse: Float64Array;
  readonly removal: Float64Array;
  readonly toolLoss: Float64Array;
  readonly crushRate: Float64Array;
}

/** A place at an age of the slurry: pressure, rates and crushed share. */
export interface AgedPlace {
  /** Cycle-mean pressure of the grits (Pa). */
  pressure: number;
  /** Rate of sinking and of tool loss if every hit were useful (m/s). */
  rate: number;
  toolRate: number;
  /** Volume fraction of the film that has been crushed. */
  crushed: number;
}

/** Probability that one squeeze crushes a grain, by gap row and class; worked out when first asked for. */
export interface CrushRows {
  readonly rows: (Float64Array | undefined)[];
}

/** No row of it worked out yet. */
export function crushRows({ count }: ContactRows): CrushRows {
  return { rows: new Array<Float64Array | undefined>(count + 1).fill(undefined) };
}

function crushRow(crush: CrushRows, rows: ContactRows, k: number): Float64Array {
  const known = crush.rows[k];
  if (known) return known;
  const row = contactRow(rows, k);
  const { diameter } = rows.classes;
  const m = rows.conditions.abrasive.crushWeibull;
  const chances = new Float64Array(row.length / TERMS);
  for (let i = 0; i < chances.length; i++) {
    const ratio = row[i * TERMS + TERM.crushRatio] as number;
    if (ratio > LEAST_RATIO && (diameter[i] as number) > UNBREAKABLE) chances[i] = 1 - exp(-exp(m * log(ratio)));
  }
  crush.rows[k] = chances;
  return chances;
}

/**
 * Averages the contact rows over a Gaussian floor.
 * @param overlap the floor's removed over credited chip volume
 */
export function placeAt(
  sums: GapSums,
  gap: number,
  roughness: number,
  overlap: number,
  crush: CrushRows = crushRows(sums.rows),
): Place {
  const { rows } = sums;
  const { conditions, classes, count, step } = rows;
  const n = classes.diameter.length;
  const impulse = new Float64Array(n);
  const removal = new Float64Array(n);
  const toolLoss = new Float64Array(n);
  const crushRate = new Float64Array(n);
  const share = toolShare(conditions.tool, conditions.constants);
  let engaged = 0;
  for (let j = 0; j < NODES; j++) {
    const here = Math.max(0, gap - roughness * (HEIGHTS[j] as number));
    const x = count - here / step;
    if (!(x > 0)) continue;
    const k = Math.min(count - 1, Math.floor(x));
    const t = x - k;
    for (let part = 0; part < 2; part++) {
      const row = contactRow(rows, k + part);
      const chances = crushRow(crush, rows, k + part);
      const weight = ((part === 0 ? 1 - t : t) * (WEIGHTS[j] as number)) / WEIGHT_SUM;
      const hitRate = weight * conditions.frequency;
      const toolWeight = weight * share;
      engaged = Math.max(engaged, chances.length);
      for (let i = 0, at = 0; i < chances.length; i++, at += TERMS) {
        impulse[i] += weight * (row[at + TERM.impulse] as number);
        removal[i] += weight * (overlap * (row[at + TERM.chipVolume] as number) + (row[at + TERM.dent] as number));
        toolLoss[i] += toolWeight * (row[at + TERM.toolDent] as number);
        crushRate[i] += hitRate * (chances[i] as number);
      }
    }
  }
  return {
    rows,
    supplied: sums.population,
    gap,
    film: gap + conditions.amplitude,
    gritFraction: gapConcentration(conditions, gap),
    gritsPerArea: gritsPerArea(conditions, gap),
    engaged,
    impulse,
    removal,
    toolLoss,
    crushRate,
  };
}

/**
 * Number shares after the slurry has stayed for a mean age: a crushed grain leaves two of half its volume, the population
 * is well mixed at that age. nu_i = (q_i + 2 k_j age nu_j) / (1 + k_i age), j the class of twice the volume. Derived.
 */
export function agedShares(place: Place, age: number, out: Float64Array): Float64Array {
  const { supplied } = place;
  for (let i = 0; i < supplied.length; i++) {
    const parent = i - CLASSES_PER_HALF_VOLUME;
    const made = parent >= 0 ? 2 * (place.crushRate[parent] as number) * age * (out[parent] as number) : 0;
    out[i] = ((supplied[i] as number) + made) / (1 + (place.crushRate[i] as number) * age);
  }
  return out;
}

/**
 * What the place does at a mean age (s).
 * @param shares scratch, one number per class; holds the aged shares of the engaged classes afterwards
 */
export function atAge(place: Place, age: number, shares: Float64Array): AgedPlace {
  const { conditions, classes } = place.rows;
  const { diameter } = classes;
  const { supplied, impulse, removal, toolLoss, crushRate } = place;
  let pressure = 0;
  let rate = 0;
  let toolRate = 0;
  let crushed = 0;
  for (let i = 0; i < place.engaged; i++) {
    const parent = i - CLASSES_PER_HALF_VOLUME;
    const lost = (crushRate[i] as number) * age;
    const made = parent >= 0 ? 2 * (crushRate[parent] as number) * age * (shares[parent] as number) : 0;
    const share = ((supplied[i] as number) + made) / (1 + lost);
    const d = diameter[i] as number;
    shares[i] = share;
    pressure += share * (impulse[i] as number);
    rate += share * (removal[i] as number);
    toolRate += share * (toolLoss[i] as number);
    crushed += share * lost * d * d * d;
  }
  const perTime = conditions.frequency * place.gritsPerArea;
  const d30 = conditions.grit.meanVolumeDiameter;
  return {
    pressure: perTime * pressure,
    rate: perTime * rate,
    toolRate: perTime * toolRate,
    crushed: (place.gritFraction * crushed) / (d30 * d30 * d30),
  };
}
