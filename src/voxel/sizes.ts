import { exp, pow } from '#src/base/math.ts';
import type { Outline } from '#src/base/outline.ts';
import { contact, contactLaw, emptyContact } from '#src/physics/contact.ts';
import { craterLaw, meanChip, meanChipVolume } from '#src/physics/crater.ts';
import { freeImpact } from '#src/physics/free-impact.ts';
import { sizeClasses } from '#src/physics/grit-law.ts';
import { gritsPerArea } from '#src/physics/population.ts';
import type { Conditions } from '#src/physics/records.ts';
import { debrisShare, hitYield } from '#src/physics/yields.ts';
import { COEFFICIENT, HIT_CHANNELS } from './kernels/contract.ts';
import type { CutSpec } from './spec.ts';
import type { CutTables, GapMeans } from './tables.ts';

/** Pressure at which a feed starts, and the most that is expected of grits (Pa): beyond it there are no data at all. */
const FEED_PRESSURE = 1e5;
const HIGHEST_PRESSURE = 3e6;
/** Scatter of the rim's sites reckoned with, in standard deviations. */
const WEAKEST_SITE = 3;

/** Sizes of chips the fields are laid out for (m). */
export interface ChipSizes {
  readonly radius: number;
  readonly largestChip: number;
  readonly deepestEdgeChip: number;
}

/** Pressure that fresh grit carries over a flat floor, at entry k of the means (Pa). */
function pressureAt(conditions: Conditions, means: GapMeans, k: number): number {
  return (means.impulse[k] as number) * conditions.frequency * gritsPerArea(conditions, k * means.step);
}

/** Gap over a flat floor, from the load over the face; a feed starts where a tenth of a megapascal would. */
export function flatFloor(spec: CutSpec, outline: Outline, means: GapMeans): { gap: number; efold: number } {
  const pressure = spec.drive.kind === 'load' ? spec.drive.load / outline.area : FEED_PRESSURE;
  const at = (k: number) => pressureAt(spec.conditions, means, k);
  for (let k = means.entries - 2; k > 0; k--) {
    if (at(k) < pressure) continue;
    const t = (at(k) - pressure) / (at(k) - at(k + 1));
    const fall = (at(k) - at(k + 1)) / means.step / at(k);
    return { gap: k * means.step + t * means.step, efold: 1 / fall };
  }
  return { gap: means.step, efold: means.step };
}

/**
 * The lowest gap grits are pressed to (m): where they carry the highest pressure there are data for, or where a narrower
 * gap lets in so few that it carries less.
 */
export function lowestGap(conditions: Conditions, means: GapMeans): number {
  let best = 0;
  for (let k = means.entries - 2; k > 0; k--) {
    const pressure = pressureAt(conditions, means, k);
    if (pressure < 0.98 * best || pressure > HIGHEST_PRESSURE) return (k + 1) * means.step;
    best = Math.max(best, pressure);
  }
  return means.step;
}

/** The chips that leave a flat floor, in the mean. */
export interface TypicalChip {
  /** m */
  readonly radius: number;
  readonly depth: number;
  /** Volume of the dents over that of chips and dents. */
  readonly dentShare: number;
}

/** Mean radius and depth of the chips that leave a flat floor at this gap, and what the dents take beside them. */
export function typicalChip(conditions: Conditions, gap: number): TypicalChip {
  const law = contactLaw(conditions);
  const crater = craterLaw(conditions.work, conditions.constants);
  const out = emptyContact();
  const { diameter, fraction } = sizeClasses(conditions.grit);
  let weight = 0;
  let radius = 0;
  let depth = 0;
  let dents = 0;
  let dentRadius = 0;
  let chipVolume = 0;
  let dentVolume = 0;
  const { lipRadius, chipYield } = conditions.constants;
  const debris = debrisShare(conditions);
  diameter.forEach((d, k) => {
    if (d <= gap) return;
    contact(law, d, d - gap, out);
    const chip = meanChip(crater, out.load);
    const share = (fraction[k] as number) * hitYield(conditions, d);
    weight += share * chip.probability;
    radius += share * chip.radius;
    depth += share * chip.depth;
    dents += share;
    dentRadius += share * lipRadius * Math.sqrt(out.load / (Math.PI * conditions.work.hardness));
    chipVolume += share * chipYield * meanChipVolume(crater, out.load);
    dentVolume += share * debris * out.workDent;
  });
  // purely plastic work has no chips to resolve: its dents set the scale
  if (weight < 1e-3 * dents) return { radius: dents > 0 ? dentRadius / dents : gap / 10, depth: 0, dentShare: 1 };
  return { radius: radius / weight, depth: depth / weight, dentShare: dentVolume / (chipVolume + dentVolume) };
}

/**
 * Radius of the chip of the largest grain over a floor this far below the face, far above its threshold (m). Kernels cut
 * off any rarer, larger chip at half a tile.
 */
export function largestRadius(tables: CutTables, gap: number): number {
  const { hits, hitDiameters, hitOverlaps, coefficients } = tables.kernel;
  const largest = coefficients[COEFFICIENT.largest] as number;
  const overlap = Math.min(hitOverlaps - 1, Math.ceil((1 - gap / largest) * (hitOverlaps - 1)));
  const load = hits[((hitDiameters - 1) * hitOverlaps + overlap) * HIT_CHANNELS] as number;
  const root = Math.sqrt(load);
  return (coefficients[COEFFICIENT.radius] as number) * root * Math.sqrt(Math.sqrt(root));
}

/** Depth of the edge chip under the largest grain, squeezed as far as the run-out swings, at the weakest site (m). */
export function deepestChip(spec: CutSpec, tables: CutTables): number {
  const { hits, hitDiameters, hitOverlaps, coefficients } = tables.kernel;
  const { constants } = spec.conditions;
  const largest = coefficients[COEFFICIENT.largest] as number;
  const squeeze = Math.min(largest, 2 * spec.runout * constants.runoutCap);
  const overlap = Math.min(hitOverlaps - 1, Math.ceil((squeeze / largest) * (hitOverlaps - 1)));
  const load = hits[((hitDiameters - 1) * hitOverlaps + overlap) * HIT_CHANNELS] as number;
  const site = exp(-WEAKEST_SITE * constants.chipSiteScatter);
  return pow(load / ((coefficients[COEFFICIENT.chipLoad] as number) * site), 2 / 3);
}

/** Lowering per cycle by grains thrown at the floor without being squeezed (m): dents only, every grain once a cycle. */
export function freeLowering(conditions: Conditions, gap: number): number {
  const { diameter, fraction } = sizeClasses(conditions.grit);
  let sum = 0;
  diameter.forEach((d, k) => {
    if (d > gap) return;
    const free = freeImpact(conditions, d);
    sum += (fraction[k] as number) * hitYield(conditions, d) * free.dent;
  });
  return gritsPerArea(conditions, gap) * debrisShare(conditions) * sum;
}
