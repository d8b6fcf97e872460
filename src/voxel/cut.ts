import type { Profile } from '#src/base/field.ts';
import { pow } from '#src/base/math.ts';
import { craterLaw } from '#src/physics/crater.ts';
import { advance, isDone } from './advance.ts';
import { loadBinEdge, loadCounts } from './book.ts';
import type { Allocate } from './field.ts';
import { LOAD_BINS } from './kernels/contract.ts';
import { type CutModel, type CutSpec, makeModel } from './model.ts';
import type { TileRunner } from './runner.ts';
import { type CutState, ENDED, makeState, SCALAR, saveState } from './state.ts';

/** Records of the history per depth asked for. */
const RECORDS = 240;
/** Process time after which a setting that removes nothing is given up (s), and the steps tried by then. */
const FRUITLESS_STEPS = 4000;

/** One moment of the cut. SI. */
export interface CutRecord {
  readonly time: number;
  readonly depth: number;
  /** Rate of sinking since the last record (m/s). */
  readonly rate: number;
  /** Load set, and the load the drawn hits added up to since the last record (N). */
  readonly setLoad: number;
  readonly sampledLoad: number;
  /** Grains that touched both faces, per cycle; magnified hits count for what they stand for. */
  readonly engaged: number;
  readonly meanLoad: number;
  readonly largestLoad: number;
  /** Share of the grit under the face that is fresh. */
  readonly freshFraction: number;
  /** What is left of the load at which the slurry's exchange breaks down: 1 - load / stall load; null where it does not. */
  readonly stallMargin: number | null;
  /** The load has been more than slurry or grits can carry, now or before. */
  readonly stalled: boolean;
  /** Area of the face in contact (m2). */
  readonly contactArea: number;
  /** Length the tool has lost and the radius of its edge (m). */
  readonly toolLost: number;
  readonly toolEdgeRadius: number;
  /** Widest edge chip on the entry face so far (m). */
  readonly edgeChip: number;
  /** Crack depth that 99 % of the hits stay below (m). */
  readonly damageDepth: number;
}

/** A cut under way. */
export interface Cut {
  readonly model: CutModel;
  readonly state: CutState;
  readonly records: CutRecord[];
}

/** Sets a cut up: model, fields and an empty history. */
export function makeCut(spec: CutSpec, allocate?: Allocate): Cut {
  const model = makeModel(spec);
  const state = makeState(model, allocate);
  return { model, state, records: [] };
}

/**
 * Runs up to `steps` steps. A cut in pieces gives the same bits as a whole one.
 * @returns true when the depth is reached
 * @throws StateError when the state becomes impossible, RangeError when the setting removes nothing
 */
export function runCut(cut: Cut, runner: TileRunner, steps: number): boolean {
  const { model, state } = cut;
  const s = state.scalars;
  for (let k = 0; k < steps; k++) {
    if (isDone(model, state)) return true;
    advance(model, state, runner);
    if ((s[SCALAR.cycles] as number) === 0) continue;
    const depth = -(s[SCALAR.floorMean] as number);
    if (depth >= (s[SCALAR.nextRecordDepth] as number) || isDone(model, state)) {
      cut.records.push(recordOf(cut));
      s[SCALAR.nextRecordDepth] = depth + (model.endDepth - (s[SCALAR.startDepth] as number)) / RECORDS;
    }
    if ((s[SCALAR.step] as number) > FRUITLESS_STEPS && depth < (s[SCALAR.startDepth] as number) + 1e-9) {
      throw new RangeError('this setting removes nothing: no grain reaches both faces hard enough');
    }
  }
  return isDone(model, state);
}

/** Share of the way from first contact to the depth asked for, 0 to 1. */
export function progressOf({ model, state }: Cut): number {
  const s = state.scalars;
  if ((s[SCALAR.ended] as number) !== ENDED.not) return 1;
  const start = s[SCALAR.startDepth] as number;
  const way = model.endDepth - start;
  return way > 0 ? Math.max(0, Math.min(1, (-(s[SCALAR.floorMean] as number) - start) / way)) : 1;
}

function recordOf(cut: Cut): CutRecord {
  const { model, state, records } = cut;
  const s = state.scalars;
  const at = (k: number) => s[k] as number;
  const { frequency } = model.spec.conditions;
  const cycles = at(SCALAR.recentTime);
  const last = records.at(-1);
  const time = at(SCALAR.time);
  const depth = Math.max(last?.depth ?? 0, -at(SCALAR.floorMean));
  // the last ligament breaks out at once: what it skips is no rate
  const broke = at(SCALAR.brokeThrough);
  const sunk = broke > (last?.depth ?? 0) ? Math.min(depth, broke) : depth;
  const since = time - (last?.time ?? 0);
  const record: CutRecord = {
    time,
    depth,
    rate: since > 0 ? (sunk - (last?.depth ?? at(SCALAR.startDepth))) / since : 0,
    setLoad: at(SCALAR.setLoad),
    sampledLoad: cycles > 0 ? (at(SCALAR.recentImpulse) * frequency) / cycles : 0,
    engaged: cycles > 0 ? at(SCALAR.recentImpacts) / cycles : 0,
    meanLoad: at(SCALAR.recentEngaged) > 0 ? at(SCALAR.recentLoad) / at(SCALAR.recentEngaged) : 0,
    largestLoad: at(SCALAR.recentLargestLoad),
    freshFraction: at(SCALAR.freshShare),
    stallMargin: stallMarginOf(cut),
    stalled: at(SCALAR.stalled) === 1,
    contactArea: at(SCALAR.contactArea),
    toolLost: at(SCALAR.toolLost),
    toolEdgeRadius: at(SCALAR.edgeRadius),
    edgeChip: largestChipWidth(cut),
    damageDepth: damageQuantile(cut, 0.99),
  };
  for (const k of [
    SCALAR.recentImpulse,
    SCALAR.recentTime,
    SCALAR.recentEngaged,
    SCALAR.recentImpacts,
    SCALAR.recentLoad,
    SCALAR.recentLargestLoad,
  ]) {
    s[k] = 0;
  }
  return record;
}

/** 1 - load / stall load at the depth reached; null with fresh grit, or where the grits bear all that is asked. */
export function stallMarginOf({ model, state }: Cut): number | null {
  const stall = state.scalars[SCALAR.stall] as number;
  if (!(stall > 0)) return null;
  const contact = model.partial ? (state.scalars[SCALAR.contactArea] as number) : model.outline.area;
  return contact > 0 ? 1 - (state.scalars[SCALAR.setLoad] as number) / contact / stall : null;
}

/** How a cut has come to its end, or stands so far. */
export interface CutEnd {
  /** Depth of the tip's floor, at most the thickness of the work (m). */
  readonly depth: number;
  /** The load was more than the slurry, or the grits at all, can carry from `stallDepth` on (m; null where it never was). */
  readonly stalled: boolean;
  readonly stallDepth: number | null;
  /** The cut was given up over it. */
  readonly gaveUp: boolean;
  /** The tool had lost all the length it may lose. */
  readonly ranOut: boolean;
  /** The tool has come out at the exit face. */
  readonly through: boolean;
}

/** How a cut has ended, or stands so far. */
export function endOf({ model, state }: Cut): CutEnd {
  const at = (k: number) => state.scalars[k] as number;
  const stalled = at(SCALAR.stalled) === 1;
  return {
    depth: Math.max(0, Math.min(-at(SCALAR.floorMean), model.spec.exit?.thickness ?? Number.POSITIVE_INFINITY)),
    stalled,
    stallDepth: stalled ? at(SCALAR.stallDepth) : null,
    gaveUp: at(SCALAR.ended) === ENDED.stalled,
    ranOut: at(SCALAR.ended) === ENDED.ranOut,
    through: at(SCALAR.brokeThrough) > 0,
  };
}

/** Widest chip on the entry face (m). */
export function largestChipWidth(cut: Cut): number {
  let deepest = 0;
  const rims = cut.state.walls.slice(0, cut.model.toolLoops);
  for (const { rim } of rims) for (const deep of rim.chips) if (deep > deepest) deepest = deep;
  return deepest * cut.model.spec.conditions.constants.chipWidthRatio;
}

/** Edges of the load histogram's bins (N), LOAD_BINS + 1. */
export function loadBinEdges(): Float64Array {
  return Float64Array.from({ length: LOAD_BINS + 1 }, (_, k) => loadBinEdge(k));
}

/** Hits of the floor, each for what it stands for, by the depth of the crack they left: bin edges (m) and counts. */
export function damageCounts(cut: Cut): { edges: Float64Array; counts: Float64Array } {
  const { work, constants } = cut.model.spec.conditions;
  const crater = craterLaw(work, constants);
  const edges = loadBinEdges().map((load) => crater.crack * pow(load, 2 / 3));
  return { edges, counts: loadCounts(cut.state.floor) };
}

/** Crack depth that a share of the floor's hits stays below (m), interpolated inside the histogram's bin. */
export function damageQuantile(cut: Cut, share: number): number {
  const { edges, counts } = damageCounts(cut);
  const total = counts.reduce((sum, n) => sum + n, 0);
  let left = share * total;
  for (let k = 0; k < counts.length; k++) {
    const n = counts[k] as number;
    if (n > 0 && left <= n)
      return (edges[k] as number) + (left / n) * ((edges[k + 1] as number) - (edges[k] as number));
    left -= n;
  }
  return 0;
}

/** Depth of the crack under the hardest hit (m). */
export function largestDamage(cut: Cut): number {
  const { work, constants } = cut.model.spec.conditions;
  const load = cut.state.scalars[SCALAR.largestLoad] as number;
  return load > 0 ? craterLaw(work, constants).crack * pow(load, 2 / 3) : 0;
}

/** A profile along the trace strip (m), the row a share of the way across; null without a strip. */
export function stripProfile(cut: Cut, across = 0.5): Profile | null {
  const { strip } = cut.state;
  if (!strip) return null;
  const row = Math.min(strip.ny - 1, Math.floor(across * strip.ny)) * strip.nx;
  return { spacing: strip.dx, z: Float64Array.from(strip.heights.subarray(row, row + strip.nx)) };
}

/** Shares of removal and means of the hits over the whole cut. */
export function hitSummary(cut: Cut) {
  const at = (k: number) => cut.state.scalars[k] as number;
  const removed = at(SCALAR.chipRemoved) + at(SCALAR.dentRemoved) + at(SCALAR.freeRemoved);
  return {
    /** Hits on the floor, magnified ones for what they stand for. */
    impacts: at(SCALAR.impacts),
    drawn: at(SCALAR.engaged),
    candidatesPerHit: at(SCALAR.engaged) > 0 ? at(SCALAR.candidates) / at(SCALAR.engaged) : 0,
    /** Removed over credited chip volume; above one where chips shear off peaks taller than their bowl. */
    overlap: at(SCALAR.credited) > 0 ? 1 - at(SCALAR.overlap) / at(SCALAR.credited) : 1,
    plasticShare: removed > 0 ? (at(SCALAR.dentRemoved) + at(SCALAR.freeRemoved)) / removed : 0,
    freeShare: removed > 0 ? at(SCALAR.freeRemoved) / removed : 0,
    chipRadius: at(SCALAR.chips) > 0 ? at(SCALAR.chipRadius) / at(SCALAR.chips) : 0,
    chipDepth: at(SCALAR.chips) > 0 ? at(SCALAR.chipDepth) / at(SCALAR.chips) : 0,
    meanLoad: at(SCALAR.engaged) > 0 ? at(SCALAR.load) / at(SCALAR.engaged) : 0,
    largestLoad: at(SCALAR.largestLoad),
    wallHits: at(SCALAR.wallHits),
  };
}

/** A digest of all that changes: the same for any number of workers, chunked or whole. FNV-1a over the bytes, 64 bits in hex. */
export function cutHash(cut: Cut): string {
  const arrays = saveState(cut.state);
  let low = 0x84222325;
  let high = 0xcbf29ce4;
  for (const array of arrays) {
    const words = new Uint32Array(array, 0, array.byteLength >> 2);
    for (const word of words) {
      low = Math.imul(low ^ word, 0x01000193);
      high = Math.imul(high ^ word ^ (low >>> 15), 0x01000193);
    }
  }
  const hex = (n: number) => (n >>> 0).toString(16).padStart(8, '0');
  return hex(high) + hex(low);
}
