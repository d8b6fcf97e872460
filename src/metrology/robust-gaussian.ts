import type { Profile } from '#src/base/field.ts';
import { exp, PI } from '#src/base/math.ts';
import { checkProfile } from './gaussian.ts';
import { withoutLine } from './linear.ts';
import { median } from './order.ts';

/** Root of (1 + pi g^2) exp(-pi g^2) = 1/2: 50 % transmission of the second-order regression at the nesting index. */
const SECOND_ORDER_ALPHA = 0.7309134280946;
/** Tukey's tuning: residuals beyond this many medians of |residual| get no weight (about three standard deviations). */
const TUKEY_MEDIANS = 4.4478;
/** Beyond this many nesting indices the weight is below 2e-6 of its middle. */
const REACH = 1.5;
/** Points are pooled into blocks of at most this share of the index, which widens the kernel by 1.2e-4 of itself. */
const BLOCKS_PER_CUTOFF = 64;
const MOST_ROUNDS = 30;
const SETTLED = 1e-4;

/** The mean line is solved at `numNodes` nodes, at the edges of the blocks, from sums over the blocks. */
interface Blocks {
  /** Points per block. */
  readonly step: number;
  readonly numBlocks: number;
  /** First block within reach of each node, and the number of weights per node. */
  readonly first: Int32Array;
  readonly span: number;
  /** Distances block - node in units of the reach, and weights; numNodes x span. */
  readonly distance: Float64Array;
  readonly weight: Float64Array;
}

function makeBlocks(n: number, spacing: number, cutoff: number): Blocks {
  const step = Math.max(1, Math.floor(cutoff / (BLOCKS_PER_CUTOFF * spacing)));
  const numBlocks = Math.ceil(n / step);
  const reach = REACH * cutoff;
  const half = Math.min(numBlocks, Math.ceil(reach / (step * spacing)) + 1);
  const span = Math.min(numBlocks, 2 * half);
  const numNodes = numBlocks + 1;
  const first = Int32Array.from({ length: numNodes }, (_, i) => Math.max(0, Math.min(i - half, numBlocks - span)));
  const distance = new Float64Array(numNodes * span);
  const weight = new Float64Array(numNodes * span);
  // distances are whole steps and a half; only the last block may be shorter
  const weightAt = (points: number) => exp(-PI * ((points * spacing) / (SECOND_ORDER_ALPHA * cutoff)) ** 2);
  const table = Float64Array.from({ length: numBlocks + 1 }, (_, k) => weightAt((k + 0.5) * step));
  for (let i = 0; i < numNodes; i++) {
    for (let k = 0; k < span; k++) {
      const block = first[i] + k;
      const points = (block * step + Math.min(n, (block + 1) * step)) / 2 - i * step;
      distance[i * span + k] = (points * spacing) / reach;
      const whole = block < numBlocks - 1;
      weight[i * span + k] = whole ? table[block < i ? i - block - 1 : block - i] : weightAt(points);
    }
  }
  return { step, numBlocks, first, span, distance, weight };
}

/** Sums over the points of each block: robust weights, weighted heights, and how far their centroid lies off the middle. */
interface Pooled {
  readonly mass: Float64Array;
  readonly moment: Float64Array;
  /** In units of the reach. */
  readonly offset: Float64Array;
}

/** Weighs every point by its residual against `scale` and sums over the blocks; `unit` is one spacing over the reach. */
function pool(
  { numBlocks, step }: Blocks,
  { z, line, scale }: { z: Float64Array; line: Float64Array; scale: number },
  { mass, moment, offset }: Pooled,
  unit: number,
): void {
  const n = z.length;
  for (let block = 0; block < numBlocks; block++) {
    const end = Math.min(n, (block + 1) * step);
    const middle = (block * step + end - 1) / 2;
    let m = 0;
    let t = 0;
    let off = 0;
    for (let j = block * step; j < end; j++) {
      const share = (z[j] - line[j]) / scale;
      const bell = 1 - share * share;
      const delta = bell > 0 ? bell * bell : 0;
      m += delta;
      t += delta * z[j];
      off += delta * (j - middle);
    }
    mass[block] = m;
    moment[block] = t;
    offset[block] = m > 0 ? (off / m) * unit : 0;
  }
}

/** Second-order regression at each node from the sums over the blocks. */
function solveNodes(blocks: Blocks, { mass, moment, offset }: Pooled, nodes: Float64Array): void {
  const { span, first, distance, weight } = blocks;
  for (let i = 0; i < nodes.length; i++) {
    let m0 = 0;
    let m1 = 0;
    let m2 = 0;
    let m3 = 0;
    let m4 = 0;
    let t0 = 0;
    let t1 = 0;
    let t2 = 0;
    for (let k = 0; k < span; k++) {
      const d = distance[i * span + k] + offset[first[i] + k];
      const m = weight[i * span + k] * mass[first[i] + k];
      const t = weight[i * span + k] * moment[first[i] + k];
      m0 += m;
      m1 += m * d;
      m2 += m * d * d;
      m3 += m * d * d * d;
      m4 += m * d * d * d * d;
      t0 += t;
      t1 += t * d;
      t2 += t * d * d;
    }
    // Cramer's rule for the value at d = 0; a node that has lost its points keeps the line of the last round
    const a = m2 * m4 - m3 * m3;
    const b = m1 * m4 - m2 * m3;
    const c = m1 * m3 - m2 * m2;
    const determinant = m0 * a - m1 * b + m2 * c;
    if (Math.abs(determinant) > 1e-9 * m0 * m0 * m0) nodes[i] = (t0 * a - t1 * b + t2 * c) / determinant;
  }
}

/** Cubic through four neighbouring nodes, read at every point; the node grid is finer than the line by far. */
function readNodes(nodes: Float64Array, step: number, line: Float64Array): void {
  const last = nodes.length - 1;
  for (let j = 0; j < line.length; j++) {
    const at = (j + 0.5) / step;
    const k = Math.min(Math.floor(at), last - 1);
    const t = at - k;
    const p1 = nodes[k];
    const p2 = nodes[k + 1];
    const p0 = k > 0 ? nodes[k - 1] : 2 * p1 - p2;
    const p3 = k + 2 <= last ? nodes[k + 2] : 2 * p2 - p1;
    line[j] = p1 + 0.5 * t * (p2 - p0 + t * (2 * p0 - 5 * p1 + 4 * p2 - p3 + t * (3 * (p1 - p2) + p3 - p0)));
  }
}

/**
 * Mean line that deep valleys and high peaks do not pull: robust Gaussian regression filter of second order with
 * Tukey's weights, ISO 16610-31 (from memory), for the material-ratio parameters. The line is solved on a grid of 64
 * nodes per `cutoff` (m) and read between them; it reaches both ends. Rounds end when the scale of the residuals moves
 * by less than 1e-4, or after `mostRounds`; one round is the plain second-order regression.
 * @throws RangeError for a profile `checkProfile` refuses or a cutoff that is not positive.
 */
export function robustMeanLine(profile: Profile, cutoff: number, mostRounds: number = MOST_ROUNDS): Profile {
  checkProfile(profile);
  if (!(cutoff > 0 && Number.isFinite(cutoff)))
    throw new RangeError(`a nesting index must be positive, not ${cutoff} m`);
  const z = withoutLine(profile.z);
  const n = z.length;
  const blocks = makeBlocks(n, profile.spacing, cutoff);
  const perBlock = () => new Float64Array(blocks.numBlocks);
  const pooled = { mass: perBlock(), moment: perBlock(), offset: perBlock() };
  const nodes = new Float64Array(blocks.numBlocks + 1);
  const line = new Float64Array(n);
  let scale = Number.POSITIVE_INFINITY;
  for (let round = 0; round < mostRounds; round++) {
    pool(blocks, { z, line, scale }, pooled, profile.spacing / (REACH * cutoff));
    solveNodes(blocks, pooled, nodes);
    readNodes(nodes, blocks.step, line);
    const before = scale;
    scale = TUKEY_MEDIANS * median(z.map((height, j) => Math.abs(height - line[j])));
    if (!(scale > 0) || Math.abs(before - scale) <= SETTLED * scale) break;
  }
  return { spacing: profile.spacing, z: profile.z.map((height, j) => height - z[j] + line[j]) };
}
