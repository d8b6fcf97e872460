import { normalQuantile } from '#src/base/math.ts';

/** Uniform numbers in (0, 1) from a linear congruence (Numerical Recipes constants, from memory): fixed test input. */
export function uniformSource(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
    return (state + 0.5) / 2 ** 32;
  };
}

export function normalSource(seed: number): () => number {
  const uniform = uniformSource(seed);
  return () => normalQuantile(uniform());
}

/** n values f((i + 1/2)/n): a period of a profile sampled at the middle of its cells, or the quantiles of a law. */
export function sampled(n: number, f: (t: number) => number): Float64Array {
  return new Float64Array(n).map((_, i) => f((i + 0.5) / n));
}
