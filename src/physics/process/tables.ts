import { meanChipVolume } from '../crater.ts';
import { type FloorState, overFloor } from '../floor.ts';
import { freeImpact } from '../free-impact.ts';
import { contactRows, type GapSums, gapSums, TERM } from '../gap-sums.ts';
import type { Conditions } from '../records.ts';
import { faceWearRate, toolShare } from '../tool-wear.ts';

/** Work that depends on the conditions alone: share it between loads and depths of one slurry, tool and material. */
export interface EstimateTables {
  readonly sums: GapSums;
  /** Chip and dent volume that leaves per thrown grit, by class from the largest down (m3). */
  readonly thrownChips: Float64Array;
  readonly thrownDents: Float64Array;
}

/** How fast and by what a floor sinks. */
export interface FloorRate {
  /** Rate of sinking (m/s). */
  readonly rate: number;
  /** Share of the removal by dents that leave, free impacts included. */
  readonly plasticShare: number;
  /** Share of the removal by thrown grits. */
  readonly freeImpactShare: number;
}

/** Gaps tabulated; within 0.1 % of many more. As few as do for a member of a band: rates within 0.3 %, stalls within 2 %. */
const ROWS = 160;
const MEMBER_ROWS = 96;

/**
 * Tables for `estimate`.
 * @param population number shares by size class, the grade's own (fresh grit) if left out
 */
export function estimateTables(conditions: Conditions, population?: Float64Array, rows = ROWS): EstimateTables {
  const contacts = contactRows(conditions, rows);
  const { chipYield } = conditions.constants;
  const thrownChips = new Float64Array(contacts.classes.diameter.length);
  const thrownDents = new Float64Array(contacts.classes.diameter.length);
  contacts.classes.diameter.forEach((d, i) => {
    const hit = freeImpact(conditions, d);
    const share = contacts.yields[i] as number;
    thrownChips[i] = chipYield * share * meanChipVolume(contacts.crater, hit.load);
    thrownDents[i] = contacts.debris * share * hit.dent;
  });
  return { sums: gapSums(contacts, population), thrownChips, thrownDents };
}

/** Tables of fewer gaps, for the members of a band. */
export function memberTables(conditions: Conditions, population?: Float64Array): EstimateTables {
  return estimateTables(conditions, population, MEMBER_ROWS);
}

/** The same tables for another population of grit. */
export function withPopulation(tables: EstimateTables, population: Float64Array): EstimateTables {
  return { ...tables, sums: gapSums(tables.sums.rows, population) };
}

/** Removal by the grits too short to touch both faces: each strikes once per cycle, thrown (m3 per grit in the film). */
function thrown(tables: EstimateTables, gap: number): { chips: number; dents: number } {
  const { rows, population } = tables.sums;
  let chips = 0;
  let dents = 0;
  rows.classes.diameter.forEach((d, i) => {
    if (d > gap) return;
    chips += (population[i] as number) * (tables.thrownChips[i] as number);
    dents += (population[i] as number) * (tables.thrownDents[i] as number);
  });
  return { chips, dents };
}

/** Rate of sinking of a steady floor: chips less overlap, dents, and free impacts. Dents carry no overlap. */
export function rateOf(tables: EstimateTables, floor: FloorState): FloorRate {
  const { sums } = tables;
  const chips = floor.overlap * overFloor(sums, TERM.chipVolume, floor.gap, floor.roughness);
  const dents = overFloor(sums, TERM.dent, floor.gap, floor.roughness);
  const free = thrown(tables, floor.gap);
  const freeChips = floor.overlap * free.chips;
  const volume = chips + dents + freeChips + free.dents;
  return {
    rate: sums.rows.conditions.frequency * floor.grits * volume,
    plasticShare: volume > 0 ? (dents + free.dents) / volume : 0,
    freeImpactShare: volume > 0 ? (freeChips + free.dents) / volume : 0,
  };
}

/** Speed at which the tool face wears back over a steady floor (m/s). */
export function toolRateOf({ sums }: EstimateTables, floor: FloorState): number {
  const { conditions } = sums.rows;
  const dents = overFloor(sums, TERM.toolDent, floor.gap, floor.roughness);
  const share = toolShare(conditions.tool, conditions.constants);
  return faceWearRate(conditions.frequency * floor.grits, dents, conditions.constants, share);
}
