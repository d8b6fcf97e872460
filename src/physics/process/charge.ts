import { CLASSES_PER_HALF_VOLUME } from '../grit-law.ts';
import { loadSearch, workingPoint } from './load-search.ts';
import { agedShares, placeAt } from './place.ts';
import { curvePlaces } from './slurry-curve.ts';
import type { SlurryFace } from './slurry-face.ts';
import { type EstimateTables, withPopulation } from './tables.ts';

/** A charge that goes round, and the setting it has been cutting under. SI. */
export interface ChargeUse {
  readonly slurry: SlurryFace;
  /** Volume of the charge (m3), and how long it has been cutting (s). */
  readonly volume: number;
  readonly used: number;
  /** Face pressure (Pa), area in contact (m2), and depth of the cavity meanwhile (m). */
  readonly pressure: number;
  readonly area: number;
  readonly depth: number;
}

/** Parts of the use between which the gap is found anew. */
const PARTS = 4;

/**
 * Number shares by class of a charge after it has been cutting, per grain it began with. Of its grit the share
 * (area x film x C_g) / (volume x C) is under the face at any time, aged there as the balance has it; what crushes there goes back into
 * the whole: d nu_i / dt = share (2 k_j nu_face_j - k_i nu_face_i), j the class of twice the volume. The volume of grit is
 * kept, a large charge stays as it was. Each part of the use is solved implicitly at one gap. Derived.
 * @throws RangeError unless the volume is above zero and the use zero or more
 */
export function usedPopulation(tables: EstimateTables, use: ChargeUse): Float64Array {
  const { volume, used } = use;
  if (!(volume > 0)) throw new RangeError(`a charge needs a volume above zero, got ${volume} m3`);
  if (!(used >= 0 && used < Number.POSITIVE_INFINITY))
    throw new RangeError(`a charge cannot have been used for ${used} s`);
  let population = tables.sums.population;
  for (let part = 0; part < PARTS && used > 0; part++) {
    const { sums } = withPopulation(tables, population);
    const places = curvePlaces(sums);
    const { conditions } = sums.rows;
    const working = workingPoint(loadSearch({ ...use.slurry, conditions }, places, use.depth), use.pressure);
    const { gap, roughness, zones } = working.point;
    const place = placeAt(sums, gap, roughness, 1, places.crush);
    const face = new Float64Array(population.length);
    const aged = new Float64Array(population.length);
    for (const { age } of zones) {
      agedShares(place, age, aged);
      aged.forEach((share, i) => {
        face[i] = (face[i] as number) + share / zones.length;
      });
    }
    // of all the grit, so much is under the face
    const under = (use.area * place.film * place.gritFraction) / (volume * conditions.concentration);
    const turns = (used / PARTS) * Math.min(1, under);
    population = crushed(population, { face, rate: place.crushRate, turns });
  }
  return population;
}

/** One implicit step: each class loses the share k face / charge per turn, half the volume down it gains two for one. */
function crushed(
  charge: Float64Array,
  { face, rate, turns }: { readonly face: Float64Array; readonly rate: Float64Array; readonly turns: number },
): Float64Array {
  const after = new Float64Array(charge.length);
  const loss = (i: number) => {
    const here = charge[i] as number;
    return here > 0 ? ((rate[i] as number) * turns * (face[i] as number)) / here : 0;
  };
  for (let i = 0; i < charge.length; i++) {
    const parent = i - CLASSES_PER_HALF_VOLUME;
    const made = parent >= 0 ? 2 * loss(parent) * (after[parent] as number) : 0;
    after[i] = ((charge[i] as number) + made) / (1 + loss(i));
  }
  return after;
}
