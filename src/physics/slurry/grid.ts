import { PI } from '#src/base/math.ts';
import { nearest, type Outline, smallestFeature } from '#src/base/outline.ts';
import { type Draft, fill, findCuts, levelOf, SIDE_X, SIDE_Y, shareSlivers } from './grid-fill.ts';

/**
 * Uniform square cells over a tool face. A cell is active when its centre lies inside the outline and outside every
 * bore; the outermost ring of cells is never active, so the four neighbours of an active cell always exist. Cells are
 * stored x fastest, cell (i, j) at index i + nx j with its centre at (x0 + i pitch, y0 + j pitch). Metres throughout.
 */

/** A round slurry bore in the tool face: centre and radius (m), in the outline's frame. */
export interface Bore {
  readonly x: number;
  readonly y: number;
  readonly radius: number;
}

/** A closed boundary of the face: `edge` the outer loop, `hole` an inner loop (of a ring), `bore` a slurry bore. */
export interface Boundary {
  readonly kind: 'edge' | 'hole' | 'bore';
  /** Its length (m). */
  readonly length: number;
}

/** Every leg from an active cell's centre to an inactive neighbour, one entry per leg. */
export interface CutFaces {
  readonly count: number;
  /** Index of the active cell. */
  readonly cell: Int32Array;
  /** 0 -x, 1 +x, 2 -y, 3 +y. */
  readonly side: Uint8Array;
  /** Distance from the cell's centre to the boundary along the leg, over the pitch, LEAST_THETA to 1. */
  readonly theta: Float64Array;
  /** Index into `FaceGrid.boundaries`. */
  readonly boundary: Uint16Array;
  /** Where along the boundary: running arc length of the outline, or of the bore counted from its +x side (m). */
  readonly s: Float64Array;
}

export interface FaceGrid {
  readonly nx: number;
  readonly ny: number;
  readonly pitch: number;
  readonly x0: number;
  readonly y0: number;
  /** 1 for an active cell. */
  readonly active: Uint8Array;
  /**
   * Signed distance from each centre to the boundary, negative inside (m): exact next to the boundary, interpolated over
   * a few cells away from it.
   */
  readonly distance: Float64Array;
  /**
   * Area each active cell stands for (m2): its own part inside the face and the slivers of inactive neighbours, so that
   * the sum is the area of the face to second order in the pitch. Zero for an inactive cell.
   */
  readonly area: Float64Array;
  readonly cuts: CutFaces;
  /** The outline's loops in their order, then the bores in theirs. */
  readonly boundaries: readonly Boundary[];
}

/** Where the grid lies under the outline, as a fraction of the pitch; a face solved at two offsets shows the grid error. */
export interface GridOffset {
  readonly x: number;
  readonly y: number;
}

/** Cells across a feature below which the face is refused. */
const LEAST_CELLS_ACROSS = 3;

function checkBores(outline: Outline, bores: readonly Bore[]): void {
  for (const [b, { x, y, radius }] of bores.entries()) {
    if (!(radius > 0)) throw new RangeError(`bore ${b + 1} has a radius of ${radius} m`);
    if (!(nearest(outline, x, y).distance < -radius)) {
      throw new RangeError(`bore ${b + 1} does not lie inside the outline of the tool`);
    }
    for (let a = 0; a < b; a++) {
      const other = bores[a] as Bore;
      const gap = Math.sqrt((x - other.x) ** 2 + (y - other.y) ** 2) - radius - other.radius;
      if (!(gap > 0)) throw new RangeError(`bores ${a + 1} and ${b + 1} run into each other`);
    }
  }
}

/** Longest side of the outline's bounds (m). */
function longestSide({ bounds }: Outline): number {
  return Math.max(bounds.xMax - bounds.xMin, bounds.yMax - bounds.yMin);
}

/** Smallest width the grid must see (m): of the outline, of a bore, and of the web between a bore and what is next to it. */
function smallestWidth(outline: Outline, bores: readonly Bore[]): number {
  let width = smallestFeature(outline.spec);
  for (const [b, bore] of bores.entries()) {
    width = Math.min(width, 2 * bore.radius, -nearest(outline, bore.x, bore.y).distance - bore.radius);
    for (const other of bores.slice(0, b)) {
      width = Math.min(
        width,
        Math.sqrt((bore.x - other.x) ** 2 + (bore.y - other.y) ** 2) - bore.radius - other.radius,
      );
    }
  }
  return width;
}

/**
 * Cells across the longest side that put `across` cells over the smallest feature of the face, within [least, most].
 * @throws RangeError when a bore lies outside the outline or runs into another.
 */
export function cellsFor(
  outline: Outline,
  bores: readonly Bore[],
  options: { readonly across: number; readonly least: number; readonly most: number },
): number {
  checkBores(outline, bores);
  const wanted = Math.ceil((options.across * longestSide(outline)) / smallestWidth(outline, bores));
  return Math.min(Math.max(wanted, options.least), options.most);
}

function emptyDraft(outline: Outline, cells: number, offset: GridOffset): Draft {
  const { bounds } = outline;
  const pitch = longestSide(outline) / cells;
  // the bounds are sampled: one spare cell all round takes up what they miss, and the offset
  const across = (size: number) => Math.ceil(size / pitch - 1e-6) + 4;
  const nx = across(bounds.xMax - bounds.xMin);
  const ny = across(bounds.yMax - bounds.yMin);
  return {
    nx,
    ny,
    pitch,
    x0: (bounds.xMin + bounds.xMax) / 2 + (offset.x - (nx - 1) / 2) * pitch,
    y0: (bounds.yMin + bounds.yMax) / 2 + (offset.y - (ny - 1) / 2) * pitch,
    active: new Uint8Array(nx * ny),
    distance: new Float64Array(nx * ny).fill(pitch),
    area: new Float64Array(nx * ny),
  };
}

/**
 * Lays `cells` cells across the longest side of a tool face.
 * @throws RangeError when a bore lies outside the outline or runs into another, and when a feature is under 3 cells wide.
 */
export function faceGrid(
  outline: Outline,
  bores: readonly Bore[],
  cells: number,
  offset: GridOffset = { x: 0, y: 0 },
): FaceGrid {
  checkBores(outline, bores);
  const width = smallestWidth(outline, bores);
  const across = (width * cells) / longestSide(outline);
  if (!(across >= LEAST_CELLS_ACROSS)) {
    throw new RangeError(
      `a feature of ${width} m is ${across.toFixed(1)} cells wide; ${LEAST_CELLS_ACROSS} are needed`,
    );
  }
  const draft = emptyDraft(outline, cells, offset);
  const level = levelOf(outline, bores);
  fill(draft, level);
  shareSlivers(draft);
  const loops = outline.loops.map(({ hole, length }): Boundary => ({ kind: hole ? 'hole' : 'edge', length }));
  const mouths = bores.map(({ radius }): Boundary => ({ kind: 'bore', length: 2 * PI * radius }));
  return { ...draft, cuts: findCuts(draft, level), boundaries: [...loops, ...mouths] };
}

/** Point of the boundary where cut face `c` ends (m). */
export function cutPoint(grid: FaceGrid, c: number): { x: number; y: number } {
  const { cell, side, theta } = grid.cuts;
  const i = cell[c] % grid.nx;
  const j = Math.floor(cell[c] / grid.nx);
  return {
    x: grid.x0 + (i + theta[c] * SIDE_X[side[c]]) * grid.pitch,
    y: grid.y0 + (j + theta[c] * SIDE_Y[side[c]]) * grid.pitch,
  };
}

/** One value per boundary spread over the cut faces, as `TransportProblem.edge` wants it. */
export function edgeValues(grid: FaceGrid, values: readonly number[]): Float64Array {
  return Float64Array.from(grid.cuts.boundary, (b) => values[b]);
}

/** Area of the face as the grid has it (m2). */
export function faceArea(grid: FaceGrid): number {
  let sum = 0;
  for (let cell = 0; cell < grid.area.length; cell++) sum += grid.area[cell];
  return sum;
}

/** Mean of a cell field over the face. */
export function faceMean(grid: FaceGrid, field: Float64Array): number {
  let sum = 0;
  for (let cell = 0; cell < grid.area.length; cell++) sum += grid.area[cell] * field[cell];
  return sum / faceArea(grid);
}
