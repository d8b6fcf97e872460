import { exp } from '#src/base/math.ts';

/** Modified Bessel functions of orders 0 and 1 of a real argument, to about 1e-14 relative. */

/** I_n(x), x up to about 700: sum over k of (x/2)^(2k+n) / (k! (k+n)!). All terms are positive, so nothing cancels. */
export function besselI(n: 0 | 1, x: number): number {
  const quarter = (x * x) / 4;
  let term = n === 0 ? 1 : x / 2;
  let sum = term;
  for (let k = 1; Math.abs(term) > 1e-17 * Math.abs(sum); k++) {
    term *= quarter / (k * (k + n));
    sum += term;
  }
  return sum;
}

/**
 * K_n(x), x > 0: the integral of exp(-x cosh t) cosh(n t) over t from 0 (Abramowitz and Stegun 9.6.24), by the trapezium
 * rule. The integrand is even and smooth for |Im t| < pi / 2 and, where x is large, a bell of width 1 / sqrt(x); a step d
 * leaves an error of about exp(-pi^2 / d) and of exp(-2 pi^2 / (x d^2)).
 */
export function besselK(n: 0 | 1, x: number): number {
  if (!(x > 0)) return Infinity;
  const step = Math.min(0.2, 0.7 / Math.sqrt(x));
  let sum = exp(-x) / 2;
  for (let k = 1; ; k++) {
    const e = exp(k * step);
    const cosh = (e + 1 / e) / 2;
    const term = exp(-x * cosh) * (n === 0 ? 1 : cosh);
    sum += term;
    if (x * cosh > 750) return sum * step;
  }
}
