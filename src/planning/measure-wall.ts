import type { PlaneCurve } from '#src/base/field.ts';
import { nearest, nominalSizes, type Outline, type OutlineSpec, pointAt } from '#src/base/outline.ts';
import { sizesAtDepth } from '#src/metrology/size.ts';
import { sizeSigns, tapers } from '#src/metrology/taper.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import { type Cut, endOf } from '#src/voxel/cut.ts';
import { exitChipAt } from '#src/voxel/exit.ts';
import { OUT_OF_REACH } from '#src/voxel/kernels/contract.ts';
import type { WallState } from '#src/voxel/state.ts';
import { wallPoints } from '#src/voxel/surface.ts';

/** Depths at which the cavity's size is taken for the taper. */
const TAPER_LEVELS = 25;

/** An outline of the tool whose wall is measured: its own, or its pilot's. */
export interface Measured {
  readonly outline: Outline;
  /** Nominal outline of the cavity, of the same kind. */
  readonly cavity: OutlineSpec;
  readonly pilot: boolean;
}

/** Least-squares sizes at one depth: the wall between the chips, and the wall as it was where a chip has taken it. */
export function sizesAt(cut: Cut, bricks: BrickField, measured: Measured, z: number): number[] {
  const seen = unchippedWall(cut, bricks, measured, z);
  const taken = wallUnderChips(cut, bricks, measured, z);
  const join = (a: Float64Array, b: Float64Array) => Float64Array.of(...a, ...b);
  return sizesAtDepth({ x: join(seen.x, taken.x), y: join(seen.y, taken.y) }, measured.cavity);
}

/** The walls of an outline, loop by loop. */
function wallsOf({ model, state }: Cut, { pilot }: Measured): WallState[] {
  return state.walls.filter((_, k) => model.walls[k]?.pilot === pilot);
}

/** True where a chip of the entry or the exit rim reaches to a depth, at a cell of a rim. */
function isChipped(cut: Cut, bricks: BrickField, wall: WallState, at: { cell: number; z: number }): boolean {
  const { exit } = cut.model.spec;
  if ((wall.rim.chips[at.cell] as number) > Math.max(0, at.z - bricks.pitch)) return true;
  if (!exit || !endOf(cut).through) return false;
  return exitChipAt(cut.state, wall, at.cell).depth > exit.thickness - at.z - bricks.pitch;
}

/** Points of the wall field at depth z where a chip reaches to there. */
function wallUnderChips(
  cut: Cut,
  bricks: BrickField,
  measured: Measured,
  z: number,
): { x: Float64Array; y: Float64Array } {
  const x: number[] = [];
  const y: number[] = [];
  wallsOf(cut, measured).forEach((wall, k) => {
    const { field, rim } = wall;
    const row = Math.floor(z / field.dy);
    const start = measured.outline.loops[k]?.start ?? 0;
    if (row >= field.ny) return;
    for (let i = 0; i < field.nx; i++) {
      const h = field.heights[row * field.nx + i] as number;
      const s = (i + 0.5) * field.dx;
      const cell = Math.min(rim.n - 1, Math.floor(s / rim.spacing));
      if (h <= OUT_OF_REACH || !isChipped(cut, bricks, wall, { cell, z })) continue;
      const p = pointAt(measured.outline, start + s);
      x.push(p.x - h * p.nx);
      y.push(p.y - h * p.ny);
    }
  });
  return { x: Float64Array.from(x), y: Float64Array.from(y) };
}

/** Wall points at depth z that lie near the outline and in no chip; all of them where a shaped face has no wall there yet. */
export function unchippedWall(cut: Cut, bricks: BrickField, measured: Measured, z: number): PlaneCurve {
  const points = wallPoints(bricks, z);
  const walls = wallsOf(cut, measured);
  if (!measured.pilot && !cut.model.face.flat && !walls.some((wall) => isOpen(wall, z))) return points;
  const reach = cut.model.spec.conditions.grit.largest * 2;
  const keep: number[] = [];
  for (let n = 0; n < points.x.length; n++) {
    const near = nearest(measured.outline, points.x[n] as number, points.y[n] as number);
    // peaks of the floor far inside the outline are no wall
    if (Math.abs(near.distance) > reach) continue;
    const wall = walls[near.loop];
    const start = measured.outline.loops[near.loop]?.start ?? 0;
    const cell = wall ? Math.min(wall.rim.n - 1, Math.floor((near.s - start) / wall.rim.spacing)) : 0;
    if (wall && isChipped(cut, bricks, wall, { cell, z })) continue;
    keep.push(n);
  }
  const pick = (values: Float64Array) => Float64Array.from(keep, (n) => values[n] as number);
  return { x: pick(points.x), y: pick(points.y), closed: false };
}

function isOpen({ field, opened }: WallState, z: number): boolean {
  return opened.some((rows) => rows * field.dy > z);
}

/** Mean distance of the wall outside the outline at depth z, chips and floor peaks left out (m). */
export function meanGap(cut: Cut, bricks: BrickField, measured: Measured, z: number): number {
  const points = unchippedWall(cut, bricks, measured, z);
  let sum = 0;
  for (let n = 0; n < points.x.length; n++) {
    sum += nearest(measured.outline, points.x[n] as number, points.y[n] as number).distance;
  }
  return points.x.length > 0 ? sum / points.x.length : Number.NaN;
}

/** Half of what the cavity is wider than the tool, averaged over the dimensions; an island counts the other way (m). */
export function overcutOf(sizes: readonly number[], tool: OutlineSpec, cavity: OutlineSpec): number {
  const nominal = nominalSizes(tool);
  const signs = sizeSigns(cavity);
  return meanOf(sizes.map((size, k) => (signs[k] as number) * ((size - (nominal[k] as number)) / 2)));
}

/** Mean of what is finite; NaN where nothing is. */
export function meanOf(values: readonly number[]): number {
  const finite = values.filter(Number.isFinite);
  return finite.length > 0 ? finite.reduce((sum, v) => sum + v, 0) / finite.length : Number.NaN;
}

/** Mean half-angle per side of all dimensions over a span of depth (rad). */
export function taperBetween(
  cut: Cut,
  bricks: BrickField,
  measured: Measured,
  span: { readonly from: number; readonly to: number; readonly depth: number },
): number {
  const { from, to, depth } = span;
  const depths = Float64Array.from({ length: TAPER_LEVELS }, (_, k) => from + ((to - from) * k) / (TAPER_LEVELS - 1));
  const bySize = nominalSizes(measured.cavity).map(() => new Float64Array(TAPER_LEVELS));
  depths.forEach((z, k) => {
    sizesAt(cut, bricks, measured, z).forEach((size, n) => {
      (bySize[n] as Float64Array)[k] = size;
    });
  });
  return meanOf(tapers(depths, bySize, depth, measured.cavity).map((taper) => taper.halfAngle));
}
