import {
  COEFFICIENT,
  DENT_MARKS,
  type Field,
  FREE_REACH,
  HIT,
  HIT_CHANNELS,
  type Kernel,
  type KernelTables,
  LOAD_BIN_FIRST_EXPONENT,
  LOAD_BINS,
  LOAD_BINS_PER_OCTAVE,
  OUT_OF_REACH,
  type Rim,
  STEP,
  SUM,
  SUMS,
} from '../contract.ts';
import { type Draw, detachOf, drawOf, grainOf, runoutOf, tailOf } from './draws.ts';
import { takeChip, takeDent } from './stamp.ts';

/** What a squeezed grain does, read from the hit table. */
interface Hit {
  readonly load: number;
  readonly impulse: number;
  readonly dent: number;
  readonly crack: number;
}

/** A candidate: the column struck, where in columns, and the grain. */
interface Candidate {
  readonly draw: Draw;
  readonly event: number;
  readonly x: number;
  readonly y: number;
  readonly column: number;
  readonly grain: number;
  /** Magnification here. */
  readonly m: number;
}

/**
 * The reference kernel: float64 fields, one small function per idea. It defines what is correct; the fast kernels are
 * held to it draw by draw.
 */
export function createReferenceKernel(): Kernel {
  return { name: 'reference', hitFloor, hitWall };
}

const at = (values: ArrayLike<number>, k: number) => values[k] as number;

/** Bilinear in diameter and overlap. */
function hitOf(tables: KernelTables, d: number, overlap: number): Hit {
  const { hits, hitDiameters, hitOverlaps } = tables;
  const largest = at(tables.coefficients, COEFFICIENT.largest);
  const a = Math.min((d / largest) * (hitDiameters - 1), hitDiameters - 1.001);
  const b = Math.min((overlap / largest) * (hitOverlaps - 1), hitOverlaps - 1.001);
  const i = Math.floor(a);
  const j = Math.floor(b);
  const channel = (k: number) => {
    const entry = (di: number, dj: number) => at(hits, ((i + di) * hitOverlaps + j + dj) * HIT_CHANNELS + k);
    const low = entry(0, 0) + (b - j) * (entry(0, 1) - entry(0, 0));
    const high = entry(1, 0) + (b - j) * (entry(1, 1) - entry(1, 0));
    return low + (a - i) * (high - low);
  };
  return { load: channel(HIT.load), impulse: channel(HIT.impulse), dent: channel(HIT.dent), crack: channel(HIT.crack) };
}

/** Length of a grain's reach below the face over a column this far beyond the start of the curved edge (m). */
function reachOf(tables: KernelTables, d: number, beyond: number): number {
  if (beyond <= 0) return d;
  const edgeRadius = at(tables.coefficients, COEFFICIENT.edgeRadius);
  const radius = d / 2 + edgeRadius;
  if (beyond >= radius) return Number.NEGATIVE_INFINITY;
  return d / 2 + Math.sqrt(radius * radius - beyond * beyond) - edgeRadius;
}

/** How far the tool's curved edge stands above its face over a column this far beyond the start of the edge (m). */
function riseOf(tables: KernelTables, beyond: number): number {
  const edgeRadius = at(tables.coefficients, COEFFICIENT.edgeRadius);
  if (beyond <= 0) return 0;
  return beyond >= edgeRadius ? edgeRadius : edgeRadius - Math.sqrt(edgeRadius * edgeRadius - beyond * beyond);
}

/** Renews the bounds of a tile's blocks, after the even lowering by free impacts. */
function renewTile(field: Field, tables: KernelTables, step: Float64Array, tile: number): void {
  const face = at(step, STEP.face);
  const even = at(step, STEP.even);
  const largest = at(tables.coefficients, COEFFICIENT.largest);
  const per = field.tile / field.block;
  for (let k = 0; k < per * per; k++) {
    let bound = OUT_OF_REACH;
    for (const column of columnsOf(field, tile, k)) {
      const before = at(field.heights, column);
      const beyond = field.edges.length > 0 ? at(field.edges, column) : 0;
      const reach = reachOf(tables, largest, beyond);
      const passed = before >= face + riseOf(tables, beyond);
      if (passed || before <= OUT_OF_REACH || reach === Number.NEGATIVE_INFINITY) continue;
      if (before > face - FREE_REACH * largest) field.heights[column] = before - even;
      const after = at(field.heights, column);
      addTo(field, tile, SUM.freeRemoved, (before - after) * field.dx * field.dy);
      bound = Math.max(bound, after - (largest - reach));
    }
    field.bounds[tile * per * per + k] = bound;
  }
}

/** Corner column of block k of a tile. */
function cornerOf(field: Field, tile: number, k: number): { i: number; j: number } {
  const per = field.tile / field.block;
  return {
    i: (tile % field.tilesX) * field.tile + (k % per) * field.block,
    j: Math.floor(tile / field.tilesX) * field.tile + Math.floor(k / per) * field.block,
  };
}

function columnsOf(field: Field, tile: number, k: number): number[] {
  const { i, j } = cornerOf(field, tile, k);
  const { block, nx } = field;
  return Array.from({ length: block * block }, (_, n) => (j + Math.floor(n / block)) * nx + i + (n % block));
}

function addTo(field: Field, tile: number, sum: number, value: number): void {
  const k = tile * SUMS + sum;
  field.sums[k] = at(field.sums, k) + value;
}

/**
 * One sweep over the blocks of a tile with exponential spacings: each block expects `expected(bound, m)` candidates, each
 * conditioned on being longer than the block's shortest gap.
 */
function sweep(
  field: Field,
  tables: KernelTables,
  step: Float64Array,
  tile: number,
  rule: {
    magnification: (block: number) => number;
    gap: (bound: number) => number;
    rate: (bound: number, m: number) => number;
    hit: (candidate: Candidate) => void;
  },
): void {
  const per = field.tile / field.block;
  let event = 0;
  let draw = drawOf(step, tile, event);
  let left = draw.spacing;
  for (let k = 0; k < per * per; k++) {
    const bound = at(field.bounds, tile * per * per + k);
    const share = tailOf(tables, rule.gap(bound));
    if (share <= 0) continue;
    const m = rule.magnification(k);
    let rest = rule.rate(bound, m) * share;
    while (left <= rest) {
      rest -= left;
      const used = draw;
      event++;
      draw = drawOf(step, tile, event);
      left = draw.spacing;
      addTo(field, tile, SUM.candidates, 1);
      const corner = cornerOf(field, tile, k);
      const x = corner.i + used.across * field.block;
      const y = corner.j + used.along * field.block;
      const column = Math.floor(y) * field.nx + Math.floor(x);
      rule.hit({ draw: used, event, x, y, column, grain: grainOf(tables, used.size * share), m });
    }
    left -= rest;
  }
}

/** Books a hit's load and crack, then takes its chip and its dent. Returns the volume taken (m3). */
function strike(
  field: Field,
  tables: KernelTables,
  step: Float64Array,
  tile: number,
  candidate: Candidate,
  struck: { hit: Hit; ceiling: number },
): number {
  const { hit, ceiling } = struck;
  const { draw, column, grain, m } = candidate;
  const time = at(step, STEP.time);
  const from = at(field.heights, column);
  addTo(field, tile, SUM.engaged, 1);
  addTo(field, tile, SUM.impacts, m);
  addTo(field, tile, SUM.impulse, m * hit.impulse);
  addTo(field, tile, SUM.load, hit.load);
  const top = tile * SUMS + SUM.largestLoad;
  field.sums[top] = Math.max(at(field.sums, top), hit.load);
  const bin = tile * LOAD_BINS + loadBin(hit.load);
  field.loads[bin] = at(field.loads, bin) + m;
  field.cracks[column] = Math.min(at(field.cracks, column), from - hit.crack);

  const root = Math.sqrt(hit.load);
  const crater = (radius: number, depth: number, limit: number) => ({
    x: candidate.x,
    y: candidate.y,
    rx: (radius * Math.sqrt(m)) / field.dx,
    ry: (radius * Math.sqrt(m)) / field.dy,
    depth,
    from,
    limit,
  });
  let taken = 0;
  const useful = at(tables.coefficients, COEFFICIENT.useful);
  const threshold = at(tables.thresholds, draw.threshold);
  if (hit.load > threshold && draw.detachment < useful * detachOf(tables, grain)) {
    const onset = 1 - Math.sqrt(Math.sqrt(threshold / hit.load));
    const full = at(tables.coefficients, COEFFICIENT.radius) * root * Math.sqrt(Math.sqrt(root)) * Math.sqrt(onset);
    // a chip stays within half a tile of its centre, so that tiles of one colour never share a column
    const widest = ((field.tile / 2 - 1) * Math.min(field.dx, field.dy)) / Math.sqrt(m);
    const radius = Math.min(full, widest);
    const depth = at(tables.coefficients, COEFFICIENT.depth) * root;
    addTo(field, tile, SUM.chips, 1);
    addTo(field, tile, SUM.radius, radius);
    addTo(field, tile, SUM.depth, depth);
    taken += takeChip(field, crater(radius, depth, Math.min(ceiling, from + radius)), tile, time);
  }
  const every = at(tables.coefficients, COEFFICIENT.dentEvery);
  if (draw.dent >= DENT_MARKS / every) return taken;
  const dentRadius = at(tables.coefficients, COEFFICIENT.dentRadius) * root;
  return taken + takeDent(field, crater(dentRadius, 0, ceiling), hit.dent * m * useful * every, tile);
}

/** Bin of a load in the histogram: eight equal steps within each octave of float32. */
function loadBin(load: number): number {
  let octave = LOAD_BIN_FIRST_EXPONENT;
  let low = 2 ** octave;
  const value = Math.fround(load);
  if (value < low) return 0;
  while (value >= 2 * low) {
    low *= 2;
    octave++;
  }
  const bin = (octave - LOAD_BIN_FIRST_EXPONENT) * LOAD_BINS_PER_OCTAVE;
  return Math.min(LOAD_BINS - 1, bin + Math.floor((value / low - 1) * LOAD_BINS_PER_OCTAVE));
}

function hitFloor(field: Field, tables: KernelTables, step: Float64Array, tile: number): void {
  field.sums.fill(0, tile * SUMS, (tile + 1) * SUMS);
  if (at(step, STEP.renew) === 1) renewTile(field, tables, step, tile);
  const face = at(step, STEP.face);
  // columns the tool has passed at its full width are wall
  const ceiling = face + (field.edges.length > 0 ? at(tables.coefficients, COEFFICIENT.edgeRadius) : 0);
  const m = at(step, STEP.magnification);
  const per = field.tile / field.block;
  sweep(field, tables, step, tile, {
    magnification: (k) => (field.unscaled.length > 0 && at(field.unscaled, tile * per * per + k) === 1 ? 1 : m),
    gap: (bound) => face - bound,
    rate: (_, local) => (at(step, STEP.lambda) * m) / local,
    hit(candidate) {
      const h = at(field.heights, candidate.column);
      const beyond = field.edges.length > 0 ? at(field.edges, candidate.column) : 0;
      const overlap = reachOf(tables, candidate.grain, beyond) - (face - h);
      if (h >= face + riseOf(tables, beyond) || !(overlap > 0)) return;
      const hit = hitOf(tables, candidate.grain, overlap);
      const taken = strike(field, tables, step, tile, candidate, { hit, ceiling });
      if (beyond <= 0) addTo(field, tile, SUM.faceRemoved, taken);
    },
  });
}

function hitWall(field: Field, tables: KernelTables, step: Float64Array, tile: number, rim: Rim): void {
  field.sums.fill(0, tile * SUMS, (tile + 1) * SUMS);
  const row = Math.floor(tile / field.tilesX);
  if (row * field.tile >= at(step, STEP.rows)) return;
  if (at(step, STEP.renew) === 1) renewTile(field, tables, step, tile);
  const m = at(step, STEP.magnification);
  const furthest = at(tables.coefficients, COEFFICIENT.runoutLargest);
  sweep(field, tables, step, tile, {
    // the rim's own rows are never magnified: chips have a length of their own
    magnification: () => (row === 0 ? 1 : m),
    gap: (bound) => -bound - furthest,
    rate: (bound, local) => ((at(step, STEP.lambda) * m) / local) * -bound,
    hit(candidate) {
      const h = at(field.heights, candidate.column);
      const runout = runoutOf(tables, step, tile, candidate.event);
      // only grains that enter the gap when it is widest and are squeezed when it is narrowest
      const overlap = candidate.grain + h + runout;
      if (h <= OUT_OF_REACH || overlap <= 0 || overlap >= 2 * runout) return;
      const hit = hitOf(tables, candidate.grain, overlap);
      strike(field, tables, step, tile, candidate, { hit, ceiling: 0 });
      chipRim(rim, tables, candidate.x * field.dx, candidate.y * field.dy, hit.load);
    },
  });
}

/** A hit of load P at depth z below the entry face chips the rim where P >= chipLoad z^(3/2) times the site's factor. */
function chipRim(rim: Rim, tables: KernelTables, s: number, z: number, load: number): void {
  const cell = Math.min(Math.floor(s / rim.spacing), rim.n - 1);
  const site = at(rim.siteFactors, Math.floor(cell / rim.cellsPerSite));
  if (load < at(tables.coefficients, COEFFICIENT.chipLoad) * site * z * Math.sqrt(z)) return;
  const half = (at(tables.coefficients, COEFFICIENT.chipBreadth) * z) / 2;
  const first = Math.ceil((s - half) / rim.spacing - 0.5);
  const last = Math.floor((s + half) / rim.spacing - 0.5);
  for (let i = first; i <= last; i++) {
    const u = ((i + 0.5) * rim.spacing - s) / half;
    const k = (i + rim.n) % rim.n;
    rim.chips[k] = Math.max(at(rim.chips, k), z * Math.sqrt(Math.max(0, 1 - u * u)));
  }
}
