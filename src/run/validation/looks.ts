import { log } from '#src/base/math.ts';
import { METRES_PER_MICROMETRE, METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE } from '#src/base/units.ts';
import { type Estimate, estimate } from '#src/physics/estimate.ts';
import { pointAt } from '#src/physics/process/slurry-curve.ts';
import { type Bench, bestAt, bestHole, type Case, HOLE, handbook, type Lab, rateAt } from './lab.ts';

/** Half the handbook's depth (m): where trends are looked at. */
export const MIDDLE = HOLE / 2;
/** Lateral run-out where none is stated (m). */
const RUNOUT = 2 * METRES_PER_MICROMETRE;
/** Edge radius of a new tool (m). */
const EDGE_RADIUS = 30 * METRES_PER_MICROMETRE;

/** m/s in mm/min. */
export const mmPerMin = (rate: number) => rate / METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE;

/** A setting on the handbook's conditions. */
export const on = (lab: Lab, amplitude: number, changes: Partial<Case> = {}): Bench =>
  lab.bench(handbook(amplitude, changes));

/** Rate of the handbook's hole at its own best load over glass's. */
export function overGlass(lab: Lab, amplitude: number, work: Case['work']): number {
  return bestHole(on(lab, amplitude, { work })).rate / bestHole(on(lab, amplitude)).rate;
}

/** Exponent of a quantity between two values of a setting. */
export function exponent(quantity: (value: number) => number, low: number, high: number): number {
  return log(quantity(high) / quantity(low)) / log(high / low);
}

/** Pressure of the best load half way down (Pa). */
export const bestPressure = (bench: Bench) => bestAt(bench, MIDDLE).pressure;

/** Rate half way down at the best load, and at a pressure (m/s). */
export const bestRate = (bench: Bench) => bestAt(bench, MIDDLE).rate;
export const middleRate = (bench: Bench, pressure: number) => rateAt(bench, MIDDLE, pressure);

/** Arithmetic mean roughness of the floor half way down at a pressure (m). */
export function floorRa(bench: Bench, pressure: number): number {
  return bench.conditions.constants.meanOverRms * pointAt(bench.curve(MIDDLE), pressure).roughness;
}

/** The whole estimate of the handbook's hole at a pressure. */
export function estimateOf({ conditions, face, tables }: Bench, pressure: number): Estimate {
  const { area, edge: perimeter } = face.shape;
  const tool = { faceArea: area, outlineArea: area, perimeter, runout: RUNOUT, edgeRadius: EDGE_RADIUS };
  return estimate({ conditions, pressure, depth: HOLE, slurry: face, ...tool }, tables);
}

/** Smallest step of a falling sequence: above 1 where it falls strictly. */
export function leastFall(values: readonly number[]): number {
  return values
    .slice(1)
    .reduce((least, value, k) => Math.min(least, (values[k] as number) / value), Number.POSITIVE_INFINITY);
}

/** The estimate of the handbook's hole at its own best load. */
export function bestEstimate(lab: Lab, amplitude: number, changes: Partial<Case> = {}): Estimate {
  const bench = on(lab, amplitude, changes);
  return bench.kept(`best ${HOLE}`, () => estimateOf(bench, bestHole(bench).pressure));
}

/** Arithmetic mean roughness half way down at the best load there (m). */
export function bestRa(lab: Lab, amplitude: number, changes: Partial<Case> = {}): number {
  const bench = on(lab, amplitude, changes);
  return floorRa(bench, bestPressure(bench));
}

/** What the freshest and the oldest tenth of the face remove half way down, one gap for both, at a share of the best load (m/s). */
export function bestZones(bench: Bench, share: number): { readonly inner: number; readonly outer: number } {
  const { zones } = pointAt(bench.curve(MIDDLE), share * bestPressure(bench));
  const cuts = zones.map(({ useful, rate }) => useful * rate);
  return { inner: cuts.at(-1) as number, outer: cuts[0] as number };
}
