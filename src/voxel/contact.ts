import { beginCount, countColumn, type HeightCounts } from './balance.ts';
import { COEFFICIENT, type Field, type KernelTables, OUT_OF_REACH } from './kernels/contract.ts';
import type { GapMeans } from './tables.ts';

/** Gap, in largest grains, up to which columns are counted: the face may be lowered by as much before it is counted anew. */
const COUNTED = 2;
/** Share of the way from the gap that is hit to the reach of the largest grain up to which a column counts in full. */
const IN_FULL = 0.5;

/** A stride over `columns` of which about `wanted` are looked at: an odd prime, so that it shares no factor with a tile. */
export function strideFor(columns: number, wanted: number): number {
  let n = Math.max(1, Math.floor(columns / wanted));
  const prime = (m: number) => {
    for (let k = 2; k * k <= m; k++) if (m % k === 0) return false;
    return true;
  };
  // an odd stride: rows are whole tiles, and tiles even
  while (n > 1 && (n === 2 || !prime(n))) n++;
  return n;
}

/**
 * Counts the columns of a floor of which only part may be near the face: of the blocks a grain could reach, were the face
 * lower by the largest grain, about `wanted` columns are looked at.
 * @param blocks room for the number of every block
 */
export function countNear(
  out: HeightCounts,
  field: Field,
  tables: KernelTables,
  means: GapMeans,
  at: { face: number; wanted: number; tileZones?: Uint8Array | undefined; blocks: Int32Array },
): HeightCounts {
  const { bounds, tile, block, tilesX, nx } = field;
  const { face, blocks } = at;
  const furthest = COUNTED * (tables.coefficients[COEFFICIENT.largest] as number);
  let near = 0;
  for (let k = 0; k < bounds.length; k++) {
    const bound = bounds[k] as number;
    if (bound > OUT_OF_REACH && face - bound < furthest) blocks[near++] = k;
  }
  const area = block * block;
  const per = tile / block;
  const stride = strideFor(near * area, at.wanted);
  const counting = beginCount(out, field, tables, means, { face, stride, tileZones: at.tileZones });
  for (let n = 0; n < near * area; n += stride) {
    const k = blocks[Math.floor(n / area)] as number;
    const home = Math.floor(k / (per * per));
    const inside = k % (per * per);
    const j = Math.floor(home / tilesX) * tile + Math.floor(inside / per) * block + Math.floor((n % area) / block);
    const i = (home % tilesX) * tile + (inside % per) * block + (n % block);
    countColumn(counting, j * nx + i);
  }
  out.faceMean = out.faceColumns > 0 ? out.faceMean / out.faceColumns : 0;
  return out;
}

/** What of a face is in contact. */
export interface Contact {
  /** Mean gap over the columns in contact, under the curved edge less what a grain loses there (m); Infinity if none. */
  readonly gap: number;
  /** Mean gap of the hits, nearer than that of the columns (m). */
  readonly struck: number;
  /** Columns in contact, those counted for what they stand for. */
  readonly columns: number;
  /** Smallest gap under the flat face (m); Infinity without a column there. */
  readonly closest: number;
}

/**
 * The part of the face that is in contact with the tip at height `face`. A column counts in full up to half way from the
 * gap at which hits fall to the reach of the largest grain, and less and less from there: what only just comes into reach
 * moves neither the area nor the mean by a jump.
 */
export function contactAt(counted: HeightCounts, means: GapMeans, face: number): Contact {
  const { largest } = means;
  const closest = closestGap(counted, means, face);
  const hits = { weight: 0, sum: 0 };
  eachNear(counted, means, face, (count, gap, hit) => {
    hits.weight += count * hit;
    hits.sum += count * hit * gap;
  });
  if (!(hits.weight > 0))
    return { gap: Number.POSITIVE_INFINITY, struck: Number.POSITIVE_INFINITY, columns: 0, closest };
  const struck = hits.sum / hits.weight;
  const full = struck + IN_FULL * (largest - struck);
  const all = { weight: 0, sum: 0 };
  eachNear(counted, means, face, (count, gap) => {
    const own = gap <= full ? count : (count * (largest - gap)) / (largest - full);
    all.weight += own;
    all.sum += own * gap;
  });
  return { gap: all.sum / all.weight, struck, columns: all.weight * counted.weight, closest };
}

/** Visits the counted gaps a grain reaches across, with the columns there and the grains engaged per fresh grain. */
function eachNear(
  { counts, bins, first, last, reference }: HeightCounts,
  means: GapMeans,
  face: number,
  visit: (count: number, gap: number, hit: number) => void,
): void {
  const { step, entries, engaged, largest } = means;
  const shift = (face - reference) / step + 0.5;
  for (let zone = 0; zone < means.zones.length; zone++) {
    const less = lossAt(means, zone);
    const end = Math.min(last[zone] as number, Math.ceil(Math.min(entries - 1, (largest + less) / step) - shift));
    for (let k = first[zone] as number; k < end; k++) {
      const count = counts[zone * bins + k] as number;
      if (count === 0) continue;
      const x = Math.max(0, k + shift);
      const gap = Math.max(0, x * step - less);
      if (gap >= largest) break;
      const i = Math.min(entries - 2, Math.floor(x));
      const low = engaged[zone * entries + i] as number;
      visit(count, gap, low + (x - i) * ((engaged[zone * entries + i + 1] as number) - low));
    }
  }
}

/** What is taken off an entry's gap in a zone: the lift of its scale, less what the largest grain's reach loses there (m). */
function lossAt({ zones, flat, lift, largest }: GapMeans, zone: number): number {
  if (zone < flat) return 0;
  const e = zones[zone] as number;
  const most = largest / 2 + lift;
  return lift - (most - Math.sqrt(Math.max(0, most * most - e * e)));
}

function closestGap({ first, last, reference }: HeightCounts, means: GapMeans, face: number): number {
  let closest = Number.POSITIVE_INFINITY;
  for (let zone = 0; zone < means.flat; zone++) {
    if ((last[zone] as number) === 0) continue;
    closest = Math.min(closest, (first[zone] as number) * means.step + face - reference);
  }
  return closest;
}

/**
 * The lowest height the tip may take (m): the mean gap in contact is at least `lowest`, and no column under the flat face
 * is nearer than half of that, or the tool would pass what it has not cut.
 */
export function lowestFace(counted: HeightCounts, means: GapMeans, from: number, lowest: number): number {
  let low = from;
  const { closest } = contactAt(counted, means, from);
  if (closest < lowest / 2) low = from + lowest / 2 - closest;
  if (contactAt(counted, means, low).gap >= lowest) return low;
  let high = low + lowest;
  for (let i = 0; i < 40; i++) {
    const middle = (low + high) / 2;
    if (contactAt(counted, means, middle).gap >= lowest) high = middle;
    else low = middle;
  }
  return high;
}
