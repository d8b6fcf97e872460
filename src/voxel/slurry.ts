import { exp } from '#src/base/math.ts';
import type { SlurryFace } from '#src/physics/estimate.ts';
import { contactRows, type GapSums, gapSums } from '#src/physics/gap-sums.ts';
import { CLASS_STEP } from '#src/physics/grit-law.ts';
import type { FaceShape } from '#src/physics/process/face.ts';
import { agedShares, placeAt } from '#src/physics/process/place.ts';
import {
  type CurvePlaces,
  curvePlaces,
  pointAt,
  type SlurrySetting,
  slurryCurve,
  type ZoneState,
} from '#src/physics/process/slurry-curve.ts';
import type { Conditions } from '#src/physics/records.ts';
import type { Allocate, FieldSpec } from './field.ts';
import { COEFFICIENT, COEFFICIENTS, type KernelTables } from './kernels/contract.ts';
import { type CutTables, fillMeans, type GapMeans, grainProbability, type ZoneGrit } from './tables.ts';

/** The slurry under the face as a cut uses it: what does not change while it runs. */
export interface SlurryModel {
  readonly setting: SlurrySetting;
  readonly sums: GapSums;
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
  grid: { readonly field: FieldSpec; readonly x0: number; readonly y0: number },
): SlurryModel {
  const sums = gapSums(contactRows(conditions));
  return {
    setting: { conditions, shape: face.shape, carrier: face.carrier, constants: face.constants },
    sums,
    places: curvePlaces(sums),
    tileZones: mapTiles(face.shape, grid),
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
  readonly carried: boolean;
  /** Engaged grits over those of fresh slurry at the same gap, mean over the face. */
  readonly fresh: number;
}

/** Works out the zones at a depth under a face pressure and writes their tables and means. */
export function renewSlurry(
  model: SlurryModel,
  tables: CutTables,
  into: { readonly zones: ZoneTables; readonly means: GapMeans },
  at: { readonly depth: number; readonly pressure: number },
): SlurryState {
  const { setting, sums, places } = model;
  const curve = slurryCurve(setting, places, at.depth);
  const point = pointAt(curve, at.pressure);
  const place = placeAt(sums, point.gap, point.roughness, 1);
  const grits = point.zones.map((zone): ZoneGrit & { readonly state: ZoneState } => ({
    state: zone,
    useful: zone.useful,
    shares: agedShares(place, zone.age, new Float64Array(place.impulse.length)),
  }));
  grits.forEach((grit, k) => {
    writeGrit(into.zones.zones[k] as KernelTables, sums, grit);
  });
  fillMeans(into.means, setting.conditions, tables, grits);
  return { stall: curve.stall, carried: point.carried, fresh: freshShare(sums, point.gap, grits) };
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
