import type { Outline } from '#src/base/outline.ts';
import { type Bore, type FaceGrid, faceGrid } from '../slurry/grid.ts';
import { type SolveOptions, solveTransport, type TransportSpace, transportSpace } from '../slurry/transport.ts';
import type { SlurryConstants } from './constants.ts';
import { type Feed, feedTable, type Supply } from './feed.ts';

/**
 * The shape of slurry exchange under a face. With the dispersion D = X U (k_D h + k_P length) the mean age is
 * T(x, y) / (X U) beyond the edge's, T from one balance div(h (k_D h + k_P length) grad T) = -h with T = 0 on every open
 * edge: a property of the outline and the film alone. The pumping length is the distance over which the film's own breathing
 * carries slurry, 2 |grad psi| with laplace psi = -1 and psi = 0 on the edges: r on a disc, |r - r_s^2 / r| on a ring, zero
 * where the flow stagnates. Zones of equal area, ordered by age, stand for the face. A face that is pumped or drawn through
 * has a table of what the flow does to T beside it (`Feed`).
 */
export interface FaceShape {
  readonly grid: FaceGrid;
  /** Area of the face and length of its open edges (m2, m). */
  readonly area: number;
  readonly edge: number;
  /** Films T was solved for (m), rising. */
  readonly films: Float64Array;
  /** Mean T of each zone without flow (m), films x zones, from the freshest on. */
  readonly ages: Float64Array;
  readonly zones: number;
  /** Zone of each cell of the grid; 255 outside the face. */
  readonly zoneOf: Uint8Array;
  /** Flow through the face; absent where the slurry is left to the pumping of the tool. */
  readonly feed?: Feed;
}

/** Zones of equal area a face is divided into. */
export const FACE_ZONES = 10;
const FILMS = 2;
/** Closes the balance to 1e-4 of what passes: a tenth of what the grid leaves open. */
const ZONE_MEANS: SolveOptions = { tolerance: 1e-4, mostIterations: 200 };

/** Films a face is worked out for (m). */
export interface FilmSpan {
  readonly thinnest: number;
  readonly thickest: number;
}

/** Solves the shape of exchange for an outline, its bores, and films from `thinnest` to `thickest` (m). */
export function faceShape(
  outline: Outline,
  bores: readonly Bore[],
  films: FilmSpan,
  constants: SlurryConstants,
  options: number | { readonly cells?: number; readonly supply?: Supply } = {},
): FaceShape {
  const { cells = 48, supply } = typeof options === 'number' ? { cells: options } : options;
  const grid = faceGrid(outline, bores, cells);
  const space = transportSpace(grid);
  const length = pumpingLength(grid, space);
  const heights = Float64Array.from(
    { length: FILMS },
    (_, k) => films.thinnest + ((films.thickest - films.thinnest) * k) / (FILMS - 1),
  );
  const dispersion = (film: number) => length.map((reach) => constants.stirring * film + constants.pumping * reach);
  const source = new Float64Array(length.length).fill(1);
  const edges = new Float64Array(grid.cuts.count);
  const guess = new Float64Array(length.length);
  const solved = Array.from(heights, (film) => {
    solveTransport(guess, space, { conductivity: dispersion(film), source, edge: edges }, ZONE_MEANS);
    return guess.slice();
  });
  const middle = guess.map((_, c) => solved.reduce((sum, field) => sum + (field[c] as number), 0) / FILMS);
  const film = (films.thinnest + films.thickest) / 2;
  const through = supply ? feedTable(space, { dispersion: dispersion(film), guess: middle, supply }) : undefined;
  const zoneOf = zonesBy(grid, through?.order ?? middle);
  const ages = new Float64Array(FILMS * FACE_ZONES);
  const means = (field: Float64Array) => zoneMeans(grid, zoneOf, field);
  solved.forEach((age, k) => {
    ages.set(means(age), k * FACE_ZONES);
  });
  const area = grid.area.reduce((sum, a) => sum + a, 0);
  const edge = grid.boundaries.reduce((sum, boundary) => sum + boundary.length, 0);
  const shape = { grid, area, edge, films: heights, ages, zones: FACE_ZONES, zoneOf };
  return through ? { ...shape, feed: through.table(means) } : shape;
}

/** 2 |grad psi| at each cell (m), psi solved once with unit source; central differences, one-sided at the edge. */
function pumpingLength(grid: FaceGrid, space: TransportSpace): Float64Array {
  const { nx, active, pitch, cuts } = grid;
  const size = active.length;
  const psi = new Float64Array(size);
  solveTransport(
    psi,
    space,
    {
      conductivity: new Float64Array(size).fill(1),
      source: new Float64Array(size).fill(1),
      edge: new Float64Array(cuts.count),
    },
    ZONE_MEANS,
  );
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

/**
 * T of a zone at a film without flow (m): 1 / T on a straight line between the two films solved, held beyond them. On a
 * disc T is close to 1 / (k_D h + k_P r); the middle film comes out within 0.2 % (measured).
 */
export function shapeAge(shape: FaceShape, zone: number, film: number): number {
  const { films, ages, zones } = shape;
  const [thin, thick] = [films[0] as number, films[1] as number];
  const t = Math.max(0, Math.min(1, (film - thin) / (thick - thin)));
  return 1 / ((1 - t) / (ages[zone] as number) + t / (ages[zones + zone] as number));
}
