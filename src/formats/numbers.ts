/** A value rounded to a number of significant digits; the nearest double to that decimal, so it prints short. */
export function roundSignificant(value: number, digits: number): number {
  return Number.isFinite(value) && value !== 0 ? Number(value.toPrecision(digits)) : value;
}

/**
 * A number as files and messages have it: rounded to `digits` significant digits, then the shortest decimal that reads
 * back as the same double. A point for decimals, whatever the place; -0 is 0.
 */
export function formatNumber(value: number, digits: number): string {
  return String(roundSignificant(value, digits) + 0);
}
