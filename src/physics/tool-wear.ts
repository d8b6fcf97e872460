import { log, PI, pow } from '#src/base/math.ts';
import type { ConstantNote, ProcessConstants } from './constants.ts';
import { type FloorState, overFloor } from './floor.ts';
import { type GapSums, TERM } from './gap-sums.ts';
import { gritsPerArea } from './population.ts';
import type { ToolMaterial } from './records.ts';
import { sideDents, type WallLaw, wallRate } from './wall.ts';

/**
 * Wear of the tool. A dent costs the tool a share of its volume by low-cycle fatigue; the same share at the face, the
 * side and the edge. Positions in the frame of the tool's end: height above the worn face.
 */

/** Constants of the tool's fatigue. */
export interface ToolWearConstants {
  /** Exponent c of Coffin and Manson, strain range / 2 = fracture strain (2 N)^-c. */
  readonly fatigueExponent: number;
  /** Range of strain one dent brings. */
  readonly contactStrain: number;
  /** Fracture strain gained per pressure around the dent (1/Pa). */
  readonly pressureDuctility: number;
}

export const toolWearConstants: ToolWearConstants = {
  fatigueExponent: 0.6,
  contactStrain: 0.08,
  pressureDuctility: 0.35e-9,
};

export const toolWearNotes: Record<keyof ToolWearConstants, ConstantNote> = {
  fatigueExponent: { min: 0.5, max: 0.7, source: 'Coffin 1954, Manson 1953, usual range for metals, from memory' },
  contactStrain: {
    min: 0.06,
    max: 0.1,
    source: 'representative strain of a Vickers indent, Tabor, The Hardness of Metals (1951), from memory',
  },
  pressureDuctility: {
    min: 0.2e-9,
    max: 1e-9,
    source: 'Bridgman, Studies in Large Plastic Flow and Fracture (1952): about one per 1 to 3 GPa, from memory',
  },
};

/** The steel `toolPlasticShare` was fitted to: hardness and modulus (Pa), true fracture strain. */
export const FITTED_STEEL = { hardness: 1.3e9, youngsModulus: 205e9, fractureStrain: 0.8 } as const;
/** Hardness over yield stress of a full indent: Tabor 1951, from memory. */
const CONSTRAINT = 2.8;

type Fatigued = Pick<ToolMaterial, 'hardness' | 'youngsModulus'> & { readonly fractureStrain: number };

/**
 * Dents a spot of the tool bears before it is lost, N = (1/2) (plastic strain range / (2 fracture strain))^(-1/c). The
 * plastic range is the contact's less what springs back between yield one way and the other, 2 Y / E with Y = H / 2.8.
 * The strain at fracture is that in tension and what the pressure beside a dent adds, Y / 3 of simple compression: a hard
 * metal or a cermet that breaks at once in tension still flows beside an indent. Cracks in a cemented carbide need none of
 * their own: their threshold lies far above any grit's load. Derived from the laws named in `toolWearNotes`.
 */
export function dentsToLoss(tool: Fatigued, wear: ToolWearConstants = toolWearConstants): number {
  const yieldStress = tool.hardness / CONSTRAINT;
  const plastic = wear.contactStrain - (2 * yieldStress) / tool.youngsModulus;
  const ductility = tool.fractureStrain + (wear.pressureDuctility * yieldStress) / 3;
  const range = Math.max(plastic, 0.1 * wear.contactStrain);
  return 0.5 * pow(range / (2 * ductility), -1 / wear.fatigueExponent);
}

/**
 * Share of a dent's volume the tool loses: the fitted share of mild steel times the ratio of the dents the two bear, at
 * most one. A tool whose fracture strain is not given takes the fitted share.
 */
export function toolShare(
  tool: ToolMaterial,
  constants: ProcessConstants,
  wear: ToolWearConstants = toolWearConstants,
): number {
  const { fractureStrain } = tool;
  if (fractureStrain === undefined) return constants.toolPlasticShare;
  const ratio = dentsToLoss(FITTED_STEEL, wear) / dentsToLoss({ ...tool, fractureStrain }, wear);
  return Math.min(1, constants.toolPlasticShare * ratio);
}

/**
 * Speed at which the tool face wears back (m/s): the tool's share of the dents the grits leave in it. Every hit counts,
 * with or without a chip on the other side. Assumed form, constant fitted to wear ratios.
 * @param hitRate hits per area and time (1/(m2 s))
 * @param meanToolDent mean dent in the tool per hit (m3), `toolDent` of `contact`
 * @param share from `toolShare`; that of mild steel if left out
 */
export function faceWearRate(
  hitRate: number,
  meanToolDent: number,
  constants: ProcessConstants,
  share = constants.toolPlasticShare,
): number {
  return share * hitRate * meanToolDent;
}

/** Volume of tool lost per volume of work removed. */
export function wearRatio(toolVolume: number, workVolume: number): number {
  return workVolume > 0 ? toolVolume / workVolume : 0;
}

/** Speed at which the tool's side wears in where the side gap is `gap` (m/s). */
export function toolSideWear(law: WallLaw, gap: number): number {
  const { tool, constants } = law.conditions;
  return toolShare(tool, constants) * sideDents(law, gap);
}

/** How fast the tool's end wears. */
export interface ToolPace {
  /** Recession of the face (m/s). */
  readonly faceRate: number;
  /** Recession of the side just above the edge, where the gap is at its foot (m/s). */
  readonly sideRate: number;
  /** Height above the edge at which the side wears half as fast (m); may be Infinity. */
  readonly sideDecay: number;
  /** Rise of the edge radius per length of tool lost; 0 if left out. */
  readonly edgeGrowth?: number;
}

/**
 * Side wear above the edge of a tool that sinks at `sinkRate` and loses `faceRate` at its face. Above the edge the gap G
 * opens as the wall goes on wearing and closes by the tool's own taper: dG/dz = a q + dy/dz, with a = wall rate / sink
 * rate and b = side rate / face rate at the foot, and q the fall of both with the gap, e-fold over l. With q = 1 / (1 +
 * z / decay): decay = l / a without the taper, and a decay^2 + (a lost - b lost - l) decay = l lost with the taper at the
 * edge. The taper only acts near the end and late, so the geometric mean of both stands; within 20 % of the wall and tool
 * followed together, point by point. Derived.
 * @param lost length lost so far (m)
 */
export function sideWear(
  law: WallLaw,
  { sinkRate, faceRate, lost }: { readonly sinkRate: number; readonly faceRate: number; readonly lost: number },
): Pick<ToolPace, 'sideRate' | 'sideDecay'> {
  const sideRate = toolSideWear(law, law.foot);
  const step = 0.05 * law.foot;
  const wall = wallRate(law, law.foot);
  const wider = wallRate(law, law.foot + step);
  if (!(sinkRate > 0 && faceRate > 0 && wall > wider && wider > 0)) return { sideRate, sideDecay: Infinity };
  const l = step / log(wall / wider);
  const a = wall / sinkRate;
  const b = sideRate / faceRate;
  const half = l + (b - a) * lost;
  const tapered = (half + Math.sqrt(half * half + 4 * a * l * lost)) / (2 * a);
  return { sideRate, sideDecay: Math.sqrt((l / a) * tapered) };
}

/** Share of its pace the edge is looked at: the slope of 45 degrees half way round. */
const SLOPE = Math.SQRT1_2;
const EDGE_STEPS = 20;

/**
 * Rise of the edge radius per length of tool lost. In steady state the work sinks alike everywhere, so a place whose
 * surface slopes by theta removes cos(theta) of the face's depth along its normal; its gap is wider and its hits are
 * weaker. Did the tool lose the same share of that, every place of it would go back alike along the axis and the edge
 * would keep its form, however round. But weak hits raise fewer chips and dent the tool nearly as much: tool per work,
 * kappa, rises. The middle of the edge runs ahead by cos 45 (kappa_45 / kappa - 1) of the face's speed, and (sqrt 2 - 1) r
 * is its distance from the corner. Zero where all removal is by dents in proportion. Derived; the lateral squeezes shift
 * the edge as a whole and are the side's.
 */
export function edgeGrowth(sums: GapSums, floor: FloorState): number {
  const { conditions, step } = sums.rows;
  const at = (gap: number) => {
    const chips = overFloor(sums, TERM.chipVolume, gap, floor.roughness);
    const removed = floor.overlap * chips + overFloor(sums, TERM.dent, gap, floor.roughness);
    const dents = overFloor(sums, TERM.toolDent, gap, floor.roughness);
    return { rate: gritsPerArea(conditions, gap) * removed, tool: removed > 0 ? dents / removed : 0 };
  };
  const face = at(floor.gap);
  if (!(face.rate > 0 && face.tool > 0)) return 0;
  let low = floor.gap;
  let high = floor.gap + step;
  while (at(high).rate > SLOPE * face.rate) high += step;
  for (let i = 0; i < EDGE_STEPS; i++) {
    const middle = (low + high) / 2;
    if (at(middle).rate > SLOPE * face.rate) low = middle;
    else high = middle;
  }
  const excess = at(low).tool / face.tool - 1;
  return (SLOPE * Math.max(0, excess)) / (Math.SQRT2 - 1);
}

/** A worn tool. */
export interface ToolWearState {
  /** Length lost at the face (m). */
  readonly lost: number;
  /** Radius of the edge between face and side (m). */
  readonly edgeRadius: number;
  /** How far the side stands in at the edge (m), on each side. */
  readonly sideLoss: number;
}

/** The tool after another `lost` of its length has gone (m). Steps at one pace add up to the whole. */
export function wearOn(state: ToolWearState, pace: ToolPace, lost: number): ToolWearState {
  const slope = pace.faceRate > 0 ? pace.sideRate / pace.faceRate : 0;
  const { sideDecay } = pace;
  const height =
    sideDecay === Infinity ? lost : sideDecay * log((sideDecay + state.lost + lost) / (sideDecay + state.lost));
  return {
    lost: state.lost + lost,
    edgeRadius: state.edgeRadius + (pace.edgeGrowth ?? 0) * lost,
    sideLoss: state.sideLoss + slope * height,
  };
}

/**
 * The tool after it has lost a length at one pace. A point of the side comes down to the face as the face wears back, and
 * wears on the way: y(z) = int_z^(z + lost) w_s(z') / w_f dz', with w_s = sideRate / (1 + z / decay). Derived.
 */
export function wornTool(input: ToolPace & { readonly edgeRadius: number; readonly lost: number }): ToolWearState {
  return wearOn({ lost: 0, edgeRadius: input.edgeRadius, sideLoss: 0 }, input, input.lost);
}

/** How far the side stands in at a height above the worn edge (m): `wornTool` along the side. */
export function sideProfile(pace: ToolPace, lost: number, height: number): number {
  const slope = pace.faceRate > 0 ? pace.sideRate / pace.faceRate : 0;
  const { sideDecay } = pace;
  if (sideDecay === Infinity) return slope * lost;
  return slope * sideDecay * log((sideDecay + lost + height) / (sideDecay + height));
}

/** What the volume of a worn tool is worked out from. */
export interface WornVolume {
  readonly state: ToolWearState;
  readonly pace: ToolPace;
  /** Edge radius of the new tool (m). */
  readonly newEdgeRadius: number;
  /** Area of the face (m2) and length of its edge (m). */
  readonly faceArea: number;
  readonly perimeter: number;
  /** Length of the side in the cavity (m). */
  readonly depth: number;
}

/**
 * Volume the tool has lost (m3), new less worn: the length off the face, the side's profile along the depth (as if all of
 * it had been in the cavity throughout, which is too much by up to a half of this small part), and (1 - pi/4)(r^2 - r0^2)
 * along the edge.
 */
export function wornVolume({ state, pace, newEdgeRadius, faceArea, perimeter, depth }: WornVolume): number {
  const slope = pace.faceRate > 0 ? pace.sideRate / pace.faceRate : 0;
  const area = slope * pace.sideDecay * logArea(pace.sideDecay, state.lost, depth);
  const side = Number.isFinite(area) ? area : slope * state.lost * depth;
  const edge = (1 - PI / 4) * (state.edgeRadius * state.edgeRadius - newEdgeRadius * newEdgeRadius);
  return faceArea * state.lost + perimeter * (side + edge);
}

/** int_0^depth ln((decay + lost + z) / (decay + z)) dz. */
function logArea(decay: number, lost: number, depth: number): number {
  const part = (x: number) => x * log(x);
  return part(decay + lost + depth) - part(decay + lost) - part(decay + depth) + part(decay);
}
