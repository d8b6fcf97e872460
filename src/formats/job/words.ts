import { MICROMETRES_PER_METRE, MILLIMETRES_PER_METRE, PASCALS_PER_MEGAPASCAL } from '#src/base/units.ts';
import { formatNumber } from '../numbers.ts';
import type { Problem } from '../problems.ts';

/** A length as a message has it, in millimetres. */
export const mm = (metres: number) => `${formatNumber(metres * MILLIMETRES_PER_METRE, 4)} mm`;
/** A small length as a message has it, in micrometres. */
export const um = (metres: number) => `${formatNumber(metres * MICROMETRES_PER_METRE, 3)} um`;
/** A pressure as a message has it, in megapascals. */
export const mpa = (pascals: number) => `${formatNumber(pascals / PASCALS_PER_MEGAPASCAL, 3)} MPa`;
/** A share as a message has it, in per cent. */
export const percent = (share: number) => `${formatNumber(100 * share, 3)} %`;

/** A problem from its five parts. */
export function problem(
  severity: Problem['severity'],
  path: string,
  value: unknown,
  allowed: string,
  message: string,
): Problem {
  return { path, value, allowed, message, severity };
}
