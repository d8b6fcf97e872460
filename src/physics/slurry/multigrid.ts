import type { Level } from './stencil.ts';

/**
 * One multigrid V-cycle for the five-point operators of `stencil.ts`: red-black Gauss-Seidel with extra sweeps next to
 * the boundary, residuals added over 2 x 2 cells, corrections brought back by bilinear interpolation. Used to
 * precondition, so it need not be symmetric.
 */

/** Sweeps along the boundary before and after a coarse correction. */
const BAND_SWEEPS = 2;

/** Gauss-Seidel over the cells of row j whose i + j is even (colour 0) or odd (colour 1). */
function relaxRow(level: Level, j: number, colour: number): void {
  const { nx, west, east, south, north, inverse, u, b } = level;
  const end = j * nx + level.high[j];
  for (let c = j * nx + level.low[j] + ((level.low[j] + j + colour) & 1); c < end; c += 2) {
    u[c] = (b[c] + west[c] * u[c - 1] + east[c] * u[c + 1] + south[c] * u[c - nx] + north[c] * u[c + nx]) * inverse[c];
  }
}

/** One sweep over both colours, `first` first; the second follows one row behind, while the row is at hand. */
function relax(level: Level, first: number): void {
  const last = level.ny - 2;
  for (let j = 1; j <= last; j++) {
    relaxRow(level, j, first);
    if (j > 1) relaxRow(level, j - 1, 1 - first);
  }
  relaxRow(level, last, 1 - first);
}

/** The first sweep on a zero guess, colour 0 first: there the neighbours add nothing. */
function start(level: Level): void {
  const { nx, ny, low, high, inverse, u, b } = level;
  for (let j = 1; j < ny - 1; j++) {
    const end = j * nx + high[j];
    let c = j * nx + low[j];
    u.fill(0, c, end);
    c += (low[j] + j) & 1;
    for (; c < end; c += 2) u[c] = b[c] * inverse[c];
    if (j > 1) relaxRow(level, j - 1, 1);
  }
  relaxRow(level, ny - 2, 1);
}

/** Gauss-Seidel over the cells next to the boundary, where the coarse correction fits least. */
function relaxBand({ nx, band, west, east, south, north, inverse, u, b }: Level): void {
  for (let k = 0; k < band.length; k++) {
    const c = band[k];
    u[c] = (b[c] + west[c] * u[c - 1] + east[c] * u[c + 1] + south[c] * u[c - nx] + north[c] * u[c + nx]) * inverse[c];
  }
}

/** Adds the residual into the coarse right-hand side. */
function restrict(coarse: Level, fine: Level): void {
  const { nx, ny, low, high, west, east, south, north, diagonal, u, b } = fine;
  coarse.b.fill(0);
  for (let j = 1; j < ny - 1; j++) {
    const row = coarse.nx * ((j + 1) >> 1);
    for (let i = low[j]; i < high[j]; i++) {
      const c = i + nx * j;
      coarse.b[((i + 1) >> 1) + row] +=
        b[c] +
        west[c] * u[c - 1] +
        east[c] * u[c + 1] +
        south[c] * u[c - nx] +
        north[c] * u[c + nx] -
        diagonal[c] * u[c];
    }
  }
}

/** Adds the coarse correction, bilinear between four coarse centres; it is zero in cells outside the face. */
function prolong(fine: Level, coarse: Level): void {
  const { nx, ny, low, high, active, u } = fine;
  const v = coarse.u;
  for (let j = 1; j < ny - 1; j++) {
    const row = coarse.nx * ((j + 1) >> 1);
    const up = (j & 1) === 0 ? coarse.nx : -coarse.nx;
    for (let i = low[j]; i < high[j]; i++) {
      const c = i + nx * j;
      const k = ((i + 1) >> 1) + row;
      const side = k + ((i & 1) === 0 ? 1 : -1);
      u[c] += active[c] * (0.5625 * v[k] + 0.1875 * (v[side] + v[k + up]) + 0.0625 * v[side + up]);
    }
  }
}

/** One V-cycle from level `n` down, on a zero guess: `levels[n].u` from `levels[n].b`. */
export function cycle(levels: readonly Level[], n = 0): void {
  const level = levels[n];
  start(level);
  if (n === levels.length - 1) {
    for (let k = 0; k < 4 * (level.nx + level.ny); k++) relax(level, k & 1);
    return;
  }
  for (let k = 0; k < BAND_SWEEPS; k++) relaxBand(level);
  restrict(levels[n + 1], level);
  cycle(levels, n + 1);
  prolong(level, levels[n + 1]);
  for (let k = 0; k < BAND_SWEEPS; k++) relaxBand(level);
  relax(level, 1);
}

/** Gauss-Seidel over one row, eastward or westward. */
function sweepRow(level: Level, j: number, eastward: boolean): void {
  const { nx, west, east, south, north, inverse, u, b } = level;
  const first = j * nx + level.low[j];
  const last = j * nx + level.high[j] - 1;
  const step = eastward ? 1 : -1;
  for (let c = eastward ? first : last; c >= first && c <= last; c += step) {
    u[c] = (b[c] + west[c] * u[c - 1] + east[c] * u[c + 1] + south[c] * u[c - nx] + north[c] * u[c + nx]) * inverse[c];
  }
}

/**
 * Gauss-Seidel over all cells from each of the four corners: whatever way slurry flows, one of them goes with it, so that
 * flow without dispersion is solved in one round wherever it keeps to a quadrant.
 */
export function sweepFourWays(level: Level): void {
  const { ny } = level;
  for (const eastward of [true, false]) {
    for (let j = 1; j < ny - 1; j++) sweepRow(level, j, eastward);
    for (let j = ny - 2; j > 0; j--) sweepRow(level, j, eastward);
  }
}

/** out = b - A u over the active cells of a level; inactive cells are left alone. */
export function residual(out: Float64Array, level: Level, u: Float64Array, b: Float64Array): void {
  apply(out, level, u);
  for (let c = 0; c < out.length; c++) out[c] = b[c] - out[c];
}

/** out = A u over the active cells of a level. */
export function apply(out: Float64Array, level: Level, u: Float64Array): void {
  const { nx, ny, low, high, west, east, south, north, diagonal } = level;
  for (let j = 1; j < ny - 1; j++) {
    const end = j * nx + high[j];
    for (let c = j * nx + low[j]; c < end; c++) {
      out[c] =
        diagonal[c] * u[c] - west[c] * u[c - 1] - east[c] * u[c + 1] - south[c] * u[c - nx] - north[c] * u[c + nx];
    }
  }
}
