import { cos, exp, log, PI } from '#src/base/math.ts';

/**
 * Which input moves which figure most, from one designed sample of independent inputs in [0, 1]^k and the figures it
 * gave; no further evaluations. Two published measures that fail in different places: rank regression needs a monotone
 * figure, the cosine series a smooth one.
 */

/** A sample: inputs in [0, 1]^k, one point after the other, and one output per point. */
export interface SensitivitySample {
  /** rows x k. */
  readonly unit: Float64Array;
  readonly inputs: number;
  /** One per row; NaN rows are left out. */
  readonly outputs: ArrayLike<number>;
}

export interface RankRegression {
  /** Standardised rank regression coefficients, -1 to 1 for independent inputs; the sign is the direction. */
  readonly coefficients: readonly number[];
  /** Share of the ranks' variance the regression explains; below 0.7 the coefficients mislead. */
  readonly explained: number;
}

/** Harmonics of the cosine series, fewer for short samples. */
export const HARMONICS = 8;
/**
 * Share explained by rank regression below which the order follows the first-order indices. Common practice, no
 * source.
 */
export const TRUSTED_REGRESSION = 0.7;

interface Rows {
  readonly columns: readonly Float64Array[];
  readonly outputs: Float64Array;
}

/** Columns of the rows that came out. */
function completeRows({ unit, inputs, outputs }: SensitivitySample): Rows {
  if (!(Number.isInteger(inputs) && inputs >= 1 && unit.length === inputs * outputs.length)) {
    throw new RangeError(
      `a sample of ${inputs} inputs needs that many times its outputs: ${unit.length}, ${outputs.length}`,
    );
  }
  const kept = Array.from(outputs, (v, i) => (Number.isNaN(v) ? -1 : i)).filter((i) => i >= 0);
  if (kept.length < inputs + 2) {
    throw new RangeError(`${kept.length} outputs are too few for ${inputs} inputs`);
  }
  return {
    columns: Array.from({ length: inputs }, (_, d) => Float64Array.from(kept, (i) => unit[i * inputs + d] as number)),
    outputs: Float64Array.from(kept, (i) => outputs[i] as number),
  };
}

/** Ranks from 1, ties sharing their mean rank; infinite values rank like others. */
export function ranksOf(values: ArrayLike<number>): Float64Array {
  const order = Array.from(values, (_, i) => i).sort((a, b) => {
    const x = values[a] as number;
    const y = values[b] as number;
    return x < y ? -1 : x > y ? 1 : a - b;
  });
  const ranks = new Float64Array(values.length);
  for (let i = 0; i < order.length; ) {
    let end = i + 1;
    while (end < order.length && values[order[end] as number] === values[order[i] as number]) end++;
    for (let j = i; j < end; j++) ranks[order[j] as number] = (i + 1 + end) / 2;
    i = end;
  }
  return ranks;
}

/** Values less their mean over their standard deviation; zeros for a constant. */
function standardised(values: Float64Array): Float64Array {
  const n = values.length;
  const mean = values.reduce((sum, v) => sum + v, 0) / n;
  const variance = values.reduce((sum, v) => sum + (v - mean) * (v - mean), 0) / n;
  const noise = 1e-26 * mean * mean;
  return variance > noise ? values.map((v) => (v - mean) / Math.sqrt(variance)) : new Float64Array(n);
}

function meanProduct(a: Float64Array, b: Float64Array): number {
  return a.reduce((sum, v, i) => sum + v * (b[i] as number), 0) / a.length;
}

/** Solves the symmetric system in place by Gauss's elimination, largest pivot first. Throws when it is singular. */
function solve(matrix: number[][], right: number[]): number[] {
  const n = right.length;
  const at = (i: number, j: number) => (matrix[i] as number[])[j] as number;
  for (let p = 0; p < n; p++) {
    let best = p;
    for (let i = p + 1; i < n; i++) if (Math.abs(at(i, p)) > Math.abs(at(best, p))) best = i;
    if (Math.abs(at(best, p)) < 1e-10)
      throw new RangeError('the inputs of the sample are not independent of each other');
    [matrix[p], matrix[best]] = [matrix[best] as number[], matrix[p] as number[]];
    [right[p], right[best]] = [right[best] as number, right[p] as number];
    for (let i = p + 1; i < n; i++) {
      const factor = at(i, p) / at(p, p);
      for (let j = p; j < n; j++) (matrix[i] as number[])[j] = at(i, j) - factor * at(p, j);
      right[i] = (right[i] as number) - factor * (right[p] as number);
    }
  }
  for (let p = n - 1; p >= 0; p--) {
    let rest = right[p] as number;
    for (let j = p + 1; j < n; j++) rest -= at(p, j) * (right[j] as number);
    right[p] = rest / at(p, p);
  }
  return right;
}

/**
 * Standardised rank regression coefficients, Iman and Conover, Technometrics 21 (1979) 499, from memory: ranks of
 * inputs and output, least squares, each in units of its standard deviation. A constant input or output has
 * coefficient zero. Infinite outputs keep their rank. Throws a RangeError for too few rows or inputs that repeat each
 * other.
 */
export function rankRegression(sample: SensitivitySample): RankRegression {
  const { columns, outputs } = completeRows(sample);
  const y = standardised(ranksOf(outputs));
  const x = columns.map((column) => standardised(ranksOf(column)));
  const moving = x.map((_, d) => d).filter((d) => (x[d] as Float64Array).some((v) => v !== 0));
  const matrix = moving.map((a) => moving.map((b) => meanProduct(x[a] as Float64Array, x[b] as Float64Array)));
  const right = moving.map((d) => meanProduct(x[d] as Float64Array, y));
  const solution = solve(matrix, [...right]);
  const coefficients = x.map(() => 0);
  moving.forEach((d, i) => {
    coefficients[d] = solution[i] as number;
  });
  return { coefficients, explained: right.reduce((sum, r, i) => sum + r * (solution[i] as number), 0) };
}

/**
 * First-order indices of Sobol, the share of the variance that one input alone carries, by the cosine series of
 * Plischke (Environ. Model. Softw. 35 (2012) 188, from memory): the output is projected on cos(j pi u) of each input,
 * j to 8, and the variance those carry is taken, less what chance alone would give (j / n, as Tissot and Prieur 2012
 * correct the like estimator, from memory). Small indices may come out slightly negative. Where outputs are infinite
 * the ranks are used.
 */
export function firstOrderIndices(sample: SensitivitySample): number[] {
  const { columns, outputs } = completeRows(sample);
  const n = outputs.length;
  const y = standardised(outputs.every(Number.isFinite) ? outputs : ranksOf(outputs));
  if (y.every((v) => v === 0)) return columns.map(() => 0);
  const harmonics = Math.max(1, Math.min(HARMONICS, Math.floor(n / 8)));
  const chance = harmonics / n;
  return columns.map((u) => {
    let carried = 0;
    for (let j = 1; j <= harmonics; j++) {
      const wave = u.map((v) => Math.SQRT2 * cos(j * PI * v));
      const coefficient = meanProduct(wave, y);
      carried += coefficient * coefficient;
    }
    return (carried - chance) / (1 - chance);
  });
}

/** What one input does to one figure. */
export interface Influence {
  readonly input: string;
  /** Rank regression coefficient: strength and direction. */
  readonly coefficient: number;
  /** Share of the figure's variance carried by this input alone. */
  readonly firstOrder: number;
}

/** Influences on one figure, strongest first. */
export interface FigureSensitivity {
  readonly figure: string;
  readonly influences: readonly Influence[];
  /** See `RankRegression.explained`. */
  readonly explained: number;
  /** What the order follows: coefficients where the regression is to be trusted, first-order indices otherwise. */
  readonly orderedBy: 'coefficient' | 'first-order';
}

/** Orders the inputs of a sample by what they do to each figure. */
export function sensitivities(
  sample: { readonly unit: Float64Array; readonly inputs: readonly string[] },
  figures: Readonly<Record<string, ArrayLike<number>>>,
): FigureSensitivity[] {
  return Object.entries(figures).map(([figure, outputs]) => {
    const one = { unit: sample.unit, inputs: sample.inputs.length, outputs };
    const { coefficients, explained } = rankRegression(one);
    const indices = firstOrderIndices(one);
    const orderedBy = explained >= TRUSTED_REGRESSION ? 'coefficient' : 'first-order';
    const weight = ({ coefficient, firstOrder }: Influence) =>
      orderedBy === 'coefficient' ? Math.abs(coefficient) : firstOrder;
    const influences = sample.inputs
      .map((input, d) => ({ input, coefficient: coefficients[d] as number, firstOrder: indices[d] as number }))
      .sort((a, b) => weight(b) - weight(a));
    return { figure, influences, explained, orderedBy };
  });
}

/** Step of an input for its elasticity, on its logarithm. */
export const ELASTICITY_STEP = 0.01;

/**
 * Elasticities d ln f / d ln x, one input at a time, by the central difference on the logarithms, exact for power laws
 * and of second order in the step otherwise. `f` takes the inputs and gives any number of figures; `steps` are those
 * on ln x, one for all or one each. Row d, column j: what input d does to figure j; NaN where input or figure is not
 * positive.
 */
export function elasticities(
  f: (x: readonly number[]) => readonly number[],
  x: readonly number[],
  steps: number | readonly number[] = ELASTICITY_STEP,
): number[][] {
  return x.map((value, d) => {
    const step = typeof steps === 'number' ? steps : (steps[d] ?? ELASTICITY_STEP);
    if (!(step > 0)) throw new RangeError(`the step of an elasticity must be positive: ${step}`);
    const factor = exp(step);
    const up = f(x.with(d, value * factor));
    const down = f(x.with(d, value / factor));
    return up.map((high, j) => {
      const positive = value > 0 && high > 0 && (down[j] as number) > 0;
      return positive ? log(high / (down[j] as number)) / (2 * step) : Number.NaN;
    });
  });
}
