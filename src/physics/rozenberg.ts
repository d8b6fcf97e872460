import { PI } from '#src/base/math.ts';

/**
 * Size law of Rozenberg, Kazantsev and co-workers, Ultrasonic Cutting (1964), from memory: q(d) ~ [1 - (d/d_m - 1)^2]^3,
 * 0 <= d <= 2 d_m. A reference for published checks only: the grades have their own laws. The literature prints the
 * normaliser as 1.095; exactly it is 35/32.
 */
export const ROZENBERG_NORMALISER = 35 / 32;

/** Number density of the diameter for mean diameter `mean` (1/m). */
export function rozenbergDensity(d: number, mean: number): number {
  const t = d / mean - 1;
  if (!(t > -1 && t < 1)) return 0;
  const bell = 1 - t * t;
  return (ROZENBERG_NORMALISER / mean) * bell * bell * bell;
}

/** P(D > d), closed. */
export function rozenbergTail(d: number, mean: number): number {
  const t = Math.min(1, Math.max(-1, d / mean - 1));
  const t2 = t * t;
  return 0.5 - ROZENBERG_NORMALISER * t * (1 - t2 + t2 * t2 * (3 / 5 - t2 / 7));
}

/** Mean of D^n for n = 0 to 3: 1, d_m, (10/9) d_m^2, (4/3) d_m^3. Derived. */
export function rozenbergMoment(n: 0 | 1 | 2 | 3, mean: number): number {
  let moment = [1, 1, 10 / 9, 4 / 3][n] as number;
  for (let i = 0; i < n; i++) moment *= mean;
  return moment;
}

/** Grits in one layer of thickness d_m and area S at volume fraction C, counted as in Kainth and co-workers (1979). */
export function oneLayerGrits(concentration: number, area: number, mean: number): number {
  return (6 * concentration * area) / (PI * mean * mean);
}
