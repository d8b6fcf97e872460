/** Cells of one axis of a grid: `n` of them, `pitch` wide, the first one's centre at `centre` (m). */
export interface Axis {
  readonly n: number;
  readonly pitch: number;
  readonly centre: number;
}

/** For each cell of one axis, the cells of another that lie under it and the share of it each of them covers. */
export interface Overlaps {
  /** First cell of the other axis; -1 where none lies under this one. */
  readonly first: Int32Array;
  /** Number of cells under each, and their shares, `most` to a cell. */
  readonly count: Int32Array;
  readonly share: Float64Array;
  readonly most: number;
}

/** Shares below this are rounding of cell borders that coincide. */
const ROUNDING = 1e-6;

/**
 * Which cells of `from` lie under each cell of `to`. Sums over the shares keep what a field holds, whatever the two
 * pitches; what lies beyond `from` has no share.
 */
export function overlapsOf(to: Axis, from: Axis): Overlaps {
  const most = Math.ceil(to.pitch / from.pitch) + 1;
  const first = new Int32Array(to.n).fill(-1);
  const count = new Int32Array(to.n);
  const share = new Float64Array(to.n * most);
  const edge = from.centre - from.pitch / 2;
  for (let k = 0; k < to.n; k++) {
    const low = (to.centre + (k - 0.5) * to.pitch - edge) / from.pitch;
    const high = (to.centre + (k + 0.5) * to.pitch - edge) / from.pitch;
    const last = Math.min(from.n - 1, Math.ceil(high - ROUNDING) - 1);
    for (let cell = Math.max(0, Math.floor(low + ROUNDING)); cell <= last; cell++) {
      const covered = (Math.min(high, cell + 1) - Math.max(low, cell)) / (high - low);
      if (covered < ROUNDING) continue;
      if (count[k] === 0) first[k] = cell;
      const n = count[k] as number;
      share[k * most + n] = covered > 1 - ROUNDING ? 1 : covered;
      count[k] = n + 1;
    }
  }
  return { first, count, share, most };
}

/** A plane field of values resampled to other axes, each cell the mean over what lies under it; 0 beyond the field. */
export function resamplePlane(
  values: ArrayLike<number>,
  from: { readonly x: Axis; readonly y: Axis },
  to: { readonly x: Axis; readonly y: Axis },
): Float64Array {
  const across = overlapsOf(to.x, from.x);
  const down = overlapsOf(to.y, from.y);
  const out = new Float64Array(to.x.n * to.y.n);
  for (let j = 0; j < to.y.n; j++) {
    for (let b = 0; b < (down.count[j] as number); b++) {
      const row = ((down.first[j] as number) + b) * from.x.n;
      const weight = down.share[j * down.most + b] as number;
      for (let i = 0; i < to.x.n; i++) {
        let sum = 0;
        for (let a = 0; a < (across.count[i] as number); a++) {
          sum +=
            (across.share[i * across.most + a] as number) * (values[row + (across.first[i] as number) + a] as number);
        }
        out[j * to.x.n + i] = (out[j * to.x.n + i] as number) + weight * sum;
      }
    }
  }
  return out;
}
