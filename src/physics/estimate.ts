import { atan } from '#src/base/math.ts';
import { meanChipVolume, radialCrack } from './crater.ts';
import type { EdgeChip } from './edge-chip.ts';
import { engagedShare, type FloorState, loadQuantiles, overFloor, steadyFloor } from './floor.ts';
import { freeImpact } from './free-impact.ts';
import { contactRows, type GapSums, gapSums, TERM } from './gap-sums.ts';
import type { SlurryConstants } from './process/constants.ts';
import type { FaceShape } from './process/face.ts';
import { throughDepth } from './process/through-depth.ts';
import type { Conditions } from './records.ts';
import { rimChips } from './rim.ts';
import type { Carrier } from './slurry/viscosity.ts';
import { faceWearRate, wearRatio } from './tool-wear.ts';
import { gapAfter, type WallLaw, wallHits, wallLaw } from './wall.ts';

/** What an estimate is asked for. SI. */
export interface EstimateSetting {
  readonly conditions: Conditions;
  /** Mean pressure on the tool face (Pa): static load over face area. */
  readonly pressure: number;
  /** Area of the tool face (m2). */
  readonly faceArea: number;
  /** Area and perimeter of the cavity's outline (m2, m). */
  readonly outlineArea: number;
  readonly perimeter: number;
  /** Depth of the cavity (m). */
  readonly depth: number;
  /** Lateral run-out, zero-to-peak (m). */
  readonly runout: number;
  /** Pressures of the load curve (Pa); none if left out. */
  readonly loadCurve?: readonly number[];
  /** The slurry under the face; fresh grit everywhere if left out. */
  readonly slurry?: SlurryFace;
}

/** What the balance of the slurry under the face needs beside the conditions. */
export interface SlurryFace {
  readonly shape: FaceShape;
  readonly carrier: Carrier;
  readonly constants: SlurryConstants;
}

/** The rate at one pressure of the load curve. */
export interface LoadPoint {
  readonly pressure: number;
  /** Rate of sinking (m/s). */
  readonly rate: number;
  readonly carried: boolean;
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

/**
 * The mean-field answer. SI. Without a slurry face, grit is fresh everywhere: the rate does not fall with depth, rises with
 * load without a best load, and no stall is defined.
 */
export interface Estimate extends FloorRate {
  /** Rate of sinking at the entry face and at depth (m/s). */
  readonly rateStart: number;
  readonly rateEnd: number;
  /** Pressure at which the exchange breaks down at depth (Pa), and what is left of it: 1 - pressure / stall. Null where fresh. */
  readonly stallPressure: number | null;
  readonly stallMargin: number | null;
  /** The grits bear the pressure; false: the state is that of the largest pressure they bear. */
  readonly carried: boolean;
  /** Tool face over the mean floor at closest approach, and averaged over the cycle (m). */
  readonly gap: number;
  readonly meanGap: number;
  /** Grits touching both faces per area and cycle (1/m2). */
  readonly engaged: number;
  /** Mean load of these, and the load 99.9 % of them stay below (N). */
  readonly meanLoad: number;
  readonly largestLoad: number;
  /** Height over which the load changes e-fold (m). */
  readonly loadHeight: number;
  /** Mean depth and radius of the chips that leave (m); 0 where none does. */
  readonly chipDepth: number;
  readonly chipRadius: number;
  /** Removed over credited chip volume. */
  readonly overlap: number;
  /** Floor roughness Sq and Ra (m), Ra taken as Sa. */
  readonly floorSq: number;
  readonly floorRa: number;
  /** Radial crack depth that 99 % and 99.9 % of the hits stay below (m). */
  readonly damageDepth: number;
  readonly largestDamage: number;
  /** Time to depth (s); Infinity when nothing is removed. */
  readonly time: number;
  /** Length the tool loses on the way (m), and volume of tool per volume of work. */
  readonly toolWearLength: number;
  readonly toolWearRatio: number;
  /** Side gap at 0.1 of the depth, and 0.2 mm (at most 0.2 of the depth) above the floor (m). */
  readonly overcutEntry: number;
  readonly overcutFloor: number;
  /** Half-angle of the wall between 10 and 90 % of the depth, least squares (rad), positive when wider at the top. */
  readonly taper: number;
  /** Chips along the entry rim: 95 % of its length, and the deepest. */
  readonly edgeChipP95: EdgeChip;
  readonly edgeChipLargest: EdgeChip;
  readonly loadCurve: readonly LoadPoint[];
}

/** Height above the floor at which its size is taken (m). */
const FLOOR_SIZE_HEIGHT = 0.2e-3;
const TAPER_POINTS = 33;

/** Work that depends on the conditions alone: share it between loads and depths of one slurry, tool and material. */
export interface EstimateTables {
  readonly sums: GapSums;
  /** Chip and dent volume that leaves per thrown grit, by class from the largest down (m3). */
  readonly thrownChips: Float64Array;
  readonly thrownDents: Float64Array;
}

/**
 * Tables for `estimate`.
 * @param population number shares by size class, the grade's own (fresh grit) if left out
 */
export function estimateTables(conditions: Conditions, population?: Float64Array): EstimateTables {
  const rows = contactRows(conditions);
  const { chipYield, plasticShare } = conditions.constants;
  const thrownChips = new Float64Array(rows.classes.diameter.length);
  const thrownDents = new Float64Array(rows.classes.diameter.length);
  rows.classes.diameter.forEach((d, i) => {
    const hit = freeImpact(conditions, d);
    const share = rows.yields[i] as number;
    thrownChips[i] = chipYield * share * meanChipVolume(rows.crater, hit.load);
    thrownDents[i] = plasticShare * share * hit.dent;
  });
  return { sums: gapSums(rows, population), thrownChips, thrownDents };
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
function rateOf(tables: EstimateTables, floor: FloorState): FloorRate {
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

/** Rates at several pressures from one set of tables, in the order given. */
export function loadCurve(tables: EstimateTables, pressures: readonly number[]): LoadPoint[] {
  let guess: FloorState | undefined;
  return pressures.map((pressure) => {
    const floor = steadyFloor(tables.sums, pressure, guess);
    guess = floor;
    return { pressure, rate: rateOf(tables, floor).rate, carried: floor.carried };
  });
}

/** Rate is solved for to this share. */
const RATE_TOLERANCE = 1e-4;
/** Pressures looked through for a rate (Pa). */
const LEAST_PRESSURE = 1e2;
const HIGHEST_PRESSURE = 1e8;

/** Face pressure at which fresh grit sinks at a rate (Pa); undefined where no load the grits bear reaches it. */
export function pressureForRate(tables: EstimateTables, rate: number): number | undefined {
  const rateAt = (pressure: number) => loadCurve(tables, [pressure])[0] as LoadPoint;
  let low = LEAST_PRESSURE;
  let high = LEAST_PRESSURE;
  for (let point = rateAt(high); point.rate < rate; point = rateAt(high)) {
    if (!point.carried || high > HIGHEST_PRESSURE) return undefined;
    low = high;
    high *= 2;
  }
  while (high - low > RATE_TOLERANCE * high) {
    const middle = (low + high) / 2;
    if (rateAt(middle).rate < rate) low = middle;
    else high = middle;
  }
  return high;
}

/** Side gap at a depth below the entry, once the cavity is finished (m). */
function gapAt(wall: WallLaw, setting: EstimateSetting, rate: number, depth: number): number {
  return gapAfter(wall, rate > 0 ? (setting.depth - depth) / rate : 0);
}

/** Least-squares slope of the side gap against depth between 10 and 90 %, as an angle (rad). */
function taperOf(wall: WallLaw, setting: EstimateSetting, rate: number): number {
  let sumXX = 0;
  let sumXY = 0;
  for (let i = 0; i < TAPER_POINTS; i++) {
    const fraction = 0.1 + (0.8 * i) / (TAPER_POINTS - 1);
    const x = (fraction - 0.5) * setting.depth;
    sumXX += x * x;
    sumXY += x * gapAt(wall, setting, rate, fraction * setting.depth);
  }
  return sumXX > 0 ? atan(-sumXY / sumXX) : 0;
}

/** What the estimate says of walls and rim. */
function wallFigures(setting: EstimateSetting, rate: number) {
  const { conditions, depth } = setting;
  const wall = wallLaw(conditions, setting.runout);
  const exposure = rate > 0 ? depth / rate : 0;
  const chips = rimChips(conditions, wallHits(wall, exposure), setting.perimeter);
  return {
    overcutEntry: gapAt(wall, setting, rate, 0.1 * depth),
    overcutFloor: gapAt(wall, setting, rate, depth - Math.min(FLOOR_SIZE_HEIGHT, 0.2 * depth)),
    taper: taperOf(wall, setting, rate),
    edgeChipP95: chips.p95,
    edgeChipLargest: chips.largest,
  };
}

function checkSetting(setting: EstimateSetting): void {
  for (const name of ['pressure', 'faceArea', 'outlineArea', 'perimeter', 'depth'] as const) {
    const value = setting[name];
    if (!(value > 0 && value < Number.POSITIVE_INFINITY))
      throw new RangeError(`${name} must be positive, got ${value}`);
  }
}

/** How a cut goes on average: the floor it keeps, the grit that makes it, and the way down. */
interface Cutting {
  readonly sums: GapSums;
  readonly floor: FloorState;
  readonly rate: FloorRate;
  readonly rateStart: number;
  readonly rateEnd: number;
  readonly time: number;
  readonly toolWearLength: number;
  readonly stallPressure: number | null;
}

/** Fresh grit everywhere: one floor all the way down. */
function cutFresh(setting: EstimateSetting, tables: EstimateTables): Cutting {
  const { conditions, depth } = setting;
  const { sums } = tables;
  const floor = steadyFloor(sums, setting.pressure);
  const rate = rateOf(tables, floor);
  const toolDents = overFloor(sums, TERM.toolDent, floor.gap, floor.roughness);
  const wearRate = faceWearRate(conditions.frequency * floor.grits, toolDents, conditions.constants);
  const time = depth / rate.rate;
  return {
    sums,
    floor,
    rate,
    rateStart: rate.rate,
    rateEnd: rate.rate,
    time,
    toolWearLength: rate.rate > 0 ? wearRate * time : 0,
    stallPressure: null,
  };
}

/** Slurry balanced at every depth; the shares of dents and thrown grits are those half way down. */
function cutWithSlurry(setting: EstimateSetting, tables: EstimateTables, slurry: SlurryFace): Cutting {
  const way = throughDepth({ ...slurry, ...setting }, tables.sums);
  const shares = rateOf({ ...tables, sums: way.sums }, way.floor);
  return {
    sums: way.sums,
    floor: { ...way.floor, carried: way.carried },
    rate: { ...shares, rate: setting.depth / way.time },
    rateStart: way.rateStart,
    rateEnd: way.rateEnd,
    time: way.time,
    toolWearLength: way.toolWearLength,
    stallPressure: way.stallPressure,
  };
}

/**
 * The mean-field estimate of one setting.
 * @param tables from `estimateTables` of the same conditions, to save their work
 * @throws RangeError when pressure, areas or depth are not positive and finite
 */
export function estimate(
  setting: EstimateSetting,
  tables: EstimateTables = estimateTables(setting.conditions),
): Estimate {
  checkSetting(setting);
  const { conditions, depth, slurry } = setting;
  const cutting = slurry ? cutWithSlurry(setting, tables, slurry) : cutFresh(setting, tables);
  const { sums, floor, rate, time, toolWearLength } = cutting;
  const { gap, roughness, grits } = floor;
  const share = engagedShare(sums, gap, roughness);
  const chips = overFloor(sums, TERM.chips, gap, roughness);
  const [load99 = 0, load999 = 0] = loadQuantiles(sums, floor, [0.99, 0.999]);
  return {
    ...rate,
    rateStart: cutting.rateStart,
    rateEnd: cutting.rateEnd,
    stallPressure: cutting.stallPressure,
    stallMargin: cutting.stallPressure === null ? null : 1 - setting.pressure / cutting.stallPressure,
    carried: floor.carried,
    gap,
    meanGap: gap + conditions.amplitude,
    engaged: grits * share,
    meanLoad: share > 0 ? overFloor(sums, TERM.load, gap, roughness) / share : 0,
    largestLoad: load999,
    loadHeight: floor.loadHeight,
    chipDepth: floor.chipDepth,
    chipRadius: chips > 0 ? overFloor(sums, TERM.chipRadius, gap, roughness) / chips : 0,
    overlap: floor.overlap,
    floorSq: roughness,
    floorRa: conditions.constants.meanOverRms * roughness,
    damageDepth: radialCrack(sums.rows.crater, load99),
    largestDamage: radialCrack(sums.rows.crater, load999),
    time,
    toolWearLength,
    toolWearRatio: wearRatio(toolWearLength * setting.faceArea, setting.outlineArea * depth),
    ...wallFigures(setting, rate.rate),
    loadCurve: loadCurve(tables, setting.loadCurve ?? []),
  };
}
