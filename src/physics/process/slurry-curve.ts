import { atAge } from './place.ts';
import { type CurvePlaces, placeOf, type RoughPlace } from './places.ts';
import { facesZones, type SlurrySetting, type ZoneState } from './zones.ts';

export { type CurvePlaces, curvePlaces, placeOf, type RoughPlace } from './places.ts';
export { type SlurrySetting, type ZoneState, zoneAt } from './zones.ts';

/** One point of the load curve. */
export interface CurvePoint {
  readonly gap: number;
  readonly roughness: number;
  /** Means over the face (Pa, m/s). */
  readonly pressure: number;
  readonly rate: number;
  readonly toolRate: number;
  /** Flow pumped or drawn through the face (m3/s), positive inward through its bores. */
  readonly flow: number;
  /** From the freshest to the oldest. */
  readonly zones: readonly ZoneState[];
}

/** A load curve at one depth: points of rising pressure. */
export interface SlurryCurve {
  readonly depth: number;
  readonly points: readonly CurvePoint[];
  /** The face nearly closed: what a load that no gap bears drops to. */
  readonly starved: CurvePoint;
  /** Pressure the grits bear before the exchange breaks down (Pa); Infinity when they bear all that was asked. */
  readonly stall: number;
}

/** Highest pressure the curve is followed to (Pa): beyond it there are no data at all. */
export const HIGHEST_PRESSURE = 3e6;
/** Share of the rate before it below which a face that bears more has stalled. */
export const SLOWER = 0.9;
/** The same of a face that bears less. */
export const BROKEN = 0.8;

/** Whether the fresh grits alone bear well over the highest pressure at a place: no need to look further down. */
export function isBeyond({ place }: RoughPlace, shares: Float64Array): boolean {
  return atAge(place, 0, shares).pressure > 1.5 * HIGHEST_PRESSURE;
}

/** The face at one gap and depth, zone by zone from the freshest on. */
export function faceAt(setting: SlurrySetting, at: RoughPlace, depth: number, shares: Float64Array): CurvePoint {
  const { shape } = setting;
  const { place, roughness } = at;
  const here = { place, depth, shares };
  const { zones, flow } = facesZones(setting, here);
  let pressure = 0;
  let rate = 0;
  let toolRate = 0;
  for (const zone of zones) {
    pressure += zone.pressure / shape.zones;
    rate += (zone.useful * zone.rate) / shape.zones;
    toolRate += (zone.useful * zone.toolRate) / shape.zones;
  }
  return { gap: place.gap, roughness, pressure, rate, toolRate, flow, zones };
}

/**
 * The load curve at a depth, from the largest grain down: the points that bear more than any before them. Where the
 * exchange breaks down the pressure falls as the gap closes, and the next gap that bears as much sinks slower by a tenth or
 * more, if there is one: the pressure before that is the stall, and what comes after is the starved face a load beyond it
 * drops to.
 */
export function slurryCurve(setting: SlurrySetting, places: CurvePlaces, depth: number): SlurryCurve {
  const points: CurvePoint[] = [];
  const shares = new Float64Array(places.sums.population.length);
  let stall = Number.POSITIVE_INFINITY;
  let starved: CurvePoint | undefined;
  for (let k = 1; k <= places.last; k++) {
    const at = placeOf(places, k);
    const point = faceAt(setting, at, depth, shares);
    const highest = points.at(-1);
    starved = point;
    const more = !highest || point.pressure > highest.pressure;
    if (highest && point.rate < (more ? SLOWER : BROKEN) * highest.rate) stall = Math.min(stall, highest.pressure);
    if (more) points.push(point);
    if (point.pressure > HIGHEST_PRESSURE || isBeyond(at, shares)) break;
  }
  const last = starved as CurvePoint;
  const top = points.at(-1);
  if (top && last.rate < SLOWER * top.rate) stall = Math.min(stall, top.pressure);
  return { depth, points, starved: last, stall };
}

/** The point of a curve that bears a pressure, interpolated; the starved face when none does. */
export function pointAt(curve: SlurryCurve, pressure: number): CurvePoint & { readonly carried: boolean } {
  const { points } = curve;
  const k = points.findIndex((point) => point.pressure >= pressure);
  if (k < 0) return { ...curve.starved, carried: false };
  if (k === 0) return { ...(points[0] as CurvePoint), carried: true };
  return { ...pointBetween(points[k - 1] as CurvePoint, points[k] as CurvePoint, pressure), carried: true };
}

/** The point of a pressure between two, interpolated. */
export function pointBetween(low: CurvePoint, high: CurvePoint, pressure: number): CurvePoint {
  const t = (pressure - low.pressure) / (high.pressure - low.pressure);
  const mix = (a: number, b: number) => a + t * (b - a);
  return {
    gap: mix(low.gap, high.gap),
    roughness: mix(low.roughness, high.roughness),
    pressure,
    rate: mix(low.rate, high.rate),
    toolRate: mix(low.toolRate, high.toolRate),
    flow: mix(low.flow, high.flow),
    zones: low.zones.map((zone, n) => {
      const other = high.zones[n] as ZoneState;
      return {
        age: mix(zone.age, other.age),
        useful: mix(zone.useful, other.useful),
        debris: mix(zone.debris, other.debris),
        pressure: mix(zone.pressure, other.pressure),
        rate: mix(zone.rate, other.rate),
        toolRate: mix(zone.toolRate, other.toolRate),
        crushed: mix(zone.crushed, other.crushed),
      };
    }),
  };
}

/** The point of the highest rate up to the stall: the best load. */
export function bestPoint(curve: SlurryCurve): CurvePoint {
  return curve.points.reduce((best, point) => (point.pressure <= curve.stall && point.rate > best.rate ? point : best));
}
