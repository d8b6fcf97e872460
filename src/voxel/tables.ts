import { exp, log, normalQuantile } from '#src/base/math.ts';
import { contact, contactLaw, emptyContact } from '#src/physics/contact.ts';
import { craterLaw, thresholdQuantiles } from '#src/physics/crater.ts';
import { numberQuantile, numberTail, sizeClasses } from '#src/physics/grit-law.ts';
import type { Conditions } from '#src/physics/records.ts';
import { debrisShare, hitYield } from '#src/physics/yields.ts';
import {
  COEFFICIENT,
  COEFFICIENTS,
  GRAIN_BINS_PER_OCTAVE,
  GRAIN_OCTAVES,
  HIT,
  HIT_CHANNELS,
  type KernelTables,
  QUANTILES,
} from './kernels/contract.ts';

const TAIL_ENTRIES = 4097;
const HIT_DIAMETERS = 33;
const HIT_OVERLAPS = 513;
const DETACH_ENTRIES = 257;
/** Steps of gap from none to the largest grain. */
const GAP_STEPS = 1200;

/** What the tables are built for, beside the conditions. */
export interface TableSetting {
  /** Radius of the tool's edge (m). */
  readonly edgeRadius: number;
  /** Lateral run-out, zero to peak (m). */
  readonly runout: number;
}

/** Tables a kernel needs, and those only the load balance needs. */
export interface CutTables {
  readonly kernel: KernelTables;
  /** Dent volume in the tool face (m3), over diameter and overlap as `kernel.hits`. */
  readonly toolDents: Float64Array;
}

/** Builds every table of one pass from the laws. Own elementary functions only, so the bits are the same on every host. */
export function buildTables(conditions: Conditions, setting: TableSetting): CutTables {
  const { grit, constants, work } = conditions;
  const crater = craterLaw(work, constants);
  const coefficients = new Float64Array(COEFFICIENTS);
  coefficients[COEFFICIENT.largest] = grit.largest;
  coefficients[COEFFICIENT.edgeRadius] = setting.edgeRadius;
  coefficients[COEFFICIENT.radius] = crater.radius;
  coefficients[COEFFICIENT.depth] = crater.depth;
  coefficients[COEFFICIENT.dentRadius] = constants.lipRadius / Math.sqrt(Math.PI * work.hardness);
  coefficients[COEFFICIENT.chipLoad] = constants.edgeChip * work.toughness;
  coefficients[COEFFICIENT.chipBreadth] = constants.chipBreadthRatio;
  coefficients[COEFFICIENT.useful] = 1;
  coefficients[COEFFICIENT.dentEvery] = 1;
  coefficients[COEFFICIENT.runout] = setting.runout;
  coefficients[COEFFICIENT.runoutLargest] = setting.runout * constants.runoutCap;

  const tail = new Float32Array(TAIL_ENTRIES);
  for (let k = 0; k < TAIL_ENTRIES; k++) tail[k] = numberTail(grit, (k * grit.largest) / (TAIL_ENTRIES - 1));
  const grain = new Float32Array(GRAIN_OCTAVES * GRAIN_BINS_PER_OCTAVE + 1);
  for (let k = 0; k < grain.length; k++) grain[k] = numberQuantile(grit, grainProbability(k));
  const detach = new Float32Array(DETACH_ENTRIES);
  for (let k = 0; k < DETACH_ENTRIES; k++) {
    detach[k] = constants.chipYield * hitYield(conditions, (k * grit.largest) / (DETACH_ENTRIES - 1));
  }
  const runouts = new Float32Array(QUANTILES);
  for (let k = 0; k < QUANTILES; k++) {
    const scattered = exp(constants.runoutScatter * normalQuantile((k + 0.5) / QUANTILES));
    runouts[k] = setting.runout * Math.min(constants.runoutCap, scattered);
  }
  const logs = Float64Array.from({ length: 1026 }, (_, k) => log(1 + k / 1024));
  const { hits, toolDents } = hitTables(conditions, crater.crack);
  return {
    kernel: {
      coefficients,
      tail,
      grain,
      hits,
      hitDiameters: HIT_DIAMETERS,
      hitOverlaps: HIT_OVERLAPS,
      detach,
      thresholds: Float32Array.from(thresholdQuantiles(crater, QUANTILES)),
      runouts,
      logs,
    },
    toolDents,
  };
}

/** The probability at entry k of the grain table: 64 steps within each octave, from 2^-32 up to 1. */
export function grainProbability(k: number): number {
  const octave = Math.floor(k / GRAIN_BINS_PER_OCTAVE);
  const inside = k % GRAIN_BINS_PER_OCTAVE;
  let low = 1;
  for (let i = octave; i < GRAIN_OCTAVES; i++) low /= 2;
  return low * (1 + inside / GRAIN_BINS_PER_OCTAVE);
}

function hitTables(conditions: Conditions, crack: number): { hits: Float32Array; toolDents: Float64Array } {
  const { grit } = conditions;
  const debris = debrisShare(conditions);
  const law = contactLaw(conditions);
  const out = emptyContact();
  const hits = new Float32Array(HIT_DIAMETERS * HIT_OVERLAPS * HIT_CHANNELS);
  const toolDents = new Float64Array(HIT_DIAMETERS * HIT_OVERLAPS);
  for (let i = 1; i < HIT_DIAMETERS; i++) {
    const d = (i * grit.largest) / (HIT_DIAMETERS - 1);
    const share = debris * hitYield(conditions, d);
    for (let j = 1; j < HIT_OVERLAPS; j++) {
      contact(law, d, (j * grit.largest) / (HIT_OVERLAPS - 1), out);
      const at = (i * HIT_OVERLAPS + j) * HIT_CHANNELS;
      hits[at + HIT.load] = out.load;
      hits[at + HIT.impulse] = out.impulse;
      hits[at + HIT.dent] = share * out.workDent;
      hits[at + HIT.crack] = crack * (out.load > 0 ? exp((2 / 3) * log(out.load)) : 0);
      toolDents[i * HIT_OVERLAPS + j] = out.toolDent;
    }
  }
  return { hits, toolDents };
}

/** Means over the size law of what one grain does, by gap and zone: flat zones first, then the curved edge's. */
export interface GapMeans {
  /** The largest grain (m). */
  readonly largest: number;
  /** Gap between neighbouring entries (m); entry k is the gap k step, less `lift` under the curved edge. */
  readonly step: number;
  readonly entries: number;
  /** The edge's columns may stand above the face, up to where the tool has its full width: gaps there run from -lift (m). */
  readonly lift: number;
  /** Flat zones, each with a population of its own; the rest lie under the tool's curved edge. */
  readonly flat: number;
  /** Distance beyond the start of the curved edge at the middle of each zone (m); 0 for the flat ones. */
  readonly zones: Float64Array;
  /** Impulse per fresh grain in the film (N s), zones x entries. */
  readonly impulse: Float64Array;
  /** Tool dent that wears the tool, per fresh grain in the film (m3), zones x entries. */
  readonly toolDent: Float64Array;
  /** Grains engaged per fresh grain in the film, zones x entries. */
  readonly engaged: Float64Array;
  /** All three in one piece of memory. */
  readonly buffer: ArrayBufferLike;
}

/** The grit of a flat zone: number shares by size class, and the share of its hits that are useful. */
export interface ZoneGrit {
  readonly shares: Float64Array;
  readonly useful: number;
}

/** Empty means for so many flat zones and zones of the edge. */
export function makeMeans(tables: CutTables, flat: number, edges: number): GapMeans {
  const { coefficients } = tables.kernel;
  return emptyMeans({
    largest: coefficients[COEFFICIENT.largest] as number,
    lift: coefficients[COEFFICIENT.edgeRadius] as number,
    flat,
    edges,
  });
}

/** Empty means like others, for an edge of another radius (m). */
export function meansFor({ largest, flat, zones }: GapMeans, edgeRadius: number): GapMeans {
  return emptyMeans({ largest, lift: edgeRadius, flat, edges: zones.length - flat });
}

function emptyMeans(of: { largest: number; lift: number; flat: number; edges: number }): GapMeans {
  const { largest, lift, flat, edges } = of;
  const reach = largest / 2 + lift;
  const step = largest / GAP_STEPS;
  const entries = GAP_STEPS + 1 + Math.ceil(lift / step);
  const zones = Float64Array.from({ length: flat + edges }, (_, k) =>
    k < flat ? 0 : ((k - flat + 0.5) / edges) * reach,
  );
  const size = zones.length * entries;
  const buffer = new ArrayBuffer(3 * 8 * size);
  return {
    buffer,
    largest,
    step,
    entries,
    lift,
    flat,
    zones,
    impulse: new Float64Array(buffer, 0, size),
    toolDent: new Float64Array(buffer, 8 * size, size),
    engaged: new Float64Array(buffer, 16 * size, size),
  };
}

/** Averages the hit tables over the grit of each zone; the edge has the grit of zone 0, the outermost. */
export function fillMeans(
  means: GapMeans,
  conditions: Conditions,
  tables: CutTables,
  grits: readonly ZoneGrit[],
): void {
  const { impulse, toolDent, engaged, zones, flat, entries, lift: edgeRadius } = means;
  const { diameter } = sizeClasses(conditions.grit);
  impulse.fill(0);
  toolDent.fill(0);
  engaged.fill(0);
  const row = { impulse: new Float64Array(entries), toolDent: new Float64Array(entries) };
  for (let c = 0; c < diameter.length; c++) {
    const d = diameter[c] as number;
    let long = d;
    fillRow(row, means, tables, d, long);
    for (let zone = 0; zone < zones.length; zone++) {
      const grit = grits[zone < flat ? zone : 0] as ZoneGrit;
      if (zone >= flat) {
        const e = zones[zone] as number;
        const r = d / 2 + edgeRadius;
        if (e >= r) continue;
        long = means.lift + d / 2 + Math.sqrt(r * r - e * e) - edgeRadius;
        fillRow(row, means, tables, d, long);
      }
      const share = grit.shares[c] as number;
      const at = zone * entries;
      for (let k = 0; k < entries && k * means.step < long; k++) {
        impulse[at + k] = (impulse[at + k] as number) + share * (row.impulse[k] as number);
        toolDent[at + k] = (toolDent[at + k] as number) + share * grit.useful * (row.toolDent[k] as number);
        engaged[at + k] = (engaged[at + k] as number) + share;
      }
    }
  }
}

/** What one grain of diameter d does at every gap it reaches across, `long` at a gap of none. */
function fillRow(
  row: { readonly impulse: Float64Array; readonly toolDent: Float64Array },
  means: GapMeans,
  tables: CutTables,
  d: number,
  long: number,
): void {
  const { coefficients, hits, hitOverlaps } = tables.kernel;
  const largest = coefficients[COEFFICIENT.largest] as number;
  const a = Math.min((d / largest) * (HIT_DIAMETERS - 1), HIT_DIAMETERS - 1.001);
  const i = Math.floor(a);
  const fa = a - i;
  const perMetre = (hitOverlaps - 1) / largest;
  for (let k = 0; k < means.entries; k++) {
    const overlap = long - k * means.step;
    if (overlap <= 0) break;
    const b = Math.min(overlap * perMetre, hitOverlaps - 1.001);
    const j = Math.floor(b);
    const fb = b - j;
    const p = i * hitOverlaps + j;
    const q = p + hitOverlaps;
    const low = (1 - fa) * (1 - fb);
    const right = (1 - fa) * fb;
    const up = fa * (1 - fb);
    const both = fa * fb;
    const impulse = (cell: number) => hits[cell * HIT_CHANNELS + HIT.impulse] as number;
    row.impulse[k] = low * impulse(p) + right * impulse(p + 1) + up * impulse(q) + both * impulse(q + 1);
    const dents = tables.toolDents;
    row.toolDent[k] =
      low * (dents[p] as number) +
      right * (dents[p + 1] as number) +
      up * (dents[q] as number) +
      both * (dents[q + 1] as number);
  }
}

/** Means of fresh grit under a face of one zone and its edge. */
export function gapMeans(conditions: Conditions, tables: CutTables, zoneCount: number): GapMeans {
  const means = makeMeans(tables, 1, zoneCount - 1);
  fillMeans(means, conditions, tables, [{ shares: sizeClasses(conditions.grit).fraction, useful: 1 }]);
  return means;
}
