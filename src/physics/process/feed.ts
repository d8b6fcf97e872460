import { log } from '#src/base/math.ts';
import { flowSpace, solveFlow } from '../slurry/flow.ts';
import type { FaceGrid } from '../slurry/grid.ts';
import {
  type FaceFlows,
  type SolveOptions,
  solveTransport,
  type TransportResult,
  type TransportSpace,
} from '../slurry/transport.ts';

/**
 * What a flow through the face does to the ages. Divided by h U X the balance of the age reads
 * div(D' grad T) - mu q . grad T + 1 = 0, D' = k_D h + k_P length, q the pattern of the flow for 1 m3/s, and
 * mu = Q / (h U X) its strength (m). The film enters through D' only, and little: T is tabulated over mu at the middle film,
 * as a share of T without flow, and that share is used at every film. The pattern is that of a uniform film, one pressure
 * at all mouths and one inside all other edges: exact for one bore and one edge, and near it where the bores are alike.
 */
export interface Feed {
  /** Gauge pressure of the supply (Pa): positive pumped in, negative drawn off. */
  readonly pressure: number;
  /** The slurry goes through bores; otherwise through the hollow of the tool, along the side gap of the core. */
  readonly bored: boolean;
  /** Flow per pressure and mobility h^3 / (12 mu) of the film: 2 pi / ln(R / R_i) on a disc with a bore. */
  readonly conductance: number;
  /** Lengths of the edges that are fed and of the others (m). */
  readonly fedEdge: number;
  readonly openEdge: number;
  /** Strengths mu of the table (m), from 0 up, and the scale of their spacing. */
  readonly strengths: Float64Array;
  readonly scale: number;
  /** T over T without flow, strengths x zones. */
  readonly slowed: Float64Array;
  /** Share of a zone's slurry that came last from the fed edge, strengths x zones. */
  readonly fed: Float64Array;
  /** Share of the age made under the face that disperses out of the fed edge, by strength. */
  readonly fedOut: Float64Array;
  /** Dispersion between the fed edge at 1 and the other at 0, out of each (m), by strength. */
  readonly fromFed: Float64Array;
  readonly toOpen: Float64Array;
}

/** The pressure at which slurry is pumped in or drawn off (Pa gauge, signed). */
export interface Supply {
  readonly pressure: number;
}

/** Strengths solved for, over that at which the flow renews the face as fast as the pumping does. */
const RELATIVE_STRENGTHS = [0, 0.1, 0.4, 1.6, 6.4] as const;
/** The strength by whose ages the zones are ordered. */
const ORDER_BY = 2;
const ZONE_MEANS: SolveOptions = { tolerance: 1e-4, mostIterations: 200 };

/** The fields of one strength, and what crosses the fed edge and the others. */
interface Solved {
  readonly age: Float64Array;
  readonly fed: Float64Array;
  readonly ageOut: { readonly fed: number; readonly open: number };
  readonly fedOut: { readonly fed: number; readonly open: number };
}

/** A table on its way: the field that orders the zones, and the table once there are zones. */
export interface FeedDraft {
  readonly order: Float64Array;
  table(means: (field: Float64Array) => Float64Array): Feed;
}

/** Boundaries the slurry is fed through: bores, or the hollow of a tool without any. Empty where there is neither. */
export function fedBoundaries({ boundaries }: FaceGrid): boolean[] {
  const bored = boundaries.some(({ kind }) => kind === 'bore');
  return boundaries.map(({ kind }) => kind === (bored ? 'bore' : 'hole'));
}

function unitFlow(space: TransportSpace, fed: readonly boolean[]): { conductance: number; flows: FaceFlows } {
  const { grid } = space;
  const outlets = fed.map((inlet) => ({ pressure: inlet ? 1 : 0, resistance: 0, mouth: Number.POSITIVE_INFINITY }));
  const flow = solveFlow(flowSpace(space), new Float64Array(grid.active.length).fill(1), outlets, 1);
  const conductance = fed.reduce((sum, inlet, b) => (inlet ? sum - (flow.outflow[b] as number) : sum), 0);
  return { conductance, flows: flow };
}

function scaled(flows: FaceFlows, factor: number): FaceFlows {
  const times = (field: Float64Array) => field.map((value) => factor * value);
  return { east: times(flows.east), north: times(flows.north), cut: times(flows.cut) };
}

/**
 * Solves what a flow does to the ages.
 * @param given dispersion D' of the middle film (m) and a guess of T without flow (m), one number per cell
 */
export function feedTable(
  space: TransportSpace,
  given: { readonly dispersion: Float64Array; readonly guess: Float64Array; readonly supply: Supply },
): FeedDraft {
  const { grid } = space;
  const fed = fedBoundaries(grid);
  const { conductance, flows } = unitFlow(space, fed);
  const area = grid.area.reduce((sum, a) => sum + a, 0);
  const sign = given.supply.pressure > 0 ? 1 : -1;
  const one = new Float64Array(grid.active.length).fill(1);
  const none = new Float64Array(grid.cuts.count);
  const fedEdge = Float64Array.from(grid.cuts.boundary, (b) => (fed[b] ? 1 : 0));
  const age = given.guess.slice();
  const share = new Float64Array(age.length).fill(0.5);
  const split = ({ outflow }: TransportResult) => {
    const sum = (inlet: boolean) => outflow.reduce((total, out, b) => (fed[b] === inlet ? total + out : total), 0);
    return { fed: sum(true), open: sum(false) };
  };
  const solve = (strength: number): Solved => {
    const flow = scaled(flows, (sign * strength) / conductance);
    const balance = { conductivity: given.dispersion, flow };
    const ageOut = split(solveTransport(age, space, { ...balance, source: one, edge: none }, ZONE_MEANS));
    const fedOut = split(solveTransport(share, space, { ...balance, edge: fedEdge }, ZONE_MEANS));
    return { age: age.slice(), fed: share.slice(), ageOut, fedOut };
  };
  const still = solve(0);
  const scale = (area * area) / still.age.reduce((sum, t, c) => sum + t * (grid.area[c] as number), 0);
  const strengths = Float64Array.from(RELATIVE_STRENGTHS, (relative) => relative * scale);
  const solved = Array.from(strengths, (strength) => (strength === 0 ? still : solve(strength)));
  const lengths = (inlet: boolean) =>
    grid.boundaries.reduce((sum, b, k) => (fed[k] === inlet ? sum + b.length : sum), 0);
  const head = {
    pressure: given.supply.pressure,
    bored: grid.boundaries.some(({ kind }) => kind === 'bore'),
    conductance,
    fedEdge: lengths(true),
    openEdge: lengths(false),
    strengths,
    scale,
    fedOut: Float64Array.from(solved, ({ ageOut }) => ageOut.fed / area),
    // what the flow itself carries across the fed edge, where the field is 1, is left out
    fromFed: Float64Array.from(solved, ({ fedOut }, k) => -fedOut.fed - sign * (strengths[k] as number)),
    toOpen: Float64Array.from(solved, ({ fedOut }) => fedOut.open),
  };
  return {
    order: orderedBy(solved[ORDER_BY] as Solved, sign * (strengths[ORDER_BY] as number)),
    table(means) {
      const unslowed = means(still.age);
      const slowed = solved.map(({ age: field }) => means(field).map((t, zone) => t / (unslowed[zone] as number)));
      const shares = solved.map(({ fed: field }) => means(field));
      const joined = (rows: readonly Float64Array[]) => Float64Array.from(rows.flatMap((row) => Array.from(row)));
      return { ...head, slowed: joined(slowed), fed: joined(shares) };
    },
  };
}

/** The age with nothing dispersed back in where the flow leaves; `inward` is the strength, negative when drawn off. */
function orderedBy({ age, fed, ageOut, fedOut }: Solved, inward: number): Float64Array {
  const outer = inward > 0;
  // the value at the way out at which its dispersion ends: for the open edges 1 - fed is the field that is 1 there
  const value = outer ? ageOut.open / fedOut.open : ageOut.fed / (-inward - fedOut.fed);
  return age.map((t, c) => t + value * (outer ? 1 - (fed[c] as number) : (fed[c] as number)));
}

/** The table at one strength. */
export interface FedFace {
  readonly slowed: Float64Array;
  readonly fed: Float64Array;
  readonly fedOut: number;
  readonly fromFed: number;
  readonly toOpen: number;
}

/**
 * The table at a strength (m): between its entries 1 / T on a straight line in mu, as where flow and pumping renew the face
 * side by side, and the rest in ln(1 + mu / scale); beyond the last T goes as 1 / mu, as it does where flow alone renews it.
 */
export function fedFace(feed: Feed, zones: number, strength: number): FedFace {
  const { strengths, scale } = feed;
  const last = strengths.length - 1;
  const most = strengths[last] as number;
  const x = log(1 + Math.min(strength, most) / scale);
  let k = 0;
  while (k < last - 1 && (strengths[k + 1] as number) < strength) k++;
  const from = log(1 + (strengths[k] as number) / scale);
  const t = (x - from) / (log(1 + (strengths[k + 1] as number) / scale) - from);
  const mix = (table: Float64Array, at: number, stride: number) =>
    (1 - t) * (table[k * stride + at] as number) + t * (table[(k + 1) * stride + at] as number);
  const beyond = strength > most ? most / strength : 1;
  const low = strengths[k] as number;
  const part = (Math.min(strength, most) - low) / ((strengths[k + 1] as number) - low);
  const slowed = new Float64Array(zones);
  const fed = new Float64Array(zones);
  for (let zone = 0; zone < zones; zone++) {
    const less = feed.slowed[k * zones + zone] as number;
    const more = feed.slowed[(k + 1) * zones + zone] as number;
    slowed[zone] = beyond / ((1 - part) / less + part / more);
    fed[zone] = mix(feed.fed, zone, zones);
  }
  const grown = strength > most ? strength / most : 1;
  return {
    slowed,
    fed,
    fedOut: mix(feed.fedOut, 0, 1),
    fromFed: grown * mix(feed.fromFed, 0, 1),
    toOpen: grown * mix(feed.toOpen, 0, 1),
  };
}
