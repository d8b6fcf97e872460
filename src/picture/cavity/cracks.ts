import type { BrickField } from '#src/voxel/bricks.ts';
import type { CutCurve } from './contour.ts';
import { type Grid, makeGrid, PAD, storedAt } from './grid.ts';

/** A fixed scatter in [-1, 1) for stroke n: the fractional part of multiples of the golden section. */
function scatter(n: number): number {
  const at = n * 0.6180339887498949;
  return 2 * (at - Math.floor(at)) - 1;
}

interface Walk {
  readonly x: number;
  readonly z: number;
  readonly dx: number;
  readonly dz: number;
}

/** How far damage reaches from a point of the curve into the work along (dx, dz), m. */
function damagedWay(grid: Grid, yCut: number, walk: Walk): number {
  const { field } = grid;
  const j = Math.round((yCut - field.y0) / field.pitch) + PAD;
  let way = 0;
  for (let n = 1; n < 80; n++) {
    const i = Math.round((walk.x - field.x0) / field.pitch + walk.dx * n) + PAD;
    const k = Math.round((walk.z - field.z0) / field.pitch + walk.dz * n) + PAD;
    if (i < PAD || i >= field.nx + PAD || k < PAD || k >= field.nz + PAD || j < PAD || j >= field.ny + PAD) break;
    const at = storedAt(grid, i, j, k);
    if (at < 0 || (field.damage[at] as number) === 0) break;
    way = n;
  }
  return way * field.pitch;
}

/**
 * Short strokes (x0, z0, x1, z1 each, m) from the cut curve into the work, as long as the damage found there: a drawing
 * of the radial cracks, about one every four voxels. Their lean is fixed scatter for the eye, not a result.
 */
export function crackStrokes(
  field: BrickField,
  curve: CutCurve,
  yCut: number,
  grid: Grid = makeGrid(field),
): Float64Array {
  const strokes: number[] = [];
  let due = 0;
  let count = 0;
  for (let n = 0; n + 1 < curve.x.length; n++) {
    const x = curve.x[n] as number;
    const z = curve.z[n] as number;
    const stepX = (curve.x[n + 1] as number) - x;
    const stepZ = (curve.z[n + 1] as number) - z;
    const step = Math.sqrt(stepX * stepX + stepZ * stepZ);
    if (step === 0) continue;
    due -= step;
    if (due > 0) continue;
    due += field.pitch * (4 + 2 * scatter(3 * count + 1));
    const lean = 0.45 * scatter(count++);
    const inX = -stepZ / step + lean * (stepX / step);
    const inZ = stepX / step + lean * (stepZ / step);
    const length = Math.sqrt(inX * inX + inZ * inZ);
    const walk = { x, z, dx: inX / length, dz: inZ / length };
    const way = damagedWay(grid, yCut, walk) * (0.75 + 0.25 * scatter(7 * count));
    if (way < 1.5 * field.pitch) continue;
    strokes.push(x, z, x + walk.dx * way, z + walk.dz * way);
  }
  return Float64Array.from(strokes);
}
