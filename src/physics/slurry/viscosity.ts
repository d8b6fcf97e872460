import { pow } from '#src/base/math.ts';

/** Viscosity and density of slurries. SI: Pa s, kg/m3; shares by volume. */

export interface Carrier {
  readonly viscosity: number;
  readonly density: number;
}

/**
 * Carriers at about 20 C. Water: 1 mPa s, handbook value. Oil: a light machining oil, 20 mPa s, where such oils lie between
 * 5 and 50 (from memory). A job may give its own viscosity instead.
 */
export const CARRIERS = {
  water: { viscosity: 1e-3, density: 998 },
  oil: { viscosity: 20e-3, density: 860 },
} as const satisfies Readonly<Record<string, Carrier>>;

export interface Crowding {
  /** Share of solids at which the slurry no longer flows, phi_m. */
  readonly packing: number;
  /** Einstein's coefficient [eta]: 2.5 for spheres, 3 to 4 for angular grit (from memory). */
  readonly intrinsic: number;
}

/**
 * Viscosity of a slurry with a share `solids` of solids (Pa s): mu0 (1 - phi / phi_m)^(-[eta] phi_m), Krieger and
 * Dougherty, Trans. Soc. Rheol. 3 (1959) 137, from memory. Infinite at phi_m and above.
 */
export function kriegerDougherty(carrier: number, solids: number, { packing, intrinsic }: Crowding): number {
  return solids >= packing ? Infinity : carrier * pow(1 - solids / packing, -intrinsic * packing);
}

/** Density of a mixture (kg/m3) with a share `solids` of solids. */
export function mixtureDensity(carrier: number, solid: number, solids: number): number {
  return carrier * (1 - solids) + solid * solids;
}
