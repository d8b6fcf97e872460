import { exp, log, normalDensity } from '#src/base/math.ts';
import { type EdgeChip, edgeChip, edgeChipDistance } from './edge-chip.ts';
import type { Conditions } from './records.ts';
import type { LoadSpectrum } from './wall.ts';

/**
 * Chips along the rim from the hits on the wall below it. A hit at depth z chips when its load reaches
 * P_F = beta K_Ic z^(3/2) times the site's factor, and cuts an elliptic scallop of breadth 5 z. Hits fall at random, so
 * the deepest chip over a point of the rim and over the whole rim follow from the mean number of chips that go deeper.
 * Derived; distances are to the original edge, never to the lip of an earlier chip.
 */

const SITE_NODES = 7;
const DEPTH_BINS = 40;

/** Edge chips of one rim. */
export interface RimChips {
  /** 95 % of the rim's length is chipped less deep. */
  readonly p95: EdgeChip;
  /** Median of the deepest chip on the whole rim. */
  readonly largest: EdgeChip;
}

interface Reach {
  /** Hits per wall area (1/m2). */
  readonly hits: number;
  /** Depth from which such a hit still chips, at a site of factor one (m). */
  readonly depth: number;
}

/** The factors on the chipping depth of strong and weak sites and their probabilities. */
function siteFactors(scatter: number): { factor: number; chance: number }[] {
  const nodes = Array.from({ length: SITE_NODES }, (_, i) => (6 * i) / (SITE_NODES - 1) - 3);
  const sum = nodes.reduce((total, z) => total + normalDensity(z), 0);
  return nodes.map((z) => ({ factor: exp((-2 / 3) * scatter * z), chance: normalDensity(z) / sum }));
}

/** Mean number of scallops deeper than e over a point of the rim: hits breadthRatio int_e^h sqrt(z^2 - e^2) dz. */
function scallopsOver(hits: number, depth: number, e: number, breadthRatio: number): number {
  if (depth <= e) return 0;
  const root = Math.sqrt(depth * depth - e * e);
  const area = e > 0 ? 0.5 * (depth * root - e * e * log((depth + root) / e)) : 0.5 * depth * depth;
  return hits * breadthRatio * area;
}

/** Largest e in [0, top] at which a falling function is at least `target`. */
function lastAbove(f: (e: number) => number, target: number, top: number): number {
  if (f(0) < target) return 0;
  let low = 0;
  let high = top;
  for (let i = 0; i < 24; i++) {
    const middle = (low + high) / 2;
    if (f(middle) >= target) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}

/** The spectrum by the depth its hits chip from, in equal bins of depth, each at its mean. */
function reachesOf({ work, constants }: Conditions, { loads, counts }: LoadSpectrum): Reach[] {
  const depths = loads.map((load, k) =>
    (counts[k] as number) > 0 ? edgeChipDistance(work.toughness, load, constants) : 0,
  );
  const deepest = depths.reduce((most, depth) => Math.max(most, depth), 0);
  const hits = new Float64Array(DEPTH_BINS);
  const moment = new Float64Array(DEPTH_BINS);
  depths.forEach((depth, k) => {
    if (!(depth > 0)) return;
    const bin = Math.min(DEPTH_BINS - 1, Math.floor((depth / deepest) * DEPTH_BINS));
    hits[bin] = (hits[bin] as number) + (counts[k] as number);
    moment[bin] = (moment[bin] as number) + (counts[k] as number) * depth;
  });
  return Array.from(hits, (number, k) => ({
    hits: number,
    depth: number > 0 ? (moment[k] as number) / number : 0,
  })).filter((reach) => reach.hits > 0);
}

/**
 * Chips along a rim of given length after the hits of `spectrum`.
 * @param perimeter length of the rim (m)
 */
export function rimChips(conditions: Conditions, spectrum: LoadSpectrum, perimeter: number): RimChips {
  const { constants } = conditions;
  const sites = siteFactors(constants.chipSiteScatter);
  const reaches = reachesOf(conditions, spectrum);
  const deepest = reaches.reduce((most, { depth }) => Math.max(most, depth), 0) * (sites[0]?.factor ?? 1);
  const chipped = (e: number) =>
    sites.reduce((share, { factor, chance }) => {
      let scallops = 0;
      for (const { hits, depth } of reaches)
        scallops += scallopsOver(hits, depth * factor, e, constants.chipBreadthRatio);
      return share + chance * (1 - exp(-scallops));
    }, 0);
  const deeper = (e: number) =>
    sites.reduce((number, { factor, chance }) => {
      let along = 0;
      for (const { hits, depth } of reaches) along += hits * Math.max(0, depth * factor - e);
      return number + chance * along * perimeter;
    }, 0);
  return {
    p95: edgeChip(lastAbove(chipped, 0.05, deepest), constants),
    largest: edgeChip(lastAbove(deeper, Math.LN2, deepest), constants),
  };
}
