import { PI } from '#src/base/math.ts';
import { LEAST_GAUGE_PRESSURE } from '../slurry/flow.ts';
import {
  type ExchangeSetting,
  exchangeFactor,
  peakSpeed,
  sideGapWidth,
  sideGritFraction,
  slurryDensity,
  slurryViscosity,
} from './exchange.ts';
import type { FaceShape } from './face.ts';
import { type FedFace, type Feed, fedFace } from './feed.ts';

/** Depth over which slurry that leaves the face and slurry on its way in share the side gap, in widths of the gap. */
const SHARED_WAY = 5;

/**
 * Cube of the film that carries a steady flow while the gap g + A (1 - cos w t) breathes, h the mean (m3). Where viscosity
 * acts faster than the tool moves (Reynolds) it is the mean cube h^3 (1 + 3 a^2 / 2), a = A / h: thick moments carry most.
 * At 20 kHz in water it does not: the time h^2 / (pi^2 nu) in which the slurry feels its walls is ten cycles of the angle, the
 * speed keeps while the film breathes, and flow and drag average apart to <h> / <1/h^2> = h^3 (1 - a^2)^(3/2), less than
 * without vibration. Between the two by 1 / (1 + (w h^2 / (pi^2 nu))^2). Derived for flow between a bore and the edge,
 * where what the breathing carries along is a gradient and makes no mean flow.
 * @param kinematic kinematic viscosity nu (m2/s)
 */
export function pulsedCube(film: number, amplitude: number, frequency: number, kinematic: number): number {
  const a = Math.min(1, amplitude / film);
  const lag = (2 * PI * frequency * film * film) / (PI * PI * kinematic);
  const follows = 1 / (1 + lag * lag);
  const left = 1 - a * a;
  return film * film * film * (follows * (1 + 1.5 * a * a) + (1 - follows) * left * Math.sqrt(left));
}

/** A face, its film and the debris in it, as far as the flow sees them. */
export interface FlowPlace {
  readonly depth: number;
  readonly film: number;
  /** Share of grit in the film. */
  readonly gritFraction: number;
  /** Mean debris over the volume of the film. */
  readonly debris: number;
}

/** A flow through the face and the ages it leads to. */
export interface ThroughFlow {
  /** Flow through the fed edge (m3/s), positive inward. */
  readonly flow: number;
  /** Exchange factor of the mean film. */
  readonly exchange: number;
  /** Age of each zone with the mean film everywhere (s), and the share of T that is left of that without flow. */
  readonly ages: Float64Array;
  readonly slowed: Float64Array;
  /** The smaller age of the two edges (s). */
  readonly freshest: number;
}

/**
 * Flow through the face (m3/s), positive inward through the fed edge: the film, the side gap in series with it, and the
 * speed it takes in a bore's mouth, a Q^2 + b Q = dp. Slurry that leaves by the side carries its debris along.
 */
export function forcedFlow(setting: ExchangeSetting, feed: Feed, place: FlowPlace): number {
  const { conditions, constants } = setting;
  const { film, depth, debris } = place;
  const solids = constants.debrisBulking * debris;
  const density = slurryDensity(setting);
  const viscosity = slurryViscosity(setting, place.gritFraction + solids);
  const cube = pulsedCube(film, conditions.amplitude, conditions.frequency, viscosity / density);
  const inward = feed.pressure > 0;
  const width = constants.sideFlowGap * conditions.grit.massMedian;
  const grit = sideGritFraction(conditions);
  const along = (edge: number, leaves: boolean) =>
    (12 * slurryViscosity(setting, grit + (leaves ? solids : 0)) * depth) / (edge * width * width * width);
  const loss =
    (12 * viscosity) / (cube * feed.conductance) +
    along(feed.openEdge, inward) +
    (feed.bored ? 0 : along(feed.fedEdge, !inward));
  const mouth = feed.bored ? feed.fedEdge * film : Number.POSITIVE_INFINITY;
  const head = density / (2 * mouth * mouth);
  const pressure = Math.min(Math.abs(feed.pressure), inward ? Number.POSITIVE_INFINITY : -LEAST_GAUGE_PRESSURE);
  const flow = (2 * pressure) / (loss + Math.sqrt(loss * loss + 4 * head * pressure));
  return inward ? flow : -flow;
}

/** How a side gap answers: the age there is `own` + `given` x (what disperses out of the face into it). */
function sideGap(
  setting: ExchangeSetting,
  at: FlowPlace,
  edge: number,
  inflow: number,
): { own: number; given: number } {
  const width = sideGapWidth(setting);
  const pumped =
    setting.constants.sideSpeed *
    peakSpeed(setting.conditions) *
    exchangeFactor(setting, width, sideGritFraction(setting.conditions));
  const speed = pumped + Math.max(0, inflow) / (edge * width);
  const shared = at.depth / (at.depth + SHARED_WAY * width);
  return { own: at.depth / speed, given: (shared * at.film) / (speed * edge * width) };
}

/** Ages at the fed edge and at the others (s), where both balances hold. */
function edgeAges(
  setting: ExchangeSetting,
  at: FlowPlace,
  face: { readonly shape: FaceShape; readonly feed: Feed; readonly table: FedFace; readonly flow: number },
  speed: number,
): { fed: number; open: number } {
  const { feed, table, flow, shape } = face;
  const madeFed = table.fedOut * shape.area;
  const madeOpen = shape.area - madeFed;
  const toOpen = speed * table.toOpen;
  const fromFed = speed * table.fromFed;
  const side = sideGap(setting, at, feed.openEdge, -flow);
  const open = side.own + side.given * madeOpen;
  // what is pumped through a bore is fresh to its mouth
  if (feed.bored && flow > 0) return { fed: 0, open: open / (1 + side.given * toOpen) };
  if (feed.bored) {
    // nothing disperses back out of a bore that is drawn on
    const older = madeFed / fromFed;
    const age = open + side.given * toOpen * older;
    return { fed: age + older, open: age };
  }
  const core = sideGap(setting, at, feed.fedEdge, flow);
  const fed = core.own + core.given * madeFed;
  const a = side.given * toOpen;
  const b = core.given * fromFed;
  const whole = 1 + a + b;
  return { fed: (fed * (1 + a) + b * open) / whole, open: (open * (1 + b) + a * fed) / whole };
}

/** The flow through a face and the ages of its zones, the film being the same all over. */
export function throughFlow(
  setting: ExchangeSetting,
  shape: FaceShape,
  still: Float64Array,
  at: FlowPlace,
): ThroughFlow {
  const feed = shape.feed as Feed;
  const flow = forcedFlow(setting, feed, at);
  const exchange = exchangeFactor(setting, at.film, at.gritFraction + setting.constants.debrisBulking * at.debris);
  const speed = peakSpeed(setting.conditions) * exchange;
  const table = fedFace(feed, shape.zones, Math.abs(flow) / (speed * at.film));
  const edges = edgeAges(setting, at, { shape, feed, table, flow }, speed);
  const ages = still.map((t, zone) => {
    const share = table.fed[zone] as number;
    return (t * (table.slowed[zone] as number)) / speed + share * edges.fed + (1 - share) * edges.open;
  });
  return { flow, exchange, ages, slowed: table.slowed, freshest: Math.min(edges.fed, edges.open) };
}
