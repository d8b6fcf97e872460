import { exp, normalQuantile } from '#src/base/math.ts';
import { nearest } from '#src/base/outline.ts';
import { philox, streamKey } from '#src/base/philox.ts';
import { emptyCounts, type HeightCounts } from './balance.ts';
import { type Allocate, allocatePlain, fieldFrom, makeField, makeRim, rimFrom } from './field.ts';
import { type Field, OUT_OF_REACH, type Rim, STEPS } from './kernels/contract.ts';
import { type CutModel, EDGE_ZONES } from './model.ts';
import { makeZoneTables, type ZoneTables } from './slurry.ts';
import { type GapMeans, makeMeans } from './tables.ts';

/** Indices of the numbers of a cut that change, one float64 each, saved and restored with the fields. */
export const SCALAR = {
  step: 0,
  /** Process time (s). */
  time: 1,
  /** Height of the tool face at the end of the last step (m). */
  face: 2,
  efold: 3,
  /** Mean height of the flat floor (m). */
  floorMean: 4,
  /** Smoothed lowering of the floor per cycle (m). */
  ratePerCycle: 5,
  stripFace: 6,
  stripMean: 7,
  stripEfold: 8,
  /** Load per area on the flat floor (Pa). */
  facePressure: 9,
  /** Cycles since the last free-impact lowering and since the last wall step. */
  cyclesSinceRenew: 10,
  cyclesSinceWall: 11,
  /** Rows of the walls open to hits. */
  openRows: 12,
  /** Length the tool has lost (m). */
  toolLost: 13,
  /** Sums over the cut: floor hits, chips, volumes (m3), impulse (N s) and the load they add up to. */
  candidates: 14,
  engaged: 15,
  chips: 16,
  credited: 17,
  overlap: 18,
  chipRemoved: 19,
  dentRemoved: 20,
  freeRemoved: 21,
  impulse: 22,
  load: 23,
  largestLoad: 24,
  chipRadius: 25,
  chipDepth: 26,
  /** Sums since the last record. */
  recentImpulse: 27,
  recentTime: 28,
  recentEngaged: 29,
  recentLoad: 30,
  recentLargestLoad: 31,
  nextRecordDepth: 32,
  wallHits: 33,
  wallRemoved: 34,
  cycles: 35,
  setLoad: 36,
  /** Tool dents per cycle at the last balance, per grain and square metre of film (m3). */
  toolDents: 37,
  /** Floor hits, each counting its magnification; over the cut and since the last record. */
  impacts: 38,
  recentImpacts: 39,
  /** Depth at which the slurry is worked out next (m), and what it came to last. */
  nextSlurryDepth: 40,
  stall: 41,
  freshShare: 42,
  smoothLowered: 43,
  smoothCycles: 44,
  lastCycles: 45,
} as const;
export const SCALARS = 46;

/** One wall: its field, its rim, and where floor columns map along it. */
export interface WallState {
  readonly buffer: ArrayBufferLike;
  readonly field: Field;
  readonly rimBuffer: ArrayBufferLike;
  readonly rim: Rim;
  readonly step: Float64Array;
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
  /** Means by gap that the load balance reads; fresh, or renewed with the slurry. */
  readonly means: GapMeans;
  readonly zones: ZoneTables | null;
  readonly counts: HeightCounts;
  readonly stripCounts: HeightCounts;
  /** Columns outside the tool: index, distance outside the outline (m), wall loop and arc length there (m). */
  readonly around: Surroundings;
  /** Area under the flat face (m2), counted in columns. */
  readonly faceArea: number;
}

/** Floor columns beyond the start of the tool's curved edge. */
export interface Surroundings {
  readonly columns: Int32Array;
  readonly outside: Float32Array;
  readonly loops: Uint8Array;
  readonly along: Float32Array;
}

const stepRow = (allocate: Allocate) => new Float64Array(allocate(STEPS * 8), 0, STEPS);

/** Columns under the flat face below which the load cannot be balanced. */
const FEWEST_FACE_COLUMNS = 50;

/**
 * A fresh cut: untouched work, the tool just above it.
 * @throws RangeError when the tool has next to no flat face
 */
export function makeState(model: CutModel, allocate: Allocate = allocatePlain): CutState {
  const floorBuffer = makeField(model.floor, 0, allocate);
  const floor = fieldFrom(floorBuffer);
  const stripBuffer = model.strip ? makeField(model.strip, 0, allocate) : null;
  const { around, faceColumns } = mapSurroundings(model, floor);
  if (faceColumns < FEWEST_FACE_COLUMNS) {
    throw new RangeError(
      'the tool has next to no flat face: its curved edge takes it all, or the voxel is too coarse for it',
    );
  }
  markUnscaled(model, floor);
  const walls = model.walls.map((wall, k): WallState => {
    const buffer = makeField(wall.spec, OUT_OF_REACH, allocate);
    const rimBuffer = makeRim(wall.rimCells, wall.rimSpacing, wall.cellsPerSite, allocate);
    const rim = rimFrom(rimBuffer);
    scatterSites(model, rim, k);
    return { buffer, field: fieldFrom(buffer), rimBuffer, rim, step: stepRow(allocate) };
  });
  const scalars = new Float64Array(SCALARS);
  scalars[SCALAR.freshShare] = 1;
  scalars[SCALAR.lastCycles] = 1;
  scalars[SCALAR.face] = model.startGap;
  scalars[SCALAR.efold] = model.startEfold;
  scalars[SCALAR.stripFace] = model.startGap;
  scalars[SCALAR.stripEfold] = model.startEfold;
  const { drive } = model.spec;
  scalars[SCALAR.facePressure] = drive.kind === 'load' ? drive.load / model.outline.area : 0;
  const flat = model.slurry?.setting.shape.zones ?? 1;
  const means = model.slurry ? makeMeans(model.tables, flat, EDGE_ZONES) : model.means;
  return {
    scalars,
    means,
    zones: model.slurry ? makeZoneTables(model.tables.kernel, flat, allocate) : null,
    floorBuffer,
    floor,
    floorStep: stepRow(allocate),
    stripBuffer,
    strip: stripBuffer ? fieldFrom(stripBuffer) : null,
    stripStep: stepRow(allocate),
    walls,
    counts: emptyCounts(means),
    stripCounts: emptyCounts(means),
    around,
    faceArea: faceColumns * floor.dx * floor.dy,
  };
}

/** Each column's distance beyond the start of the curved edge, and the list of columns that have one. */
function mapSurroundings(model: CutModel, floor: Field): { around: Surroundings; faceColumns: number } {
  const { outline, spec, x0, y0 } = model;
  const columns: number[] = [];
  const outside: number[] = [];
  const loops: number[] = [];
  const along: number[] = [];
  let faceColumns = 0;
  for (let j = 0; j < floor.ny; j++) {
    for (let i = 0; i < floor.nx; i++) {
      const near = nearest(outline, x0 + i * floor.dx, y0 + j * floor.dy);
      const beyond = near.distance + spec.edgeRadius;
      if (beyond <= 0) {
        faceColumns++;
        continue;
      }
      const column = j * floor.nx + i;
      floor.edges[column] = beyond;
      columns.push(column);
      outside.push(near.distance);
      loops.push(near.loop);
      along.push(near.s - (outline.loops[near.loop]?.start ?? 0));
    }
  }
  const around = {
    columns: Int32Array.from(columns),
    outside: Float32Array.from(outside),
    loops: Uint8Array.from(loops),
    along: Float32Array.from(along),
  };
  return { around, faceColumns };
}

/**
 * Marks the blocks within reach of the tool's edge, and so near it that a magnified crater would spill over it: there the
 * fillet, the foot and the overcut have lengths of their own, and hits are drawn one by one.
 */
function markUnscaled(model: CutModel, floor: Field): void {
  if (model.magnification === 1) return;
  const reach = model.largestChip * Math.sqrt(model.magnification);
  const per = floor.tile / floor.block;
  const half = (floor.block / 2) * floor.dx;
  for (let k = 0; k < floor.unscaled.length; k++) {
    const tile = Math.floor(k / (per * per));
    const inside = k % (per * per);
    const i = (tile % floor.tilesX) * floor.tile + ((inside % per) + 0.5) * floor.block;
    const j = Math.floor(tile / floor.tilesX) * floor.tile + (Math.floor(inside / per) + 0.5) * floor.block;
    const { distance } = nearest(model.outline, model.x0 + (i - 0.5) * floor.dx, model.y0 + (j - 0.5) * floor.dy);
    floor.unscaled[k] = distance + half * Math.SQRT2 > -(model.spec.edgeRadius + reach) ? 1 : 0;
  }
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
    ...state.walls.flatMap((wall) => [copy(wall.buffer), copy(wall.rimBuffer)]),
    ...(state.zones ? [copy(state.zones.buffer), copy(state.means.buffer)] : []),
  ];
}

/**
 * Puts a saved copy back. The block bounds are part of it: they set the list of candidates.
 * @throws RangeError when the copy is not of a state of this model.
 */
export function restoreState(state: CutState, saved: readonly ArrayBuffer[]): void {
  const targets = [
    state.scalars.buffer,
    state.floorBuffer,
    ...(state.stripBuffer ? [state.stripBuffer] : []),
    ...state.walls.flatMap((wall) => [wall.buffer, wall.rimBuffer]),
    ...(state.zones ? [state.zones.buffer, state.means.buffer] : []),
  ];
  const fits = saved.length === targets.length && targets.every((t, k) => t.byteLength === saved[k]?.byteLength);
  if (!fits) throw new RangeError('the saved state belongs to another job');
  targets.forEach((target, k) => {
    new Uint8Array(target).set(new Uint8Array(saved[k] as ArrayBuffer));
  });
}
