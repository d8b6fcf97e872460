import type { FaceGrid } from './grid.ts';
import { apply, cycle, residual, sweepFourWays } from './multigrid.ts';
import { assemble, coarsen, emptyLevels, farWeight, type Level } from './stencil.ts';

/**
 * The steady balance under a tool face, integrated over the gap: div(h D grad u) - q . grad u - k u + s = 0 with values
 * given on every boundary. Finite volumes; a leg that meets the boundary ends on it (Gibou, Fedkiw, Cheng and Kang, J.
 * Comput. Phys. 176 (2002) 205, from memory), which keeps the matrix symmetric without flow and the answer of second
 * order. Sources and losses act on the area each cell stands for, so the sums are those of the real face.
 *
 * Fresh share: k = h x rate of loss, s = 0, 1 outside. Mean age: k = 0, s = h, age of the slurry outside.
 */

/** Flow through the faces of the cells (m3/s), free of divergence; zero between an active and an inactive cell. */
export interface FaceFlows {
  /** Through the east face of each cell, to +x. */
  readonly east: Float64Array;
  /** Through the north face of each cell, to +y. */
  readonly north: Float64Array;
  /** Out across each cut face. */
  readonly cut: Float64Array;
}

/** Cell fields have one number per cell of the grid; inactive cells are not read. */
export interface TransportProblem {
  /** h D (m3/s), not negative; averaged between neighbours, so it may fall to zero at a point. */
  readonly conductivity: Float64Array;
  /** k (m/s), not negative. */
  readonly loss?: Float64Array;
  /** s (m/s times the unit of u). */
  readonly source?: Float64Array;
  /** Value of u where each cut face ends. */
  readonly edge: Float64Array;
  readonly flow?: FaceFlows;
}

export interface SolveOptions {
  /** Largest sum of |residual| over what passes through the face; the balance closes to the same share. */
  readonly tolerance: number;
  readonly mostIterations: number;
}

export interface TransportResult {
  readonly iterations: number;
  /** Sum of |residual| over `throughput`. */
  readonly residual: number;
  readonly converged: boolean;
  /** Net outflow of u across each boundary, by diffusion and flow (m3/s times the unit of u). */
  readonly outflow: Float64Array;
  /** What the source makes and the loss takes over the whole face, same unit; sources = sinks + sum of outflow. */
  readonly sources: number;
  readonly sinks: number;
  /** Gross amount on the move: sources, sinks and exchange across every cut face. */
  readonly throughput: number;
}

/** Everything a solve needs, allocated once per grid. One solve at a time. */
export interface TransportSpace {
  readonly grid: FaceGrid;
  readonly levels: readonly Level[];
  /** Right-hand side, residual. */
  readonly b: Float64Array;
  readonly r: Float64Array;
  /** Weight of the boundary value at each cut face (m3/s). */
  readonly cutWeight: Float64Array;
  /** The last three search directions and their images. */
  readonly z: readonly Float64Array[];
  readonly az: readonly Float64Array[];
}

/** Closes the balance to 1e-7 of what passes through the face, far inside the error of any grid. */
export const STANDARD: SolveOptions = { tolerance: 1e-7, mostIterations: 200 };

/** Workspace for a grid: about 40 numbers per cell. */
export function transportSpace(grid: FaceGrid): TransportSpace {
  const size = grid.nx * grid.ny;
  const fields = () => Array.from({ length: 3 }, () => new Float64Array(size));
  return {
    grid,
    levels: emptyLevels(grid),
    b: new Float64Array(size),
    r: new Float64Array(size),
    cutWeight: new Float64Array(grid.cuts.count),
    z: fields(),
    az: fields(),
  };
}

function checkProblem(grid: FaceGrid, { conductivity, loss, source, edge }: TransportProblem): void {
  for (let c = 0; c < grid.active.length; c++) {
    if (grid.active[c] === 0) continue;
    if (!(conductivity[c] >= 0 && conductivity[c] < Infinity)) {
      throw new RangeError(`cell ${c} has a conductivity of ${conductivity[c]} m3/s`);
    }
    if (loss && !(loss[c] >= 0 && loss[c] < Infinity)) throw new RangeError(`cell ${c} has a loss of ${loss[c]} m/s`);
    if (source && !Number.isFinite(source[c])) throw new RangeError(`cell ${c} has a source of ${source[c]}`);
  }
  for (let c = 0; c < grid.cuts.count; c++) {
    if (!Number.isFinite(edge[c])) throw new RangeError(`cut face ${c} has an edge value of ${edge[c]}`);
  }
}

function fillFinest(space: TransportSpace, problem: TransportProblem): void {
  const { grid, b, cutWeight } = space;
  const level = space.levels[0];
  const { loss, source, flow, conductivity } = problem;
  level.edge.fill(0);
  level.inflow.fill(0);
  for (let c = 0; c < grid.active.length; c++) {
    if (grid.active[c] === 0) continue;
    level.conductivity[c] = conductivity[c];
    level.sink[c] = loss ? loss[c] * grid.area[c] : 0;
    b[c] = source ? source[c] * grid.area[c] : 0;
  }
  if (flow) {
    level.flowEast.set(flow.east);
    level.flowNorth.set(flow.north);
  } else {
    level.flowEast.fill(0);
    level.flowNorth.fill(0);
  }
  const { cell, theta, count } = grid.cuts;
  for (let k = 0; k < count; k++) {
    const c = cell[k];
    const out = flow ? flow.cut[k] : 0;
    const weight = farWeight(conductivity[c] / theta[k], out);
    const inflow = out < 0 ? -out : 0;
    cutWeight[k] = weight;
    level.edge[c] += weight - inflow;
    level.inflow[c] += inflow;
    b[c] += weight * problem.edge[k];
  }
}

/** Sources, sinks and outflows of a field. */
function takeStock(space: TransportSpace, problem: TransportProblem, u: Float64Array) {
  const { grid, cutWeight } = space;
  const { loss, source, flow } = problem;
  let sources = 0;
  let sinks = 0;
  let throughput = 0;
  for (let c = 0; c < grid.area.length; c++) {
    const made = source ? source[c] * grid.area[c] : 0;
    const taken = loss ? loss[c] * grid.area[c] * u[c] : 0;
    sources += made;
    sinks += taken;
    throughput += Math.abs(made) + Math.abs(taken);
  }
  const outflow = new Float64Array(grid.boundaries.length);
  for (let k = 0; k < grid.cuts.count; k++) {
    const here = u[grid.cuts.cell[k]];
    const out = cutWeight[k] * (here - problem.edge[k]) + (flow ? flow.cut[k] * here : 0);
    outflow[grid.cuts.boundary[k]] += out;
    throughput += Math.abs(out);
  }
  return { outflow, sources, sinks, throughput };
}

function sumOfMagnitudes(x: Float64Array): number {
  let even = 0;
  let odd = 0;
  const n = x.length - 1;
  for (let c = 0; c < n; c += 2) {
    even += Math.abs(x[c]);
    odd += Math.abs(x[c + 1]);
  }
  // the last cell lies in the ring of inactive ones
  return even + odd;
}

/** Parts of a new image along the last two, which are orthogonal to each other; a zero image has no part. */
function partsAlong(image: Float64Array, [p, q]: readonly Float64Array[], [pp, qq]: readonly number[]): number[] {
  let withP = 0;
  let withQ = 0;
  for (let c = 0; c < image.length; c++) {
    withP += image[c] * p[c];
    withQ += image[c] * q[c];
  }
  return [pp > 0 ? withP / pp : 0, qq > 0 ? withQ / qq : 0];
}

/** x -= a p + b q. */
function subtract(x: Float64Array, [a, b]: readonly number[], [p, q]: readonly Float64Array[]): void {
  for (let c = 0; c < x.length; c++) x[c] -= a * p[c] + b * q[c];
}

/** Search directions of a solve: index 0 the newest. */
interface Search {
  readonly z: Float64Array[];
  readonly az: Float64Array[];
  /** Squares of the norms of az. */
  readonly square: number[];
  /** Whether flow outweighs dispersion somewhere, which the cycle alone does not bear. */
  readonly swept: boolean;
}

/** Whether any cell passes more by flow than its neighbours by dispersion: a cell Peclet number above 2. */
function flowLeads({ active, conductivity, flowEast, flowNorth }: Level): boolean {
  for (let c = 0; c < active.length; c++) {
    if (active[c] === 1 && Math.max(Math.abs(flowEast[c]), Math.abs(flowNorth[c])) > 2 * conductivity[c]) return true;
  }
  return false;
}

/** One step of the conjugate-residual method: corrects u and r along a preconditioned residual. */
function step(space: TransportSpace, u: Float64Array, search: Search): void {
  const { levels, r } = space;
  const top = levels[0];
  const z = search.z.pop() as Float64Array;
  const az = search.az.pop() as Float64Array;
  search.square.pop();
  top.b.set(r);
  cycle(levels);
  if (search.swept) sweepFourWays(top);
  z.set(top.u);
  apply(az, top, z);
  const parts = partsAlong(az, search.az, search.square);
  subtract(az, parts, search.az);
  subtract(z, parts, search.z);
  let square = 0;
  let along = 0;
  for (let c = 0; c < az.length; c++) {
    square += az[c] * az[c];
    along += az[c] * r[c];
  }
  search.z.unshift(z);
  search.az.unshift(az);
  search.square.unshift(square);
  const length = square > 0 ? along / square : 0;
  for (let c = 0; c < u.length; c++) {
    u[c] += length * z[c];
    r[c] -= length * az[c];
  }
}

/**
 * Solves the balance. `u` (one number per cell) is the first guess on entry, so a neighbouring answer saves work, and the
 * answer on return; inactive cells become zero. Conjugate residuals with a short memory (Vinsome's Orthomin, 1976, from
 * memory), preconditioned by one multigrid V-cycle, and by sweeps along the flow where flow outweighs dispersion.
 * @throws RangeError when a field is not finite or negative where it must not be.
 */
export function solveTransport(
  u: Float64Array,
  space: TransportSpace,
  problem: TransportProblem,
  options: SolveOptions = STANDARD,
): TransportResult {
  const { grid, levels, b, r } = space;
  checkProblem(grid, problem);
  for (let c = 0; c < u.length; c++) if (grid.active[c] === 0 || !Number.isFinite(u[c])) u[c] = 0;
  fillFinest(space, problem);
  assemble(levels[0]);
  for (let n = 1; n < levels.length; n++) {
    coarsen(levels[n], levels[n - 1]);
    assemble(levels[n]);
  }
  residual(r, levels[0], u, b);
  // below this the residual is rounding
  const floor = 1e-15 * sumOfMagnitudes(b);
  const search: Search = {
    z: [...space.z],
    az: [...space.az],
    square: [0, 0, 0],
    swept: flowLeads(levels[0]),
  };
  for (let n = 0; ; n++) {
    const stock = takeStock(space, problem, u);
    const left = sumOfMagnitudes(r);
    const converged = left <= Math.max(options.tolerance * stock.throughput, floor);
    if (converged || n === options.mostIterations) {
      const share = left <= floor ? 0 : left / stock.throughput;
      return { iterations: n, residual: share, converged, ...stock };
    }
    step(space, u, search);
  }
}
