import { exp, normalQuantile } from '#src/base/math.ts';
import { philox, streamKey } from '#src/base/philox.ts';
import { emptyCounts, type HeightCounts } from './balance.ts';
import { fitMeans, flatArea } from './edge.ts';
import { type Allocate, allocatePlain, fieldFrom, makeField, makeRim, rimFrom } from './field.ts';
import { type Field, OUT_OF_REACH, type Rim, STEPS } from './kernels/contract.ts';
import { type CutModel, EDGE_ZONES } from './model.ts';
import { SCALAR, SCALARS } from './scalars.ts';
import { makeZoneTables, type ZoneTables } from './slurry.ts';
import { boundBlocks, depthsBefore, highestReach } from './start.ts';
import { type FloorMap, mapFloor, markUnscaled, type Surroundings } from './surroundings.ts';
import { type GapMeans, makeMeans } from './tables.ts';

export { ENDED, SCALAR, SCALARS } from './scalars.ts';
export type { Surroundings } from './surroundings.ts';

/** One wall: its field, its rim, and where floor columns map along it. */
export interface WallState {
  readonly buffer: ArrayBufferLike;
  readonly field: Field;
  readonly rimBuffer: ArrayBufferLike;
  readonly rim: Rim;
  readonly step: Float64Array;
  /** Rows that have been opened, cell by cell of arc length. */
  readonly opened: Int32Array;
}

/** Everything that changes while a cut runs, in flat typed arrays. */
export interface CutState {
  readonly scalars: Float64Array;
  readonly floorBuffer: ArrayBufferLike;
  readonly floor: Field;
  readonly floorStep: Float64Array;
  readonly stripBuffer: ArrayBufferLike | null;
  readonly strip: Field | null;
  readonly stripStep: Float64Array;
  readonly walls: readonly WallState[];
  /** Means by gap that the load balance reads: fresh, or renewed with the slurry and the tool's edge. */
  means: GapMeans;
  readonly zones: ZoneTables;
  counts: HeightCounts;
  stripCounts: HeightCounts;
  readonly map: FloorMap;
  /** Columns outside the tool: index, distance outside the outline (m), wall loop and arc length there (m). */
  readonly around: Surroundings;
  /** Area under the flat face (m2), counted in columns; less when the edge has worn. */
  faceArea: number;
  /** Room for the numbers of the blocks near a face in partial contact. */
  readonly blocks: Int32Array;
}

const stepRow = (allocate: Allocate) => new Float64Array(allocate(STEPS * 8), 0, STEPS);

/** Columns under the flat face below which the load cannot be balanced. */
const FEWEST_FACE_COLUMNS = 50;

/**
 * A fresh cut: the work as the passes before have left it, the tool in first contact.
 * @throws RangeError when the tool has next to no face within its curved edge
 */
export function makeState(model: CutModel, allocate: Allocate = allocatePlain): CutState {
  const floorBuffer = makeField(model.floor, 0, allocate);
  const floor = fieldFrom(floorBuffer);
  const map = mapFloor(model, floor);
  if (map.faceColumns < FEWEST_FACE_COLUMNS) {
    throw new RangeError(
      'the tool has next to no flat face: its curved edge takes it all, or the voxel is too coarse for it',
    );
  }
  markUnscaled(model, floor, model.spec.edgeRadius);
  const flat = model.slurry?.face.shape.zones ?? 1;
  const zones = makeZoneTables(model.tables.kernel, flat, allocate);
  const means = model.slurry ? makeMeans(model.tables, flat, EDGE_ZONES) : model.means;
  const strip = makeStrip(model, allocate);
  const state: CutState = {
    scalars: startScalars(model),
    means,
    zones,
    floorBuffer,
    floor,
    floorStep: stepRow(allocate),
    stripBuffer: strip?.buffer ?? null,
    strip: strip?.field ?? null,
    stripStep: stepRow(allocate),
    walls: model.walls.map((_, k) => makeWall(model, k, allocate)),
    counts: emptyCounts(means),
    stripCounts: emptyCounts(means),
    map,
    around: map.around,
    faceArea: flatArea(floor),
    blocks: new Int32Array(model.partial ? floor.bounds.length : 0),
  };
  if (model.partial) standOnSurface(model, state);
  return state;
}

function startScalars(model: CutModel): Float64Array {
  const { drive, edgeRadius, conditions } = model.spec;
  const scalars = new Float64Array(SCALARS);
  scalars[SCALAR.freshShare] = 1;
  scalars[SCALAR.lastCycles] = 1;
  scalars[SCALAR.face] = model.startGap;
  scalars[SCALAR.balancedFace] = model.startGap;
  scalars[SCALAR.efold] = model.startEfold;
  scalars[SCALAR.stripFace] = model.startGap;
  scalars[SCALAR.stripEfold] = model.startEfold;
  scalars[SCALAR.facePressure] = drive.kind === 'load' ? drive.load / model.outline.area : 0;
  scalars[SCALAR.contactArea] = model.outline.area;
  scalars[SCALAR.edgeRadius] = edgeRadius;
  scalars[SCALAR.wallFresh] = conditions.constants.wallRenewal;
  return scalars;
}

function makeWall(model: CutModel, k: number, allocate: Allocate): WallState {
  const wall = model.walls[k] as CutModel['walls'][number];
  const buffer = makeField(wall.spec, OUT_OF_REACH, allocate);
  const rimBuffer = makeRim(wall.rimCells, wall.rimSpacing, wall.cellsPerSite, allocate);
  const rim = rimFrom(rimBuffer);
  scatterSites(model, rim, k);
  const opened = new Int32Array(wall.spec.nx);
  return { buffer, field: fieldFrom(buffer), rimBuffer, rim, step: stepRow(allocate), opened };
}

/** The trace strip, with the roughness the pass before has left where there is one. */
function makeStrip(model: CutModel, allocate: Allocate): { buffer: ArrayBufferLike; field: Field } | null {
  if (!model.strip) return null;
  const buffer = makeField(model.strip, 0, allocate);
  const field = fieldFrom(buffer);
  const earlier = model.spec.stripBefore;
  if (!earlier) return { buffer, field };
  let mean = 0;
  for (const h of earlier.heights) mean += h / earlier.heights.length;
  for (let c = 0; c < field.heights.length; c++) {
    const i = Math.round(((c % field.nx) * field.dx) / earlier.dx) % earlier.nx;
    const j = Math.round((Math.floor(c / field.nx) * field.dy) / earlier.dy) % earlier.ny;
    field.heights[c] = (earlier.heights[j * earlier.nx + i] as number) - mean;
  }
  field.cracks.set(field.heights);
  boundBlocks(field, model.tables.kernel);
  return { buffer, field };
}

/**
 * Lays the surface the cut starts on into the floor, less the face's rise, and lowers the tool until its first grains touch
 * it.
 */
function standOnSurface(model: CutModel, state: CutState): void {
  const { floor, map, scalars } = state;
  const before = model.spec.before ? depthsBefore(model, model.spec.before) : null;
  for (let c = 0; c < floor.heights.length; c++) {
    const depth = before ? (before[c] as number) : 0;
    floor.heights[c] = depth === Number.POSITIVE_INFINITY ? OUT_OF_REACH : -depth - (map.rises[c] ?? 0);
  }
  floor.cracks.set(floor.heights);
  if (before) map.starts.set(floor.heights);
  boundBlocks(floor, model.tables.kernel);
  const top = Math.min(0, highestReach(floor));
  scalars[SCALAR.floorMean] = top;
  scalars[SCALAR.startDepth] = -top;
  scalars[SCALAR.nextRecordDepth] = -top;
  scalars[SCALAR.nextSlurryDepth] = -top;
  scalars[SCALAR.face] = top + model.startGap;
  scalars[SCALAR.balancedFace] = top + model.startGap;
  scalars[SCALAR.contactArea] = 0;
}

/** Site-by-site log-normal scatter of the load that chips the rim. */
function scatterSites(model: CutModel, rim: Rim, wall: number): void {
  const key = streamKey(model.spec.pass, 100 + wall, model.spec.replicate);
  const random = new Uint32Array(4);
  const scatter = model.spec.conditions.constants.chipSiteScatter;
  rim.siteFactors.forEach((_, k) => {
    const r = philox(random, k, 0, 0, 0, model.key0, key)[0] as number;
    rim.siteFactors[k] = exp(scatter * normalQuantile((r + 0.5) / 4294967296));
  });
}

/** A copy of everything that changes, in one list of buffers: scalars, floor, strip, wall and rim of each loop, slurry. */
export function saveState(state: CutState): ArrayBuffer[] {
  const copy = (buffer: ArrayBufferLike) => new Uint8Array(buffer).slice().buffer;
  return [
    copy(state.scalars.buffer),
    copy(state.floorBuffer),
    ...(state.stripBuffer ? [copy(state.stripBuffer)] : []),
    ...state.walls.flatMap((wall) => [copy(wall.buffer), copy(wall.rimBuffer), copy(wall.opened.buffer)]),
    copy(state.zones.buffer),
    copy(state.means.buffer),
  ];
}

/**
 * Puts a saved copy back. The block bounds are part of it: they set the list of candidates.
 * @throws RangeError when the copy is not of a state of this model.
 */
export function restoreState(state: CutState, saved: readonly ArrayBuffer[]): void {
  const misfit = () => new RangeError('the saved state belongs to another job');
  const first = saved[0];
  if (first?.byteLength !== state.scalars.byteLength) throw misfit();
  fitMeans(state, new Float64Array(first)[SCALAR.edgeRadius] as number);
  const targets = [
    state.scalars.buffer,
    state.floorBuffer,
    ...(state.stripBuffer ? [state.stripBuffer] : []),
    ...state.walls.flatMap((wall) => [wall.buffer, wall.rimBuffer, wall.opened.buffer]),
    state.zones.buffer,
    state.means.buffer,
  ];
  const fits = saved.length === targets.length && targets.every((t, k) => t.byteLength === saved[k]?.byteLength);
  if (!fits) throw misfit();
  targets.forEach((target, k) => {
    new Uint8Array(target).set(new Uint8Array(saved[k] as ArrayBuffer));
  });
  state.faceArea = flatArea(state.floor);
}
