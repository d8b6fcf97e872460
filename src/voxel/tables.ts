import { exp, log, normalQuantile } from '#src/base/math.ts';
import { contact, contactLaw, emptyContact } from '#src/physics/contact.ts';
import { craterLaw, thresholdQuantiles } from '#src/physics/crater.ts';
import { numberQuantile, numberTail, sizeClasses } from '#src/physics/grit-law.ts';
import type { Conditions } from '#src/physics/records.ts';
import { hitYield } from '#src/physics/yields.ts';
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
  coefficients[COEFFICIENT.dentRadius] = 1 / Math.sqrt(Math.PI * work.hardness);
  coefficients[COEFFICIENT.chipLoad] = constants.edgeChip * work.toughness;
  coefficients[COEFFICIENT.chipBreadth] = constants.chipBreadthRatio;
  coefficients[COEFFICIENT.runout] = setting.runout;
  coefficients[COEFFICIENT.runoutLargest] = setting.runout * constants.runoutCap;

  const tail = new Float32Array(TAIL_ENTRIES);
  for (let k = 0; k < TAIL_ENTRIES; k++) tail[k] = numberTail(grit, (k * grit.largest) / (TAIL_ENTRIES - 1));
  const grain = new Float32Array(GRAIN_OCTAVES * GRAIN_BINS_PER_OCTAVE + 1);
  for (let k = 0; k < grain.length; k++) grain[k] = numberQuantile(grit, octaveValue(k));
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
function octaveValue(k: number): number {
  const octave = Math.floor(k / GRAIN_BINS_PER_OCTAVE);
  const inside = k % GRAIN_BINS_PER_OCTAVE;
  let low = 1;
  for (let i = octave; i < GRAIN_OCTAVES; i++) low /= 2;
  return low * (1 + inside / GRAIN_BINS_PER_OCTAVE);
}

function hitTables(conditions: Conditions, crack: number): { hits: Float32Array; toolDents: Float64Array } {
  const { grit, constants } = conditions;
  const law = contactLaw(conditions);
  const out = emptyContact();
  const hits = new Float32Array(HIT_DIAMETERS * HIT_OVERLAPS * HIT_CHANNELS);
  const toolDents = new Float64Array(HIT_DIAMETERS * HIT_OVERLAPS);
  for (let i = 1; i < HIT_DIAMETERS; i++) {
    const d = (i * grit.largest) / (HIT_DIAMETERS - 1);
    const share = constants.plasticShare * hitYield(conditions, d);
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

/** Means over the size law of what one grain does, by gap and distance beyond the curved edge's start. */
export interface GapMeans {
  /** Gap between neighbouring entries (m); entry k is the gap k step. */
  readonly step: number;
  readonly entries: number;
  /** Edge distance at the middle of each zone (m); zone 0 is the flat face. */
  readonly zones: Float64Array;
  /** Impulse per grain in the film (N s), zones x entries. */
  readonly impulse: Float64Array;
  /** Tool dent per grain in the film (m3), zones x entries. */
  readonly toolDent: Float64Array;
  /** Share of grains engaged, zones x entries. */
  readonly engaged: Float64Array;
}

/** Averages the hit tables over the size law for every gap and zone. */
export function gapMeans(conditions: Conditions, tables: CutTables, zoneCount: number, entries = 1201): GapMeans {
  const { coefficients, hits, hitOverlaps } = tables.kernel;
  const largest = coefficients[COEFFICIENT.largest] as number;
  const edgeRadius = coefficients[COEFFICIENT.edgeRadius] as number;
  const reach = largest / 2 + edgeRadius;
  const { diameter, fraction } = sizeClasses(conditions.grit);
  const step = largest / (entries - 1);
  const zones = Float64Array.from({ length: zoneCount }, (_, k) =>
    k === 0 ? 0 : ((k - 0.5) / (zoneCount - 1)) * reach,
  );
  const impulse = new Float64Array(zoneCount * entries);
  const toolDent = new Float64Array(zoneCount * entries);
  const engaged = new Float64Array(zoneCount * entries);
  const perMetreD = (HIT_DIAMETERS - 1) / largest;
  const perMetreO = (hitOverlaps - 1) / largest;
  for (let zone = 0; zone < zoneCount; zone++) {
    const e = zones[zone] as number;
    for (let c = 0; c < diameter.length; c++) {
      const d = diameter[c] as number;
      const q = fraction[c] as number;
      const r = d / 2 + edgeRadius;
      if (e >= r) continue;
      const long = e > 0 ? d / 2 + Math.sqrt(r * r - e * e) - edgeRadius : d;
      const a = Math.min(d * perMetreD, HIT_DIAMETERS - 1.001);
      const i = Math.floor(a);
      const fa = a - i;
      for (let k = 0; k < entries; k++) {
        const overlap = long - k * step;
        if (overlap <= 0) break;
        const b = Math.min(overlap * perMetreO, hitOverlaps - 1.001);
        const j = Math.floor(b);
        const fb = b - j;
        const p = i * hitOverlaps + j;
        const weights = [(1 - fa) * (1 - fb), (1 - fa) * fb, fa * (1 - fb), fa * fb] as const;
        const cells = [p, p + 1, p + hitOverlaps, p + hitOverlaps + 1] as const;
        let meanImpulse = 0;
        let meanDent = 0;
        for (let w = 0; w < 4; w++) {
          const cell = cells[w] as number;
          meanImpulse += (weights[w] as number) * (hits[cell * HIT_CHANNELS + HIT.impulse] as number);
          meanDent += (weights[w] as number) * (tables.toolDents[cell] as number);
        }
        const at = zone * entries + k;
        impulse[at] = (impulse[at] as number) + q * meanImpulse;
        toolDent[at] = (toolDent[at] as number) + q * meanDent;
        engaged[at] = (engaged[at] as number) + q;
      }
    }
  }
  return { step, entries, zones, impulse, toolDent, engaged };
}
