import { exp, log, PI, pow } from '#src/base/math.ts';
import { besselI, besselK } from './bessel.ts';

/**
 * Answers in closed form of div(h D grad u) - q . grad u - k u + s = 0, against which the numbers of `transport.ts` are
 * tested. Derived unless a source is named. Lengths in m, conductivity K = h D in m3/s, loss k in m/s, ages in s.
 */

// --- first-order loss, fresh slurry (u = 1) at the edge ---

/** Fresh share at radius r of a disc of radius R: I0(m r) / I0(m R), m = sqrt(k / K). */
export function discShare(r: number, disc: { readonly radius: number; readonly modulus: number }): number {
  return besselI(0, (disc.modulus * r) / disc.radius) / besselI(0, disc.modulus);
}

/** Mean fresh share of a disc, 2 I1(phi) / (phi I0(phi)), phi = R sqrt(k / K): Thiele's effectiveness (1939, from memory). */
export function discEffectiveness(modulus: number): number {
  if (modulus === 0) return 1;
  return (2 * besselI(1, modulus)) / (modulus * besselI(0, modulus));
}

/** Mean fresh share of a strip fed from both sides, tanh(phi) / phi, phi = half width x sqrt(k / K) (Thiele 1939, from memory). */
export function stripEffectiveness(modulus: number): number {
  if (modulus === 0) return 1;
  const e = exp(-2 * modulus);
  return (1 - e) / (1 + e) / modulus;
}

/** Fresh share across a strip at x from its middle: cosh(m x) / cosh(m a), m = phi / a. */
export function stripShare(x: number, strip: { readonly halfWidth: number; readonly modulus: number }): number {
  const at = Math.abs((strip.modulus * x) / strip.halfWidth);
  return (exp(at - strip.modulus) * (1 + exp(-2 * at))) / (1 + exp(-2 * strip.modulus));
}

/** An annulus between radii `inner` and `outer` with m = sqrt(k / K) (1/m). */
export interface LossyAnnulus {
  readonly inner: number;
  readonly outer: number;
  readonly m: number;
}

/** Weights of I0 and K0 in the share of an annulus fed from both edges. */
function annulusWeights({ inner, outer, m }: LossyAnnulus): { a: number; b: number } {
  const i0 = besselI(0, m * inner);
  const i1 = besselI(0, m * outer);
  const k0 = besselK(0, m * inner);
  const k1 = besselK(0, m * outer);
  const det = i0 * k1 - i1 * k0;
  return { a: (k1 - k0) / det, b: (i0 - i1) / det };
}

/** Fresh share of an annulus fed from both edges, as a function of r: a I0(m r) + b K0(m r). */
export function annulusShare(annulus: LossyAnnulus): (r: number) => number {
  const { a, b } = annulusWeights(annulus);
  return (r) => a * besselI(0, annulus.m * r) + b * besselK(0, annulus.m * r);
}

/** Mean fresh share of an annulus fed from both edges, from what enters across them. */
export function annulusEffectiveness(annulus: LossyAnnulus): number {
  const { inner, outer, m } = annulus;
  const { a, b } = annulusWeights(annulus);
  // integral of r u is r/m (a I1 - b K1)
  const part = (r: number) => (r / m) * (a * besselI(1, m * r) - b * besselK(1, m * r));
  return (2 * (part(outer) - part(inner))) / (outer * outer - inner * inner);
}

/**
 * Mean fresh share of a disc with D = a r^2 (h D = h a r^2) and loss h k': 2 / (2 + n) with n = sqrt(1 + k'/a) - 1, the
 * share being (r/R)^n.
 */
export function pumpedDiscEffectiveness(lossOverA: number): number {
  return 2 / (1 + Math.sqrt(1 + lossOverA));
}

// --- mean age, slurry of age 0 at the edge ---

/** Age at radius r of a disc, D constant (m2/s): (R^2 - r^2) / (4 D). Its mean is R^2 / (8 D). */
export function discAge(r: number, radius: number, dispersion: number): number {
  return (radius * radius - r * r) / (4 * dispersion);
}

/**
 * Age at radius r of a disc with D = d0 + a r^2: ln[(d0 + a R^2) / (d0 + a r^2)] / (4 a). For d0 = 0 it is ln(R/r) / (2 a),
 * without bound at the centre, and its mean 1 / (4 a).
 */
export function pumpedDiscAge(
  r: number,
  disc: { readonly radius: number; readonly d0: number; readonly a: number },
): number {
  const { radius, d0, a } = disc;
  return log((d0 + a * radius * radius) / (d0 + a * r * r)) / (4 * a);
}

/** Age at radius r of a disc with D = d0 + b r: [R - r - (d0/b) ln((d0 + b R) / (d0 + b r))] / (2 b). */
export function linearDiscAge(
  r: number,
  disc: { readonly radius: number; readonly d0: number; readonly b: number },
): number {
  const { radius, d0, b } = disc;
  return (radius - r - (d0 / b) * log((d0 + b * radius) / (d0 + b * r))) / (2 * b);
}

/** Age at radius r of an annulus open at both edges, D constant; it is largest at `stagnationRadius`. */
export function annulusAge(
  r: number,
  annulus: { readonly inner: number; readonly outer: number; readonly dispersion: number },
): number {
  const { inner, outer, dispersion } = annulus;
  const share = log(outer / r) / log(outer / inner);
  return (outer * outer - r * r - (outer * outer - inner * inner) * share) / (4 * dispersion);
}

/** Radius across which nothing passes in an annulus open at both edges: r^2 = (R^2 - Ri^2) / (2 ln(R / Ri)). */
export function stagnationRadius(inner: number, outer: number): number {
  return Math.sqrt((outer * outer - inner * inner) / (2 * log(outer / inner)));
}

/** Outward flow through an annulus, m3/s, with film h (m). */
export interface RadialFlow {
  readonly inner: number;
  readonly outer: number;
  readonly flow: number;
  readonly film: number;
}

/** Age at radius r of slurry that enters at the inner edge and only flows: pi h (r^2 - Ri^2) / Q. */
export function plugAge(r: number, { inner, flow, film }: RadialFlow): number {
  return (PI * film * (r * r - inner * inner)) / flow;
}

/** Fresh share at radius r of slurry that enters at the inner edge and only flows: exp(-k pi (r^2 - Ri^2) / Q), k in m/s. */
export function plugShare(r: number, { inner, flow }: RadialFlow, loss: number): number {
  return exp((-loss * PI * (r * r - inner * inner)) / flow);
}

/**
 * Age at radius r with flow and dispersion, age 0 at both edges: A + B r^P - h r^2 / (2 K (2 - P)), P = Q / (2 pi K), K in
 * m3/s. Not for P = 0 or 2.
 */
export function radialFlowAge(r: number, { inner, outer, flow, film }: RadialFlow, conductivity: number): number {
  const power = flow / (2 * PI * conductivity);
  const c = film / (2 * conductivity * (2 - power));
  const b = (c * (outer * outer - inner * inner)) / (pow(outer, power) - pow(inner, power));
  return b * (pow(r, power) - pow(inner, power)) - c * (r * r - inner * inner);
}

// --- mean flow ---

/** Flow (m3/s) from an inner to an outer circle under a pressure dp, mobility M = h^3 / (12 mu): 2 pi M dp / ln(R / Ri). */
export function annulusFlow(inner: number, outer: number, mobilityTimesPressure: number): number {
  return (2 * PI * mobilityTimesPressure) / log(outer / inner);
}

/**
 * The same between circles whose centres lie `apart`: 2 pi M dp / acosh[(R^2 + Ri^2 - e^2) / (2 R Ri)], by bipolar
 * coordinates (the capacitance of eccentric cylinders; Smythe, Static and Dynamic Electricity, from memory).
 */
export function eccentricFlow(
  circles: { readonly inner: number; readonly outer: number; readonly apart: number },
  mobilityTimesPressure: number,
): number {
  const { inner, outer, apart } = circles;
  const x = (outer * outer + inner * inner - apart * apart) / (2 * outer * inner);
  return (2 * PI * mobilityTimesPressure) / log(x + Math.sqrt(x * x - 1));
}
