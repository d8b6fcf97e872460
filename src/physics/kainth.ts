import { acos, PI, sin } from '#src/base/math.ts';
import { oneLayerGrits, rozenbergDensity } from './rozenberg.ts';
import { shawCrater } from './shaw.ts';

/**
 * Hammering by the largest grits, after Kainth, Nandy and Singh, Int. J. Mach. Tool Des. Res. 19 (1979) 33 (form from
 * memory), with a sinusoidal tool: plastic spheres of the Rozenberg law squeezed below the gap share the load. A
 * reference model; the process core has its own law of sizes and contact.
 */
export interface KainthSetting {
  readonly force: number;
  readonly area: number;
  readonly amplitude: number;
  readonly frequency: number;
  readonly concentration: number;
  readonly meanDiameter: number;
  readonly hardness: number;
  /** Hardness of work over tool. */
  readonly hardnessRatio: number;
  /** Volume removed by a hit of peak load P by a grit of diameter d pressed h into the work (m3). */
  readonly volume: (load: number, d: number, workIndent: number) => number;
  /** Number of midpoint bins over the size law. */
  readonly bins: number;
}

/** Gap and rate of a Kainth-type balance. */
export interface KainthResult {
  readonly gap: number;
  /** Grits squeezed per cycle under the whole face. */
  readonly activeGrits: number;
  readonly meanLoad: number;
  readonly largestLoad: number;
  /** m3/s. */
  readonly rate: number;
}

/** The Shaw crater as a volume per hit, for `KainthSetting.volume`. */
export function plasticCrater(_load: number, d: number, workIndent: number): number {
  return shawCrater(d, workIndent);
}

/** Impulse of one plastic sphere over the loading half (N s). */
function impulse(setting: KainthSetting, d: number, overlap: number): number {
  const { amplitude, frequency, hardness, hardnessRatio } = setting;
  const omega = 2 * PI * frequency;
  const time = acos(1 - overlap / amplitude) / omega;
  const travel = (overlap - amplitude) * time + (amplitude / omega) * sin(omega * time);
  return ((PI * d * hardness) / (1 + hardnessRatio)) * travel;
}

function sumOverSizes(setting: KainthSetting, gap: number, term: (d: number, overlap: number) => number): number {
  const { meanDiameter, bins } = setting;
  const width = (2 * meanDiameter) / bins;
  let sum = 0;
  for (let i = bins - 1; i >= 0; i--) {
    const d = (i + 0.5) * width;
    if (d <= gap) break;
    sum += rozenbergDensity(d, meanDiameter) * term(d, d - gap);
  }
  return sum * width;
}

/** Solves the load balance by bisection on the gap and returns what follows from it. */
export function kainth(setting: KainthSetting): KainthResult {
  const { force, area, frequency, concentration, meanDiameter, hardness, hardnessRatio } = setting;
  const grits = oneLayerGrits(concentration, area, meanDiameter);
  let low = 0;
  let high = 2 * meanDiameter;
  for (let i = 0; i < 60; i++) {
    const gap = (low + high) / 2;
    const carried = frequency * grits * sumOverSizes(setting, gap, (d, overlap) => impulse(setting, d, overlap));
    if (carried > force) low = gap;
    else high = gap;
  }
  const gap = (low + high) / 2;
  const indentOf = (overlap: number) => overlap / (1 + hardnessRatio);
  const loadOf = (d: number, overlap: number) => PI * d * indentOf(overlap) * hardness;
  const active = sumOverSizes(setting, gap, () => 1);
  return {
    gap,
    activeGrits: grits * active,
    meanLoad: sumOverSizes(setting, gap, loadOf) / active,
    largestLoad: loadOf(2 * meanDiameter, 2 * meanDiameter - gap),
    rate:
      frequency *
      grits *
      sumOverSizes(setting, gap, (d, overlap) => setting.volume(loadOf(d, overlap), d, indentOf(overlap))),
  };
}
