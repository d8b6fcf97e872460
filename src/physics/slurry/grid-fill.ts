import { atan2, PI } from '#src/base/math.ts';
import { nearest, type Outline } from '#src/base/outline.ts';
import type { Bore, CutFaces } from './grid.ts';

/** How a face grid is filled in from signed distances: cells, areas, and where the legs of the stencil meet the boundary. */

/** Sides of a cell, in the order of `CutFaces.side`: -x, +x, -y, +y. */
export const SIDE_X = [-1, 1, 0, 0] as const;
export const SIDE_Y = [0, 0, -1, 1] as const;

/** Shortest leg over the pitch: it bounds the largest conductance and moves a boundary by 1e-4 cells at most. */
export const LEAST_THETA = 1e-4;

/** Half the diagonal of a unit square, rounded up. */
const HALF_DIAGONAL = 0.7072;

/** A grid under construction: the parts that are filled in. */
export interface Draft {
  readonly nx: number;
  readonly ny: number;
  readonly pitch: number;
  readonly x0: number;
  readonly y0: number;
  readonly active: Uint8Array;
  readonly distance: Float64Array;
  readonly area: Float64Array;
}

/** Signed distance to the boundary of the face, negative inside, with the boundary it belongs to. */
export interface Level {
  (x: number, y: number): number;
  readonly hit: { boundary: number; s: number };
}

/** The level of a face. */
export function levelOf(outline: Outline, bores: readonly Bore[]): Level {
  const hit = { boundary: 0, s: 0 };
  const at = (x: number, y: number) => {
    const edge = nearest(outline, x, y);
    let distance = edge.distance;
    hit.boundary = edge.loop;
    hit.s = edge.s;
    for (let b = 0; b < bores.length; b++) {
      const bore = bores[b] as Bore;
      const dx = x - bore.x;
      const dy = y - bore.y;
      const inside = bore.radius - Math.sqrt(dx * dx + dy * dy);
      if (inside <= distance) continue;
      distance = inside;
      hit.boundary = outline.loops.length + b;
      const angle = atan2(dy, dx);
      hit.s = bore.radius * (angle < 0 ? angle + 2 * PI : angle);
    }
    return distance;
  };
  return Object.assign(at, { hit });
}

/**
 * Part of a square where a function given at its corners (anticlockwise) and linear along its sides is negative: area of
 * the polygon between the crossings, over that of the square (marching squares).
 */
function negativeShare(v: readonly number[]): number {
  const cx = [0, 1, 1, 0];
  const cy = [0, 0, 1, 1];
  let doubled = 0;
  let started = false;
  let firstX = 0;
  let firstY = 0;
  let lastX = 0;
  let lastY = 0;
  const push = (x: number, y: number) => {
    if (started) doubled += lastX * y - x * lastY;
    else {
      started = true;
      firstX = x;
      firstY = y;
    }
    lastX = x;
    lastY = y;
  };
  for (let a = 0; a < 4; a++) {
    const b = (a + 1) % 4;
    const va = v[a];
    const vb = v[b];
    if (va < 0) push(cx[a], cy[a]);
    if (va < 0 === vb < 0) continue;
    const t = va / (va - vb);
    push(cx[a] + t * (cx[b] - cx[a]), cy[a] + t * (cy[b] - cy[a]));
  }
  return started ? (doubled + lastX * firstY - firstX * lastY) / 2 : 0;
}

/** A block of cells: i0 <= i < i1, j0 <= j < j1. */
interface Block {
  readonly i0: number;
  readonly i1: number;
  readonly j0: number;
  readonly j1: number;
}

/** Fills a block that lies all on one side, distances bilinear between those of its corner cells. */
function fillWhole(draft: Draft, { i0, i1, j0, j1 }: Block, at: (i: number, j: number) => number): void {
  const { nx, pitch, active, distance, area } = draft;
  const corners = [at(i0, j0), at(i1 - 1, j0), at(i0, j1 - 1), at(i1 - 1, j1 - 1)];
  const inside = corners[0] < 0;
  for (let j = j0; j < j1; j++) {
    const t = (j - j0) / Math.max(1, j1 - 1 - j0);
    const west = corners[0] + t * (corners[2] - corners[0]);
    const east = corners[1] + t * (corners[3] - corners[1]);
    const slope = (east - west) / Math.max(1, i1 - 1 - i0);
    for (let i = i0; i < i1; i++) distance[i + nx * j] = west + (i - i0) * slope;
    if (!inside) continue;
    active.fill(1, i0 + nx * j, i1 + nx * j);
    area.fill(pitch * pitch, i0 + nx * j, i1 + nx * j);
  }
}

/** Fills cells and their areas by halving blocks: a distance falls by no more than the way gone, so most blocks are whole. */
export function fill(draft: Draft, level: Level): void {
  const { nx, ny, pitch, x0, y0, active, distance, area } = draft;
  const at = (i: number, j: number) => level(x0 + i * pitch, y0 + j * pitch);
  const visit = (block: Block) => {
    const { i0, i1, j0, j1 } = block;
    const v = at((i0 + i1 - 1) / 2, (j0 + j1 - 1) / 2);
    const size = Math.max(i1 - i0, j1 - j0);
    if (Math.abs(v) > HALF_DIAGONAL * size * pitch) return fillWhole(draft, block, at);
    if (size === 1) {
      const cell = i0 + nx * j0;
      const corners = [at(i0 - 0.5, j0 - 0.5), at(i0 + 0.5, j0 - 0.5), at(i0 + 0.5, j0 + 0.5), at(i0 - 0.5, j0 + 0.5)];
      active[cell] = v < 0 ? 1 : 0;
      distance[cell] = v;
      area[cell] = negativeShare(corners) * pitch * pitch;
      return;
    }
    const im = (i0 + i1 + 1) >> 1;
    const jm = (j0 + j1 + 1) >> 1;
    visit({ i0, i1: im, j0, j1: jm });
    if (im < i1) visit({ i0: im, i1, j0, j1: jm });
    if (jm < j1) visit({ i0, i1: im, j0: jm, j1 });
    if (im < i1 && jm < j1) visit({ i0: im, i1, j0: jm, j1 });
  };
  visit({ i0: 1, i1: nx - 1, j0: 1, j1: ny - 1 });
}

/** Hands the slivers of inactive cells to their active neighbours in equal parts: across a side if there are any. */
export function shareSlivers({ nx, ny, active, area }: Draft): void {
  const beside = [-1, 1, -nx, nx];
  const corners = [-nx - 1, -nx + 1, nx - 1, nx + 1];
  for (let cell = nx; cell < nx * (ny - 1); cell++) {
    const sliver = area[cell];
    if (active[cell] === 1 || sliver === 0) continue;
    area[cell] = 0;
    let takers = beside.filter((step) => active[cell + step] === 1);
    if (takers.length === 0) takers = corners.filter((step) => active[cell + step] === 1);
    for (const step of takers) area[cell + step] += sliver / takers.length;
  }
}

/** Fraction of the leg from an inside point (value va < 0) at which the level is zero (Illinois form of false position). */
function crossing(at: (t: number) => number, va: number): number {
  let a = 0;
  let fa = va;
  let b = 1;
  let fb = at(1);
  if (fb <= 0) return 1;
  const small = 1e-12 * (fb - fa);
  for (let n = 0; n < 60; n++) {
    const t = (a * fb - b * fa) / (fb - fa);
    const f = at(t);
    if (Math.abs(f) <= small || b - a < 1e-13) return t;
    if (f > 0) {
      b = t;
      fb = f;
      fa /= 2;
    } else {
      a = t;
      fa = f;
      fb /= 2;
    }
  }
  return (a + b) / 2;
}

/** Legs of active cells that end on the boundary, in the order of the cells. */
export function findCuts(draft: Draft, level: Level): CutFaces {
  const { nx, ny, pitch, x0, y0, active } = draft;
  const steps = [-1, 1, -nx, nx];
  const cell: number[] = [];
  const side: number[] = [];
  const theta: number[] = [];
  const boundary: number[] = [];
  const s: number[] = [];
  for (let here = nx; here < nx * (ny - 1); here++) {
    if (active[here] === 0) continue;
    const x = x0 + (here % nx) * pitch;
    const y = y0 + Math.floor(here / nx) * pitch;
    for (let k = 0; k < 4; k++) {
      if (active[here + steps[k]] === 1) continue;
      const at = (t: number) => level(x + t * pitch * SIDE_X[k], y + t * pitch * SIDE_Y[k]);
      const t = crossing(at, at(0));
      at(t);
      cell.push(here);
      side.push(k);
      theta.push(Math.max(t, LEAST_THETA));
      boundary.push(level.hit.boundary);
      s.push(level.hit.s);
    }
  }
  return {
    count: cell.length,
    cell: Int32Array.from(cell),
    side: Uint8Array.from(side),
    theta: Float64Array.from(theta),
    boundary: Uint16Array.from(boundary),
    s: Float64Array.from(s),
  };
}
