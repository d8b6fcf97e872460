import type { FaceGrid } from './grid.ts';

/**
 * The five-point operators of the slurry balance, from the face grid (level 0) down to a few cells. Each level is built
 * from conductances G and flows Q through the faces of its cells, so a coarse level is the same balance on larger cells
 * and keeps the sign pattern that bounds the answer between its boundary values.
 */

/** One level. Cells x fastest with a ring of inactive cells round them; faces are kept with the cell west or south. */
export interface Level {
  readonly nx: number;
  readonly ny: number;
  /** First active cell of each row and one past the last, as i. */
  readonly low: Int32Array;
  readonly high: Int32Array;
  readonly active: Uint8Array;
  /** Signed distance to the boundary, negative inside (m). */
  readonly distance: Float64Array;
  /** Legs that end on the boundary: the cell, and the length over the pitch. */
  readonly cutCell: Int32Array;
  readonly cutTheta: Float64Array;
  /** Cells with such legs and the active cells next to them, ascending. */
  readonly band: Int32Array;
  /** Cells whose boundary the next level has lost between its centres, as a small bore gets lost. */
  readonly carried: Int32Array;
  /** Conductivity h D of each cell (m3/s), zero where inactive. */
  readonly conductivity: Float64Array;
  /** Net flow to +x through the east face of each cell, to +y through its north face (m3/s). */
  readonly flowEast: Float64Array;
  readonly flowNorth: Float64Array;
  /** Weight by diffusion of the boundary in each cell's row (m3/s). */
  readonly edge: Float64Array;
  /** The rest of the diagonal: weight of what flows in across the boundary, and of the loss term (m3/s). */
  readonly inflow: Float64Array;
  readonly sink: Float64Array;
  /** Weights of the four neighbours in each cell's row (m3/s), the diagonal, and one over it. */
  readonly west: Float64Array;
  readonly east: Float64Array;
  readonly south: Float64Array;
  readonly north: Float64Array;
  readonly diagonal: Float64Array;
  readonly inverse: Float64Array;
  /** Correction and right-hand side of a cycle. */
  readonly u: Float64Array;
  readonly b: Float64Array;
}

/** Coarsest level: this many cells or fewer across. */
const COARSEST = 4;
/** Shortest leg of a coarse level, over its pitch: its boundary is only known to a part of a cell. */
const LEAST_COARSE_THETA = 0.05;

/** Where a level lies: what it has before its operators. */
interface Place {
  readonly nx: number;
  readonly ny: number;
  readonly active: Uint8Array;
  readonly distance: Float64Array;
  readonly cutCell: Int32Array;
  readonly cutTheta: Float64Array;
}

/** The 2 x 2 cells of the finer level make one; its centre is where they meet, at their mean distance. */
function coarsePlace(fine: Place): Place {
  const nx = ((fine.nx - 1) >> 1) + 2;
  const ny = ((fine.ny - 1) >> 1) + 2;
  const distance = new Float64Array(nx * ny).fill(Infinity);
  for (let J = 1; J < ny - 1; J++) {
    for (let I = 1; I < nx - 1; I++) {
      let sum = 0;
      for (let part = 0; part < 4; part++) {
        const i = Math.min(2 * I - (part & 1), fine.nx - 2);
        const j = Math.min(2 * J - (part >> 1), fine.ny - 2);
        sum += fine.distance[i + fine.nx * j];
      }
      distance[I + nx * J] = sum / 4;
    }
  }
  const active = Uint8Array.from(distance, (d) => (d < 0 ? 1 : 0));
  const cells: number[] = [];
  const thetas: number[] = [];
  for (let c = 0; c < active.length; c++) {
    if (active[c] === 0) continue;
    for (const step of [-1, 1, -nx, nx]) {
      if (active[c + step] === 1) continue;
      cells.push(c);
      // distances are linear across a straight boundary; outside the array they are infinite, which makes the leg short
      thetas.push(Math.max(distance[c] / (distance[c] - distance[c + step]), LEAST_COARSE_THETA));
    }
  }
  return { nx, ny, active, distance, cutCell: Int32Array.from(cells), cutTheta: Float64Array.from(thetas) };
}

/** Index of the coarse cell that takes in fine cell c. */
function parent(fine: Place, coarse: Place, c: number): number {
  const i = c % fine.nx;
  const j = (c - i) / fine.nx;
  return ((i + 1) >> 1) + coarse.nx * ((j + 1) >> 1);
}

/** Cells of a level whose boundary the next has lost: `already` those that had lost it before. */
function carriedCells(fine: Place, coarse: Place, already: Iterable<number>): Int32Array {
  const { active, nx } = coarse;
  const interior = (k: number) => active[k] + active[k - 1] + active[k + 1] + active[k - nx] + active[k + nx] === 5;
  const found = new Set<number>();
  for (const c of fine.cutCell) {
    for (const step of [-1, 1, -fine.nx, fine.nx]) {
      if (fine.active[c + step] === 0 && interior(parent(fine, coarse, c + step))) found.add(c);
    }
  }
  for (const c of already) if (interior(parent(fine, coarse, c))) found.add(c);
  return Int32Array.from(found);
}

function bandCells({ nx, active, cutCell }: Place): Int32Array {
  const band = new Set<number>();
  for (const c of cutCell) {
    for (const step of [0, -1, 1, -nx, nx]) if (active[c + step] === 1) band.add(c + step);
  }
  return Int32Array.from(band).sort();
}

function emptyLevel(place: Place, carried: Int32Array): Level {
  const { nx, ny, active } = place;
  const field = () => new Float64Array(nx * ny);
  const low = new Int32Array(ny);
  const high = new Int32Array(ny);
  for (let j = 0; j < ny; j++) {
    const row = active.subarray(j * nx, (j + 1) * nx);
    low[j] = Math.max(0, row.indexOf(1));
    high[j] = row.lastIndexOf(1) + 1;
  }
  return {
    ...place,
    low,
    high,
    carried,
    band: bandCells(place),
    conductivity: field(),
    flowEast: field(),
    flowNorth: field(),
    edge: field(),
    inflow: field(),
    sink: field(),
    west: field(),
    east: field(),
    south: field(),
    north: field(),
    diagonal: field(),
    inverse: field(),
    u: field(),
    b: field(),
  };
}

/** All levels for a grid, empty, down to the last that has an active cell. */
export function emptyLevels(grid: FaceGrid): Level[] {
  const { nx, ny, active, distance, cuts } = grid;
  const levels: Level[] = [];
  let place: Place = { nx, ny, active, distance, cutCell: cuts.cell, cutTheta: cuts.theta };
  let lost = new Set<number>();
  while (Math.max(place.nx, place.ny) - 2 > COARSEST) {
    const next = coarsePlace(place);
    if (!next.active.includes(1)) break;
    const carried = carriedCells(place, next, lost);
    levels.push(emptyLevel(place, carried));
    lost = new Set(Array.from(carried, (c) => parent(place, next, c)));
    place = next;
  }
  levels.push(emptyLevel(place, new Int32Array(0)));
  return levels;
}

/**
 * Weight of the value at the far end of a leg with conductance G and flow Q away from it (m3/s):
 * G max(0, 1 - |P|/10)^5 + max(-Q, 0), P = Q/G, Patankar's power law (Numerical Heat Transfer and Fluid Flow, 1980, from
 * memory). It follows the exact exponential answer of one leg to 1 % of the flux, is of second order where |P| is small,
 * pure upwind above 10, and never negative.
 */
export function farWeight(conductance: number, flow: number): number {
  const upwind = flow < 0 ? -flow : 0;
  const rest = conductance - 0.1 * (flow < 0 ? -flow : flow);
  if (!(rest > 0)) return upwind;
  const share = rest / conductance;
  const squared = share * share;
  return rest * squared * squared + upwind;
}

/** Fills the neighbour weights and the diagonal of a level from its conductivity, flows, edge and sink. */
export function assemble(level: Level): void {
  const { nx, ny, active, conductivity, flowEast, flowNorth, west, east, south, north } = level;
  for (let j = 1; j < ny - 1; j++) {
    const end = j * nx + level.high[j];
    for (let c = j * nx + level.low[j]; c < end; c++) {
      if (active[c] === 0) continue;
      if (active[c + 1] === 1) {
        const q = flowEast[c];
        const weight = farWeight(0.5 * (conductivity[c] + conductivity[c + 1]), q);
        east[c] = weight;
        west[c + 1] = weight + q;
      }
      if (active[c + nx] === 1) {
        const q = flowNorth[c];
        const weight = farWeight(0.5 * (conductivity[c] + conductivity[c + nx]), q);
        north[c] = weight;
        south[c + nx] = weight + q;
      }
      // rows and columns before this one are done, so the west and south weights are there
      const diagonal = west[c] + east[c] + south[c] + north[c] + level.edge[c] + level.inflow[c] + level.sink[c];
      level.diagonal[c] = diagonal;
      level.inverse[c] = diagonal > 0 ? 1 / diagonal : 0;
    }
  }
}

/** Coarse balance from a fine one: conductivities averaged, flows and sinks added, the boundary where it lies. */
export function coarsen(coarse: Level, fine: Level): void {
  const { nx } = fine;
  for (const field of [coarse.conductivity, coarse.flowEast, coarse.flowNorth, coarse.edge, coarse.sink]) field.fill(0);
  const count = coarse.b;
  count.fill(0);
  for (let j = 1; j < fine.ny - 1; j++) {
    const row = coarse.nx * ((j + 1) >> 1);
    const northmost = (j & 1) === 0;
    for (let i = fine.low[j]; i < fine.high[j]; i++) {
      const c = i + nx * j;
      const k = ((i + 1) >> 1) + row;
      if (fine.active[c] === 0 || coarse.active[k] === 0) continue;
      count[k] += 1;
      coarse.conductivity[k] += fine.conductivity[c];
      coarse.sink[k] += fine.sink[c];
      if ((i & 1) === 0) coarse.flowEast[k] += fine.flowEast[c];
      if (northmost) coarse.flowNorth[k] += fine.flowNorth[c];
    }
  }
  for (let k = 0; k < count.length; k++) if (count[k] > 0) coarse.conductivity[k] /= count[k];
  for (let n = 0; n < coarse.cutCell.length; n++) {
    coarse.edge[coarse.cutCell[n]] += coarse.conductivity[coarse.cutCell[n]] / coarse.cutTheta[n];
  }
  for (const c of fine.carried) coarse.edge[parent(fine, coarse, c)] += fine.edge[c];
  findInflow(coarse);
}

/** Puts the flow right between a coarse cell and the rest: what leaves it and comes from no neighbour crosses the boundary. */
function findInflow({ nx, active, flowEast, flowNorth, inflow }: Level): void {
  for (let c = nx; c < active.length - nx; c++) {
    if (active[c] === 0) continue;
    if (active[c + 1] === 0) flowEast[c] = 0;
    if (active[c + nx] === 0) flowNorth[c] = 0;
    // faces west and south were put right with the cells before
    const west = active[c - 1] * flowEast[c - 1];
    const south = active[c - nx] * flowNorth[c - nx];
    inflow[c] = Math.max(0, flowEast[c] + flowNorth[c] - west - south);
  }
}
