import { log, normalDensity, pow } from '#src/base/math.ts';
import { classLoadAt, type GapSums, sumAt, TERM, type Term } from './gap-sums.ts';
import { numberTail } from './grit-law.ts';
import { gritsPerArea } from './population.ts';

/** Nodes of the Gaussian floor: heights -4 to 4 Sq, a tenth of Sq apart. */
const FLOOR_NODES = 81;
const NODE_HEIGHT = Float64Array.from({ length: FLOOR_NODES }, (_, j) => (j - 40) / 10);
const NODE_WEIGHT = NODE_HEIGHT.map((z) => normalDensity(z));
const WEIGHT_SUM = NODE_WEIGHT.reduce((sum, weight) => sum + weight, 0);
const ITERATIONS = 40;
const TOLERANCE = 1e-7;

/** The floor and the tool over it in steady state. SI. */
export interface FloorState {
  /** The grits carry the load at some gap. False beyond what they can bear: the state is then that of the largest load. */
  readonly carried: boolean;
  /** Tool face over the mean floor at closest approach (m). */
  readonly gap: number;
  /** Root mean square height Sq of the floor (m). */
  readonly roughness: number;
  /** Height over which the load changes e-fold (m). */
  readonly loadHeight: number;
  /** Mean depth of the chips that leave (m), 0 if none. */
  readonly chipDepth: number;
  /** Depth that roughens the floor: chips and dents by the volume each removes (m). */
  readonly craterDepth: number;
  /** Removed over credited chip volume. */
  readonly overlap: number;
  /** Grits over one square metre of face (1/m2). */
  readonly grits: number;
}

/** Mean of a term over the Gaussian floor under a tool at `gap` above its mean, per grit in the film. */
export function overFloor(sums: GapSums, term: Term, gap: number, roughness: number): number {
  if (!(roughness > 0)) return sumAt(sums, term, gap);
  let sum = 0;
  for (let j = 0; j < FLOOR_NODES; j++) {
    sum += (NODE_WEIGHT[j] as number) * sumAt(sums, term, gap - roughness * (NODE_HEIGHT[j] as number));
  }
  return sum / WEIGHT_SUM;
}

/**
 * Share of the film's grits that touch both faces in one cycle: of fresh grit by its law, of any other population by its
 * classes, counted against the fresh grits that came in.
 */
export function engagedShare(sums: GapSums, gap: number, roughness: number): number {
  const { conditions, classes } = sums.rows;
  const fresh = sums.population === classes.fraction;
  let sum = 0;
  for (let j = 0; j < FLOOR_NODES; j++) {
    const here = gap - roughness * (NODE_HEIGHT[j] as number);
    sum += (NODE_WEIGHT[j] as number) * (fresh ? numberTail(conditions.grit, here) : countAbove(sums, here));
  }
  return sum / WEIGHT_SUM;
}

function countAbove({ rows, population }: GapSums, gap: number): number {
  let count = 0;
  for (let i = 0; i < population.length && (rows.classes.diameter[i] as number) > gap; i++)
    count += population[i] as number;
  return count;
}

/** Cycle-mean pressure the grits carry at a gap (Pa). */
function pressureAt(sums: GapSums, gap: number, roughness: number): number {
  const { conditions } = sums.rows;
  return conditions.frequency * gritsPerArea(conditions, gap) * overFloor(sums, TERM.impulse, gap, roughness);
}

/** From above, the first gap at which the grits carry the pressure, bracketed to one row; NaN if there is none. */
function firstGap(sums: GapSums, pressure: number, roughness: number): number {
  const { step, conditions } = sums.rows;
  const top = conditions.grit.largest + 4 * roughness;
  let best = 0;
  for (let gap = top - step; gap > 0; gap -= step) {
    const carried = pressureAt(sums, gap, roughness);
    if (carried >= pressure) return gap;
    // beyond the largest load the gap is choked: it never comes back
    if (carried < 0.5 * best) return Number.NaN;
    best = Math.max(best, carried);
  }
  return Number.NaN;
}

/** The largest gap that carries `pressure`, from a guess: bracket outward by rows, then false position in ln p. */
function solveGap(sums: GapSums, pressure: number, roughness: number, guess: number): number {
  const { step } = sums.rows;
  const excess = (gap: number) => log(Math.max(1e-300, pressureAt(sums, gap, roughness)) / pressure);
  let low = guess;
  let high = guess;
  let atLow = excess(low);
  let atHigh = atLow;
  for (let i = 0; atHigh > 0 && i < 4096; i++) {
    low = high;
    atLow = atHigh;
    high += step;
    atHigh = excess(high);
  }
  for (let i = 0; atLow < 0 && i < 4096; i++) {
    high = low;
    atHigh = atLow;
    low -= step;
    if (low <= 0) return Number.NaN;
    atLow = excess(low);
  }
  for (let i = 0; i < 60 && high - low > 1e-10 * high; i++) {
    // halve every third time: near the largest grain ln p runs to minus infinity
    const share = i % 3 === 2 ? 0.5 : Math.min(0.98, Math.max(0.02, atLow / (atLow - atHigh)));
    const middle = low + share * (high - low);
    const value = excess(middle);
    if (value === 0) return middle;
    if (value > 0) {
      low = middle;
      atLow = value;
    } else {
      high = middle;
      atHigh = value;
    }
  }
  return (low + high) / 2;
}

/** Height over which the load changes e-fold at a gap, at a fixed number of grits (m). */
function loadHeightAt(sums: GapSums, gap: number, roughness: number): number {
  const half = sums.rows.step / 2;
  const wider = overFloor(sums, TERM.impulse, gap + half, roughness);
  const closer = overFloor(sums, TERM.impulse, gap - half, roughness);
  return wider > 0 && closer > wider ? (2 * half) / log(closer / wider) : half;
}

/**
 * Depth that roughens the floor: mean depth of the chips and of the dents (dents by volume), each by the volume it
 * removes. Where no chip forms the floor is made of dents: against cuts of cemented carbide and hard steel the roughness
 * comes out 3 % low (F600) to 30 % high (F320).
 */
function depthsAt(sums: GapSums, gap: number, roughness: number): { chip: number; crater: number } {
  const chips = overFloor(sums, TERM.chips, gap, roughness);
  const chip = chips > 0 ? overFloor(sums, TERM.chipDepth, gap, roughness) / chips : 0;
  const chipVolume = overFloor(sums, TERM.chipVolume, gap, roughness);
  const dentVolume = overFloor(sums, TERM.dent, gap, roughness);
  const removed = chipVolume + dentVolume;
  const dents = overFloor(sums, TERM.dentDepth, gap, roughness);
  return { chip, crater: removed > 0 ? (chipVolume * chip + dents) / removed : 0 };
}

/** Removed over credited chip volume, factor (b/l)^exponent, at most one: found in the cut. */
function overlapOf(sums: GapSums, chipDepth: number, loadHeight: number): number {
  const { overlapFactor, overlapExponent } = sums.rows.conditions.constants;
  return chipDepth > 0 ? Math.min(1, overlapFactor * pow(chipDepth / loadHeight, overlapExponent)) : 1;
}

/** Roughness and overlap of the floor that forms under a tool at a given gap, from a neighbouring roughness. */
export function chipStateAt(sums: GapSums, gap: number, guess: number): { roughness: number; overlap: number } {
  let roughness = guess;
  let loadHeight = 0;
  let depths = { chip: 0, crater: 0 };
  for (let i = 0; i < ITERATIONS; i++) {
    loadHeight = loadHeightAt(sums, gap, roughness);
    depths = depthsAt(sums, gap, roughness);
    const wanted = sums.rows.conditions.constants.floorRoughness * Math.sqrt(depths.crater * loadHeight);
    const settled = Math.abs(wanted - roughness) <= 1e-3 * wanted;
    roughness = settled ? wanted : 0.4 * roughness + 0.6 * wanted;
    if (settled) break;
  }
  return { roughness, overlap: overlapOf(sums, depths.chip, loadHeight) };
}

/** The floor under a tool at a known gap and roughness. */
export function floorAt(sums: GapSums, gap: number, roughness: number): FloorState {
  const loadHeight = loadHeightAt(sums, gap, roughness);
  const depths = depthsAt(sums, gap, roughness);
  return {
    carried: true,
    gap,
    roughness,
    loadHeight,
    chipDepth: depths.chip,
    craterDepth: depths.crater,
    overlap: overlapOf(sums, depths.chip, loadHeight),
    grits: gritsPerArea(sums.rows.conditions, gap),
  };
}

/**
 * Steady floor under a face pressure: the tool height carries the pressure on a Gaussian floor whose own roughness is
 * Sq = factor sqrt(b l), b the crater depth and l the load height there. Fixed point by secants. The overlap and
 * roughness laws were found in impact-by-impact cuts (within 5 % and -27 to +18 %).
 * @param guess a neighbouring state to start from
 */
export function steadyFloor(sums: GapSums, pressure: number, guess?: FloorState): FloorState {
  const { conditions } = sums.rows;
  let roughness = guess?.roughness ?? 0;
  let gap = guess?.carried ? guess.gap : firstGap(sums, pressure, roughness);
  let loadHeight = 0;
  let depths = { chip: 0, crater: 0 };
  let before = { roughness: 0, excess: 0 };
  for (let i = 0; i < ITERATIONS; i++) {
    gap = solveGap(sums, pressure, roughness, gap);
    if (Number.isNaN(gap)) gap = firstGap(sums, pressure, roughness);
    if (Number.isNaN(gap)) return chokedFloor(sums, roughness);
    loadHeight = loadHeightAt(sums, gap, roughness);
    depths = depthsAt(sums, gap, roughness);
    const excess = conditions.constants.floorRoughness * Math.sqrt(depths.crater * loadHeight) - roughness;
    if (Math.abs(excess) <= TOLERANCE * roughness) break;
    const slope = i > 0 ? (excess - before.excess) / (roughness - before.roughness) : -1;
    before = { roughness, excess };
    // the law rises slower than its argument, so its excess falls: keep the secant to that
    roughness -= excess / Math.min(-0.2, Math.max(-2, slope));
  }
  return floorAt(sums, gap, roughness);
}

/** The state of the largest load the grits carry. */
function chokedFloor(sums: GapSums, roughness: number): FloorState {
  const { step, count, conditions } = sums.rows;
  let gap = conditions.grit.largest;
  let most = 0;
  for (let k = 1; k < count; k++) {
    const candidate = (count - k) * step;
    const carried = pressureAt(sums, candidate, roughness);
    if (carried <= most) continue;
    most = carried;
    gap = candidate;
  }
  return { ...floorAt(sums, gap, roughness), carried: false };
}

/** Loads that given shares of the hits stay below (N), over the size law and the Gaussian floor. */
export function loadQuantiles(sums: GapSums, floor: FloorState, shares: readonly number[]): number[] {
  const { diameter } = sums.rows.classes;
  const hits: { load: number; weight: number }[] = [];
  let total = 0;
  for (let j = 0; j < FLOOR_NODES; j++) {
    const gap = Math.max(0, floor.gap - floor.roughness * (NODE_HEIGHT[j] as number));
    for (let i = 0; i < diameter.length && (diameter[i] as number) > gap; i++) {
      const weight = (NODE_WEIGHT[j] as number) * (sums.population[i] as number);
      hits.push({ load: classLoadAt(sums.rows, i, gap), weight });
      total += weight;
    }
  }
  hits.sort((a, b) => a.load - b.load);
  return shares.map((share) => {
    let sum = 0;
    for (const { load, weight } of hits) {
      sum += weight;
      if (sum >= share * total) return load;
    }
    return hits.at(-1)?.load ?? 0;
  });
}
