import { PI } from '#src/base/math.ts';
import type { Conditions } from '../records.ts';
import { type Carrier, kriegerDougherty, mixtureDensity } from '../slurry/viscosity.ts';
import type { SlurryConstants } from './constants.ts';

/** Einstein's coefficient of the suspension: that of spheres. */
const INTRINSIC = 2.5;
/** Share of dense packing above which the viscosity rises no further. */
const MOST_CROWDED = 0.97;

/** What the exchange of slurry depends on beside the film and its solids. SI. */
export interface ExchangeSetting {
  readonly conditions: Conditions;
  readonly carrier: Carrier;
  readonly constants: SlurryConstants;
}

/** Peak speed of the tool, U = w A (m/s). */
export const peakSpeed = (conditions: Conditions): number => 2 * PI * conditions.frequency * conditions.amplitude;

/** Viscosity of the slurry with a share of solids, grit and debris together (Pa s). */
export function slurryViscosity({ conditions, carrier }: ExchangeSetting, solids: number): number {
  const { packing } = conditions.constants;
  return kriegerDougherty(carrier.viscosity, Math.min(solids, MOST_CROWDED * packing), {
    packing,
    intrinsic: INTRINSIC,
  });
}

/** Density of the slurry as supplied (kg/m3). */
export function slurryDensity({ conditions, carrier }: ExchangeSetting): number {
  return mixtureDensity(carrier.density, conditions.abrasive.density, conditions.concentration);
}

/** Exchange factor X = Re / (Re + Re_c) of a film of height h with this share of solids. Assumed form. */
export function exchangeFactor(setting: ExchangeSetting, film: number, solids: number): number {
  const reynolds = (slurryDensity(setting) * peakSpeed(setting.conditions) * film) / slurryViscosity(setting, solids);
  return reynolds / (reynolds + setting.constants.exchangeReynolds);
}

/** Width of the side gap the slurry passes (m). */
export function sideGapWidth({ conditions, constants }: ExchangeSetting): number {
  return constants.sideGap * conditions.grit.massMedian;
}

/** Share of grit in the side gap, which never closes. */
export function sideGritFraction({ concentration, constants }: Conditions): number {
  return concentration / (1 + concentration / constants.packing);
}
