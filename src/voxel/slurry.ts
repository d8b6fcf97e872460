import { exp } from '#src/base/math.ts';
import { type EstimateTables, estimateTables, type SlurryFace, usedPopulation } from '#src/physics/estimate.ts';
import { type GapSums, gapSums } from '#src/physics/gap-sums.ts';
import { CLASS_STEP } from '#src/physics/grit-law.ts';
import type { FaceShape } from '#src/physics/process/face.ts';
import {
  bestOf,
  type LoadSearch,
  loadSearch,
  pointOf,
  stallOf,
  workingPoint,
} from '#src/physics/process/load-search.ts';
import { agedShares, placeAt } from '#src/physics/process/place.ts';
import { type CurvePlaces, type CurvePoint, curvePlaces, type ZoneState } from '#src/physics/process/slurry-curve.ts';
import type { Conditions } from '#src/physics/records.ts';
import type { Allocate, FieldSpec } from './field.ts';
import { COEFFICIENT, COEFFICIENTS, type KernelTables } from './kernels/contract.ts';
import { type CutTables, fillMeans, type GapMeans, grainProbability, type ZoneGrit } from './tables.ts';

/** Share of the highest pressure below which the freshest zone is past its best. */
const PAST_TOP = 0.9;

/** The slurry under the face as a cut uses it: what does not change while it runs. */
export interface SlurryModel {
  readonly conditions: Conditions;
  readonly face: SlurryFace;
  /** Area of the face and depth of the cut, for a charge that goes round (m2, m). */
  readonly area: number;
  readonly depth: number;
  readonly tables: EstimateTables;
  readonly places: CurvePlaces;
  /** Zone of the face each tile of the floor lies in. */
  readonly tileZones: Uint8Array;
}

/** Tables of each zone, renewed as the cavity deepens. */
export interface ZoneTables {
  /** Coefficients, tail and grain of all zones: what is saved and shared. */
  readonly buffer: ArrayBufferLike;
  readonly zones: readonly KernelTables[];
}

/** Sets the slurry up for a tool face over a floor grid whose column (0, 0) has its centre at (x0, y0). */
export function makeSlurry(
  conditions: Conditions,
  face: SlurryFace,
  at: {
    readonly grid: { readonly field: FieldSpec; readonly x0: number; readonly y0: number };
    readonly area: number;
    readonly depth: number;
  },
): SlurryModel {
  const tables = estimateTables(conditions);
  return {
    conditions,
    face,
    area: at.area,
    depth: at.depth,
    tables,
    places: curvePlaces(tables.sums),
    tileZones: mapTiles(face.shape, at.grid),
  };
}

/** Zone under the middle of each tile; tiles whose middle is off the face lie in the outermost zone. */
function mapTiles(
  shape: FaceShape,
  at: { readonly field: FieldSpec; readonly x0: number; readonly y0: number },
): Uint8Array {
  const { field, x0, y0 } = at;
  const { grid, zoneOf } = shape;
  const tilesX = field.nx / field.tile;
  const tiles = tilesX * (field.ny / field.tile);
  return Uint8Array.from({ length: tiles }, (_, tile) => {
    const x = x0 + ((tile % tilesX) + 0.5) * field.tile * field.dx;
    const y = y0 + (Math.floor(tile / tilesX) + 0.5) * field.tile * field.dy;
    const i = Math.round((x - grid.x0) / grid.pitch);
    const j = Math.round((y - grid.y0) / grid.pitch);
    if (i < 0 || j < 0 || i >= grid.nx || j >= grid.ny) return 0;
    const zone = zoneOf[j * grid.nx + i] as number;
    return zone < shape.zones ? zone : 0;
  });
}

/** Room for the tables of so many zones, fresh to begin with. */
export function makeZoneTables(tables: KernelTables, zones: number, allocate: Allocate): ZoneTables {
  const per = 8 * 16 + 4 * (tables.tail.length + tables.grain.length);
  const stride = Math.ceil(per / 16) * 16;
  const buffer = allocate(zones * stride);
  const all = Array.from({ length: zones }, (_, zone): KernelTables => {
    const at = zone * stride;
    const coefficients = new Float64Array(buffer, at, COEFFICIENTS);
    const tail = new Float32Array(buffer, at + 8 * 16, tables.tail.length);
    const grain = new Float32Array(buffer, at + 8 * 16 + 4 * tables.tail.length, tables.grain.length);
    coefficients.set(tables.coefficients);
    tail.set(tables.tail);
    grain.set(tables.grain);
    return { ...tables, coefficients, tail, grain };
  });
  return { buffer, zones: all };
}

/** What the slurry came to at a renewal. */
export interface SlurryState {
  /** Pressure at which the exchange breaks down at this depth (Pa). */
  readonly stall: number;
  /** The pressure is above that: the face is starved. */
  readonly stalled: boolean;
  readonly gap: number;
  readonly roughness: number;
  /** Rate of sinking and of tool loss of a steady floor here, and the rate at the best load (m/s). */
  readonly rate: number;
  readonly toolRate: number;
  readonly best: number;
  readonly bestPressure: number;
  /** Flow through the face (m3/s). */
  readonly flow: number;
  /** Engaged grits over those of fresh slurry at the same gap, mean over the face. */
  readonly fresh: number;
}

/** Where the slurry is worked out. */
export interface SlurryPlace {
  /** Depth of the tip (m), and the load over the area in contact (Pa). */
  readonly depth: number;
  readonly pressure: number;
  /** Only a small part of the face is in contact: slurry as fresh as in the freshest zone, at the rim, reaches all of it. */
  readonly rim: boolean;
  /** Process time (s), for a charge that goes round. */
  readonly time: number;
}

/** Curve of a place; its grit is the grade's own, or that of a charge as it is by now. */
function searchAt(model: SlurryModel, at: SlurryPlace): { search: LoadSearch; sums: GapSums } {
  const { conditions, face, tables, places } = model;
  const setting = { conditions, shape: face.shape, carrier: face.carrier, constants: face.constants };
  if (!face.charge) return { search: loadSearch(setting, places, at.depth), sums: tables.sums };
  const { volume, used } = face.charge;
  const { pressure } = at;
  const use = { slurry: face, volume, used: used + at.time, pressure, area: model.area, depth: model.depth / 2 };
  const sums = gapSums(tables.sums.rows, usedPopulation(tables, use));
  return { search: loadSearch(setting, curvePlaces(sums), at.depth), sums };
}

/** Whether the exchange breaks down at a place. */
export function stalledAt(model: SlurryModel, at: SlurryPlace): boolean {
  return !at.rim && workingPoint(searchAt(model, at).search, at.pressure).stalled;
}

/** Works out the zones at a depth under a face pressure and writes their tables and means. */
export function renewSlurry(
  model: SlurryModel,
  tables: CutTables,
  into: { readonly zones: ZoneTables; readonly means: GapMeans },
  at: SlurryPlace,
): SlurryState {
  const { search, sums } = searchAt(model, at);
  const working = workingPoint(search, at.pressure);
  const point = at.rim ? rimPoint(search, at.pressure) : working.point;
  const place = placeAt(sums, point.gap, point.roughness, 1);
  const grits = point.zones.map(
    (zone): ZoneGrit => ({
      useful: zone.useful,
      shares: agedShares(place, zone.age, new Float64Array(place.impulse.length)),
    }),
  );
  grits.forEach((grit, k) => {
    writeGrit(into.zones.zones[k] as KernelTables, sums, grit);
  });
  fillMeans(into.means, model.conditions, tables, grits);
  const best = bestOf(search) ?? point;
  return {
    stall: stallOf(search),
    stalled: !at.rim && working.stalled,
    gap: point.gap,
    roughness: point.roughness,
    rate: point.rate,
    toolRate: point.toolRate,
    best: best.rate,
    bestPressure: best.pressure,
    flow: point.flow,
    fresh: freshShare(sums, point.gap, grits),
  };
}

/** The point at which the freshest zone alone bears a pressure, that zone's state everywhere; the one that bears most if none does. */
function rimPoint(search: LoadSearch, pressure: number): CurvePoint {
  const rim = (step: number) => pointOf(search, step).zones[0] as ZoneState;
  let best = 1;
  for (let step = 1; step <= search.places.last; step++) {
    if (rim(step).pressure > rim(best).pressure) best = step;
    if (rim(best).pressure >= pressure || rim(step).pressure < PAST_TOP * rim(best).pressure) break;
  }
  const state = rim(best);
  const point = pointOf(search, best);
  return {
    ...point,
    pressure: state.pressure,
    rate: state.useful * state.rate,
    toolRate: state.useful * state.toolRate,
    zones: point.zones.map(() => state),
  };
}

function freshShare(sums: GapSums, gap: number, grits: readonly ZoneGrit[]): number {
  const { diameter, fraction } = sums.rows.classes;
  let aged = 0;
  let fresh = 0;
  for (let i = 0; i < diameter.length && (diameter[i] as number) > gap; i++) {
    fresh += fraction[i] as number;
    for (const { shares } of grits) aged += (shares[i] as number) / grits.length;
  }
  return fresh > 0 ? aged / fresh : 1;
}

/** Tail and its inverse of a population given by classes, ln d evenly spread within each. */
function writeGrit(tables: KernelTables, sums: GapSums, grit: ZoneGrit): void {
  const { diameter } = sums.rows.classes;
  const { tail, grain, coefficients } = tables;
  const largest = coefficients[COEFFICIENT.largest] as number;
  coefficients[COEFFICIENT.useful] = grit.useful;
  // upper edges of the classes, largest first, and what lies above each
  const edges = new Float64Array(diameter.length + 1);
  const above = new Float64Array(diameter.length + 1);
  for (let i = 0; i <= diameter.length; i++) {
    edges[i] = largest * exp(-CLASS_STEP * i);
    if (i > 0) above[i] = (above[i - 1] as number) + (grit.shares[i - 1] as number);
  }
  let i = 0;
  for (let k = tail.length - 1; k >= 0; k--) {
    const d = (k * largest) / (tail.length - 1);
    while (i < diameter.length && (edges[i + 1] as number) > d) i++;
    if (i >= diameter.length) {
      tail[k] = above[diameter.length] as number;
      continue;
    }
    const upper = edges[i] as number;
    const t = (upper - d) / (upper - (edges[i + 1] as number));
    tail[k] = (above[i] as number) + t * (grit.shares[i] as number);
  }
  let n = 0;
  for (let k = 0; k < grain.length; k++) {
    const p = grainProbability(k);
    while (n < diameter.length && (above[n + 1] as number) < p) n++;
    const share = n < diameter.length ? (grit.shares[n] as number) : 0;
    const t = share > 0 ? Math.min(1, (p - (above[n] as number)) / share) : 1;
    const upper = edges[Math.min(n, diameter.length)] as number;
    const lower = edges[Math.min(n + 1, diameter.length)] as number;
    grain[k] = upper + t * (lower - upper);
  }
}
