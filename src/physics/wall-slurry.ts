import { PI } from '#src/base/math.ts';
import { type SlurryConstants, slurryConstants } from './process/constants.ts';
import type { Conditions } from './records.ts';
import { CARRIERS, type Carrier, kriegerDougherty, mixtureDensity } from './slurry/viscosity.ts';

/**
 * How fresh the grit in the side gap is. A grain about as long as the gap is squeezed once per cycle; as long as nothing
 * moves it, it falls back into its own dents and removes nothing more. Swaps come at random, k per second, squeezes f per
 * second, so the share of squeezes that are first ones is k / (k + f) (derived). A swap takes the slurry one grain
 * further along the wall: k = speed / (distance d50), with the speed of the slurry past the wall. To and fro motion at no
 * Reynolds number leaves everything where it was (reversal of Stokes flow), so of the tool's own pumping only the share
 * X = Re / (Re + Re_c) is net, the factor under the face; a forced flow is net whatever the viscosity. Debris among the
 * grains shields by the same law as under the face. The level is not derived: `wallRenewal` is the share in clear water,
 * flooded, at the reference setting below. Its order is that of steric exclusion, a grain of diameter d entering a slit
 * that opens to w + rho with probability (w + rho - d) / w, rho / w = 0.03 to 0.05 on average (derived, not used).
 */

/** What the slurry beside the tool carries and how it moves. Flows per metre of rim. */
export interface WallSlurry {
  readonly carrier: Carrier;
  /** Forced flow out through the side gap (m2/s); none if left out. */
  readonly forcedFlow?: number;
  /** The whole flow out, pumped and forced (m2/s), where it is known; worked out by `sideFlow` if left out. */
  readonly sideFlow?: number;
  /** Debris of work and tool leaving (m2/s). */
  readonly debrisFlow: number;
  readonly constants?: SlurryConstants;
}

/** The setting at which `wallRenewal` is meant: F320 boron carbide, 30 vol%, 20 um zero-to-peak at 20 kHz. */
export const WALL_REFERENCE = {
  massMedian: 29.2e-6,
  gritDensity: 2510,
  concentration: 0.3,
  amplitude: 20e-6,
  frequency: 20e3,
} as const;

/** What of the conditions the flow beside the tool depends on. */
interface Side {
  readonly massMedian: number;
  readonly gritDensity: number;
  readonly concentration: number;
  readonly amplitude: number;
  readonly frequency: number;
}

const sideOf = ({ grit, abrasive, concentration, amplitude, frequency }: Conditions): Side => ({
  massMedian: grit.massMedian,
  gritDensity: abrasive.density,
  concentration,
  amplitude,
  frequency,
});

/** Share of grit in the side gap: grains enter only the room left free. */
const gritInside = (concentration: number, packing: number) => concentration / (1 + concentration / packing);

/** Flow pumped by the tool along the side gap (m2/s), its slurry thickened by a volume share of debris. */
function pumped(side: Side, carrier: Carrier, debris: number, set: Settings): number {
  const { constants, packing } = set;
  const gap = constants.sideGap * side.massMedian;
  const speed = 2 * PI * side.frequency * side.amplitude;
  const solids = gritInside(side.concentration, packing) + constants.debrisBulking * debris;
  const viscosity = kriegerDougherty(carrier.viscosity, Math.min(solids, 0.97 * packing), { packing, intrinsic: 2.5 });
  const density = mixtureDensity(carrier.density, side.gritDensity, side.concentration);
  const reynolds = (density * speed * gap) / viscosity;
  return (constants.sideSpeed * speed * gap * reynolds) / (reynolds + constants.exchangeReynolds);
}

interface Settings {
  readonly constants: SlurryConstants;
  readonly packing: number;
}

/** Slurry distances in grains passed per cycle. */
function grainsPerCycle(side: Side, flow: number, { constants }: Settings): number {
  const gap = constants.sideGap * side.massMedian;
  return flow / (gap * side.massMedian * side.frequency);
}

const SOLVES = 12;

/** Flow of slurry out through the side gap, pumped and forced (m2/s per metre of rim), debris in its viscosity. */
export function sideFlow(conditions: Conditions, slurry: WallSlurry): number {
  const set = { constants: slurry.constants ?? slurryConstants, packing: conditions.constants.packing };
  const side = sideOf(conditions);
  const forced = slurry.forcedFlow ?? 0;
  let flow = forced + pumped(side, slurry.carrier, 0, set);
  for (let i = 0; i < SOLVES && flow > 0; i++)
    flow = 0.5 * (flow + forced + pumped(side, slurry.carrier, slurry.debrisFlow / flow, set));
  return flow;
}

/**
 * Share of the squeezes in the side gap that are first ones, for `wallLaw`: `wallRenewal` in clear water at the reference
 * setting; falls with viscosity and debris, rises with forced flow; between 0 and 1.
 */
export function wallFreshness(conditions: Conditions, slurry: WallSlurry): number {
  const { packing, wallRenewal } = conditions.constants;
  const set = { constants: slurry.constants ?? slurryConstants, packing };
  const side = sideOf(conditions);
  const flow = slurry.sideFlow ?? sideFlow(conditions, slurry);
  if (!(flow > 0)) return 0;
  const reference = grainsPerCycle(WALL_REFERENCE, pumped(WALL_REFERENCE, CARRIERS.water, 0, set), set);
  const swaps = ((wallRenewal / (1 - wallRenewal)) * grainsPerCycle(side, flow, set)) / reference;
  const half = set.constants.shielding * gritInside(side.concentration, packing);
  const clear = half > 0 ? 1 / (1 + Math.max(0, slurry.debrisFlow) / flow / half) : 0;
  return (swaps / (1 + swaps)) * clear;
}
