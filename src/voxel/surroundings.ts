import { type NearestPoint, nearest, type Outline } from '#src/base/outline.ts';
import type { Field, Reals } from './kernels/contract.ts';
import type { CutModel } from './model.ts';

/** Floor columns at or beyond the start of a curved edge: where along which loop of its outline they lie. */
export interface Surroundings {
  readonly columns: Int32Array;
  /** Distance outside the outline (m). */
  readonly outside: Float32Array;
  readonly loops: Uint16Array;
  /** Arc length along the loop (m). */
  readonly along: Float32Array;
  /** Places in these lists of the columns of each loop. */
  readonly ofLoop: readonly Int32Array[];
}

/** What the outline and the face's form make of the floor's columns. */
export interface FloorMap {
  readonly around: Surroundings;
  /** The columns round the pilot of a stepped tool. */
  readonly aroundPilot: Surroundings | null;
  /** How far the face stands behind the tip over each column (m); empty under a flat face. */
  readonly rises: Float32Array;
  /** Distance outside the outline whose edge a column belongs to (m); empty where the edge does not wear. */
  readonly outside: Float32Array;
  /** Height each column began at (m), to tell what this cut has lowered; empty in untouched work. */
  readonly starts: Reals;
  /** Columns under the face inside the start of its curved edge. */
  readonly faceColumns: number;
}

/** Growing lists of surroundings. */
class SurroundingsList {
  private readonly columns: number[] = [];
  private readonly outside: number[] = [];
  private readonly loops: number[] = [];
  private readonly along: number[] = [];
  private readonly outline: Outline;

  constructor(outline: Outline) {
    this.outline = outline;
  }

  add(column: number, near: NearestPoint): void {
    this.columns.push(column);
    this.outside.push(near.distance);
    this.loops.push(near.loop);
    this.along.push(near.s - (this.outline.loops[near.loop]?.start ?? 0));
  }

  finish(): Surroundings {
    const ofLoop = this.outline.loops.map((): number[] => []);
    this.loops.forEach((loop, n) => {
      ofLoop[loop]?.push(n);
    });
    return {
      columns: Int32Array.from(this.columns),
      outside: Float32Array.from(this.outside),
      loops: Uint16Array.from(this.loops),
      along: Float32Array.from(this.along),
      ofLoop: ofLoop.map((places) => Int32Array.from(places)),
    };
  }
}

/** Writes each column's distance beyond the start of the curved edge into the floor, and lists the columns that have one. */
export function mapFloor(model: CutModel, floor: Field): FloorMap {
  const { outline, spec, face, x0, y0 } = model;
  const around = new SurroundingsList(outline);
  const pilot = face.pilot ? new SurroundingsList(face.pilot.outline) : null;
  const rises = new Float32Array(face.flat ? 0 : floor.nx * floor.ny);
  const outside = new Float32Array(spec.toolLife ? floor.nx * floor.ny : 0);
  let faceColumns = 0;
  for (let column = 0; column < floor.nx * floor.ny; column++) {
    const x = x0 + (column % floor.nx) * floor.dx;
    const y = y0 + Math.floor(column / floor.nx) * floor.dy;
    const near = nearest(outline, x, y);
    const place = face.at(x, y, near);
    const beyond = place.outside + spec.edgeRadius;
    if (beyond <= 0) faceColumns++;
    else floor.edges[column] = beyond;
    if (outside.length > 0) outside[column] = place.outside;
    if (rises.length > 0) rises[column] = place.rise;
    if (near.distance + spec.edgeRadius > 0) around.add(column, near);
    if (pilot && face.pilot) addPilot(pilot, column, nearest(face.pilot.outline, x, y), pilotReach(model));
  }
  const starts = spec.before ? floor.heights.slice() : new Float32Array(0);
  return { around: around.finish(), aroundPilot: pilot?.finish() ?? null, rises, outside, starts, faceColumns };
}

/** How far outside the pilot its wall can come to lie (m). */
function pilotReach({ spec, largestChip }: CutModel): number {
  const { grit, constants } = spec.conditions;
  return grit.largest + spec.runout * constants.runoutCap + largestChip;
}

function addPilot(list: SurroundingsList, column: number, near: NearestPoint, reach: number): void {
  if (near.distance < -reach || near.distance > reach) return;
  list.add(column, near);
}

/**
 * Lays the edge anew after it has worn: a larger radius, and a side that stands back from the outline.
 * @param radius of the edge now (m)
 * @param sideLoss how far the side stands back (m)
 */
export function remapEdges(floor: Field, outside: Float32Array, radius: number, sideLoss: number): void {
  for (let c = 0; c < outside.length; c++) {
    const beyond = (outside[c] as number) + sideLoss + radius;
    floor.edges[c] = Math.max(0, beyond);
  }
}

/**
 * Marks the blocks within reach of the tool's edge, and so near it that a magnified crater would spill over it: there the
 * fillet, the foot and the overcut have lengths of their own, and hits are drawn one by one.
 */
export function markUnscaled(model: CutModel, floor: Field, edgeRadius: number): void {
  if (model.magnification === 1) return;
  const reach = model.largestChip * Math.sqrt(model.magnification);
  const per = floor.tile / floor.block;
  const half = (floor.block / 2) * floor.dx;
  const pilot = model.face.pilot?.outline;
  for (let k = 0; k < floor.unscaled.length; k++) {
    const tile = Math.floor(k / (per * per));
    const inside = k % (per * per);
    const i = (tile % floor.tilesX) * floor.tile + ((inside % per) + 0.5) * floor.block;
    const j = Math.floor(tile / floor.tilesX) * floor.tile + (Math.floor(inside / per) + 0.5) * floor.block;
    const x = model.x0 + (i - 0.5) * floor.dx;
    const y = model.y0 + (j - 0.5) * floor.dy;
    const least = -(edgeRadius + reach);
    const { distance } = nearest(model.outline, x, y);
    const atPilot = pilot ? Math.abs(nearest(pilot, x, y).distance) - half * Math.SQRT2 < -least : false;
    floor.unscaled[k] = distance + half * Math.SQRT2 > least || atPilot ? 1 : 0;
  }
}
