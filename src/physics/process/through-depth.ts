import { type FloorState, floorAt, steadyFloor } from '../floor.ts';
import { type GapSums, gapSums } from '../gap-sums.ts';
import { humpOf } from './hump.ts';
import { bestOf, type LoadSearch, loadSearch, stallOf, type WorkingPoint, workingPoint } from './load-search.ts';
import { agedShares, placeAt } from './place.ts';
import { type CurvePlaces, curvePlaces } from './slurry-curve.ts';
import type { Leg } from './stages.ts';
import { type EstimateTables, type FloorRate, rateOf, toolRateOf } from './tables.ts';

/** How a floor sinks at one depth. SI. */
export interface Station {
  readonly depth: number;
  /** Length of the way it stands for (m). */
  readonly weight: number;
  readonly leg: Leg;
  /** Rates of sinking and of tool loss (m/s). */
  readonly rate: number;
  readonly toolRate: number;
  /** Flow pumped or drawn through the face (m3/s). */
  readonly flow: number;
  readonly carried: boolean;
  readonly stalled: boolean;
}

/** How the way down ends: what is worked out of the last depth alone. */
export interface WayEnd {
  readonly floor: FloorState;
  readonly rate: FloorRate;
  /** Sums over the population in the middle of the face. */
  readonly sums: GapSums;
  /** Grains that touch both faces over those of fresh slurry at the same gap. */
  readonly freshFraction: number;
  /** Steady height of the floor under the oldest slurry over that under the freshest (m). */
  readonly hump: number;
  /** Pressure of the highest rate (Pa); null where the grit is fresh, or the rate rises as far as the load is followed. */
  readonly bestPressure: number | null;
}

/** A cut under a load from the entry face down. SI. */
export interface WayDown {
  /** From the start down; the first has no weight. */
  readonly stations: readonly Station[];
  readonly time: number;
  /** Length the tool loses (m), and the volume its face loses (m3). */
  readonly lost: number;
  readonly faceVolume: number;
  /** Least over the legs at their deepest of 1 - pressure / stall, and that leg's stall (Pa); null where fresh. */
  readonly stallMargin: number | null;
  readonly stallPressure: number | null;
  readonly carried: boolean;
  readonly stalled: boolean;
  readonly end: WayEnd;
}

/**
 * Radau's rule on [0, 1], the end included (Radau IIA): three nodes for one leg, two for each of several. The variable is the
 * square root of the depth, since the rate falls fastest at the entry.
 */
const TWO = { nodes: [1 / 3, 1], weights: [3 / 4, 1 / 4] } as const;
const THREE = {
  nodes: [(4 - Math.sqrt(6)) / 10, (4 + Math.sqrt(6)) / 10, 1],
  weights: [(16 - Math.sqrt(6)) / 36, (16 + Math.sqrt(6)) / 36, 1 / 9],
} as const;

/** What the depths share. */
interface Descent {
  readonly tables: EstimateTables;
  readonly places: CurvePlaces;
  /** Floors under fresh grit, by pressure. */
  readonly floors: Map<number, FloorState>;
}

/** A face at one depth of a leg: the load curve there and the point on it, or the floor under fresh grit. */
interface Reached {
  readonly station: Station;
  readonly curve?: { readonly search: LoadSearch; readonly working: WorkingPoint };
  readonly floor?: FloorState;
}

function reach(descent: Descent, leg: Leg, depth: number, weight: number): Reached {
  const { tables, places } = descent;
  if (!leg.slurry) {
    const floor = descent.floors.get(leg.pressure) ?? steadyFloor(tables.sums, leg.pressure);
    descent.floors.set(leg.pressure, floor);
    const { rate } = rateOf(tables, floor);
    const toolRate = toolRateOf(tables, floor);
    const { carried } = floor;
    return { station: { depth, weight, leg, rate, toolRate, flow: 0, carried, stalled: false }, floor };
  }
  const { conditions } = tables.sums.rows;
  const search = loadSearch({ ...leg.slurry, conditions }, places, depth);
  const working = workingPoint(search, leg.pressure);
  const { rate, toolRate, flow } = working.point;
  const { carried, stalled } = working;
  return { station: { depth, weight, leg, rate, toolRate, flow, carried, stalled }, curve: { search, working } };
}

/** Follows the legs down: rates at a few depths of each, time and wear as their sums. */
export function throughDepth(legs: readonly Leg[], tables: EstimateTables): WayDown {
  const first = legs[0] as Leg;
  const depth = (legs.at(-1) as Leg).to;
  const descent: Descent = { tables, places: curvePlaces(tables.sums), floors: new Map() };
  const rule = legs.length === 1 ? THREE : TWO;
  const start = reach(descent, first, first.from, 0);
  const stations = [start.station];
  let reached = start;
  let margin: { margin: number; stall: number } | null = null;
  for (const leg of legs) {
    const from = Math.sqrt(leg.from / depth);
    const span = Math.sqrt(leg.to / depth) - from;
    for (const [j, node] of rule.nodes.entries()) {
      const s = from + span * node;
      const at = node === 1 ? leg.to : depth * s * s;
      reached = reach(descent, leg, at, 2 * depth * s * span * (rule.weights[j] as number));
      stations.push(reached.station);
    }
    const here = marginOf(reached, leg.pressure);
    if (here && (!margin || here.margin < margin.margin)) margin = here;
  }
  return { ...sumUp(stations), ...stallFigures(margin), stations, end: endOf(reached, descent) };
}

function stallFigures(margin: { margin: number; stall: number } | null) {
  return { stallMargin: margin?.margin ?? null, stallPressure: margin?.stall ?? null };
}

function marginOf({ curve }: Reached, pressure: number): { margin: number; stall: number } | null {
  if (!curve) return null;
  const stall = stallOf(curve.search);
  return { margin: 1 - pressure / stall, stall };
}

function sumUp(stations: readonly Station[]) {
  let time = 0;
  let lost = 0;
  let faceVolume = 0;
  for (const { weight, rate, toolRate, leg } of stations) {
    if (weight === 0) continue;
    time += weight / rate;
    if (!(rate > 0)) continue;
    lost += (weight * toolRate) / rate;
    faceVolume += (leg.area * weight * toolRate) / rate;
  }
  return {
    time,
    lost,
    faceVolume,
    carried: stations.every(({ carried }) => carried),
    stalled: stations.some(({ stalled }) => stalled),
  };
}

function endOf({ curve, floor, station }: Reached, { tables, places }: Descent): WayEnd {
  if (!curve) {
    const fresh = floor as FloorState;
    const rate = rateOf(tables, fresh);
    return { floor: fresh, rate, sums: tables.sums, freshFraction: 1, hump: 0, bestPressure: null };
  }
  const { search, working } = curve;
  const { gap, roughness, zones } = working.point;
  const place = placeAt(tables.sums, gap, roughness, 1, places.crush);
  const shares = new Float64Array(place.impulse.length);
  const middle = agedShares(place, zones[zones.length >> 1]?.age ?? 0, shares);
  const sums = gapSums(tables.sums.rows, middle);
  const settled = { ...floorAt(sums, gap, roughness), carried: station.carried };
  return {
    floor: settled,
    rate: { ...rateOf({ ...tables, sums }, settled), rate: working.point.rate },
    sums,
    freshFraction: freshShare(tables.sums, sums, gap),
    hump: humpOf(search, working),
    bestPressure: bestOf(search)?.pressure ?? null,
  };
}

/** Grains longer than the gap in an aged slurry over those of the grade as bought. */
function freshShare({ rows }: GapSums, { population }: GapSums, gap: number): number {
  const { diameter, fraction } = rows.classes;
  let aged = 0;
  let fresh = 0;
  for (let i = 0; i < diameter.length && (diameter[i] as number) > gap; i++) {
    aged += population[i] as number;
    fresh += fraction[i] as number;
  }
  return fresh > 0 ? aged / fresh : 1;
}
