/** Share of the plain step taken where the secant is of no use. */
const CAUTIOUS = 0.8;
const MOST_ROUNDS = 80;
const RELATIVE = 1e-4;
const ABSOLUTE = 1e-9;

/**
 * Lowest root of x = g(x) at or above `start`, for a rising g: approached from below and not passed, so that of several
 * roots the first is found. Secants where the excess g(x) - x falls, which stay below while g bends upward; a plain step
 * back from the last good point where one has gone too far.
 * @param g takes x, returns g(x)
 * @returns the last x at which g was called, within 1e-4 of its root, or after 80 rounds
 */
export function lowestRoot(start: number, g: (x: number) => number): number {
  let x = start;
  let excess = g(x) - x;
  let before = Number.NaN;
  let excessBefore = Number.NaN;
  for (let i = 0; i < MOST_ROUNDS; i++) {
    if (!(excess > RELATIVE * (x + excess) + ABSOLUTE)) return x;
    const slope = (excess - excessBefore) / (x - before);
    const bold = slope < 0 && slope > -1 ? x - excess / slope : Number.NaN;
    const next = bold > x && bold < x + 8 * excess ? bold : x + CAUTIOUS * excess;
    let after = g(next) - next;
    let here = next;
    if (after < -(RELATIVE * next + ABSOLUTE) && next === bold) {
      here = x + CAUTIOUS * excess;
      after = g(here) - here;
    }
    before = x;
    excessBefore = excess;
    x = here;
    excess = after;
  }
  return x;
}
