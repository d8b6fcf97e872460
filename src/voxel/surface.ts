import type { HeightField, PlaneCurve } from '#src/base/field.ts';
import { ALL_EMPTY, ALL_SOLID, BRICK, BRICK_VOXELS, type BrickField, solidAt } from './bricks.ts';

/** Half of a full voxel: the surface runs where the solid fraction passes it. */
const HALF = 127.5;

/** Depth of the first solid below the entry face in each column (m), from the voxels' fractions, nx x ny. */
export function surfaceDepths(bricks: BrickField): Float64Array {
  const { nx, ny, nz, pitch, table, solid } = bricks;
  const bx = nx >> 3;
  const by = ny >> 3;
  const depths = new Float64Array(nx * ny);
  const done = new Uint8Array(nx * ny);
  for (let k = 0; k < nz >> 3; k++) {
    for (let j = 0; j < by; j++) {
      for (let i = 0; i < bx; i++) {
        const entry = table[(k * by + j) * bx + i] as number;
        for (let n = 0; n < BRICK * BRICK; n++) {
          const column = (j * BRICK + (n >> 3)) * nx + i * BRICK + (n & 7);
          if (done[column] === 1) continue;
          if (entry === ALL_EMPTY) depths[column] = (depths[column] as number) + BRICK * pitch;
          else if (entry === ALL_SOLID) done[column] = 1;
          else addBrick(solid, entry, n, column, pitch, depths, done);
        }
      }
    }
  }
  return depths;
}

function addBrick(
  solid: Uint8Array,
  entry: number,
  n: number,
  column: number,
  pitch: number,
  depths: Float64Array,
  done: Uint8Array,
): void {
  for (let k = 0; k < BRICK; k++) {
    const fraction = solid[entry * BRICK_VOXELS + k * BRICK * BRICK + n] as number;
    depths[column] = (depths[column] as number) + ((255 - fraction) / 255) * pitch;
    if (fraction === 255) {
      done[column] = 1;
      return;
    }
  }
}

/** The solid's upper surface as a height field (m, up positive): the floor inside, the entry face outside. */
export function surfaceField(bricks: BrickField): HeightField {
  const { nx, ny, pitch, x0, y0 } = bricks;
  const z = surfaceDepths(bricks).map((depth) => -depth);
  return { nx, ny, dx: pitch, dy: pitch, x0, y0, z };
}

/**
 * Points of the wall at depth z: where the solid fraction passes one half between neighbouring voxels of that layer, along
 * x and along y. In no order. Only bricks that hold a surface, or border on a brick of another kind, are looked at.
 */
export function wallPoints(bricks: BrickField, z: number): PlaneCurve {
  const { nx, ny, nz, pitch, x0, y0, table } = bricks;
  const k = Math.max(0, Math.min(nz - 1, Math.floor(z / pitch)));
  const bx = nx >> 3;
  const by = ny >> 3;
  const row = (k >> 3) * by * bx;
  const xs: number[] = [];
  const ys: number[] = [];
  const cross = (i: number, j: number, di: number, dj: number) => {
    if (i + di >= nx || j + dj >= ny) return;
    const a = solidAt(bricks, i, j, k);
    const b = solidAt(bricks, i + di, j + dj, k);
    if (a < HALF === b < HALF) return;
    const t = (HALF - a) / (b - a);
    xs.push(x0 + (i + t * di) * pitch);
    ys.push(y0 + (j + t * dj) * pitch);
  };
  for (let j = 0; j < by; j++) {
    for (let i = 0; i < bx; i++) {
      const entry = table[row + j * bx + i] as number;
      const right = i + 1 < bx ? table[row + j * bx + i + 1] : entry;
      const below = j + 1 < by ? table[row + (j + 1) * bx + i] : entry;
      if (entry < 0 && right === entry && below === entry) continue;
      for (let n = 0; n < BRICK * BRICK; n++) {
        const column = i * BRICK + (n & 7);
        const line = j * BRICK + (n >> 3);
        cross(column, line, 1, 0);
        cross(column, line, 0, 1);
      }
    }
  }
  return { x: Float64Array.from(xs), y: Float64Array.from(ys), closed: false };
}

/** The section of the solid at the voxel row nearest to y: surface depth from above, and the wall's two sides by depth. */
export interface SectionCurves {
  /** Depth of the surface along x (m). */
  readonly x: Float64Array;
  readonly surface: Float64Array;
  /** Outermost empty x on either side, layer by layer (m); NaN where the layer is solid all through. */
  readonly z: Float64Array;
  readonly left: Float64Array;
  readonly right: Float64Array;
}

/** Cuts the solid along the plane y = `y` (m). */
export function sectionAt(bricks: BrickField, y: number): SectionCurves {
  const { nx, nz, pitch, x0, y0 } = bricks;
  const j = Math.max(0, Math.min(bricks.ny - 1, Math.round((y - y0) / pitch)));
  const x = Float64Array.from({ length: nx }, (_, i) => x0 + i * pitch);
  const surface = new Float64Array(nx);
  const z = Float64Array.from({ length: nz }, (_, k) => (k + 0.5) * pitch);
  const left = new Float64Array(nz).fill(Number.NaN);
  const right = new Float64Array(nz).fill(Number.NaN);
  for (let i = 0; i < nx; i++) {
    let depth = 0;
    for (let k = 0; k < nz; k++) {
      const solid = solidAt(bricks, i, j, k);
      depth += ((255 - solid) / 255) * pitch;
      if (solid === 255) break;
    }
    surface[i] = depth;
  }
  for (let k = 0; k < nz; k++) {
    for (let i = 0; i + 1 < nx; i++) {
      const a = solidAt(bricks, i, j, k);
      const b = solidAt(bricks, i + 1, j, k);
      if (a < HALF === b < HALF) continue;
      const at = x0 + (i + (HALF - a) / (b - a)) * pitch;
      if (Number.isNaN(left[k] as number)) left[k] = at;
      right[k] = at;
    }
  }
  return { x, surface, z, left, right };
}
