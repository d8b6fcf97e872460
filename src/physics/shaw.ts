import { PI, pow } from '#src/base/math.ts';

/**
 * The model of Shaw, "Ultrasonic grinding", Microtecnic 10 (1956) 257, as textbooks give it (Ghosh and Mallik,
 * Manufacturing Science, ch. 6; Jain, Advanced Machining Processes; from memory). A reference for published checks, all
 * in SI: it meets the work at mean speed, so its contact is too short, and it knows no best load.
 */

/** Contact diameter of a grit's projections, d1 = mu d^2. mu carries a unit: 1 per millimetre is 1000 per metre. */
export const PROJECTION_PER_METRE = 1000;

/** d1 = mu d^2 (m), mu in 1/m. */
export function projectionDiameter(d: number, mu = PROJECTION_PER_METRE): number {
  return mu * d * d;
}

/** Crater of a grit of contact diameter d pressed h deep, the hemisphere over its impression: (2/3) pi (d h)^(3/2) (m3). */
export function shawCrater(d: number, indent: number): number {
  return (2 / 3) * PI * pow(d * indent, 1.5);
}

/** Depth of a thrown grit, 2 pi A f d sqrt(rho / (6 H)) (m); amplitude zero-to-peak. */
export function throwingIndent(hit: {
  readonly d: number;
  readonly amplitude: number;
  readonly frequency: number;
  readonly density: number;
  readonly hardness: number;
}): number {
  return 2 * PI * hit.amplitude * hit.frequency * hit.d * Math.sqrt(hit.density / (6 * hit.hardness));
}

/** What hammering reads. `hardnessRatio` is work over tool; `contactDiameter` is d for a smooth grit, mu d^2 with projections. */
export interface Hammering {
  readonly force: number;
  readonly amplitude: number;
  readonly grits: number;
  readonly contactDiameter: number;
  readonly hardness: number;
  readonly hardnessRatio: number;
}

/** Depth of a hammered grit, sqrt(8 F A / (pi Z d H (1 + lambda))) (m). */
export function hammeringIndent(hit: Hammering): number {
  const { force, amplitude, grits, contactDiameter, hardness, hardnessRatio } = hit;
  return Math.sqrt((8 * force * amplitude) / (PI * grits * contactDiameter * hardness * (1 + hardnessRatio)));
}

/** Grits under the tool by area coverage, C 4 S / (pi d^2); C = 1/2 for slurry mixed one to one. */
export function coveredGrits(concentration: number, area: number, d: number): number {
  return (4 * concentration * area) / (PI * d * d);
}

/** Removal by hammering (m3/s): crater times grits times frequency. */
export function hammeringRate(hit: Hammering, frequency: number): number {
  return shawCrater(hit.contactDiameter, hammeringIndent(hit)) * hit.grits * frequency;
}

/** The same in Jain's constants: volume K1 (h d)^(3/2) per hit, K2 / d^2 grits (K2 in m2), a share K3 of them working. */
export interface JainConstants {
  readonly k1: number;
  readonly k2: number;
  readonly k3: number;
}

/** Depth of a hammered grit in Jain's form, sqrt(4 F a d / (pi K2 H (j + 1))) (m). Its `a` is TWICE the tool amplitude. */
export function jainHammeringIndent(
  hit: Omit<Hammering, 'grits' | 'contactDiameter'> & { readonly d: number },
  { k2 }: JainConstants,
): number {
  const a = 2 * hit.amplitude;
  return Math.sqrt((4 * hit.force * a * hit.d) / (PI * k2 * hit.hardness * (hit.hardnessRatio + 1)));
}

/** Removal in Jain's form from a depth h (m3/s): K1 K2 K3 sqrt(h^3 / d) f. */
export function jainRate(indent: number, d: number, frequency: number, { k1, k2, k3 }: JainConstants): number {
  return k1 * k2 * k3 * Math.sqrt((indent * indent * indent) / d) * frequency;
}
