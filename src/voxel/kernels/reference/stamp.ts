import { type Field, OUT_OF_REACH, SUM, SUMS } from '../contract.ts';

/** A crater: centre in columns from the field's corner, radii in columns, depth (m). */
export interface Crater {
  readonly x: number;
  readonly y: number;
  readonly rx: number;
  readonly ry: number;
  readonly depth: number;
  /** Height struck (m). */
  readonly from: number;
  /** Columns at or above this height are left alone (m). */
  readonly limit: number;
}

/** Index of column (i, j) after wrapping periodic sides, or -1 outside the field. */
function columnAt(field: Field, i: number, j: number): number {
  const { nx, ny, periodicX, periodicY } = field;
  if ((i < 0 || i >= nx) && !periodicX) return -1;
  if ((j < 0 || j >= ny) && !periodicY) return -1;
  return ((j + ny) % ny) * nx + ((i + nx) % nx);
}

/** Visits every column whose centre lies under the crater, with 1 - (r / radius)^2 there. */
function forEachUnder(field: Field, crater: Crater, visit: (column: number, inside: number) => void): void {
  const { x, y, rx, ry } = crater;
  for (let j = Math.ceil(y - 0.5 - ry); j <= Math.floor(y - 0.5 + ry); j++) {
    for (let i = Math.ceil(x - 0.5 - rx); i <= Math.floor(x - 0.5 + rx); i++) {
      const inside = 1 - ((i + 0.5 - x) / rx) ** 2 - ((j + 0.5 - y) / ry) ** 2;
      const column = columnAt(field, i, j);
      if (inside <= 0 || column < 0) continue;
      const h = field.heights[column] as number;
      if (h >= crater.limit || h <= OUT_OF_REACH) continue;
      visit(column, inside);
    }
  }
}

function add(field: Field, tile: number, sum: number, value: number): void {
  const k = tile * SUMS + sum;
  field.sums[k] = (field.sums[k] as number) + value;
}

/** A chip leaves: no column under the half-ellipsoid stays above it. Returns the volume taken (m3). */
export function takeChip(field: Field, crater: Crater, tile: number, time: number): number {
  const area = field.dx * field.dy;
  let taken = 0;
  forEachUnder(field, crater, (column, inside) => {
    const bowl = crater.depth * Math.sqrt(inside);
    const before = field.heights[column] as number;
    const after = Math.min(before, crater.from - bowl);
    if (after < before) field.ages[column] = time;
    field.heights[column] = after;
    const removed = before - (field.heights[column] as number);
    taken += removed * area;
    add(field, tile, SUM.credited, bowl * area);
    add(field, tile, SUM.overlap, (bowl - removed) * area);
  });
  add(field, tile, SUM.chipRemoved, taken);
  return taken;
}

/**
 * A dent's debris leaves: its volume comes off the columns around, as a paraboloid where the columns resolve it, shared
 * over the four nearest where they do not. Returns the volume taken (m3).
 */
export function takeDent(field: Field, crater: Crater, volume: number, tile: number): number {
  const area = field.dx * field.dy;
  let taken = 0;
  const lower = (column: number, by: number) => {
    const before = field.heights[column] as number;
    field.heights[column] = before - by;
    taken += (before - (field.heights[column] as number)) * area;
  };
  if (crater.rx > 1.5 && crater.ry > 1.5) {
    // volume of a paraboloid: pi rx ry depth / 2
    const depth = (2 * volume) / (Math.PI * crater.rx * crater.ry * area);
    forEachUnder(field, crater, (column, inside) => lower(column, depth * inside));
  } else {
    const i0 = Math.floor(crater.x - 0.5);
    const j0 = Math.floor(crater.y - 0.5);
    for (const i of [i0, i0 + 1]) {
      for (const j of [j0, j0 + 1]) {
        const column = columnAt(field, i, j);
        if (column < 0) continue;
        const h = field.heights[column] as number;
        if (h >= crater.limit || h <= OUT_OF_REACH) continue;
        const weight = (1 - Math.abs(crater.x - 0.5 - i)) * (1 - Math.abs(crater.y - 0.5 - j));
        lower(column, (volume / area) * weight);
      }
    }
  }
  add(field, tile, SUM.dentRemoved, taken);
  return taken;
}
