import type { Outline } from '#src/base/outline.ts';
import { type Bore, type FaceGrid, faceGrid } from '../slurry/grid.ts';
import { solveTransport, type TransportSpace, transportSpace } from '../slurry/transport.ts';
import type { SlurryConstants } from './constants.ts';

/**
 * The shape of slurry exchange under a face. With the dispersion D = X U (k_D h + k_P length) the mean age is
 * T(x, y) / (X U) beyond the edge's, T from one balance div(h (k_D h + k_P length) grad T) = -h with T = 0 on every open
 * edge: a property of the outline and the film alone. The pumping length is the distance over which the film's own breathing
 * carries slurry, 2 |grad psi| with laplace psi = -1 and psi = 0 on the edges: r on a disc, |r - r_s^2 / r| on a ring, zero
 * where the flow stagnates. Zones of equal area, ordered by T, stand for the face.
 */
export interface FaceShape {
  readonly grid: FaceGrid;
  /** Area of the face and length of its open edges (m2, m). */
  readonly area: number;
  readonly edge: number;
  /** Films T was solved for (m), rising. */
  readonly films: Float64Array;
  /** Mean T of each zone (m), films x zones, from the edge inward. */
  readonly ages: Float64Array;
  readonly zones: number;
  /** Zone of each cell of the grid; 255 outside the face. */
  readonly zoneOf: Uint8Array;
}

/** Zones of equal area a face is divided into. */
export const FACE_ZONES = 10;
const FILMS = 4;

/** Solves the shape of exchange for an outline, its bores, and films from `thinnest` to `thickest` (m). */
export function faceShape(
  outline: Outline,
  bores: readonly Bore[],
  films: { readonly thinnest: number; readonly thickest: number },
  constants: SlurryConstants,
  cells = 64,
): FaceShape {
  const grid = faceGrid(outline, bores, cells);
  const space = transportSpace(grid);
  const size = grid.nx * grid.ny;
  const length = pumpingLength(grid, space);
  const heights = Float64Array.from(
    { length: FILMS },
    (_, k) => films.thinnest + ((films.thickest - films.thinnest) * k) / (FILMS - 1),
  );
  const solved: Float64Array[] = [];
  const guess = new Float64Array(size);
  for (const film of heights) {
    solveTransport(guess, space, {
      conductivity: length.map((reach) => film * (constants.stirring * film + constants.pumping * reach)),
      source: new Float64Array(size).fill(film),
      edge: new Float64Array(grid.cuts.count),
    });
    solved.push(guess.slice());
  }
  const zoneOf = zonesBy(grid, solved[FILMS >> 1] as Float64Array);
  const ages = new Float64Array(FILMS * FACE_ZONES);
  solved.forEach((age, k) => {
    ages.set(zoneMeans(grid, zoneOf, age), k * FACE_ZONES);
  });
  const area = grid.area.reduce((sum, a) => sum + a, 0);
  const edge = grid.boundaries.reduce((sum, boundary) => sum + boundary.length, 0);
  return { grid, area, edge, films: heights, ages, zones: FACE_ZONES, zoneOf };
}

/** 2 |grad psi| at each cell (m), psi solved once with unit source; central differences, one-sided at the edge. */
function pumpingLength(grid: FaceGrid, space: TransportSpace): Float64Array {
  const { nx, active, pitch, cuts } = grid;
  const size = active.length;
  const psi = new Float64Array(size);
  solveTransport(psi, space, {
    conductivity: new Float64Array(size).fill(1),
    source: new Float64Array(size).fill(1),
    edge: new Float64Array(cuts.count),
  });
  const theta = new Float64Array(4 * size).fill(1);
  for (let n = 0; n < cuts.count; n++)
    theta[4 * (cuts.cell[n] as number) + (cuts.side[n] as number)] = cuts.theta[n] as number;
  const slope = (c: number, side: number, stride: number) => {
    const low = theta[4 * c + side] as number;
    const high = theta[4 * c + side + 1] as number;
    const at = (n: number) => (active[n] === 1 ? (psi[n] as number) : 0);
    return (at(c + stride) - at(c - stride)) / ((low + high) * pitch);
  };
  return Float64Array.from(psi, (_, c) => {
    if (active[c] === 0) return 0;
    const x = slope(c, 0, 1);
    const y = slope(c, 2, nx);
    return 2 * Math.sqrt(x * x + y * y);
  });
}

/** Zones of equal area from the smallest age to the largest. */
function zonesBy(grid: FaceGrid, age: Float64Array): Uint8Array {
  const cells = Int32Array.from(age.keys()).filter((c) => grid.active[c] === 1);
  cells.sort((a, b) => (age[a] as number) - (age[b] as number) || a - b);
  const total = cells.reduce((sum, c) => sum + (grid.area[c] as number), 0);
  const zoneOf = new Uint8Array(age.length).fill(255);
  let passed = 0;
  for (const c of cells) {
    zoneOf[c] = Math.min(FACE_ZONES - 1, Math.floor((FACE_ZONES * (passed + (grid.area[c] as number) / 2)) / total));
    passed += grid.area[c] as number;
  }
  return zoneOf;
}

function zoneMeans(grid: FaceGrid, zoneOf: Uint8Array, age: Float64Array): Float64Array {
  const sums = new Float64Array(FACE_ZONES);
  const areas = new Float64Array(FACE_ZONES);
  zoneOf.forEach((zone, c) => {
    if (zone >= FACE_ZONES) return;
    sums[zone] = (sums[zone] as number) + (age[c] as number) * (grid.area[c] as number);
    areas[zone] = (areas[zone] as number) + (grid.area[c] as number);
  });
  return sums.map((sum, zone) => sum / (areas[zone] as number));
}

/** T of a zone at a film, linear between the films solved and held beyond them (m). */
export function shapeAge(shape: FaceShape, zone: number, film: number): number {
  const { films, ages, zones } = shape;
  const step = (films[1] as number) - (films[0] as number);
  const x = Math.max(0, Math.min(films.length - 1, (film - (films[0] as number)) / step));
  const k = Math.min(films.length - 2, Math.floor(x));
  const low = ages[k * zones + zone] as number;
  return low + (x - k) * ((ages[(k + 1) * zones + zone] as number) - low);
}
