import { philox } from '../../../base/philox.ts';
import {
  COEFFICIENT,
  DENT_MARKS,
  type Field,
  FREE_REACH,
  GRAIN_BINS_PER_OCTAVE,
  GRAIN_OCTAVES,
  HIT_CHANNELS,
  type Kernel,
  type KernelTables,
  LOAD_BIN_FIRST_EXPONENT,
  LOAD_BINS,
  OUT_OF_REACH,
  type Rim,
  STEP,
  SUM,
  SUMS,
  USE_HIT,
  USE_RUNOUT,
} from '../contract.ts';
import { detachAt, exponential, isIdle, riseAt, tailAt } from './look-up.ts';
import { type Footprint, stampChip, stampDent } from './stamp.ts';

const TWO_TO_MINUS_32 = 2.3283064365386963e-10;

/** The fast kernel: float32 fields, float64 arithmetic, everything inline that runs once per candidate. */
export function createFastKernel(): Kernel {
  const random = new Uint32Array(4);
  const second = new Uint32Array(4);
  const bits = new Int32Array(1);
  const real = new Float32Array(bits.buffer);
  const at: Footprint = { x: 0, y: 0, column: 0, radius: 0, depth: 0, limit: 0 };
  const scale = { magnification: 1, time: 0 };
  const hit = new Float64Array(HIT_CHANNELS);

  /** Grain whose tail is p, by the bits of p as a float32. */
  function grainAt(grain: Float32Array, p: number): number {
    real[0] = p;
    const b = bits[0] as number;
    const first = (127 - GRAIN_OCTAVES) << 23;
    if (b <= first) return grain[0] as number;
    const k = (b - first) >> 17;
    if (k >= GRAIN_OCTAVES * GRAIN_BINS_PER_OCTAVE) return grain[GRAIN_OCTAVES * GRAIN_BINS_PER_OCTAVE] as number;
    const low = grain[k] as number;
    return low + ((b & 0x1ffff) / 131072) * ((grain[k + 1] as number) - low);
  }

  /** Load, impulse, dent and crack of a grain of diameter d squeezed by `overlap`, into `hit`. */
  function lookUp(tables: KernelTables, d: number, overlap: number): void {
    const { hits, hitDiameters, hitOverlaps } = tables;
    const perMetre = 1 / (tables.coefficients[COEFFICIENT.largest] as number);
    let a = d * perMetre * (hitDiameters - 1);
    let b = overlap * perMetre * (hitOverlaps - 1);
    if (a > hitDiameters - 1.001) a = hitDiameters - 1.001;
    if (b > hitOverlaps - 1.001) b = hitOverlaps - 1.001;
    const i = a | 0;
    const j = b | 0;
    const fa = a - i;
    const fb = b - j;
    let p = (i * hitOverlaps + j) * HIT_CHANNELS;
    let q = p + hitOverlaps * HIT_CHANNELS;
    for (let k = 0; k < HIT_CHANNELS; k++, p++, q++) {
      const low = (hits[p] as number) + fb * ((hits[p + HIT_CHANNELS] as number) - (hits[p] as number));
      const high = (hits[q] as number) + fb * ((hits[q + HIT_CHANNELS] as number) - (hits[q] as number));
      hit[k] = low + fa * (high - low);
    }
  }

  function countLoad(loads: Float64Array, tile: number, load: number, stands: number): void {
    real[0] = load;
    let bin = ((bits[0] as number) >> 20) - ((127 + LOAD_BIN_FIRST_EXPONENT) << 3);
    if (bin < 0) bin = 0;
    if (bin >= LOAD_BINS) bin = LOAD_BINS - 1;
    const k = tile * LOAD_BINS + bin;
    loads[k] = (loads[k] as number) + stands;
  }

  /** Lowers the reachable columns evenly and renews the bounds of one tile; returns the volume taken. */
  function renew(field: Field, tables: KernelTables, step: Float64Array, tile: number): void {
    const { nx, heights, edges, bounds, block, tile: side } = field;
    const face = step[STEP.face] as number;
    const even = step[STEP.even] as number;
    const edgeRadius = tables.coefficients[COEFFICIENT.edgeRadius] as number;
    const most = (tables.coefficients[COEFFICIENT.largest] as number) / 2 + edgeRadius;
    const lowest = face - FREE_REACH * (tables.coefficients[COEFFICIENT.largest] as number);
    const edged = edges.length > 0;
    const row0 = ((tile / field.tilesX) | 0) * side;
    const col0 = (tile % field.tilesX) * side;
    const per = side / block;
    let taken = 0;
    let target = tile * per * per;
    for (let by = 0; by < per; by++) {
      for (let bx = 0; bx < per; bx++, target++) {
        let bound = OUT_OF_REACH;
        for (let j = 0; j < block; j++) {
          let column = (row0 + by * block + j) * nx + col0 + bx * block;
          for (let i = 0; i < block; i++, column++) {
            const h = heights[column] as number;
            if (h <= OUT_OF_REACH) continue;
            const e = edged ? (edges[column] as number) : 0;
            if (e >= most || h >= face + riseAt(edgeRadius, e)) continue;
            let reached = h;
            if (even > 0 && h > lowest) {
              heights[column] = h - even;
              reached = heights[column] as number;
              taken += h - reached;
            }
            if (e > 0) reached -= most - Math.sqrt(most * most - e * e);
            if (reached > bound) bound = reached;
          }
        }
        bounds[target] = bound;
      }
    }
    field.sums[tile * SUMS + SUM.freeRemoved] = taken * field.dx * field.dy;
  }

  function hitFloor(field: Field, tables: KernelTables, step: Float64Array, tile: number): void {
    const { nx, heights, edges, cracks, bounds, unscaled, sums, loads, block, tile: side } = field;
    const { coefficients, thresholds, logs, tail, grain, detach } = tables;
    const base = tile * SUMS;
    sums.fill(0, base, base + SUMS);
    if (isIdle(field, tile)) return;
    if (step[STEP.renew] === 1) renew(field, tables, step, tile);

    const face = step[STEP.face] as number;
    const lambda = step[STEP.lambda] as number;
    const m = step[STEP.magnification] as number;
    const stepNumber = step[STEP.step] as number;
    const key0 = step[STEP.key0] as number;
    const key1 = step[STEP.key1] as number;
    const stretch = Math.sqrt(m);
    scale.magnification = stretch;
    scale.time = step[STEP.time] as number;
    // a chip stays within half a tile of its centre, so that tiles of one colour never share a column
    const widest = ((side / 2 - 1) * Math.min(field.dx, field.dy)) / scale.magnification;
    const largest = coefficients[COEFFICIENT.largest] as number;
    const perLargest = 1 / largest;
    const perMetre = (tail.length - 1) / largest;
    const edgeRadius = coefficients[COEFFICIENT.edgeRadius] as number;
    const radiusFactor = coefficients[COEFFICIENT.radius] as number;
    const depthFactor = coefficients[COEFFICIENT.depth] as number;
    const dentFactor = coefficients[COEFFICIENT.dentRadius] as number;
    const dentEvery = coefficients[COEFFICIENT.dentEvery] as number;
    const dentMarks = DENT_MARKS / dentEvery;
    const useful = coefficients[COEFFICIENT.useful] as number;
    const edged = edges.length > 0;
    // columns the tool has passed at its full width are wall
    const top = edged ? face + edgeRadius : face;
    const per = side / block;
    const blocks = per * per;
    const row0 = ((tile / field.tilesX) | 0) * side;
    const col0 = (tile % field.tilesX) * side;

    let candidates = 0;
    let engaged = 0;
    let impacts = 0;
    let impulse = 0;
    let chips = 0;
    let loadSum = 0;
    let largestLoad = 0;
    let radiusSum = 0;
    let depthSum = 0;
    let faceRemoved = 0;

    // one sweep with exponential spacings over the blocks; the next draw is made before this one is used
    philox(random, candidates, tile, stepNumber, USE_HIT, key0, key1);
    let left = exponential(logs, random[0] as number);
    for (let k = 0; k < blocks; k++) {
      const gap = face - (bounds[tile * blocks + k] as number);
      if (gap >= largest) continue;
      const share = tailAt(tail, perMetre, gap);
      const local = edged && unscaled[tile * blocks + k] === 1 ? 1 : m;
      let rest = ((lambda * m) / local) * share;
      while (left <= rest) {
        rest -= left;
        candidates++;
        const place = random[1] as number;
        const mark = random[2] as number;
        const d = grainAt(grain, ((random[3] as number) + 0.5) * TWO_TO_MINUS_32 * share);
        philox(random, candidates, tile, stepNumber, USE_HIT, key0, key1);
        left = exponential(logs, random[0] as number);

        // the column struck and its squeeze
        const x = col0 + (k % per) * block + (((place >>> 16) + 0.5) / 65536) * block;
        const y = row0 + ((k / per) | 0) * block + (((place & 0xffff) + 0.5) / 65536) * block;
        const column = (y | 0) * nx + (x | 0);
        const h0 = heights[column] as number;
        const e = edged ? (edges[column] as number) : 0;
        if (h0 >= face + riseAt(edgeRadius, e)) continue;
        let long = d;
        if (e > 0) {
          const reach = d / 2 + edgeRadius;
          if (e >= reach) continue;
          long = d / 2 + Math.sqrt(reach * reach - e * e) - edgeRadius;
        }
        const overlap = long - (face - h0);
        if (overlap <= 0) continue;
        engaged++;
        impacts += local;
        scale.magnification = local === m ? stretch : 1;
        lookUp(tables, d, overlap);
        const load = hit[0] as number;
        loadSum += load;
        if (load > largestLoad) largestLoad = load;
        impulse += local * (hit[1] as number);
        countLoad(loads, tile, load, local);
        const tip = h0 - (hit[3] as number);
        if (tip < (cracks[column] as number)) cracks[column] = tip;

        // chip above its threshold, if it leaves; then the dent
        at.x = x;
        at.y = y;
        at.column = column;
        const root = Math.sqrt(load);
        const threshold = thresholds[mark >>> 22] as number;
        const before = (sums[base + SUM.chipRemoved] as number) + (sums[base + SUM.dentRemoved] as number);
        if (load > threshold && (mark & 0xffff) < 65536 * useful * detachAt(detach, perLargest, d)) {
          const quarter = Math.sqrt(root);
          const onset = 1 - Math.sqrt(Math.sqrt(threshold / load));
          at.radius = Math.min(widest, radiusFactor * root * Math.sqrt(quarter) * Math.sqrt(onset));
          at.depth = depthFactor * root;
          at.limit = Math.min(top, h0 + at.radius);
          chips++;
          radiusSum += at.radius;
          depthSum += at.depth;
          stampChip(field, at, scale, base);
        }
        if (((mark >>> 16) & (DENT_MARKS - 1)) < dentMarks) {
          at.radius = dentFactor * root;
          at.limit = top;
          stampDent(field, at, (hit[2] as number) * local * useful * dentEvery, scale, base);
        }
        if (e === 0) {
          faceRemoved += (sums[base + SUM.chipRemoved] as number) + (sums[base + SUM.dentRemoved] as number) - before;
        }
      }
      left -= rest;
    }
    sums[base + SUM.candidates] = candidates;
    sums[base + SUM.engaged] = engaged;
    sums[base + SUM.impulse] = impulse;
    sums[base + SUM.impacts] = impacts;
    sums[base + SUM.chips] = chips;
    sums[base + SUM.faceRemoved] = faceRemoved;
    sums[base + SUM.load] = loadSum;
    sums[base + SUM.largestLoad] = largestLoad;
    sums[base + SUM.radius] = radiusSum;
    sums[base + SUM.depth] = depthSum;
  }

  /** A wall hit of load P at depth z below the entry face chips the rim where P reaches chipLoad z^(3/2). */
  function chipRim(rim: Rim, tables: KernelTables, s: number, z: number, load: number): void {
    const cell = Math.min((s / rim.spacing) | 0, rim.n - 1);
    const site = rim.siteFactors[(cell / rim.cellsPerSite) | 0] as number;
    if (load < (tables.coefficients[COEFFICIENT.chipLoad] as number) * site * z * Math.sqrt(z)) return;
    const half = ((tables.coefficients[COEFFICIENT.chipBreadth] as number) * z) / 2;
    const i0 = Math.ceil((s - half) / rim.spacing - 0.5);
    const i1 = Math.floor((s + half) / rim.spacing - 0.5);
    for (let i = i0; i <= i1; i++) {
      const u = ((i + 0.5) * rim.spacing - s) / half;
      const deep = z * Math.sqrt(Math.max(0, 1 - u * u));
      const k = i < 0 ? i + rim.n : i >= rim.n ? i - rim.n : i;
      if (deep > (rim.chips[k] as number)) rim.chips[k] = deep;
    }
  }

  function hitWall(field: Field, tables: KernelTables, step: Float64Array, tile: number, rim: Rim): void {
    const { nx, heights, cracks, bounds, sums, loads, block, tile: side } = field;
    const { coefficients, thresholds, runouts, logs, tail, grain, detach } = tables;
    const base = tile * SUMS;
    sums.fill(0, base, base + SUMS);
    const row0 = ((tile / field.tilesX) | 0) * side;
    if (row0 >= (step[STEP.rows] as number)) return;
    if (step[STEP.renew] === 1) renew(field, tables, step, tile);

    const m = row0 === 0 ? 1 : (step[STEP.magnification] as number);
    const lambda = ((step[STEP.lambda] as number) * (step[STEP.magnification] as number)) / m;
    const stepNumber = step[STEP.step] as number;
    const key0 = step[STEP.key0] as number;
    const key1 = step[STEP.key1] as number;
    scale.magnification = Math.sqrt(m);
    scale.time = step[STEP.time] as number;
    // a chip stays within half a tile of its centre, so that tiles of one colour never share a column
    const widest = ((side / 2 - 1) * Math.min(field.dx, field.dy)) / scale.magnification;
    const largest = coefficients[COEFFICIENT.largest] as number;
    const perLargest = 1 / largest;
    const perMetre = (tail.length - 1) / largest;
    const furthest = coefficients[COEFFICIENT.runoutLargest] as number;
    const radiusFactor = coefficients[COEFFICIENT.radius] as number;
    const depthFactor = coefficients[COEFFICIENT.depth] as number;
    const dentFactor = coefficients[COEFFICIENT.dentRadius] as number;
    const dentEvery = coefficients[COEFFICIENT.dentEvery] as number;
    const dentMarks = DENT_MARKS / dentEvery;
    const per = side / block;
    const blocks = per * per;
    const col0 = (tile % field.tilesX) * side;

    let candidates = 0;
    let engaged = 0;
    let chips = 0;
    let loadSum = 0;
    let largestLoad = 0;
    philox(random, candidates, tile, stepNumber, USE_HIT, key0, key1);
    let left = exponential(logs, random[0] as number);
    for (let k = 0; k < blocks; k++) {
      const narrowest = -(bounds[tile * blocks + k] as number);
      if (narrowest - furthest >= largest) continue;
      const share = tailAt(tail, perMetre, narrowest - furthest);
      let rest = lambda * narrowest * share;
      while (left <= rest) {
        rest -= left;
        candidates++;
        const place = random[1] as number;
        const mark = random[2] as number;
        const d = grainAt(grain, ((random[3] as number) + 0.5) * TWO_TO_MINUS_32 * share);
        philox(second, candidates, tile, stepNumber, USE_RUNOUT, key0, key1);
        philox(random, candidates, tile, stepNumber, USE_HIT, key0, key1);
        left = exponential(logs, random[0] as number);

        const x = col0 + (k % per) * block + (((place >>> 16) + 0.5) / 65536) * block;
        const y = row0 + ((k / per) | 0) * block + (((place & 0xffff) + 0.5) / 65536) * block;
        const column = (y | 0) * nx + (x | 0);
        const h0 = heights[column] as number;
        if (h0 <= OUT_OF_REACH) continue;
        // only grains that enter the gap when it is widest and are squeezed when it is narrowest
        const runout = runouts[(second[0] as number) >>> 22] as number;
        const overlap = d + h0 + runout;
        if (overlap <= 0 || overlap >= 2 * runout) continue;
        engaged++;
        lookUp(tables, d, overlap);
        const load = hit[0] as number;
        loadSum += load;
        if (load > largestLoad) largestLoad = load;
        countLoad(loads, tile, load, m);
        const tip = h0 - (hit[3] as number);
        if (tip < (cracks[column] as number)) cracks[column] = tip;

        at.x = x;
        at.y = y;
        at.column = column;
        const root = Math.sqrt(load);
        const threshold = thresholds[mark >>> 22] as number;
        if (load > threshold && (mark & 0xffff) < 65536 * detachAt(detach, perLargest, d)) {
          const quarter = Math.sqrt(root);
          const onset = 1 - Math.sqrt(Math.sqrt(threshold / load));
          at.radius = Math.min(widest, radiusFactor * root * Math.sqrt(quarter) * Math.sqrt(onset));
          at.depth = depthFactor * root;
          at.limit = Math.min(0, h0 + at.radius);
          chips++;
          stampChip(field, at, scale, base);
        }
        if (((mark >>> 16) & (DENT_MARKS - 1)) < dentMarks) {
          at.radius = dentFactor * root;
          at.limit = 0;
          stampDent(field, at, (hit[2] as number) * m * dentEvery, scale, base);
        }
        chipRim(rim, tables, x * field.dx, y * field.dy, load);
      }
      left -= rest;
    }
    sums[base + SUM.candidates] = candidates;
    sums[base + SUM.engaged] = engaged;
    sums[base + SUM.chips] = chips;
    sums[base + SUM.load] = loadSum;
    sums[base + SUM.largestLoad] = largestLoad;
  }

  return { name: 'fast', hitFloor, hitWall };
}
