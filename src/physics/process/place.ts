import { exp, log, normalDensity } from '#src/base/math.ts';
import { type ContactRows, contactRow, type GapSums, TERM } from '../gap-sums.ts';
import { CLASSES_PER_HALF_VOLUME } from '../grit-law.ts';
import { gapConcentration, gritsPerArea } from '../population.ts';

/** Floor heights a place is averaged over: -3 to 3 Sq in half steps. */
const NODES = 13;
const HEIGHTS = Float64Array.from({ length: NODES }, (_, j) => (j - 6) / 2);
const WEIGHTS = HEIGHTS.map((z) => normalDensity(z));
const WEIGHT_SUM = WEIGHTS.reduce((sum, w) => sum + w, 0);
/** Values per class in a gap row. */
const TERMS = 10;
/** Grains below this size yield instead of breaking (m): Kendall, Nature 272 (1978) 710, from memory. */
const UNBREAKABLE = 1e-6;

/** What one grain of each size does at one gap over a rough floor, and how fast it crushes there. SI. */
export interface Place {
  readonly rows: ContactRows;
  readonly gap: number;
  readonly film: number;
  readonly gritFraction: number;
  readonly gritsPerArea: number;
  /** Per class, largest first. */
  readonly impulse: Float64Array;
  readonly removal: Float64Array;
  readonly toolDent: Float64Array;
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

/** Averages the contact rows over a Gaussian floor. `overlap` is the floor's removed over credited chip volume. */
export function placeAt(sums: GapSums, gap: number, roughness: number, overlap: number): Place {
  const { rows } = sums;
  const { conditions, classes, count, step } = rows;
  const n = classes.diameter.length;
  const impulse = new Float64Array(n);
  const removal = new Float64Array(n);
  const toolDent = new Float64Array(n);
  const crushRate = new Float64Array(n);
  const m = conditions.abrasive.crushWeibull;
  for (let j = 0; j < NODES; j++) {
    const here = Math.max(0, gap - roughness * (HEIGHTS[j] as number));
    const x = count - here / step;
    if (!(x > 0)) continue;
    const k = Math.min(count - 1, Math.floor(x));
    const t = x - k;
    const above = contactRow(rows, k);
    const below = contactRow(rows, k + 1);
    const weight = (WEIGHTS[j] as number) / WEIGHT_SUM;
    const engaged = below.length / TERMS;
    for (let i = 0; i < engaged; i++) {
      const at = i * TERMS;
      const mix = (term: number) => {
        const a = above[at + term] ?? 0;
        return a + t * ((below[at + term] as number) - a);
      };
      impulse[i] = (impulse[i] as number) + weight * mix(TERM.impulse);
      removal[i] = (removal[i] as number) + weight * (overlap * mix(TERM.chipVolume) + mix(TERM.dent));
      toolDent[i] = (toolDent[i] as number) + weight * mix(TERM.toolDent);
      const ratio = mix(TERM.crushRatio);
      if (ratio > 0.02 && (classes.diameter[i] as number) > UNBREAKABLE) {
        crushRate[i] = (crushRate[i] as number) + weight * (1 - exp(-exp(m * log(ratio))));
      }
    }
  }
  for (let i = 0; i < n; i++) crushRate[i] = (crushRate[i] as number) * conditions.frequency;
  return {
    rows,
    gap,
    film: gap + conditions.amplitude,
    gritFraction: gapConcentration(conditions, gap),
    gritsPerArea: gritsPerArea(conditions, gap),
    impulse,
    removal,
    toolDent,
    crushRate,
  };
}

/**
 * Number shares after the slurry has stayed for a mean age: a crushed grain leaves two of half its volume, the population
 * is well mixed at that age. nu_i = (q_i + 2 k_j age nu_j) / (1 + k_i age), j the class of twice the volume. Derived.
 */
export function agedShares(place: Place, age: number, out: Float64Array): Float64Array {
  const { fraction } = place.rows.classes;
  for (let i = 0; i < fraction.length; i++) {
    const parent = i - CLASSES_PER_HALF_VOLUME;
    const made = parent >= 0 ? 2 * (place.crushRate[parent] as number) * age * (out[parent] as number) : 0;
    out[i] = ((fraction[i] as number) + made) / (1 + (place.crushRate[i] as number) * age);
  }
  return out;
}

/** What the place does at a mean age (s). */
export function atAge(place: Place, age: number, shares: Float64Array): AgedPlace {
  const { conditions, classes } = place.rows;
  agedShares(place, age, shares);
  let pressure = 0;
  let rate = 0;
  let toolRate = 0;
  let crushed = 0;
  for (let i = 0; i < shares.length; i++) {
    const share = shares[i] as number;
    if ((place.impulse[i] as number) === 0 && (place.crushRate[i] as number) === 0) break;
    const d = classes.diameter[i] as number;
    pressure += share * (place.impulse[i] as number);
    rate += share * (place.removal[i] as number);
    toolRate += share * (place.toolDent[i] as number);
    crushed += share * (place.crushRate[i] as number) * age * d * d * d;
  }
  const perTime = conditions.frequency * place.gritsPerArea;
  const d30 = conditions.grit.meanVolumeDiameter;
  return {
    pressure: perTime * pressure,
    rate: perTime * rate,
    toolRate: perTime * conditions.constants.toolPlasticShare * toolRate,
    crushed: (place.gritFraction * crushed) / (d30 * d30 * d30),
  };
}
