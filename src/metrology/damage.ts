/** Counts of hits by crack depth: bin k holds depths from edges[k] to edges[k + 1] (m); one more edge than counts. */
export interface Histogram {
  readonly edges: Float64Array;
  readonly counts: Float64Array | Uint32Array;
}

function check({ edges, counts }: Histogram): number {
  if (edges.length !== counts.length + 1)
    throw new RangeError(`${counts.length} bins need ${counts.length + 1} edges, not ${edges.length}`);
  const rising = edges.every((edge, k) => Number.isFinite(edge) && (k === 0 || edge > edges[k - 1]));
  if (!rising) throw new RangeError('the edges of a histogram must be finite and rise');
  let total = 0;
  for (const count of counts) {
    if (!(count >= 0)) throw new RangeError(`a bin holds ${count} hits`);
    total += count;
  }
  return total;
}

/**
 * Depth that a share (0 to 1) of the hits does not exceed, counts spread evenly over their bin. Share 0 and 1 give the
 * ends of the filled bins. NaN without a hit.
 * @throws RangeError for a share outside 0 to 1 or a histogram that is none.
 */
export function histogramPercentile(histogram: Histogram, share: number): number {
  if (!(share >= 0 && share <= 1)) throw new RangeError(`a share lies between 0 and 1, not at ${share}`);
  const total = check(histogram);
  const { edges, counts } = histogram;
  let passed = 0;
  for (let k = 0; k < counts.length; k++) {
    if (counts[k] === 0) continue;
    const last = passed + counts[k] >= total;
    if (passed + counts[k] < share * total && !last) {
      passed += counts[k];
      continue;
    }
    const inside = Math.min(1, (share * total - passed) / counts[k]);
    return edges[k] + inside * (edges[k + 1] - edges[k]);
  }
  return Number.NaN;
}

export interface DamageDepth {
  /** Depth that 99 % of the hits do not exceed (m). */
  readonly p99: number;
  /** Largest depth (m): as recorded, or the upper edge of the last filled bin. */
  readonly largest: number;
  readonly hits: number;
}

/** Damage depth of a floor or a wall; `largest` (m) where the deepest hit was recorded by itself. */
export function damageDepth(histogram: Histogram, largest?: number): DamageDepth {
  const hits = check(histogram);
  const top = histogramPercentile(histogram, 1);
  const deepest = largest ?? top;
  return { p99: Math.min(histogramPercentile(histogram, 0.99), deepest), largest: deepest, hits };
}
