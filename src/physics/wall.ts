import { exp, log, normalDensity, PI } from '#src/base/math.ts';
import { contact, contactLaw, emptyContact } from './contact.ts';
import { craterLaw, meanChipVolume } from './crater.ts';
import { numberDensity } from './grit-law.ts';
import type { Conditions } from './records.ts';
import { debrisShare, hitYield } from './yields.ts';

/**
 * The side gap. A grit of diameter d in a side gap w is squeezed when w - rho < d < w + rho by d - (w - rho), rho the
 * lateral run-out; longer ones do not enter. The squeeze is set by displacement, so its load is that of `contact`
 * without kinematics, one hit per cycle, and the crater laws are the floor's. Growth is logarithmic in exposure and ends
 * when the largest grain passes freely, which is why no overlap factor is applied: a rate 10 % lower shifts the gap by a
 * tenth of the height over which the rate changes e-fold.
 *
 * Lift-off is the floor's, with the axial amplitude: what frees a grit from its dent in the wall is the tool's side
 * sliding past it by +-A every cycle and the slurry that moves with it, not the few micrometres of run-out. With the
 * run-out in its place lift-off would be 0.02 for a 40 um grit and walls would hardly leave the foot.
 */

/** Nodes of the run-out's scatter: -3 to 3 standard deviations. */
const RUNOUT_NODES = 13;
const SQUEEZE_NODES = 8;
const GAPS = 65;
const OVERLAPS = 65;
const DIAMETERS = 5;
const DENSITIES = 257;

/** One side gap under given conditions, tabulated. SI. */
export interface WallLaw {
  readonly conditions: Conditions;
  /** Gap left where the tool's edge passes (m). */
  readonly foot: number;
  /** Gap at which the largest grain passes freely (m). */
  readonly widest: number;
  /** Run-outs and their probabilities. */
  readonly runouts: Float64Array;
  readonly chances: Float64Array;
  /** Grains per volume of side gap (1/m3). */
  readonly grainsPerVolume: number;
  /** Largest overlap of the tables (m) and the diameters they span (m). */
  readonly largestOverlap: number;
  readonly shortest: number;
  readonly longest: number;
  /** Load (N), removed volume (m3) and dent in the tool's side (m3) of a hit, diameters x overlaps, overlap fastest. */
  readonly loads: Float64Array;
  readonly volumes: Float64Array;
  readonly toolDents: Float64Array;
  /** Number density of grains, equally spaced from `shortest` to `longest` (1/m). */
  readonly density: Float64Array;
  /** Gap (m) and the exposure after which it is reached (s), both rising; the last exposure may be infinite. */
  readonly gaps: Float64Array;
  readonly exposures: Float64Array;
}

/** Run-out of single hits: log-normal about the set one, capped. */
function scatteredRunouts(
  runout: number,
  scatter: number,
  cap: number,
): { runouts: Float64Array; chances: Float64Array } {
  const z = Float64Array.from({ length: RUNOUT_NODES }, (_, i) => (6 * i) / (RUNOUT_NODES - 1) - 3);
  const weights = z.map((value) => normalDensity(value));
  const sum = weights.reduce((total, weight) => total + weight, 0);
  return {
    runouts: z.map((value) => runout * Math.min(cap, exp(scatter * value))),
    chances: weights.map((weight) => weight / sum),
  };
}

/**
 * Builds the side gap's law.
 * @param runout lateral run-out of the tool, zero-to-peak (m); 0 leaves the wall at its foot
 * @param freshness share of the squeezes that are first ones, from `wallFreshness`; in clear water if left out
 */
export function wallLaw(conditions: Conditions, runout: number, freshness = conditions.constants.wallRenewal): WallLaw {
  const { grit, constants, concentration } = conditions;
  const foot = constants.wallFoot * grit.massMedian;
  const { runouts, chances } = scatteredRunouts(runout, constants.runoutScatter, constants.runoutCap);
  const reach = runouts[RUNOUT_NODES - 1] as number;
  const longest = grit.largest;
  const shortest = Math.max(longest / 100, Math.min(foot - reach, longest * 0.98));
  const d30 = grit.meanVolumeDiameter;
  const density = Float64Array.from({ length: DENSITIES }, (_, i) =>
    numberDensity(grit, shortest + ((longest - shortest) * i) / (DENSITIES - 1)),
  );
  const bare = {
    conditions,
    foot,
    widest: Math.max(foot, longest + reach),
    runouts,
    chances,
    grainsPerVolume: (6 * concentration * freshness) / (PI * d30 * d30 * d30),
    largestOverlap: 2 * reach,
    shortest,
    longest,
    density,
    ...hitTables(conditions, 2 * reach, shortest, longest),
  };
  return { ...bare, ...growth(bare) };
}

function hitTables(
  conditions: Conditions,
  largestOverlap: number,
  shortest: number,
  longest: number,
): Pick<WallLaw, 'loads' | 'volumes' | 'toolDents'> {
  const { chipYield } = conditions.constants;
  const debris = debrisShare(conditions);
  const law = contactLaw(conditions);
  const crater = craterLaw(conditions.work, conditions.constants);
  const loads = new Float64Array(DIAMETERS * OVERLAPS);
  const volumes = new Float64Array(DIAMETERS * OVERLAPS);
  const toolDents = new Float64Array(DIAMETERS * OVERLAPS);
  const hit = emptyContact();
  for (let i = 0; i < DIAMETERS; i++) {
    const d = shortest + ((longest - shortest) * i) / (DIAMETERS - 1);
    const share = hitYield(conditions, d);
    for (let j = 0; j < OVERLAPS; j++) {
      contact(law, d, (largestOverlap * j) / (OVERLAPS - 1), hit);
      loads[i * OVERLAPS + j] = hit.load;
      volumes[i * OVERLAPS + j] = share * (chipYield * meanChipVolume(crater, hit.load) + debris * hit.workDent);
      toolDents[i * OVERLAPS + j] = hit.toolDent;
    }
  }
  return { loads, volumes, toolDents };
}

type Tables = Omit<WallLaw, 'gaps' | 'exposures'>;

/**
 * Calls `visit` for every kind of squeeze at gap w: how many of them per wall area and cycle (1/m2), the diameter (m)
 * and the overlap (m).
 */
function forSqueezes(law: Tables, gap: number, visit: (count: number, d: number, overlap: number) => void): void {
  const perDiameter = (DENSITIES - 1) / (law.longest - law.shortest);
  for (let r = 0; r < RUNOUT_NODES; r++) {
    const rho = law.runouts[r] as number;
    const width = (2 * rho) / SQUEEZE_NODES;
    const perNode = law.grainsPerVolume * gap * (law.chances[r] as number) * width;
    for (let k = 0; k < SQUEEZE_NODES; k++) {
      const overlap = (k + 0.5) * width;
      const d = gap - rho + overlap;
      const x = (d - law.shortest) * perDiameter;
      if (!(x >= 0 && x <= DENSITIES - 1)) continue;
      const i = Math.min(DENSITIES - 2, Math.floor(x));
      const below = law.density[i] as number;
      visit(perNode * (below + (x - i) * ((law.density[i + 1] as number) - below)), d, overlap);
    }
  }
}

/** Bilinear value of a hit table. */
function fromTable(law: Tables, table: Float64Array, d: number, overlap: number): number {
  const x = Math.max(0, Math.min(DIAMETERS - 1, ((d - law.shortest) / (law.longest - law.shortest)) * (DIAMETERS - 1)));
  const y = Math.max(0, Math.min(OVERLAPS - 1, (overlap / law.largestOverlap) * (OVERLAPS - 1)));
  const i = Math.min(DIAMETERS - 2, Math.floor(x));
  const j = Math.min(OVERLAPS - 2, Math.floor(y));
  const at = i * OVERLAPS + j;
  const u = x - i;
  const v = y - j;
  const near = (1 - v) * (table[at] as number) + v * (table[at + 1] as number);
  const far = (1 - v) * (table[at + OVERLAPS] as number) + v * (table[at + OVERLAPS + 1] as number);
  return (1 - u) * near + u * far;
}

/** Speed of one side of the gap w under one hit table (m/s): volume per area and cycle, times cycles. */
function speedOf(law: Tables, table: Float64Array, gap: number): number {
  if (!(law.largestOverlap > 0)) return 0;
  let volume = 0;
  forSqueezes(law, gap, (count, d, overlap) => {
    volume += count * fromTable(law, table, d, overlap);
  });
  return law.conditions.frequency * volume;
}

/** Speed at which a side gap w widens by loss of work (m/s). */
export function wallRate(law: Tables, gap: number): number {
  return speedOf(law, law.volumes, gap);
}

/** Dent volume made in the tool's side per area and time where the side gap is w (m/s). */
export function sideDents(law: WallLaw, gap: number): number {
  return speedOf(law, law.toolDents, gap);
}

/** The gap as a function of exposure: dt = dw / rate, exponential between table entries. */
function growth(law: Tables): Pick<WallLaw, 'gaps' | 'exposures'> {
  const step = (law.widest - law.foot) / (GAPS - 1);
  const gaps = new Float64Array(GAPS);
  const exposures = new Float64Array(GAPS);
  gaps[0] = law.foot;
  let before = wallRate(law, law.foot);
  for (let i = 1; i < GAPS; i++) {
    gaps[i] = law.foot + i * step;
    const after = wallRate(law, gaps[i] as number);
    exposures[i] = (exposures[i - 1] as number) + crossing(step, before, after);
    before = after;
  }
  return { gaps, exposures };
}

function crossing(step: number, before: number, after: number): number {
  if (!(step > 0)) return 0;
  if (!(before > 0) || !(after > 0)) return Number.POSITIVE_INFINITY;
  const ratio = before / after;
  const mean = Math.abs(ratio - 1) < 1e-6 ? 1 : (ratio - 1) / log(ratio);
  return (step / before) * mean;
}

/** Side gap after an exposure (m): the foot at 0, rising, bounded. An infinite exposure gives the final gap. */
export function gapAfter(law: WallLaw, exposure: number): number {
  const { gaps, exposures } = law;
  if (!(exposure > 0)) return law.foot;
  let low = 0;
  let high = GAPS - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if ((exposures[middle] as number) <= exposure) low = middle;
    else high = middle;
  }
  const t0 = exposures[low] as number;
  const t1 = exposures[high] as number;
  const w0 = gaps[low] as number;
  if (t1 <= exposure) return gaps[high] as number;
  return t1 > t0 && t1 < Number.POSITIVE_INFINITY
    ? w0 + (((gaps[high] as number) - w0) * (exposure - t0)) / (t1 - t0)
    : w0;
}

/** Hits the rim has taken, by load. */
export interface LoadSpectrum {
  /** Load of each kind (N). */
  readonly loads: Float64Array;
  /** Hits per wall area of each kind (1/m2). */
  readonly counts: Float64Array;
}

/** Hits on one square metre of wall over an exposure from the foot on, by load. */
export function wallHits(law: WallLaw, exposure: number): LoadSpectrum {
  const counts = new Float64Array(DIAMETERS * OVERLAPS);
  for (let i = 0; i < GAPS - 1; i++) {
    const from = law.exposures[i] as number;
    if (from >= exposure) break;
    const last = i === GAPS - 2;
    const until = last ? exposure : Math.min(exposure, law.exposures[i + 1] as number);
    const cycles = law.conditions.frequency * (until - from);
    const gap = ((law.gaps[i] as number) + (law.gaps[i + 1] as number)) / 2;
    forSqueezes(law, gap, (count, d, overlap) => deposit(law, counts, cycles * count, d, overlap));
  }
  return { loads: law.loads, counts };
}

/** Adds hits to the nearest entry of the hit tables. */
function deposit(law: Tables, counts: Float64Array, hits: number, d: number, overlap: number): void {
  const i = Math.round(((d - law.shortest) / (law.longest - law.shortest)) * (DIAMETERS - 1));
  const j = Math.round((overlap / law.largestOverlap) * (OVERLAPS - 1));
  const at = Math.max(0, Math.min(DIAMETERS - 1, i)) * OVERLAPS + Math.max(0, Math.min(OVERLAPS - 1, j));
  counts[at] = (counts[at] as number) + hits;
}
