import { exp, pow } from '#src/base/math.ts';

/**
 * Probability that one squeeze crushes the grit, 1 - exp(-(P0 / F_c)^m): Weibull 1951 with the load as the stress, every
 * squeeze a fresh test.
 * @param uncappedLoad load the contact asks for (N)
 * @param crushLoad load at which 63 % crush (N), `crushLoad` of `contact.ts`
 */
export function crushProbability(uncappedLoad: number, crushLoad: number, weibull: number): number {
  if (!(uncappedLoad > 0)) return 0;
  return 1 - exp(-pow(uncappedLoad / crushLoad, weibull));
}

/** Load at which a sphere of diameter d splits at tensile strength sigma, F = sigma d^2 / 0.9 (N). Hiramatsu and Oka,
 * Int. J. Rock Mech. Min. Sci. 3 (1966) 89, from memory. A reference: tabulated strengths are load over d^2. */
export function pointLoad(strength: number, d: number): number {
  return (strength * d * d) / 0.9;
}

/** Strength ratio of grains of two sizes under a Weibull law with volume effect, (d2 / d1)^(3/m). */
export function weibullSizeRatio(d1: number, d2: number, weibull: number): number {
  return pow(d2 / d1, 3 / weibull);
}
