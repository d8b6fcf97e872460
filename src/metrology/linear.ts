/**
 * Solves a small dense system by elimination with partial pivoting. `matrix` holds n rows of n, row by row; both arrays
 * are overwritten and the solution is returned in `rhs`. A singular system gives `undefined`: a pivot below 1e-13 of the
 * largest entry of the matrix counts as zero, so scale the unknowns first.
 */
export function solveLinear(matrix: Float64Array, rhs: Float64Array): Float64Array | undefined {
  const n = rhs.length;
  let largest = 0;
  for (const entry of matrix) largest = Math.max(largest, Math.abs(entry));
  for (let k = 0; k < n; k++) {
    const pivot = pivotRow(matrix, n, k);
    if (!(Math.abs(matrix[pivot * n + k]) > 1e-13 * largest)) return undefined;
    if (pivot !== k) swapRows(matrix, rhs, k, pivot);
    for (let row = k + 1; row < n; row++) {
      const factor = matrix[row * n + k] / matrix[k * n + k];
      for (let c = k; c < n; c++) matrix[row * n + c] -= factor * matrix[k * n + c];
      rhs[row] -= factor * rhs[k];
    }
  }
  for (let k = n - 1; k >= 0; k--) {
    for (let c = k + 1; c < n; c++) rhs[k] -= matrix[k * n + c] * rhs[c];
    rhs[k] /= matrix[k * n + k];
  }
  return rhs;
}

function pivotRow(matrix: Float64Array, n: number, k: number): number {
  let best = k;
  for (let row = k + 1; row < n; row++) {
    if (Math.abs(matrix[row * n + k]) > Math.abs(matrix[best * n + k])) best = row;
  }
  return best;
}

function swapRows(matrix: Float64Array, rhs: Float64Array, a: number, b: number): void {
  const n = rhs.length;
  for (let c = 0; c < n; c++) {
    const held = matrix[a * n + c];
    matrix[a * n + c] = matrix[b * n + c];
    matrix[b * n + c] = held;
  }
  const held = rhs[a];
  rhs[a] = rhs[b];
  rhs[b] = held;
}

/** Straight line y = `level` + `slope` (x - `at`), `at` being the mean of x. */
export interface FittedLine {
  readonly level: number;
  readonly slope: number;
  readonly at: number;
}

/** Least-squares line of y on x. @throws RangeError when fewer than two different x are given. */
export function fitLine(x: ArrayLike<number>, y: ArrayLike<number>): FittedLine {
  const n = x.length;
  let at = 0;
  let level = 0;
  for (let i = 0; i < n; i++) {
    at += x[i] / n;
    level += y[i] / n;
  }
  let sxx = 0;
  let sxy = 0;
  for (let i = 0; i < n; i++) {
    sxx += (x[i] - at) ** 2;
    sxy += (x[i] - at) * (y[i] - level);
  }
  if (!(sxx > 0)) throw new RangeError('a line needs points at two different places at least');
  return { level, slope: sxy / sxx, at };
}

/** Heights less their least-squares line over the index; a constant array gives exact zeros. */
export function withoutLine(z: Float64Array): Float64Array {
  const n = z.length;
  const middle = (n - 1) / 2;
  let sum = 0;
  let moment = 0;
  for (let i = 0; i < n; i++) {
    sum += z[i] - z[0];
    moment += (i - middle) * (z[i] - z[0]);
  }
  const slope = n > 1 ? moment / ((n * (n * n - 1)) / 12) : 0;
  return z.map((height, i) => height - z[0] - sum / n - slope * (i - middle));
}
