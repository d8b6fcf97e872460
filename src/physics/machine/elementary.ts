import { exp, log, sinCos } from '#src/base/math.ts';

/**
 * Elementary functions the horns need, written from those of the base layer, so that they too give the same bits
 * anywhere.
 */

/** Tangent of an angle in radians. */
export function tan(angle: number): number {
  const { sin, cos } = sinCos(angle);
  return sin / cos;
}

/** Hyperbolic cosine. */
export function cosh(x: number): number {
  const grown = exp(Math.abs(x));
  return (grown + 1 / grown) / 2;
}

/** Hyperbolic sine; by its series inside |x| < 0.5, where the difference of exponentials cancels. */
export function sinh(x: number): number {
  if (Math.abs(x) < 0.5) return x * sineRatio(-x * x);
  const grown = exp(Math.abs(x));
  return (Math.sign(x) * (grown - 1 / grown)) / 2;
}

/** Inverse hyperbolic cosine, x >= 1; NaN below. */
export function acosh(x: number): number {
  return log(x + Math.sqrt((x - 1) * (x + 1)));
}

/** sin(y) / y as a power series in q = y^2, negative q giving sinh; |q| <= 0.25. */
function sineRatio(q: number): number {
  let sum = 1;
  for (let n = 15; n >= 3; n -= 2) sum = 1 - (q * sum) / (n * (n - 1));
  return sum;
}

/**
 * The two solutions of w'' = -q w over a unit length: even (cos, or cosh where q < 0) and odd (sin(y)/y with y^2 = q,
 * or sinh(y)/y). Both are smooth through q = 0.
 */
export function oscillation(q: number): { readonly even: number; readonly odd: number } {
  const y = Math.sqrt(Math.abs(q));
  if (q < 0) return { even: cosh(y), odd: y < 0.5 ? sineRatio(q) : sinh(y) / y };
  const { sin, cos } = sinCos(y);
  return { even: cos, odd: y < 0.5 ? sineRatio(q) : sin / y };
}

/** Where `f` falls through zero between `low` (f > 0 there) and `high` (f < 0), to the last bits, by bisection. */
export function fallsThroughZero(f: (x: number) => number, low: number, high: number): number {
  let a = low;
  let b = high;
  for (let i = 0; i < 100; i++) {
    const middle = 0.5 * (a + b);
    if (middle <= a || middle >= b) break;
    if (f(middle) > 0) a = middle;
    else b = middle;
  }
  return 0.5 * (a + b);
}

/**
 * Largest value of a single-peaked `f` on [0, 1], by a scan and then golden section; good to about 1e-14 of the value.
 */
export function peakOnUnit(f: (z: number) => number): number {
  const steps = 100;
  let best = 0;
  for (let i = 1; i <= steps; i++) if (f(i / steps) > f(best / steps)) best = i;
  let a = Math.max(0, best - 1) / steps;
  let b = Math.min(steps, best + 1) / steps;
  const golden = (Math.sqrt(5) - 1) / 2;
  for (let i = 0; i < 60; i++) {
    const reach = golden * (b - a);
    if (f(b - reach) > f(a + reach)) b = a + reach;
    else a = b - reach;
  }
  return f(0.5 * (a + b));
}
