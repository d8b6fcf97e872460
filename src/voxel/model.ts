import { makeBoredOutline, type Outline } from '#src/base/outline.ts';
import { streamKey } from '#src/base/philox.ts';
import { type FaceMap, faceMap } from './face.ts';
import type { FieldSpec } from './field.ts';
import { floorGrid, stripSpec, type WallModel, wallModels } from './grids.ts';
import { COEFFICIENT } from './kernels/contract.ts';
import { deepestChip, flatFloor, freeLowering, largestRadius, lowestGap, typicalChip } from './sizes.ts';
import { makeSlurry, type SlurryModel } from './slurry.ts';
import type { CutSpec } from './spec.ts';
import { buildTables, type CutTables, type GapMeans, gapMeans } from './tables.ts';

export type { WallModel } from './grids.ts';
export type { CutSpec, Drive } from './spec.ts';

/** Zones of distance beyond the start of the tool's curved edge in the load balance, the flat face included. */
const ZONES = 17;
/** Of these, zones under the curved edge. */
export const EDGE_ZONES = ZONES - 1;
/** Advance per step over the load's e-fold height: the load then stays within 1 % with the face taken at mid-step. */
export const ADVANCE = 0.2;
/** Share of the volume below which dents are thinned to one in so many hits. */
const FEW_DENTS = 0.25;
const DENTS_THINNED = 4;
/** Floor steps per wall step. */
export const WALL_EVERY = 8;
/** Steps between renewals of the block bounds: heights only fall, so an old bound is loose and never wrong. */
export const RENEW_EVERY = 4;

/** Everything about a cut that does not change while it runs. */
export interface CutModel {
  readonly spec: CutSpec;
  /** Of the tool's face, its bores last. */
  readonly outline: Outline;
  /** Loops of it that are the tool's own, before those of the bores. */
  readonly toolLoops: number;
  readonly face: FaceMap;
  /**
   * Only part of the face may be in contact: it is shaped, or the cut starts in an earlier cavity. Otherwise the whole flat
   * face rests on the floor from the first step on.
   */
  readonly partial: boolean;
  /** Depth of the tip at which the cut ends (m): past an exit face by so much that the tool comes out at its full width. */
  readonly endDepth: number;
  readonly tables: CutTables;
  /** Means of fresh grit. */
  readonly means: GapMeans;
  readonly slurry: SlurryModel | null;
  readonly floor: FieldSpec;
  /** Centre of floor column (0, 0) in the outline's frame (m). */
  readonly x0: number;
  readonly y0: number;
  readonly magnification: number;
  readonly strip: FieldSpec | null;
  readonly walls: readonly WallModel[];
  /** Mean radius and depth of the chips expected on a flat floor, and the gap there (m). */
  readonly chipRadius: number;
  readonly chipDepth: number;
  /** Radius of the largest chip of the floor, and depth of the deepest edge chip, that are reckoned with (m). */
  readonly largestChip: number;
  readonly deepestEdgeChip: number;
  readonly startGap: number;
  readonly startEfold: number;
  /** The lowest gap fresh grit is pressed to (m): a face in too little contact to bear the load stands there. */
  readonly lowestGap: number;
  /** Expected lowering by free impacts per cycle (m). */
  readonly freePerCycle: number;
  readonly key0: number;
  readonly keys: { readonly floor: number; readonly strip: number; readonly walls: readonly number[] };
}

/**
 * Works out tables, pitches, magnifications and field sizes.
 * @throws RangeError when the pitch asked for would give a crater less than half a column, or the face has no size.
 */
export function makeModel(spec: CutSpec): CutModel {
  const { conditions } = spec;
  const outline = makeBoredOutline(spec.tool, spec.bores ?? []);
  const face = faceMap(spec, outline);
  const partial = !face.flat || Boolean(spec.before);
  const tables = buildTables(conditions, spec);
  const means = gapMeans(conditions, tables, ZONES);
  const start = flatFloor(spec, outline, means);
  const lowest = lowestGap(conditions, means);
  const chip = typicalChip(conditions, start.gap);
  tables.kernel.coefficients[COEFFICIENT.dentEvery] = chip.dentShare < FEW_DENTS ? DENTS_THINNED : 1;
  const largestChip = largestRadius(tables, 0.85 * (partial ? Math.min(lowest, start.gap) : start.gap));
  const deepestEdgeChip = deepestChip(spec, tables);
  const sizes = { radius: chip.radius, largestChip, deepestEdgeChip };
  const grid = floorGrid(spec, outline, sizes);
  const walls = wallModels(spec, { outline, face, floorPitch: grid.pitch, sizes });
  return {
    spec,
    outline,
    toolLoops: outline.loops.length - (spec.bores?.length ?? 0),
    face,
    partial,
    tables,
    means,
    endDepth: endDepthOf(spec),
    slurry: spec.slurry ? makeSlurry(conditions, spec.slurry, { grid, area: outline.area, depth: spec.depth }) : null,
    floor: grid.field,
    x0: grid.x0,
    y0: grid.y0,
    magnification: grid.magnification,
    strip: spec.withoutStrip ? null : stripSpec(spec, sizes),
    walls,
    chipRadius: chip.radius,
    chipDepth: chip.depth,
    largestChip,
    deepestEdgeChip,
    startGap: start.gap,
    startEfold: start.efold,
    lowestGap: lowest,
    freePerCycle: freeLowering(conditions, start.gap),
    key0: spec.seed >>> 0,
    keys: {
      floor: streamKey(spec.pass, 1, spec.replicate),
      strip: streamKey(spec.pass, 2, spec.replicate),
      walls: walls.map((_, k) => streamKey(spec.pass, 3 + k, spec.replicate)),
    },
  };
}

function endDepthOf({ depth, exit, edgeRadius, conditions }: CutSpec): number {
  if (!exit?.backing || depth < exit.thickness) return depth;
  return Math.max(depth, exit.thickness + edgeRadius + conditions.grit.largest);
}
