/** Round steps of the series 1, 2, 5, 10, ... */

/** 10^n for a whole n, exact where a double is. */
function powerOfTen(n: number): number {
  return Number(`1e${n}`);
}

/** The decade of a positive number: the n with 10^n <= value < 10^(n+1). */
export function decade(value: number): number {
  return Number(value.toExponential(12).split('e')[1]);
}

/** Largest of ..., 0.1, 0.2, 0.5, 1, 2, 5, ... not above `limit`. Throws RangeError unless `limit` is positive and finite. */
export function oneTwoFive(limit: number): number {
  if (!(limit > 0) || !Number.isFinite(limit))
    throw new RangeError(`a round length needs a positive limit, got ${limit}`);
  const n = decade(limit);
  const lead = Number(limit.toExponential(12).split('e')[0]);
  const step = lead >= 5 ? 5 : lead >= 2 ? 2 : 1;
  return n < 0 ? step / powerOfTen(-n) : step * powerOfTen(n);
}

export interface Ticks {
  readonly step: number;
  /** Decimals that write every tick exactly. */
  readonly decimals: number;
  readonly values: readonly number[];
}

/** Ticks on multiples of a 1-2-5 step inside [low, high], at most `most` intervals. Throws RangeError on an empty range. */
export function ticks(low: number, high: number, most: number): Ticks {
  if (!(high > low)) throw new RangeError(`an axis needs high above low, got ${low} to ${high}`);
  const least = (high - low) / most;
  let step = oneTwoFive(least);
  if (step < least * (1 - 1e-9)) step = oneTwoFive(step * 2.5 + Number.EPSILON);
  const decimals = Math.max(0, -decade(step));
  const first = Math.ceil(low / step - 1e-9);
  const last = Math.floor(high / step + 1e-9);
  const values: number[] = [];
  for (let n = first; n <= last; n++) values.push(Number((n * step).toFixed(decimals)));
  return { step, decimals, values };
}
