/** The k-th smallest value (k from 0); `values` is reordered. Hoare's selection (1961, from memory). */
export function selectSmallest(values: Float64Array, k: number): number {
  let low = 0;
  let high = values.length - 1;
  while (low < high) {
    const pivot = values[(low + high) >> 1];
    let i = low;
    let j = high;
    while (i <= j) {
      while (values[i] < pivot) i++;
      while (values[j] > pivot) j--;
      if (i > j) break;
      const held = values[i];
      values[i++] = values[j];
      values[j--] = held;
    }
    if (k <= j) high = j;
    else if (k >= i) low = i;
    else return values[k];
  }
  return values[k];
}

/** Median; of an even number of values the mean of the middle two. `values` is reordered; none gives NaN. */
export function median(values: Float64Array): number {
  const n = values.length;
  if (n === 0) return Number.NaN;
  const upper = selectSmallest(values, n >> 1);
  if (n % 2 === 1) return upper;
  let lower = values[0];
  for (let i = 1; i < n >> 1; i++) lower = Math.max(lower, values[i]);
  return (lower + upper) / 2;
}

/**
 * Smallest value at or below which a `share` (0 to 1) of the weight lies; steps, no interpolation, so that it is always
 * a value that occurs. Values of zero weight are passed over; no weight at all gives NaN.
 */
export function weightedQuantile(values: Float64Array, weights: Float64Array, share: number): number {
  const weighted = Uint32Array.from(values.keys()).filter((index) => weights[index] > 0);
  const order = weighted.sort((a, b) => values[a] - values[b]);
  let total = 0;
  for (const weight of weights) total += weight;
  let passed = 0;
  let result = Number.NaN;
  for (const index of order) {
    passed += weights[index];
    result = values[index];
    if (passed >= share * total * (1 - 1e-12)) return result;
  }
  return result;
}
