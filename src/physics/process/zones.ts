import type { Conditions } from '../records.ts';
import type { Carrier } from '../slurry/viscosity.ts';
import type { SlurryConstants } from './constants.ts';
import { exchangeFactor, peakSpeed, sideGapWidth, sideGritFraction } from './exchange.ts';
import { type FaceShape, shapeAge } from './face.ts';
import { lowestRoot } from './lowest-root.ts';
import { type AgedPlace, atAge, type Place } from './place.ts';
import { throughFlow } from './through-flow.ts';

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

/**
 * Age of the slurry where it enters the face (s): the way down the side gap at depth L, and what the slurry that comes
 * out again carries back over the part of the way they share.
 */
function edgeAge(setting: SlurrySetting, film: number, depth: number): number {
  const { conditions, constants, shape } = setting;
  const side = sideGapWidth(setting);
  const exchange = exchangeFactor(setting, side, sideGritFraction(conditions));
  const speed = constants.sideSpeed * peakSpeed(conditions) * exchange;
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
  const { pressure, rate, toolRate, crushed } = aged;
  const debris = (useful * (rate + toolRate) * age) / place.film + fines;
  return { pressure, rate, toolRate, crushed, age, useful, debris };
}

/** A zone of a place at a known age of its slurry. */
export function zoneAt(setting: SlurrySetting, place: Place, age: number, shares: Float64Array): ZoneState {
  return shielded(setting, place, age, atAge(place, age, shares));
}

/** What a face is worked out at: a place, a depth, and a scratch array of one number per class. */
export interface FacePlace {
  readonly place: Place;
  readonly depth: number;
  readonly shares: Float64Array;
}

/** The way from one zone to the next. */
interface ZoneStep {
  /** Age and debris of the zone before. */
  readonly age: number;
  readonly debris: number;
  /** What is added at an exchange factor of 1, which thickening lengthens (s), and what the flow adds whatever the debris (s). */
  readonly pumped: number;
  readonly carried: number;
}

/** A zone further in than the one before: the lowest root of its debris, found from below. */
function zoneAfter(setting: SlurrySetting, at: FacePlace, step: ZoneStep): ZoneState {
  const { place, shares } = at;
  const { debrisBulking } = setting.constants;
  let state: ZoneState | null = null;
  lowestRoot(step.debris, (debris) => {
    const x = exchangeFactor(setting, place.film, place.gritFraction + debrisBulking * debris);
    const age = step.age + step.pumped / x + step.carried;
    state = zoneAt(setting, place, age, shares);
    return state.debris;
  });
  return state as unknown as ZoneState;
}

/** Zones of a face whose slurry is left to the pumping of the tool. */
function stillZones(setting: SlurrySetting, at: FacePlace): ZoneState[] {
  const { shape } = setting;
  const speed = peakSpeed(setting.conditions);
  const zones: ZoneState[] = [];
  let before: Pick<ZoneState, 'age' | 'debris'> = { age: edgeAge(setting, at.place.film, at.depth), debris: 0 };
  let reached = 0;
  for (let zone = 0; zone < shape.zones; zone++) {
    const reach = shapeAge(shape, zone, at.place.film);
    const pumped = (reach - reached) / speed;
    const state: ZoneState = zoneAfter(setting, at, { age: before.age, debris: before.debris, pumped, carried: 0 });
    zones.push(state);
    before = state;
    reached = reach;
  }
  return zones;
}

/**
 * Zones of a face that slurry flows through. Flow and exchange of the whole face follow from its mean debris, found from
 * below; from zone to zone the part of the age that is left to the pumping lengthens with the zone's own debris.
 */
function fedZones(setting: SlurrySetting, at: FacePlace): { zones: ZoneState[]; flow: number } {
  const { shape } = setting;
  const { film, gritFraction } = at.place;
  const still = Float64Array.from({ length: shape.zones }, (_, zone) => shapeAge(shape, zone, film));
  let zones: ZoneState[] = [];
  let flow = 0;
  lowestRoot(0, (debris) => {
    const through = throughFlow(setting, shape, still, { depth: at.depth, film, gritFraction, debris });
    flow = through.flow;
    zones = [];
    let before: Pick<ZoneState, 'age' | 'debris'> = { age: through.freshest, debris: 0 };
    let reached = through.freshest;
    let sum = 0;
    for (let zone = 0; zone < shape.zones; zone++) {
      const reach = through.ages[zone] as number;
      const state = zoneAfter(
        setting,
        at,
        stepTo(before, reached, reach, {
          exchange: through.exchange,
          slowed: through.slowed[zone] as number,
        }),
      );
      zones.push(state);
      before = state;
      reached = reach;
      sum += state.debris / shape.zones;
    }
    return sum;
  });
  return { zones, flow };
}

/** From a zone to the next whose ages in a uniform film are `reached` and `reach` (s). */
function stepTo(
  before: Pick<ZoneState, 'age' | 'debris'>,
  reached: number,
  reach: number,
  { exchange, slowed }: { readonly exchange: number; readonly slowed: number },
): ZoneStep {
  const step = reach - reached;
  // a zone may be fresher than the one before it: in proportion, and its debris found from none
  if (step <= 0) {
    const share = reached > 0 ? reach / reached : 1;
    return { age: before.age * share, debris: 0, pumped: 0, carried: 0 };
  }
  const share = Math.min(1, slowed);
  return { age: before.age, debris: before.debris, pumped: share * step * exchange, carried: (1 - share) * step };
}

/** Zones of a face from the freshest on, and the flow pumped or drawn through it (m3/s, positive inward through its bores). */
export function facesZones(
  setting: SlurrySetting,
  at: FacePlace,
): { readonly zones: ZoneState[]; readonly flow: number } {
  return setting.shape.feed ? fedZones(setting, at) : { zones: stillZones(setting, at), flow: 0 };
}
