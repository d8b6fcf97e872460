import { radialCrack } from './crater.ts';
import type { EdgeChip } from './edge-chip.ts';
import { breakingThickness, crackedStrength, type ExitBreakout, exitBreakout, exitLoad } from './exit.ts';
import { engagedShare, type FloorState, loadQuantiles, overFloor, steadyFloor } from './floor.ts';
import { TERM } from './gap-sums.ts';
import type { ToolLife } from './pass.ts';
import { usedPopulation } from './process/charge.ts';
import type { SlurryFace } from './process/slurry-face.ts';
import { type Leg, legsOf, type Stage, type Through } from './process/stages.ts';
import { type EstimateTables, estimateTables, type FloorRate, rateOf, withPopulation } from './process/tables.ts';
import type { WayDown } from './process/through-depth.ts';
import { toolsWay } from './process/tool-life.ts';
import { wallFigures } from './process/walls.ts';
import type { Conditions } from './records.ts';
import { wearRatio } from './tool-wear.ts';

export { usedPopulation } from './process/charge.ts';
export { makeSlurryFace, type SlurryFace, type SlurryFaceOptions } from './process/slurry-face.ts';
export type { Stage } from './process/stages.ts';
export { type EstimateTables, estimateTables, type FloorRate, memberTables } from './process/tables.ts';

/** What an estimate is asked for. SI. */
export interface EstimateSetting {
  readonly conditions: Conditions;
  /** Static load (N); `pressure` times `faceArea` if left out. One of the two is needed. */
  readonly load?: number;
  /** Mean pressure on the whole tool face (Pa): static load over face area. */
  readonly pressure?: number;
  /** Area of the tool face (m2). */
  readonly faceArea: number;
  /** Area and perimeter of the cavity's outline (m2, m). */
  readonly outlineArea: number;
  readonly perimeter: number;
  /** Depth of the cavity (m): of the tool's tip, if nothing of it is lost. */
  readonly depth: number;
  /** Lateral run-out, zero-to-peak (m). */
  readonly runout: number;
  /** Edge radius of the tool as it comes to this pass (m); sharp if left out. */
  readonly edgeRadius?: number;
  /** Parts of the way down with their own contact area and slurry; one, of the whole face, if left out. */
  readonly stages?: readonly Stage[];
  /** The slurry under the face; fresh grit everywhere if left out. */
  readonly slurry?: SlurryFace;
  /** How the length lost is dealt with; made up for, and no end to it, if left out. */
  readonly toolLife?: ToolLife;
  /** A through-cut. */
  readonly exit?: Through;
  /** Number shares by size class of the slurry as it comes to this pass; the grade's own if left out. */
  readonly population?: Float64Array;
  /** Pressures of the load curve (Pa); none if left out. */
  readonly loadCurve?: readonly number[];
}

/** The rate at one pressure of the load curve. */
export interface LoadPoint {
  readonly pressure: number;
  /** Rate of sinking (m/s). */
  readonly rate: number;
  readonly carried: boolean;
}

/**
 * The mean-field answer. SI. Floor, loads, damage and roughness are those at the end of the way down; time and wear are
 * sums over it. Without a slurry face, grit is fresh everywhere: the rate does not fall with depth, rises with load without
 * a best load, and no stall is defined.
 */
export interface Estimate extends FloorRate {
  /** Rate of sinking at the entry face and at depth (m/s). */
  readonly rateStart: number;
  readonly rateEnd: number;
  /** Depth the cavity comes to (m), less than asked for where the tool runs out or its wear is not made up for. */
  readonly depthReached: number;
  readonly ranOut: boolean;
  /** The load is above what the exchange of slurry bears somewhere on the way down. */
  readonly stalled: boolean;
  /** Where the margin is least: the pressure at which the exchange breaks down (Pa), and 1 - pressure / stall. Null where fresh. */
  readonly stallPressure: number | null;
  readonly stallMargin: number | null;
  /** Pressure of the highest rate at depth (Pa); null where fresh. */
  readonly bestPressure: number | null;
  /** The grits bear the pressure; false: the state is that of the largest pressure they bear. */
  readonly carried: boolean;
  /** Grains long enough to touch both faces over those of fresh slurry at the same gap. */
  readonly freshFraction: number;
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
  /** Height of the floor under the oldest slurry over that under the freshest (m); Infinity where a boss stays uncut. */
  readonly hump: number;
  /** Radial crack depth that 99 % and 99.9 % of the hits stay below (m). */
  readonly damageDepth: number;
  readonly largestDamage: number;
  /** Time to the depth reached (s); Infinity when nothing is removed. */
  readonly time: number;
  /** Length the tool loses on the way (m), and volume of tool per volume of work, side and edge included. */
  readonly toolWearLength: number;
  readonly toolWearRatio: number;
  /** Radius of the tool's worn edge, and how far its side stands in there (m). */
  readonly toolEdgeRadius: number;
  readonly toolSideLoss: number;
  /** Radius between wall and floor (m): the worn edge and half the gap under the face, as grains roll it. */
  readonly cornerRadius: number;
  /** Wall over the new tool's outline at 0.1 of the depth, and 0.2 mm (at most 0.2 of the depth) above the floor (m). */
  readonly overcutEntry: number;
  readonly overcutFloor: number;
  /** Half-angle of the wall, least squares (rad), positive when wider at the top; NaN where the fillet takes half of it. */
  readonly taper: number;
  /** Chips along the entry rim: 95 % of its length, and the deepest; NaN where the cavity has no wall yet. */
  readonly edgeChipP95: EdgeChip;
  readonly edgeChipLargest: EdgeChip;
  /** What breaks out at the exit; null where the cavity does not come through. */
  readonly exit: ExitBreakout | null;
  readonly loadCurve: readonly LoadPoint[];
}

/** Rates at several pressures of fresh grit from one set of tables, in the order given. */
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

/** A setting whose load is known and whose numbers hold. */
type Loaded = EstimateSetting & { readonly load: number; readonly edgeRadius: number };

function checked(setting: EstimateSetting): Loaded {
  const { edgeRadius = 0 } = setting;
  for (const name of ['faceArea', 'outlineArea', 'perimeter', 'depth'] as const) {
    const value = setting[name];
    if (!(value > 0 && value < Number.POSITIVE_INFINITY))
      throw new RangeError(`${name} must be positive, got ${value}`);
  }
  const load = setting.load ?? (setting.pressure ?? Number.NaN) * setting.faceArea;
  if (!(load > 0 && load < Number.POSITIVE_INFINITY))
    throw new RangeError(`load or pressure must be positive, got ${setting.load ?? setting.pressure}`);
  if (!(edgeRadius >= 0)) throw new RangeError(`edgeRadius must not be negative, got ${edgeRadius}`);
  return { ...setting, load, edgeRadius };
}

/** Without vibration or grit nothing is exchanged and nothing cut: the slurry does not matter. */
function withoutSlurry(setting: Loaded): Loaded {
  const { slurry: _, stages, ...rest } = setting;
  return { ...rest, ...(stages && { stages: stages.map(({ slurry: __, ...stage }) => stage) }) };
}

/** The way down with the charge as it is half way through the pass. */
function wayWith(setting: Loaded, tables: EstimateTables): { way: WayDown; legs: readonly Leg[]; ranOut: boolean } {
  const legs = legsOf(setting);
  const leg = legs.find(({ slurry }) => slurry?.charge) ?? legs[0];
  const charge = leg?.slurry?.charge;
  if (!leg?.slurry || !charge || setting.population) return { ...toolsWay(legs, tables, setting.toolLife), legs };
  const use = { slurry: leg.slurry, ...leg, volume: charge.volume, depth: (leg.from + leg.to) / 2 };
  const after = (used: number) => {
    const shares = usedPopulation(tables, { ...use, slurry: leg.slurry as SlurryFace, used });
    return toolsWay(legs, withPopulation(tables, shares), setting.toolLife);
  };
  const before = after(charge.used);
  if (!(before.way.time < Number.POSITIVE_INFINITY)) return { ...before, legs };
  return { ...after(charge.used + before.way.time / 2), legs };
}

/** What breaks out where the cavity comes through. */
function breakoutOf(setting: Loaded, depth: number, figures: { largestLoad: number; largestDamage: number }) {
  const { exit, conditions, load } = setting;
  if (!exit || depth < exit.thickness) return null;
  const { work, constants } = conditions;
  const strength = crackedStrength(work, figures.largestDamage);
  return exitBreakout({
    load: exitLoad(load, exit, (force) => breakingThickness(force, strength)),
    work,
    crack: figures.largestDamage,
    backing: exit.backing,
    edgeLoad: figures.largestLoad,
    constants,
  });
}

/** Floor, loads and damage at the end of the way down. */
function floorFigures(conditions: Conditions, { end }: WayDown) {
  const { sums, floor } = end;
  const { gap, roughness, grits } = floor;
  const share = engagedShare(sums, gap, roughness);
  const chips = overFloor(sums, TERM.chips, gap, roughness);
  const [load99 = 0, load999 = 0] = loadQuantiles(sums, floor, [0.99, 0.999]);
  return {
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
    hump: end.hump,
    freshFraction: end.freshFraction,
    bestPressure: end.bestPressure,
  };
}

/** Volume of work removed down to the depth reached (m3). */
function workVolume(setting: Loaded, legs: readonly Leg[], depth: number): number {
  if (!setting.stages) return setting.outlineArea * depth;
  const rim = setting.outlineArea / setting.faceArea;
  return legs.reduce((sum, { area, from, to }) => sum + rim * area * Math.max(0, Math.min(to, depth) - from), 0);
}

/**
 * The mean-field estimate of one setting.
 * @param tables from `estimateTables` of the same conditions, to save their work
 * @throws RangeError when load, areas or depth are not positive and finite, and when stages do not join
 */
export function estimate(
  setting: EstimateSetting,
  tables: EstimateTables = estimateTables(setting.conditions),
): Estimate {
  const { conditions, population } = setting;
  const works = conditions.amplitude > 0 && conditions.concentration > 0;
  const loaded = works ? checked(setting) : withoutSlurry(checked(setting));
  const { way, legs, ranOut } = wayWith(loaded, population ? withPopulation(tables, population) : tables);
  const { stations, time, lost, end } = way;
  const depthReached = stations.at(-1)?.depth ?? 0;
  const floor = floorFigures(conditions, way);
  const walls = wallFigures(loaded, way, depthReached);
  const { toolVolume, ...wallsShown } = walls;
  const sunk = depthReached - (stations[0]?.depth ?? 0);
  return {
    ...end.rate,
    rate: sunk / time,
    rateStart: stations[0]?.rate ?? 0,
    rateEnd: stations.at(-1)?.rate ?? 0,
    depthReached,
    ranOut,
    stalled: way.stalled,
    stallPressure: way.stallPressure,
    stallMargin: way.stallMargin,
    carried: way.carried,
    ...floor,
    time,
    toolWearLength: lost,
    toolWearRatio: wearRatio(toolVolume, workVolume(loaded, legs, depthReached)),
    ...wallsShown,
    exit: breakoutOf(loaded, depthReached, floor),
    loadCurve: loadCurve(tables, setting.loadCurve ?? []),
  };
}
