import { log } from '../../../base/math.ts';
import { philox } from '../../../base/philox.ts';
import {
  COEFFICIENT,
  DENT_MARKS,
  GRAIN_BINS_PER_OCTAVE,
  GRAIN_OCTAVES,
  type KernelTables,
  STEP,
  USE_HIT,
  USE_RUNOUT,
} from '../contract.ts';

const TWO_TO_32 = 4294967296;

/** The random numbers of one candidate: 128 bits named by tile, step and event. */
export interface Draw {
  /** Distance to the next candidate in expected counts, exponentially distributed. */
  readonly spacing: number;
  /** Place within the block, two fractions. */
  readonly across: number;
  readonly along: number;
  /** Quantile of the threshold's scatter, 0..1023. */
  readonly threshold: number;
  /** Detachment mark, 0..1. */
  readonly detachment: number;
  /** Mark that thins the dents, 0..63. */
  readonly dent: number;
  /** Share of the block's own tail at which the grain lies. */
  readonly size: number;
}

/** Draw number `event` of a tile in a step. */
export function drawOf(step: Float64Array, tile: number, event: number): Draw {
  const r = philox(
    new Uint32Array(4),
    event,
    tile,
    step[STEP.step] as number,
    USE_HIT,
    step[STEP.key0] as number,
    step[STEP.key1] as number,
  );
  const [r0, r1, r2, r3] = r as unknown as [number, number, number, number];
  return {
    spacing: -log((r0 === 0 ? 0.5 : r0) / TWO_TO_32),
    across: ((r1 >>> 16) + 0.5) / 65536,
    along: ((r1 & 0xffff) + 0.5) / 65536,
    threshold: r2 >>> 22,
    dent: (r2 >>> 16) % DENT_MARKS,
    detachment: (r2 & 0xffff) / 65536,
    size: (r3 + 0.5) / TWO_TO_32,
  };
}

/** Run-out of hit number `event` at a wall (m): how far the tool swings towards it. */
export function runoutOf(tables: KernelTables, step: Float64Array, tile: number, event: number): number {
  const r = philox(
    new Uint32Array(4),
    event,
    tile,
    step[STEP.step] as number,
    USE_RUNOUT,
    step[STEP.key0] as number,
    step[STEP.key1] as number,
  );
  return tables.runouts[(r[0] as number) >>> 22] as number;
}

/** Linear interpolation in a table at a place counted in entries, held at both ends. */
export function interpolate(table: ArrayLike<number>, place: number): number {
  const k = Math.max(0, Math.min(table.length - 2, Math.floor(place)));
  const low = table[k] as number;
  const high = table[k + 1] as number;
  return low + Math.max(0, Math.min(1, place - k)) * (high - low);
}

/** Share of grains longer than g. */
export function tailOf(tables: KernelTables, g: number): number {
  const largest = tables.coefficients[COEFFICIENT.largest] as number;
  if (g <= 0) return 1;
  if (g >= largest) return 0;
  return interpolate(tables.tail, (g / largest) * (tables.tail.length - 1));
}

/** Diameter of the grain that a share p of all grains exceeds (m). */
export function grainOf(tables: KernelTables, p: number): number {
  // the table has 64 equal steps of p within each octave
  let octave = GRAIN_OCTAVES - 1;
  let low = 0.5;
  while (octave > 0 && p < low) {
    low /= 2;
    octave--;
  }
  return interpolate(tables.grain, (octave + p / low - 1) * GRAIN_BINS_PER_OCTAVE);
}

/** Chance that a chip under a grain of diameter d leaves. */
export function detachOf(tables: KernelTables, d: number): number {
  const largest = tables.coefficients[COEFFICIENT.largest] as number;
  return interpolate(tables.detach, (d / largest) * (tables.detach.length - 1));
}
