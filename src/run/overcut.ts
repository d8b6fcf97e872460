import { DEFAULT_PRESSURE } from '#src/formats/job/defaults.ts';
import type { PredictOvercut } from '#src/formats/job/pass-draft.ts';
import { estimate, estimateTables } from '#src/physics/estimate.ts';

/**
 * Overcut for a tool without an outline: what the estimate says of the entry at the default face pressure. The pressure
 * enters through the time the wall is exposed only, and the overcut grows with the logarithm of that.
 */
export function predictOvercut(): PredictOvercut {
  const known = new Map<string, number>();
  return (conditions, depth, runout) => {
    const key = JSON.stringify([conditions, depth, runout]);
    const before = known.get(key);
    if (before !== undefined) return before;
    const one = { faceArea: 1e-6, outlineArea: 1e-6, perimeter: 4e-3, pressure: DEFAULT_PRESSURE };
    const { overcutEntry } = estimate({ conditions, depth, runout, ...one }, estimateTables(conditions));
    known.set(key, overcutEntry);
    return overcutEntry;
  };
}
