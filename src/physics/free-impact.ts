import { PI, pow } from '#src/base/math.ts';
import type { Conditions } from './records.ts';

/** What a grit thrown by the tool does to the work. */
export interface FreeImpact {
  /** Kinetic energy (J). */
  readonly energy: number;
  /** Largest load (N). */
  readonly load: number;
  /** Volume of the dent (m3). */
  readonly dent: number;
}

/** Peak speed of the tool face, 2 pi f A (m/s). */
export function peakSpeed({ amplitude, frequency }: Conditions): number {
  return 2 * PI * frequency * amplitude;
}

/**
 * Free impact of a grit of diameter d. Energy (pi/12) rho d^3 v^2 at the peak speed of the tool: a grit leaves the tool
 * where the tool starts to slow down, which is at its peak speed, so the cycle mean (half of it) would be too small and
 * the peak is an upper bound since drag takes part of it. Load (3U)^(2/3) (k H)^(1/3), quasi-static indentation by a
 * Vickers-like grain with P = k H h^2 and U = P h / 3; dent U / H. Derived.
 */
export function freeImpact(conditions: Conditions, d: number): FreeImpact {
  const { abrasive, work, constants } = conditions;
  const speed = peakSpeed(conditions);
  const energy = d > 0 ? (PI / 12) * abrasive.density * d * d * d * speed * speed : 0;
  const load = energy > 0 ? pow(9 * energy * energy * constants.freeImpactStiffness * work.hardness, 1 / 3) : 0;
  return { energy, load, dent: energy / work.hardness };
}
