import { exp, log } from '#src/base/math.ts';
import { PASCAL_ROOT_METRES_PER_MEGAPASCAL_ROOT_METRE, PASCALS_PER_GIGAPASCAL } from '#src/base/units.ts';
import { findMaterial, type Library } from '#src/formats/library.ts';
import type { WorkMaterial } from '#src/physics/records.ts';
import { type Lab, READINGS, workOf } from './lab.ts';
import type { Part } from './record.ts';

/** A work at the low and the high end of one of its properties, the others nominal. */
type Ends = readonly [WorkMaterial, WorkMaterial];

/** Hardness, and toughness at the size of a grain, at the ends of the library's ranges. */
function endsOf(library: Library, id: string): readonly Ends[] {
  const { found } = findMaterial(library.materials, id);
  if (!found) return [];
  const work = workOf(library, id);
  const { hardnessGPa: hardness, smallCrackToughnessMPaSqrtM: toughness } = found.properties;
  const hard = (value: number) => ({ ...work, hardness: value * PASCALS_PER_GIGAPASCAL });
  const tough = (value: number) => ({
    ...work,
    smallCrackToughness: value * PASCAL_ROOT_METRES_PER_MEGAPASCAL_ROOT_METRE,
  });
  return [
    [hard(hardness.min), hard(hardness.max)],
    [tough(toughness.min), tough(toughness.max)],
  ];
}

/** Lowest and highest of a value over the ranges, one property at a time and their logarithms added in squares. */
function rangeAt(value: (work: WorkMaterial) => number, nominal: number, ends: readonly Ends[]): [number, number] {
  let down = 0;
  let up = 0;
  for (const pair of ends) {
    const shifts = pair.map((work) => log(value(work) / nominal));
    down += Math.min(0, ...shifts) ** 2;
    up += Math.max(0, ...shifts) ** 2;
  }
  return [nominal * exp(-Math.sqrt(down)), nominal * exp(Math.sqrt(up))];
}

/** Lowest and highest predicted value over the ranges of a work's hardness and toughness, both readings of the amplitude. */
export function propertyRange(
  lab: Lab,
  predict: Part['predict'],
  id: string,
  predicted: readonly number[],
): [number, number] {
  const ends = endsOf(lab.library, id);
  const ranges = READINGS.map((amplitude, k) =>
    rangeAt((work) => predict(lab.withWork(id, work), amplitude), predicted[k] as number, ends),
  );
  return [Math.min(...ranges.map(([low]) => low)), Math.max(...ranges.map(([, high]) => high))];
}
