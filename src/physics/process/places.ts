import { chipStateAt } from '../floor.ts';
import type { GapSums } from '../gap-sums.ts';
import { type CrushRows, crushRows, type Place, placeAt } from './place.ts';

/** Steps of gap from the largest grain down. */
const STEPS = 160;
/** Steps between the gaps whose floor is worked out; between them roughness and overlap lie on a parabola. */
const FLOOR_STEPS = 8;

/** A place with the roughness of its floor. */
export interface RoughPlace {
  readonly place: Place;
  readonly roughness: number;
}

/** Places by gap, step by step from the largest grain down; they do not depend on the depth. Worked out when asked for. */
export interface CurvePlaces {
  readonly sums: GapSums;
  readonly crush: CrushRows;
  /** Steps between floors that are worked out. */
  readonly floorSteps: number;
  readonly floors: { roughness: number; overlap: number }[];
  readonly places: (RoughPlace | undefined)[];
  /** Steps there are: the gap of the last is one step. */
  readonly last: number;
}

/**
 * Places for every gap, none of them worked out yet.
 * @param floorSteps steps of gap between floors worked out; 1 is the slow reference
 */
export function curvePlaces(sums: GapSums, floorSteps = FLOOR_STEPS): CurvePlaces {
  const places = new Array<RoughPlace | undefined>(STEPS).fill(undefined);
  return { sums, crush: crushRows(sums.rows), floorSteps, floors: [], places, last: STEPS - 1 };
}

const gapOfStep = (sums: GapSums, k: number) => sums.rows.conditions.grit.largest * (1 - k / STEPS);

/** Floor number n of those worked out, at step n x `floorSteps`, from the largest grain down. */
function floorOf({ sums, floors, floorSteps, last }: CurvePlaces, n: number): { roughness: number; overlap: number } {
  for (let i = floors.length; i <= n; i++) {
    const gap = gapOfStep(sums, Math.min(last, i * floorSteps));
    floors.push(i === 0 ? { roughness: 0, overlap: 1 } : chipStateAt(sums, gap, floors[i - 1]?.roughness ?? 0));
  }
  return floors[n] as { roughness: number; overlap: number };
}

/** The place at a step of gap, 1 to `last`. */
export function placeOf(places: CurvePlaces, k: number): RoughPlace {
  const known = places.places[k];
  if (known) return known;
  const { sums, floorSteps, crush } = places;
  const n = Math.max(1, Math.min(Math.ceil(places.last / floorSteps) - 1, Math.round(k / floorSteps)));
  // the first floor but one stands in for the very first, where nothing touches
  const low = floorOf(places, Math.max(1, n - 1));
  const middle = floorOf(places, n);
  const high = floorOf(places, n + 1);
  const t = floorSteps === 1 ? 0 : k / floorSteps - n;
  const mix = (a: number, b: number, c: number) => b + 0.5 * t * (c - a) + 0.5 * t * t * (a - 2 * b + c);
  const roughness = Math.max(0, mix(low.roughness, middle.roughness, high.roughness));
  const overlap = Math.max(0, Math.min(1, mix(low.overlap, middle.overlap, high.overlap)));
  const found = { place: placeAt(sums, gapOfStep(sums, k), roughness, overlap, crush), roughness };
  places.places[k] = found;
  return found;
}
