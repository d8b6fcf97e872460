import { type FloorState, floorAt } from '../floor.ts';
import { type GapSums, gapSums } from '../gap-sums.ts';
import type { Conditions } from '../records.ts';
import type { Carrier } from '../slurry/viscosity.ts';
import type { SlurryConstants } from './constants.ts';
import type { FaceShape } from './face.ts';
import { agedShares, placeAt } from './place.ts';
import { type CurvePoint, curvePlaces, pointAt, type SlurryCurve, slurryCurve } from './slurry-curve.ts';

/** Shares of the depth at which the load curve is worked out, and Simpson's weights between them. */
const STATIONS = [0, 0.25, 0.5, 0.75, 1] as const;
const WEIGHTS = [1 / 12, 4 / 12, 2 / 12, 4 / 12, 1 / 12] as const;
const MIDDLE = 2;

/** A cut under a constant load from the entry face down, slurry balanced at every depth. SI. */
export interface ThroughDepth {
  readonly rateStart: number;
  readonly rateEnd: number;
  readonly time: number;
  readonly toolWearLength: number;
  /** Stall pressure at depth; Infinity where the grits bear all that is asked. */
  readonly stallPressure: number;
  /** The load is borne at every depth. */
  readonly carried: boolean;
  readonly curves: readonly SlurryCurve[];
  /** Half way down: the floor, and the sums over the population in the middle of the face. */
  readonly floor: FloorState;
  readonly sums: GapSums;
  readonly point: CurvePoint;
}

/** What the balance is worked out for. */
export interface DepthSetting {
  readonly conditions: Conditions;
  readonly pressure: number;
  readonly depth: number;
  readonly shape: FaceShape;
  readonly carrier: Carrier;
  readonly constants: SlurryConstants;
}

/** Follows a constant pressure down to the depth: rates at five depths, the time by Simpson's rule on 1 / rate. */
export function throughDepth(setting: DepthSetting, fresh: GapSums): ThroughDepth {
  const places = curvePlaces(fresh);
  const curves = STATIONS.map((share) => slurryCurve(setting, places, share * setting.depth));
  const points = curves.map((curve) => pointAt(curve, setting.pressure));
  let time = 0;
  let toolWearLength = 0;
  points.forEach((point, k) => {
    const weight = (WEIGHTS[k] as number) * setting.depth;
    time += weight / point.rate;
    toolWearLength += (weight * point.toolRate) / point.rate;
  });
  const middle = points[MIDDLE] as CurvePoint;
  const zone = middle.zones[middle.zones.length >> 1];
  const place = placeAt(fresh, middle.gap, middle.roughness, 1);
  const aged = agedShares(place, zone?.age ?? 0, new Float64Array(place.impulse.length));
  const sums = gapSums(fresh.rows, aged);
  return {
    rateStart: (points[0] as CurvePoint).rate,
    rateEnd: (points.at(-1) as CurvePoint).rate,
    time,
    toolWearLength,
    stallPressure: Math.min(...curves.map((curve) => curve.stall)),
    carried: points.every((point) => point.carried),
    curves,
    floor: floorAt(sums, middle.gap, middle.roughness),
    sums,
    point: middle,
  };
}
