import type { Outline } from '#src/base/outline.ts';
import type { BrickField } from './bricks.ts';
import type { FaceMap } from './face.ts';
import type { FieldSpec } from './field.ts';
import type { ChipSizes } from './sizes.ts';
import type { CutSpec } from './spec.ts';

/** The trace strip: long enough for the 4 mm evaluation length with half a cut-off of 0.8 mm at either end. */
const STRIP_LENGTH = 4.8e-3;
const STRIP_PITCH = 1e-6;
/** Radius of the widest chip the strip is laid out for, over the mean: rarer ones, fewer than one in a thousand, are cut off there. */
const STRIP_WIDEST = 4.7;

/** One closed loop of an outline of the tool, its own or its pilot's, and the wall along it. */
export interface WallModel {
  /** The outline the loop belongs to; the tool's own come first, in the order of its loops. */
  readonly outline: Outline;
  readonly loop: number;
  readonly pilot: boolean;
  readonly spec: FieldSpec;
  /** How far the face stands behind the tip along the loop (m), one per cell of arc length. */
  readonly rises: Float32Array;
  readonly magnification: number;
  readonly rimCells: number;
  readonly rimSpacing: number;
  readonly cellsPerSite: number;
}

/** The floor's columns: their field, and the centre of column (0, 0) in the outline's frame (m). */
export interface FloorGrid {
  readonly field: FieldSpec;
  readonly pitch: number;
  readonly magnification: number;
  readonly x0: number;
  readonly y0: number;
}

const roundUp = (value: number, unit: number) => Math.ceil(value / unit - 1e-9) * unit;

/** Blocks no larger than a crater keep the candidates per engaged grain under three. */
function blockFor(columnsPerRadius: number): number {
  if (columnsPerRadius >= 6) return 8;
  return columnsPerRadius >= 2 ? 4 : 2;
}

/** The smallest of the allowed tile sides that no crater can cross. */
function tileFor(columns: number): number {
  for (const tile of [64, 128]) if (tile >= 2 * columns) return tile;
  return 256;
}

/** A pitch near the one wanted whose columns are a whole part or a whole multiple of an earlier cavity's voxels. */
function pitchOn(before: BrickField | null | undefined, wanted: number): number {
  if (!before) return wanted;
  const ratio = wanted / before.pitch;
  return ratio >= 1 ? before.pitch * Math.round(ratio) : before.pitch / Math.round(1 / ratio);
}

/** An origin moved down by less than a voxel, so that borders of columns lie on borders of an earlier cavity's voxels. */
function originOn(earlier: number, pitch: number, ours: { readonly origin: number; readonly pitch: number }): number {
  const cell = Math.min(pitch, ours.pitch);
  const off = (ours.origin - ours.pitch / 2 - (earlier - pitch / 2)) / cell;
  return ours.origin - (off - Math.floor(off + 1e-6)) * cell;
}

/**
 * The floor under a tool and around it.
 * @throws RangeError when the pitch asked for would give a crater less than half a column.
 */
export function floorGrid(spec: CutSpec, outline: Outline, sizes: ChipSizes): FloorGrid {
  const { radius, largestChip, deepestEdgeChip } = sizes;
  const { bounds } = outline;
  const { grit, constants } = spec.conditions;
  const toolReach = grit.largest / 2 + spec.edgeRadius + Math.min(largestChip, grit.largest);
  const wallReach = grit.largest + spec.runout * constants.runoutCap + constants.chipWidthRatio * deepestEdgeChip;
  const margin = Math.max(toolReach, wallReach);
  const width = bounds.xMax - bounds.xMin + 2 * margin;
  const height = bounds.yMax - bounds.yMin + 2 * margin;
  const budgeted = Math.sqrt((width * height) / spec.columnBudget);
  const pitch = spec.pitch ?? pitchOn(spec.before, Math.max(radius / spec.columnsPerRadius, budgeted));
  const asked = (spec.columnsPerRadius * pitch) / radius;
  const magnification = spec.magnification ?? (asked > 1.001 ? asked * asked : 1);
  if (radius * Math.sqrt(magnification) < 0.5 * pitch) {
    throw new RangeError(
      `a pitch of ${pitch} m loses craters of ${radius} m: take a finer one, or let it be magnified`,
    );
  }
  const stretch = Math.sqrt(magnification);
  const tile = tileFor((largestChip * stretch) / pitch);
  // room for the shift onto an earlier grid
  const slack = spec.before ? 2 * pitch : 0;
  const nx = roundUp((width + slack) / pitch, tile);
  const ny = roundUp((height + slack) / pitch, tile);
  const field: FieldSpec = {
    nx,
    ny,
    dx: pitch,
    dy: pitch,
    tile,
    block: blockFor((radius * stretch) / pitch),
    periodicX: false,
    periodicY: false,
    edged: true,
    precision: spec.precision ?? 32,
  };
  let x0 = (bounds.xMin + bounds.xMax) / 2 - ((nx - 1) / 2) * pitch;
  let y0 = (bounds.yMin + bounds.yMax) / 2 - ((ny - 1) / 2) * pitch;
  if (spec.before) {
    x0 = originOn(spec.before.x0, spec.before.pitch, { origin: x0, pitch });
    y0 = originOn(spec.before.y0, spec.before.pitch, { origin: y0, pitch });
  }
  return { field, pitch, magnification, x0, y0 };
}

/** A strip of floor at fine pitch, periodic both ways. */
export function stripSpec(spec: CutSpec, { radius, largestChip }: ChipSizes): FieldSpec {
  const widest = Math.min(largestChip, STRIP_WIDEST * radius);
  const pitch = Math.max(Math.min(STRIP_PITCH, radius / 2), widest / 128);
  const tile = tileFor(widest / pitch);
  const nx = roundUp(STRIP_LENGTH / pitch, 2 * tile);
  return {
    nx,
    ny: tile,
    dx: pitch,
    dy: pitch,
    tile,
    block: blockFor(radius / pitch),
    periodicX: true,
    periodicY: true,
    edged: false,
    precision: spec.precision ?? 32,
  };
}

/** What walls are laid out from, beside the spec. */
export interface WallPlan {
  readonly outline: Outline;
  readonly face: FaceMap;
  readonly floorPitch: number;
  readonly sizes: ChipSizes;
}

/** The walls along the tool's loops, then those along its pilot's. */
export function wallModels(spec: CutSpec, plan: WallPlan): WallModel[] {
  const { outline, face } = plan;
  const perimeter = outline.perimeter + (face.pilot?.outline.perimeter ?? 0);
  const own = outline.loops.map((_, loop) =>
    wallModel(spec, plan, { outline, loop, perimeter, rise: face.alongEdge, pilot: false }),
  );
  const pilot = face.pilot?.outline;
  if (!pilot) return own;
  const its = pilot.loops.map((_, loop) =>
    wallModel(spec, plan, { outline: pilot, loop, perimeter, rise: () => 0, pilot: true }),
  );
  return [...own, ...its];
}

/** A loop, and what is particular to it. */
interface WallLoop {
  readonly outline: Outline;
  readonly loop: number;
  /** Length of all loops that share the columns (m). */
  readonly perimeter: number;
  readonly rise: (s: number) => number;
  readonly pilot: boolean;
}

function wallModel(spec: CutSpec, { floorPitch, sizes }: WallPlan, one: WallLoop): WallModel {
  const { radius, largestChip, deepestEdgeChip } = sizes;
  const { length, start } = one.outline.loops[one.loop] as Outline['loops'][number];
  const share = ((spec.columnBudget / 2) * length) / one.perimeter;
  const wanted = Math.min(floorPitch, radius / spec.columnsPerRadius);
  const depth = spec.exit ? spec.exit.thickness : spec.depth;
  const pitch = Math.max(wanted, Math.sqrt((length * depth) / share));
  const asked = (spec.columnsPerRadius * pitch) / radius;
  const magnification = asked > 1.001 ? asked * asked : 1;
  const stretched = largestChip * Math.sqrt(magnification);
  // a chip of the rim spans its breadth along the wall, and must not meet one of a tile of the same colour
  const breadth = (spec.conditions.constants.chipBreadthRatio / 2) * deepestEdgeChip;
  const tile = tileFor(Math.max(stretched, breadth) / pitch);
  const nx = Math.max(2 * tile, roundUp(length / pitch, 2 * tile));
  const rimCells = Math.max(nx, Math.ceil(length / (0.1 * spec.conditions.grit.massMedian)));
  const rises = Float32Array.from({ length: nx }, (_, i) => one.rise(start + ((i + 0.5) * length) / nx));
  const height = Math.max(pitch, depth - rises.reduce((least, rise) => Math.min(least, rise), depth));
  return {
    outline: one.outline,
    loop: one.loop,
    pilot: one.pilot,
    spec: {
      nx,
      ny: roundUp(height / pitch, tile),
      dx: length / nx,
      dy: pitch,
      tile,
      block: blockFor((radius * Math.sqrt(magnification)) / pitch),
      periodicX: true,
      periodicY: false,
      edged: false,
      precision: spec.precision ?? 32,
    },
    rises,
    magnification,
    rimCells,
    rimSpacing: length / rimCells,
    cellsPerSite: 16,
  };
}
