import { PI } from '#src/base/math.ts';
import { chipStateAt } from '../floor.ts';
import type { GapSums } from '../gap-sums.ts';
import type { Conditions } from '../records.ts';
import { type Carrier, kriegerDougherty, mixtureDensity } from '../slurry/viscosity.ts';
import type { SlurryConstants } from './constants.ts';
import { type FaceShape, shapeAge } from './face.ts';
import { type AgedPlace, atAge, type Place, placeAt } from './place.ts';

/** What the slurry under a face is worked out for. SI. */
export interface SlurrySetting {
  readonly conditions: Conditions;
  readonly shape: FaceShape;
  readonly carrier: Carrier;
  readonly constants: SlurryConstants;
}

/** A zone of the face at one gap and depth. */
export interface ZoneState extends AgedPlace {
  /** Mean age of the slurry (s). */
  readonly age: number;
  /** Share of the hits that debris does not shield. */
  readonly useful: number;
  /** Debris over the volume of the film. */
  readonly debris: number;
}

/** One point of the load curve. */
export interface CurvePoint {
  readonly gap: number;
  readonly roughness: number;
  /** Means over the face (Pa, m/s). */
  readonly pressure: number;
  readonly rate: number;
  readonly toolRate: number;
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
const HIGHEST_PRESSURE = 3e6;
/** Steps of gap from the largest grain down. */
const STEPS = 160;
/** A fall of the pressure below this share of the highest so far is the stall. */
const STARVED = 0.97;

/** Gap by gap, the places do not depend on the depth: worked out once for all depths. */
export interface CurvePlaces {
  readonly places: readonly { readonly place: Place; readonly roughness: number }[];
}

/** Places for every gap of the sweep, until the fresh grits alone would bear the highest pressure. */
export function curvePlaces(sums: GapSums): CurvePlaces {
  const { conditions } = sums.rows;
  const places: { place: Place; roughness: number }[] = [];
  const shares = new Float64Array(sums.rows.classes.diameter.length);
  let roughness = 0;
  for (let k = 1; k < STEPS; k++) {
    const gap = conditions.grit.largest * (1 - k / STEPS);
    const floor = chipStateAt(sums, gap, roughness);
    roughness = floor.roughness;
    const place = placeAt(sums, gap, roughness, floor.overlap);
    places.push({ place, roughness });
    if (atAge(place, 0, shares).pressure > 1.5 * HIGHEST_PRESSURE) break;
  }
  return { places };
}

/** Exchange factor X = Re / (Re + Re_c) of a film of height h with this share of solids. */
function exchange(setting: SlurrySetting, film: number, solids: number): number {
  const { conditions, carrier, constants } = setting;
  const packing = conditions.constants.packing;
  const crowded = Math.min(solids, 0.97 * packing);
  const viscosity = kriegerDougherty(carrier.viscosity, crowded, { packing, intrinsic: 2.5 });
  const density = mixtureDensity(carrier.density, conditions.abrasive.density, conditions.concentration);
  const reynolds = (density * peakSpeed(conditions) * film) / viscosity;
  return reynolds / (reynolds + constants.exchangeReynolds);
}

const peakSpeed = (conditions: Conditions) => 2 * PI * conditions.frequency * conditions.amplitude;

/**
 * Age of the slurry where it enters the face (s): the way down the side gap at depth L, and what the slurry that comes
 * out again carries back over the part of the way they share.
 */
function edgeAge(setting: SlurrySetting, film: number, depth: number): number {
  const { conditions, constants, shape } = setting;
  const side = constants.sideGap * conditions.grit.massMedian;
  const inside = conditions.concentration / (1 + conditions.concentration / conditions.constants.packing);
  const speed = constants.sideSpeed * peakSpeed(conditions) * exchange(setting, side, inside);
  const returned = (shape.area * film) / (shape.edge * side);
  return depth / speed + (returned / speed) * (depth / (depth + 5 * side));
}

/** Shielding by debris at an age: s solves s (1 + debris(s) / phi_0) = 1 in closed form. */
function shielded(setting: SlurrySetting, place: Place, age: number, aged: AgedPlace): ZoneState {
  const { constants } = setting;
  const half = constants.shielding * place.gritFraction;
  const fines = constants.finesYield * aged.crushed;
  const a = 1 + fines / half;
  const b = ((aged.rate + aged.toolRate) * age) / (place.film * half);
  const useful = 2 / (a + Math.sqrt(a * a + 4 * b));
  return { ...aged, age, useful, debris: (useful * (aged.rate + aged.toolRate) * age) / place.film + fines };
}

/** Debris of a zone `step` (m of T) further in than the slurry of age `before`: the lowest root, found from below. */
function zoneAfter(
  setting: SlurrySetting,
  place: Place,
  from: { readonly age: number; readonly debris: number; readonly step: number },
  shares: Float64Array,
): ZoneState {
  const speed = peakSpeed(setting.conditions);
  const { debrisBulking } = setting.constants;
  let debris = from.debris;
  let state: ZoneState | null = null;
  for (let i = 0; i < 80; i++) {
    const x = exchange(setting, place.film, place.gritFraction + debrisBulking * debris);
    const age = from.age + from.step / (speed * x);
    state = shielded(setting, place, age, atAge(place, age, shares));
    if (state.debris - debris <= 1e-5 * state.debris + 1e-9) break;
    debris += 0.8 * (state.debris - debris);
  }
  return state as ZoneState;
}

/** The face at one gap and depth, zone by zone from the edge inward. */
export function faceAt(
  setting: SlurrySetting,
  at: { readonly place: Place; readonly roughness: number },
  depth: number,
  shares: Float64Array,
): CurvePoint {
  const { shape } = setting;
  const { place } = at;
  const zones: ZoneState[] = [];
  let age = edgeAge(setting, place.film, depth);
  let debris = 0;
  let before = 0;
  let pressure = 0;
  let rate = 0;
  let toolRate = 0;
  for (let zone = 0; zone < shape.zones; zone++) {
    const reach = shapeAge(shape, zone, place.film);
    const state = zoneAfter(setting, place, { age, debris, step: reach - before }, shares);
    zones.push(state);
    age = state.age;
    debris = state.debris;
    before = reach;
    pressure += state.pressure / shape.zones;
    rate += (state.useful * state.rate) / shape.zones;
    toolRate += (state.useful * state.toolRate) / shape.zones;
  }
  return { gap: place.gap, roughness: at.roughness, pressure, rate, toolRate, zones };
}

/**
 * The load curve at a depth, from the largest grain down: the points that bear more than any before them. Where the
 * exchange breaks down the pressure falls as the gap closes; the highest before that is the stall, and what comes after
 * is the starved face a load beyond it drops to.
 */
export function slurryCurve(setting: SlurrySetting, places: CurvePlaces, depth: number): SlurryCurve {
  const points: CurvePoint[] = [];
  const first = places.places[0];
  const shares = new Float64Array(first ? first.place.impulse.length : 0);
  let highest = 0;
  let stall = Number.POSITIVE_INFINITY;
  let starved = faceAt(setting, first as CurvePlaces['places'][number], depth, shares);
  for (const at of places.places) {
    const point = faceAt(setting, at, depth, shares);
    starved = point;
    if (point.pressure > highest) {
      highest = point.pressure;
      points.push(point);
    } else if (point.pressure < STARVED * highest) {
      stall = Math.min(stall, highest);
    }
    if (highest > HIGHEST_PRESSURE) break;
  }
  return { depth, points, starved, stall };
}

/** The point of a curve that bears a pressure, interpolated; the starved face when none does. */
export function pointAt(curve: SlurryCurve, pressure: number): CurvePoint & { readonly carried: boolean } {
  const { points } = curve;
  const k = points.findIndex((point) => point.pressure >= pressure);
  if (k < 0) return { ...curve.starved, carried: false };
  if (k === 0) return { ...(points[0] as CurvePoint), carried: true };
  const low = points[k - 1] as CurvePoint;
  const high = points[k] as CurvePoint;
  const t = (pressure - low.pressure) / (high.pressure - low.pressure);
  const mix = (a: number, b: number) => a + t * (b - a);
  return {
    carried: true,
    gap: mix(low.gap, high.gap),
    roughness: mix(low.roughness, high.roughness),
    pressure,
    rate: mix(low.rate, high.rate),
    toolRate: mix(low.toolRate, high.toolRate),
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
