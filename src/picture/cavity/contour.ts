import type { BrickField } from '#src/voxel/bricks.ts';
import { fractionAt, type Grid, makeGrid, PAD } from './grid.ts';

/** A curve of the cut: where the solid fraction is one half in the cutting plane. Work lies to its right going along. */
export interface CutCurve {
  /** Metres. */
  readonly x: Float64Array;
  readonly z: Float64Array;
  readonly closed: boolean;
  /** Pieces of work that the plane cuts apart from the rest, as between two holes whose exit chips meet; of the main curve. */
  readonly loose?: readonly CutCurve[];
}

/** Solid fraction at which the surface lies (in 255ths). */
const HALF = 127.5;

/** Solid fraction less one half (in 255ths) on the cutting plane: columns -1 .. nx, rows -1 .. nz of voxel centres. */
function cutPlane(
  grid: Grid,
  yCut: number,
  exit: number,
): { readonly values: Float32Array; readonly width: number; readonly height: number } {
  const { field } = grid;
  const width = field.nx + 2;
  const height = field.nz + 2;
  const v = Math.min(field.ny + PAD, Math.max(PAD - 1, (yCut - field.y0) / field.pitch + PAD));
  const j0 = Math.floor(v);
  const share = v - j0;
  const values = new Float32Array(width * height);
  // rows that reach beyond the far face count as work: the line runs along that face, whatever is stored beneath it
  const rows = Math.min(height, 1 + Math.max(0, Math.floor((exit - field.z0) / field.pitch + 0.51)));
  values.fill(HALF, rows * width);
  for (let k = 0; k < rows; k++) {
    for (let i = 0; i < width; i++) {
      const near = fractionAt(grid, i + PAD - 1, j0, k + PAD - 1);
      const far = share === 0 ? near : fractionAt(grid, i + PAD - 1, j0 + 1, k + PAD - 1);
      // never exactly zero, so that every crossing lies inside an edge
      values[k * width + i] = near + share * (far - near) - HALF || 1e-3;
    }
  }
  return { values, width, height };
}

/** Edges of a cell: 0 top, 1 right, 2 bottom, 3 left; per corner pattern the directed pairs, work on the right. */
// biome-ignore format: one row a pattern (bit 0 top left, 1 top right, 2 bottom right, 3 bottom left are work)
const PAIRS: readonly (readonly number[])[] = [
  [], [0, 3], [1, 0], [1, 3], [2, 1], [], [2, 0], [2, 3],
  [3, 2], [0, 2], [], [1, 2], [3, 1], [0, 1], [3, 0], [],
];

/** The two saddles: joined when the middle of the cell is work, apart when it is not. */
function saddle(pattern: number, middle: number): readonly number[] {
  if (pattern === 5) return middle > 0 ? [0, 1, 2, 3] : [0, 3, 2, 1];
  return middle > 0 ? [3, 0, 1, 2] : [1, 0, 3, 2];
}

interface Tracing {
  readonly values: Float32Array;
  readonly width: number;
  /** Crossed edge to the next crossed edge along the curve. */
  readonly next: Map<number, number>;
}

/** Number of a cell edge: twice its upper left node, plus 1 for the edge that goes down. */
function edgeNumber(width: number, i: number, k: number, side: number): number {
  if (side === 0) return 2 * (k * width + i);
  if (side === 2) return 2 * ((k + 1) * width + i);
  return side === 3 ? 2 * (k * width + i) + 1 : 2 * (k * width + i + 1) + 1;
}

function linkCell(tracing: Tracing, i: number, k: number): void {
  const { values, width, next } = tracing;
  const at = k * width + i;
  const a = values[at] as number;
  const b = values[at + 1] as number;
  const c = values[at + width + 1] as number;
  const d = values[at + width] as number;
  const pattern = (a > 0 ? 1 : 0) | (b > 0 ? 2 : 0) | (c > 0 ? 4 : 0) | (d > 0 ? 8 : 0);
  const pairs =
    pattern === 5 || pattern === 10 ? saddle(pattern, a + b + c + d) : (PAIRS[pattern] as readonly number[]);
  for (let n = 0; n < pairs.length; n += 2) {
    next.set(edgeNumber(width, i, k, pairs[n] as number), edgeNumber(width, i, k, pairs[n + 1] as number));
  }
}

function curveOf(edges: readonly number[], tracing: Tracing, field: BrickField, closed: boolean): CutCurve {
  const { values, width } = tracing;
  const x = new Float64Array(edges.length);
  const z = new Float64Array(edges.length);
  edges.forEach((edge, n) => {
    const node = edge >> 1;
    const downward = edge & 1;
    const here = values[node] as number;
    const there = values[downward ? node + width : node + 1] as number;
    const share = here / (here - there);
    const i = (node % width) - 1 + (downward ? 0 : share);
    const k = Math.floor(node / width) - 1 + (downward ? share : 0);
    x[n] = field.x0 + field.pitch * i;
    z[n] = field.z0 + field.pitch * k;
  });
  return { x, z, closed };
}

/** Voxels above the far face within which a line is taken to lie on it. */
const AT_FACE = 1.6;

/** The curve with everything at the far face or beyond laid on that face. */
function endedAt(curve: CutCurve, exit: number, pitch: number): CutCurve {
  return { ...curve, z: curve.z.map((z) => (z > exit - AT_FACE * pitch ? exit : z)) };
}

/**
 * Curves in which the plane y = yCut (m) cuts the surface, by marching squares on the bilinear field (Lorensen and Cline
 * 1987 in the plane; from memory). Open ones first: the entry face and the cavity as one line from left to right. Of a cut
 * that goes through a work `exit` (m) thick the curves run along the far face where the work is open.
 */
export function cutCurves(
  field: BrickField,
  yCut: number,
  grid: Grid = makeGrid(field),
  exit = Number.POSITIVE_INFINITY,
): CutCurve[] {
  const { values, width, height } = cutPlane(grid, yCut, exit);
  const tracing: Tracing = { values, width, next: new Map() };
  for (let k = 0; k + 1 < height; k++) for (let i = 0; i + 1 < width; i++) linkCell(tracing, i, k);
  const { next } = tracing;
  const ends = new Set(next.values());
  const starts = [...next.keys()].filter((edge) => !ends.has(edge));
  const curves: CutCurve[] = [];
  for (const start of [...starts, ...next.keys()]) {
    if (!next.has(start)) continue;
    const edges = [start];
    let edge = next.get(start);
    next.delete(start);
    while (edge !== undefined && edge !== start) {
      edges.push(edge);
      const after = next.get(edge);
      next.delete(edge);
      edge = after;
    }
    curves.push(curveOf(edges, tracing, field, edge === start));
  }
  return Number.isFinite(exit) ? curves.map((curve) => endedAt(curve, exit, field.pitch)) : curves;
}

/** Twice the area that a closed curve encloses (m2), positive where that is work: work lies to its right, z down. */
function doubleArea({ x, z }: CutCurve): number {
  let sum = 0;
  for (let n = 0; n < x.length; n++) {
    const m = (n + 1) % x.length;
    sum += (x[n] as number) * (z[m] as number) - (x[m] as number) * (z[n] as number);
  }
  return sum;
}

/** Edge of the smallest loose piece that is shown (m): smaller ones are crumbs of the voxels. */
const CRUMB = 50e-6;

/**
 * The open curve from the left border to the right: entry face, wall, floor, wall, entry face; with the pieces of work apart
 * from it. Undefined without work.
 */
export function mainCurve(curves: readonly CutCurve[]): CutCurve | undefined {
  let longest: CutCurve | undefined;
  for (const curve of curves) {
    if (!curve.closed && (longest === undefined || curve.x.length > longest.x.length)) longest = curve;
  }
  const loose = curves.filter((curve) => curve.closed && doubleArea(curve) > 2 * CRUMB ** 2);
  return longest && loose.length > 0 ? { ...longest, loose } : longest;
}

/** The points of a curve as x0, z0, x1, z1, ... (m), back to the first where it is closed. */
export function curveLine({ x, z, closed }: CutCurve): Float64Array {
  const count = x.length + (closed ? 1 : 0);
  const line = new Float64Array(2 * count);
  for (let n = 0; n < count; n++) {
    line[2 * n] = x[n % x.length] as number;
    line[2 * n + 1] = z[n % x.length] as number;
  }
  return line;
}

/** The lines of a main curve and of the pieces apart from it, as `curveLine`. */
export function curveLines(curve: CutCurve): Float64Array[] {
  return [curve, ...(curve.loose ?? [])].map(curveLine);
}

/** The stretch of a curve within `reach` (m) of its point nearest to (x, z), as x0, z0, x1, z1, ... in m. */
export function stretchNear(curve: CutCurve, x: number, z: number, reach: number): Float64Array {
  const distance = (n: number): number => ((curve.x[n] as number) - x) ** 2 + ((curve.z[n] as number) - z) ** 2;
  let nearest = 0;
  for (let n = 1; n < curve.x.length; n++) if (distance(n) < distance(nearest)) nearest = n;
  let first = nearest;
  let last = nearest;
  while (first > 0 && distance(first - 1) < reach * reach) first--;
  while (last + 1 < curve.x.length && distance(last + 1) < reach * reach) last++;
  const points = new Float64Array(2 * (last - first + 1));
  for (let n = first; n <= last; n++) {
    points[2 * (n - first)] = curve.x[n] as number;
    points[2 * (n - first) + 1] = curve.z[n] as number;
  }
  return points;
}

/** The main curve as walls and floor, each x0, z0, x1, z1, ... (m): walls from the entry face down, floor left to right. */
export interface SplitCurve {
  readonly left: Float64Array;
  readonly floor: Float64Array;
  readonly right: Float64Array;
}

/** Splits the main curve where it first and last passes `share` of the depth (m). Undefined where it stays above. */
export function splitCurve(curve: CutCurve, depth: number, share = 0.9): SplitCurve | undefined {
  const level = share * depth;
  const first = curve.z.findIndex((z) => z >= level);
  const last = curve.z.findLastIndex((z) => z >= level);
  if (first < 1 || last < first || last + 1 >= curve.z.length) return undefined;
  const points = (from: number, to: number): Float64Array => {
    const part = new Float64Array(2 * (Math.abs(to - from) + 1));
    const step = from <= to ? 1 : -1;
    for (let n = from, at = 0; at < part.length; n += step, at += 2) {
      part[at] = curve.x[n] as number;
      part[at + 1] = curve.z[n] as number;
    }
    return part;
  };
  return { left: points(0, first), floor: points(first, last), right: points(curve.z.length - 1, last) };
}
