import { PI } from '#src/base/math.ts';
import type { FaceGrid } from './grid.ts';
import { type FaceFlows, type SolveOptions, solveTransport, type TransportSpace } from './transport.ts';

/**
 * Mean flow of slurry under a tool face (Hele-Shaw): q = -(h^3 / 12 mu) grad p per unit width, div q = 0, with the gap of
 * the side wall in series at every edge and the mouth of every bore in series at the bore. Pressures are gauge (Pa).
 */

/** Lowest gauge pressure of a liquid at sea level (Pa): minus one atmosphere, rounded; below it the liquid boils. */
export const LEAST_GAUGE_PRESSURE = -1e5;

/** How a boundary of the face is joined to the outside. */
export interface Outlet {
  /** Gauge pressure outside (Pa). */
  readonly pressure: number;
  /** Pressure lost per flow on the way (Pa s/m3). */
  readonly resistance: number;
  /** Area of the mouth in which the flow's own head is lost (m2), Infinity for none. */
  readonly mouth: number;
}

export interface FaceFlow extends FaceFlows {
  /** Net flow out of the face across each boundary (m3/s). */
  readonly outflow: Float64Array;
  /** Gauge pressure just inside each boundary (Pa), and in each cell. */
  readonly boundaryPressure: Float64Array;
  readonly pressure: Float64Array;
  /** Largest net outflow of a cell over the flow through the face. */
  readonly divergence: number;
}

/** Pressure fields that are 1 on one boundary and 0 on the others, kept for the next gap or viscosity. */
export interface FlowSpace {
  readonly transport: TransportSpace;
  readonly unit: readonly Float64Array[];
  /** Outflow (m3/s) across boundary b for 1 Pa on boundary c, at b + boundaries x c. */
  readonly conductance: Float64Array;
  /** Mobility the fields were solved for (m3 / Pa s), one number per cell; empty before. */
  readonly mobility: Float64Array;
}

/** Tight, since the transport leans on a flow free of divergence to 1e-9. */
const FLOW_OPTIONS: SolveOptions = { tolerance: 1e-11, mostIterations: 300 };

export function flowSpace(transport: TransportSpace): FlowSpace {
  const { grid } = transport;
  const size = grid.active.length;
  return {
    transport,
    unit: grid.boundaries.map(() => new Float64Array(size)),
    conductance: new Float64Array(grid.boundaries.length * grid.boundaries.length),
    mobility: new Float64Array(size),
  };
}

/** Mobility h^3 / (12 mu) of a film (m3 / Pa s), h in m, mu in Pa s. Reynolds 1886, the parallel film. */
export function filmMobility(film: number, viscosity: number): number {
  return (film * film * film) / (12 * viscosity);
}

/** A gap round the side of a tool: width (m), depth it is sunk (m), viscosity of what is in it (Pa s). */
export interface SideGap {
  readonly width: number;
  readonly depth: number;
  readonly viscosity: number;
}

/**
 * Pressure lost per flow along the side gap (Pa s/m3): 12 mu L / (perimeter w^3), so that round a round tool
 * Q = pi D w^3 dp / (12 mu L). Plane Poiseuille flow; good while w is small beside the radius.
 */
export function sideResistance(perimeter: number, { width, depth, viscosity }: SideGap): number {
  return depth === 0 ? 0 : (12 * viscosity * depth) / (perimeter * width * width * width);
}

/** Stefan's force (N) that resists the closing of a disc of radius R at speed V on a film h: 3 pi mu R^4 V / (2 h^3). */
export function stefanForce(closing: {
  readonly viscosity: number;
  readonly radius: number;
  readonly speed: number;
  readonly film: number;
}): number {
  const { viscosity, radius, speed, film } = closing;
  const square = radius * radius;
  return (3 * PI * viscosity * square * square * speed) / (2 * film * film * film);
}

/** Flow (m3/s) through a mouth at most: all of the pressure turned into speed, area sqrt(2 dp / rho) (Torricelli). */
export function orificeFlow(mouth: number, pressure: number, density: number): number {
  return mouth * Math.sqrt((2 * Math.abs(pressure)) / density);
}

/** Slurry as it is given to a face. */
export interface Delivery {
  /** Gauge pressure where the slurry is fed (Pa): 0 flooded, positive pumped, negative drawn off. */
  readonly pressure: number;
  /** Density (kg/m3) of what flows. */
  readonly density: number;
  /** Mean film under the face (m), the height of a bore's mouth. */
  readonly film: number;
  readonly side: SideGap;
}

/**
 * Outlets of a face, by boundary. Slurry is fed through the bores; a tool without bores but with a hollow is fed through
 * that, along the side gap of the core it leaves. Everything else is open to the bath through its side gap.
 * @throws RangeError when a pressure has no way in, or the side gap no way out.
 */
export function outletsFor(grid: FaceGrid, delivery: Delivery): Outlet[] {
  const { pressure, side, film } = delivery;
  const kinds = grid.boundaries.map(({ kind }) => kind);
  const fed = kinds.includes('bore') ? 'bore' : 'hole';
  if (pressure !== 0 && !kinds.includes(fed)) {
    throw new RangeError('slurry cannot be pumped or drawn through a tool without a bore');
  }
  if (!(side.depth >= 0) || !(side.width > 0 || side.depth === 0)) {
    throw new RangeError(`a side gap of ${side.width} m over ${side.depth} m lets no slurry out`);
  }
  const supply = Math.max(pressure, LEAST_GAUGE_PRESSURE);
  return grid.boundaries.map(({ kind, length }): Outlet => {
    const outside = kind === fed ? supply : 0;
    if (kind === 'bore') return { pressure: outside, resistance: 0, mouth: length * film };
    return { pressure: outside, resistance: sideResistance(length, side), mouth: Infinity };
  });
}

/** Ratio of two mobility fields when one number will do for the whole face, NaN when not. */
function commonRatio(grid: FaceGrid, now: Float64Array, then: Float64Array): number {
  const first = grid.cuts.cell[0];
  const ratio = now[first] / then[first];
  for (let c = 0; c < now.length; c++) {
    if (grid.active[c] === 1 && Math.abs(now[c] - ratio * then[c]) > 1e-13 * now[c]) return Number.NaN;
  }
  return ratio;
}

/** Solves the unit fields unless those at hand differ by one factor, which is returned. */
function prepareUnits(space: FlowSpace, mobility: Float64Array): number {
  const { transport, unit, conductance } = space;
  const { grid } = transport;
  const ratio = commonRatio(grid, mobility, space.mobility);
  if (ratio > 0 && ratio < Infinity) return ratio;
  const n = grid.boundaries.length;
  const last = unit[n - 1];
  // pressure 1 on every boundary is pressure 1 everywhere, which gives the last field without a solve
  for (let c = 0; c < last.length; c++) last[c] = grid.active[c];
  conductance.fill(0, n * (n - 1));
  for (let c = 0; c < n - 1; c++) {
    const edge = Float64Array.from(grid.cuts.boundary, (b) => (b === c ? 1 : 0));
    const answer = solveTransport(unit[c], transport, { conductivity: mobility, edge }, FLOW_OPTIONS);
    if (!answer.converged) throw new RangeError(`the pressure field of boundary ${c + 1} does not converge`);
    conductance.set(answer.outflow, n * c);
    for (let b = 0; b < n; b++) conductance[b + n * (n - 1)] -= answer.outflow[b];
    for (let cell = 0; cell < last.length; cell++) last[cell] -= unit[c][cell];
  }
  space.mobility.set(mobility);
  return 1;
}

/** Solves a small dense system in place by elimination with pivoting; the answer is in b. */
function eliminate(a: Float64Array, b: Float64Array): void {
  const n = b.length;
  for (let k = 0; k < n; k++) {
    let p = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(a[i * n + k]) > Math.abs(a[p * n + k])) p = i;
    for (let j = 0; j < n; j++) [a[k * n + j], a[p * n + j]] = [a[p * n + j], a[k * n + j]];
    [b[k], b[p]] = [b[p], b[k]];
    for (let i = k + 1; i < n; i++) {
      const f = a[i * n + k] / a[k * n + k];
      for (let j = k; j < n; j++) a[i * n + j] -= f * a[k * n + j];
      b[i] -= f * b[k];
    }
  }
  for (let k = n - 1; k >= 0; k--) {
    for (let j = k + 1; j < n; j++) b[k] -= a[k * n + j] * b[j];
    b[k] /= a[k * n + k];
  }
}

/**
 * Pressures inside the boundaries: p = p outside + R Q + rho Q |Q| / (2 mouth^2), Q the outflow, linear in all pressures.
 * The head lost in the mouth keeps the flow below that of a bare orifice. Newton's method from the answer without heads.
 */
function boundaryPressures(g: Float64Array, outlets: readonly Outlet[], density: number): Float64Array {
  const n = outlets.length;
  const p = new Float64Array(n);
  const scale = outlets.reduce((most, { pressure }) => Math.max(most, Math.abs(pressure)), 0);
  for (let round = 0; round < 60; round++) {
    const a = new Float64Array(n * n);
    const step = new Float64Array(n);
    for (let b = 0; b < n; b++) {
      const { pressure, resistance, mouth } = outlets[b];
      let out = 0;
      for (let c = 0; c < n; c++) out += g[b + n * c] * p[c];
      const head = round === 0 ? 0 : density / (2 * mouth * mouth);
      step[b] = pressure + resistance * out + head * out * Math.abs(out) - p[b];
      const slope = resistance + 2 * head * Math.abs(out);
      for (let c = 0; c < n; c++) a[b * n + c] = (b === c ? 1 : 0) - slope * g[b + n * c];
    }
    eliminate(a, step);
    let largest = 0;
    for (let b = 0; b < n; b++) {
      p[b] += step[b];
      largest = Math.max(largest, Math.abs(step[b]));
    }
    if (round > 0 && largest <= 1e-14 * scale) break;
  }
  return p;
}

/** Largest net outflow of a cell (m3/s). */
function largestDivergence(grid: FaceGrid, flow: FaceFlows): number {
  const net = new Float64Array(grid.active.length);
  for (let c = 0; c < net.length - grid.nx; c++) {
    net[c] += flow.east[c] + flow.north[c];
    net[c + 1] -= flow.east[c];
    net[c + grid.nx] -= flow.north[c];
  }
  for (let k = 0; k < grid.cuts.count; k++) net[grid.cuts.cell[k]] += flow.cut[k];
  return net.reduce((most, value) => Math.max(most, Math.abs(value)), 0);
}

/** Flows through all faces from the pressures of the cells and those just inside the boundaries. */
function flowsFrom(grid: FaceGrid, mobility: Float64Array, pressure: Float64Array, inside: Float64Array): FaceFlows {
  const { nx, active, cuts } = grid;
  const east = new Float64Array(active.length);
  const north = new Float64Array(active.length);
  const cut = new Float64Array(cuts.count);
  for (let c = 0; c < active.length; c++) {
    if (active[c] === 0) continue;
    if (active[c + 1] === 1) east[c] = 0.5 * (mobility[c] + mobility[c + 1]) * (pressure[c] - pressure[c + 1]);
    if (active[c + nx] === 1) north[c] = 0.5 * (mobility[c] + mobility[c + nx]) * (pressure[c] - pressure[c + nx]);
  }
  for (let k = 0; k < cuts.count; k++) {
    const c = cuts.cell[k];
    cut[k] = (mobility[c] / cuts.theta[k]) * (pressure[c] - inside[cuts.boundary[k]]);
  }
  return { east, north, cut };
}

/** No flow, and one pressure (Pa) everywhere. */
function stillFlow(grid: FaceGrid, pressure: number): FaceFlow {
  const size = grid.active.length;
  return {
    east: new Float64Array(size),
    north: new Float64Array(size),
    cut: new Float64Array(grid.cuts.count),
    outflow: new Float64Array(grid.boundaries.length),
    boundaryPressure: new Float64Array(grid.boundaries.length).fill(pressure),
    pressure: Float64Array.from(grid.active, (inside) => inside * pressure),
    divergence: 0,
  };
}

/**
 * Solves the mean flow. `mobility` is h^3 / (12 mu) per cell (m3 / Pa s, `filmMobility`), `density` that of the slurry. A
 * mobility that differs from the last one by a factor only, as with another gap or viscosity all over, needs no new field.
 * @throws RangeError when a field does not converge.
 */
export function solveFlow(
  space: FlowSpace,
  mobility: Float64Array,
  outlets: readonly Outlet[],
  density: number,
): FaceFlow {
  const { grid } = space.transport;
  if (outlets.every(({ pressure }) => pressure === outlets[0].pressure)) return stillFlow(grid, outlets[0].pressure);
  const ratio = prepareUnits(space, mobility);
  const conductance = space.conductance.map((value) => value * ratio);
  const inside = boundaryPressures(conductance, outlets, density);
  const pressure = new Float64Array(grid.active.length);
  for (let b = 0; b < inside.length; b++) {
    const unit = space.unit[b];
    for (let c = 0; c < pressure.length; c++) pressure[c] += inside[b] * unit[c];
  }
  const flow = flowsFrom(grid, mobility, pressure, inside);
  const outflow = new Float64Array(inside.length);
  for (let k = 0; k < grid.cuts.count; k++) outflow[grid.cuts.boundary[k]] += flow.cut[k];
  const through = outflow.reduce((sum, out) => sum + Math.abs(out), 0) / 2;
  return { ...flow, outflow, boundaryPressure: inside, pressure, divergence: largestDivergence(grid, flow) / through };
}
