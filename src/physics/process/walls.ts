import { atan } from '#src/base/math.ts';
import type { EdgeChip } from '../edge-chip.ts';
import type { Conditions } from '../records.ts';
import { rimChips } from '../rim.ts';
import { edgeGrowth, sideProfile, sideWear, type ToolPace, wornTool, wornVolume } from '../tool-wear.ts';
import { gapAfter, type WallLaw, wallHits, wallLaw } from '../wall.ts';
import { wallFreshness } from '../wall-slurry.ts';
import type { Station, WayDown } from './through-depth.ts';

/** Height above the floor at which its size is taken (m), and the share of the depth where the cavity is shallower. */
const FLOOR_SIZE_HEIGHT = 0.2e-3;
const FLOOR_SIZE_SHARE = 0.2;
const ENTRY_SHARE = 0.1;
const TAPER_POINTS = 33;
/** Share of the depth that must lie above the fillet for a taper to be had. */
const TAPER_NEEDS = 0.5;

/** What walls, rim and the worn tool follow from. */
export interface WallSetting {
  readonly conditions: Conditions;
  readonly runout: number;
  readonly perimeter: number;
  readonly faceArea: number;
  /** Edge radius of the tool as it comes to this pass (m). */
  readonly edgeRadius: number;
}

/** Walls, rim and tool at the end. Lengths in metres. */
export interface WallFigures {
  /** Tool's end: edge radius, and how far its side stands in at the edge. */
  readonly toolEdgeRadius: number;
  readonly toolSideLoss: number;
  /** Volume the tool has lost, side and edge included (m3). */
  readonly toolVolume: number;
  /** Radius between wall and floor: the worn edge and half the gap under the face. */
  readonly cornerRadius: number;
  /** Wall over the new tool's outline at 0.1 of the depth, and 0.2 mm (at most 0.2 of the depth) above the floor. */
  readonly overcutEntry: number;
  readonly overcutFloor: number;
  /** Half-angle between 10 and 90 % of the depth above the fillet (rad); NaN where the fillet takes half the wall. */
  readonly taper: number;
  /** Chips along the entry rim; NaN where the cavity is shallower than the tool's edge radius and has no wall yet. */
  readonly edgeChipP95: EdgeChip;
  readonly edgeChipLargest: EdgeChip;
}

/** Share of first squeezes in the side gap at a station: `wallFreshness` of what flows and of the debris made there. */
function freshnessAt({ conditions, perimeter }: WallSetting, station: Station): number {
  const { leg, rate, toolRate, flow } = station;
  if (!leg.slurry) return conditions.constants.wallRenewal;
  const { carrier, constants } = leg.slurry;
  const debrisFlow = ((rate + toolRate) * leg.area) / perimeter;
  return wallFreshness(conditions, { carrier, forcedFlow: Math.abs(flow) / perimeter, debrisFlow, constants });
}

/** Exposure of the wall from a depth on until the end (s), as if all of it were at the freshness of the end. */
type Exposure = (depth: number) => number;

/**
 * Sums freshness / rate over the depth: linear in the square root of the depth between the stations, a step where one leg
 * follows another.
 */
function exposureOf(stations: readonly Station[], values: readonly number[], depth: number): Exposure {
  const s: number[] = [];
  const y: number[] = [];
  stations.forEach((station, k) => {
    const before = stations[k - 1];
    if (before && before.leg !== station.leg) {
      s.push(Math.sqrt(station.leg.from / depth));
      y.push(values[k] as number);
    }
    s.push(Math.sqrt(station.depth / depth));
    y.push(values[k] as number);
  });
  // 2 depth s ds = dL
  const part = (k: number, from: number, to: number) => {
    const [s0, s1, y0, y1] = [s[k], s[k + 1], y[k], y[k + 1]] as [number, number, number, number];
    if (!(to > from)) return 0;
    if (!(y0 + y1 < Number.POSITIVE_INFINITY)) return Number.POSITIVE_INFINITY;
    const slope = (y1 - y0) / (s1 - s0);
    const level = y0 - slope * s0;
    return depth * (level * (to * to - from * from) + (2 / 3) * slope * (to * to * to - from * from * from));
  };
  return (z) => {
    const from = Math.sqrt(Math.max(0, z) / depth);
    let sum = 0;
    for (let k = 0; k + 1 < s.length; k++) sum += part(k, Math.max(from, s[k] as number), s[k + 1] as number);
    return sum;
  };
}

/** How far the fillet stands in from the wall at a height above the floor (m). */
function filletAt(radius: number, height: number): number {
  const left = radius - height;
  return left > 0 ? radius - Math.sqrt(radius * radius - left * left) : 0;
}

/** Least-squares slope of the wall against depth, as an angle (rad), positive when wider at the top. */
function taperOf(wallAt: (z: number) => number, from: number, to: number): number {
  let sumXX = 0;
  let sumXY = 0;
  for (let i = 0; i < TAPER_POINTS; i++) {
    const x = (i / (TAPER_POINTS - 1) - 0.5) * (to - from);
    sumXX += x * x;
    sumXY += x * wallAt((from + to) / 2 + x);
  }
  return sumXX > 0 ? atan(-sumXY / sumXX) : 0;
}

/** The tool's end: its wear, how far its side stands in at a height above the edge, and the volume it has lost. */
interface WornEnd {
  readonly edgeRadius: number;
  readonly sideLoss: number;
  readonly inset: (height: number) => number;
  readonly volume: number;
}

/** The tool's end at the mean pace of the way down. */
function wornEnd(setting: WallSetting, way: WayDown, law: WallLaw, depth: number): WornEnd {
  const { lost, time, end } = way;
  const { edgeRadius, faceArea, perimeter } = setting;
  if (!(lost > 0 && time > 0 && time < Number.POSITIVE_INFINITY))
    return { edgeRadius, sideLoss: 0, inset: () => 0, volume: 0 };
  const faceRate = lost / time;
  const side = sideWear(law, { sinkRate: depth / time, faceRate, lost });
  const pace: ToolPace = { faceRate, ...side, edgeGrowth: edgeGrowth(end.sums, end.floor) };
  const worn = wornTool({ ...pace, edgeRadius, lost });
  // no more can go than there is: 2 area / perimeter is the radius of a round tool
  const most = (2 * faceArea) / perimeter;
  const state = { lost, edgeRadius: Math.min(worn.edgeRadius, most), sideLoss: Math.min(worn.sideLoss, most) };
  const beside = wornVolume({ state, pace, newEdgeRadius: edgeRadius, faceArea: 0, perimeter, depth });
  return {
    ...state,
    inset: (height) => Math.min(most, sideProfile(pace, lost, height)),
    volume: way.faceVolume + beside,
  };
}

const NO_CHIP: EdgeChip = { depth: Number.NaN, width: Number.NaN, breadth: Number.NaN };

/**
 * Walls, rim and worn tool of a finished cavity of depth `depth`. The gap stands against the tool's own side, which the
 * wear has taken back. The corner is rolled by grains about as large as the gap under the face: their middles keep half of
 * it from the tool's edge, so the fillet has the edge's radius and that half (derived; 0 to 7 % over the least-squares arc
 * of impact-by-impact cuts in glass). Below the top of the fillet the cavity is narrower by it.
 */
export function wallFigures(setting: WallSetting, way: WayDown, depth: number): WallFigures {
  const { conditions } = setting;
  const { stations } = way;
  const freshness = stations.map((station) => freshnessAt(setting, station));
  const last = freshness.at(-1) as number;
  const law = wallLaw(conditions, setting.runout, last);
  const slow = stations.map(({ rate }, k) => (last > 0 ? (freshness[k] as number) / last : 1) / rate);
  // a floor that does not sink exposes no wall
  const exposure = way.time < Number.POSITIVE_INFINITY ? exposureOf(stations, slow, depth) : () => 0;
  const tool = wornEnd(setting, way, law, depth);
  const wallAt = (z: number) => gapAfter(law, exposure(z)) - tool.inset(depth - z);
  const cornerRadius = tool.edgeRadius + Math.max(0, way.end.floor.gap) / 2;
  const height = Math.min(FLOOR_SIZE_HEIGHT, FLOOR_SIZE_SHARE * depth);
  const lowest = Math.min((1 - ENTRY_SHARE) * depth, depth - tool.edgeRadius - conditions.grit.largest);
  const sized = (z: number) => wallAt(z) - filletAt(Math.min(cornerRadius, depth), depth - z);
  const { p95, largest } =
    depth > setting.edgeRadius
      ? rimChips(conditions, wallHits(law, exposure(0)), setting.perimeter)
      : { p95: NO_CHIP, largest: NO_CHIP };
  return {
    toolEdgeRadius: tool.edgeRadius,
    toolSideLoss: tool.sideLoss,
    toolVolume: tool.volume,
    cornerRadius,
    overcutEntry: sized(ENTRY_SHARE * depth),
    overcutFloor: sized(depth - height),
    taper: lowest < TAPER_NEEDS * depth ? Number.NaN : taperOf(wallAt, ENTRY_SHARE * depth, lowest),
    edgeChipP95: p95,
    edgeChipLargest: largest,
  };
}
