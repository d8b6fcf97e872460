import type { LoadSearch, WorkingPoint } from './load-search.ts';
import { placeOf, zoneAt } from './slurry-curve.ts';

/**
 * Height of the floor under the oldest slurry over that under the freshest once all of it sinks alike (m): each zone takes
 * the gap at which it sinks as fast as the face does, at the age its slurry has under the flat floor. The floor comes to it
 * within a few hump heights of sinking. Infinity where the oldest sinks so fast at no gap: a boss grows there. Derived.
 */
export function humpOf(search: LoadSearch, { point, step }: WorkingPoint): number {
  if (!(point.rate > 0)) return 0;
  const ages = point.zones.map(({ age }) => age);
  const youngest = zoneGap(search, Math.min(...ages), point.rate, step);
  const oldest = zoneGap(search, Math.max(...ages), point.rate, step);
  return Math.max(0, youngest - oldest);
}

/** Largest gap at which slurry of an age sinks the floor at a rate (m), sought from a step; minus infinity where there is none. */
function zoneGap(search: LoadSearch, age: number, rate: number, from: number): number {
  const { setting, places, shares } = search;
  const rateAt = (step: number) => {
    const { useful, rate: whole } = zoneAt(setting, placeOf(places, step).place, age, shares);
    return useful * whole;
  };
  const gapAt = (step: number) => placeOf(places, step).place.gap;
  let over = Math.max(1, Math.min(from, places.last));
  let under = over;
  let [atOver, atUnder] = [rateAt(over), rateAt(over)];
  while (atUnder >= rate && under > 1) {
    [over, atOver] = [under, atUnder];
    under--;
    atUnder = rateAt(under);
  }
  while (atOver < rate) {
    [under, atUnder] = [over, atOver];
    if (over >= places.last) return Number.NEGATIVE_INFINITY;
    over++;
    atOver = rateAt(over);
    if (atOver < atUnder) return Number.NEGATIVE_INFINITY;
  }
  if (!(atUnder < rate)) return gapAt(under);
  return gapAt(under) + ((rate - atUnder) / (atOver - atUnder)) * (gapAt(over) - gapAt(under));
}
