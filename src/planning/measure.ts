import type { HeightField } from '#src/base/field.ts';
import { makeOutline, nearest, type OutlineSpec } from '#src/base/outline.ts';
import { type ChipFigures, edgeChips } from '#src/metrology/chips.ts';
import { floorFlatness, insideOutline } from '#src/metrology/floor.ts';
import { entrySizeDepth, floorSizeDepth } from '#src/metrology/taper.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import { type Cut, type CutEnd, damageQuantile, endOf, hitSummary, largestDamage } from '#src/voxel/cut.ts';
import { type EarlierDamage, earlierDamage } from '#src/voxel/left.ts';
import { exitRimProfile, type RimProfile, rimProfile } from '#src/voxel/rims.ts';
import { removedVolume } from '#src/voxel/solid.ts';
import { SCALAR } from '#src/voxel/state.ts';
import { type SectionCurves, sectionAt, surfaceField } from '#src/voxel/surface.ts';
import { cornerOf, edgeNow } from './measure-corner.ts';
import { type Measured, overcutOf, sizesAt, taperBetween } from './measure-wall.ts';

/** Share of the depth that must lie above the fillet for a taper to be measured. */
const TAPER_NEEDS = 0.5;
/** Shares of the depth between which the taper is measured; the exit size is taken at the second of a through-cut. */
const TAPER_FROM = 0.1;
const TAPER_TO = 0.9;
/** Cells of floor below which its middle and its rim are not told apart. */
const FEWEST_CELLS = 100;
/** Share of the depth over which the first and the last rate are averaged. */
const RATE_SPAN = 0.1;

/**
 * The cavity as measured on its voxels, and what the last cut recorded. SI; one value per dimension in the arrays, those of
 * a path overall: the length and the width of the box around all its islands.
 */
export interface CutMeasures {
  readonly time: number;
  /** Depth of the tip's floor; of a cut that has come out, the thickness. */
  readonly depth: number;
  readonly end: CutEnd;
  /** Depth from which on the load was more than slurry or grits can carry (m); null where it never was. */
  readonly stalledAt: number | null;
  readonly ranOut: boolean;
  /** Least of 1 - pressure / stall on the way down, and the pressure of the highest rate at the end (Pa); null with fresh grit. */
  readonly stallMargin: number | null;
  readonly bestPressure: number | null;
  readonly rateStart: number;
  readonly rateEnd: number;
  readonly rateMean: number;
  /** Volume of work this cut removed over its time (m3/s). */
  readonly removalRate: number;
  readonly entrySize: readonly number[];
  /** Above the floor; of a through-cut near the exit, of a stepped tool that of the pilot, of any other shaped face NaN. */
  readonly floorSize: readonly number[];
  /** Per side, over the tool's own size, or its pilot's at the floor (m). */
  readonly overcutEntry: number;
  readonly overcutFloor: number;
  /** Mean half-angle per side of all dimensions (rad), positive when wider at the entry. */
  readonly taper: number;
  /** Of flat faces in blind cavities; NaN otherwise. */
  readonly cornerRadius: number;
  readonly floorFlatness: number;
  /** Mean height of the floor's middle over that of its rim (m); NaN where there is no flat floor. */
  readonly floorHump: number;
  /** Width left out inside the tool's outline for the flatness (m); the wall lies an overcut further out. */
  readonly flatnessMargin: number;
  /** Edge chips at the entry, those of earlier passes that are left included: width on the face and depth down the wall. */
  readonly chipWidth: ChipFigures;
  readonly chipDepth: ChipFigures;
  /** Edge chips at the exit; null for a blind cavity. */
  readonly exitChips: { readonly width: ChipFigures; readonly depth: ChipFigures } | null;
  /** The largest of them (m). */
  readonly exitChip: { readonly width: number; readonly depth: number } | null;
  readonly damageDepth: number;
  readonly damageLargest: number;
  /** What earlier passes have left below this one's surface; null where there was none. */
  readonly earlierDamage: EarlierDamage | null;
  readonly toolWearLength: number;
  /** Volume of tool lost at the face per volume of work this cut removed. */
  readonly toolWearRatio: number;
  readonly toolEdgeRadius: number;
  readonly toolSideLoss: number;
  /** Hits the cut stands for, and those drawn one by one. */
  readonly impacts: number;
  readonly drawnHits: number;
  readonly overlap: number;
  readonly plasticShare: number;
  readonly freeImpactShare: number;
  /** Removed by this cut (m3), and of the whole cavity. */
  readonly removedVolume: number;
  readonly cavityVolume: number;
  /** Half-section along y = 0, and the rims unrolled; the exit's is null for a blind cavity. */
  readonly section: SectionCurves;
  readonly rim: RimProfile;
  readonly exitRim: RimProfile | null;
}

/**
 * Measures a finished (or stopped) cut. Sizes, taper, flatness and corner are taken from the voxels; chips, damage and
 * tool from what the hits left in the fields.
 * @param cavity the cavity's nominal outline, of the same kind as the tool's
 */
export function measureCut(cut: Cut, bricks: BrickField, cavity: OutlineSpec): CutMeasures {
  const { model, state } = cut;
  const end = endOf(cut);
  const time = state.scalars[SCALAR.time] as number;
  const cavityVolume = removedVolume(bricks);
  const volume = cavityVolume - (model.spec.before ? removedVolume(model.spec.before) : 0);
  const hits = hitSummary(cut);
  return {
    time,
    depth: end.depth,
    end,
    stalledAt: end.stallDepth,
    ranOut: end.ranOut,
    ...loadFigures(cut),
    rateStart: rateBetween(cut, 0, RATE_SPAN),
    rateEnd: rateBetween(cut, 1 - RATE_SPAN, 1),
    rateMean: time > 0 ? (end.depth - (state.scalars[SCALAR.startDepth] as number)) / time : 0,
    removalRate: time > 0 ? volume / time : 0,
    ...wallFigures(cut, bricks, cavity),
    ...floorFigures(cut, bricks, cavity),
    ...rimFigures(cut),
    damageDepth: damageQuantile(cut, 0.99),
    damageLargest: largestDamage(cut),
    earlierDamage: earlierDamage(model, state),
    toolWearLength: state.scalars[SCALAR.toolLost] as number,
    toolWearRatio: volume > 0 ? (state.scalars[SCALAR.toolVolume] as number) / volume : 0,
    toolEdgeRadius: edgeNow(cut),
    toolSideLoss: state.scalars[SCALAR.sideLoss] as number,
    impacts: hits.impacts,
    drawnHits: hits.drawn,
    overlap: hits.overlap,
    plasticShare: hits.plasticShare,
    freeImpactShare: hits.freeShare,
    removedVolume: volume,
    cavityVolume,
    section: sectionAt(bricks, 0),
  };
}

/** What is left of the stall at the worst place, and the best pressure. */
function loadFigures({ model, state, records }: Cut): Pick<CutMeasures, 'stallMargin' | 'bestPressure'> {
  const margins = records.flatMap(({ stallMargin }) => (stallMargin === null ? [] : [stallMargin]));
  return {
    stallMargin: margins.length > 0 ? margins.reduce((least, margin) => Math.min(least, margin)) : null,
    bestPressure: model.slurry ? (state.scalars[SCALAR.bestPressure] as number) : null,
  };
}

/** Mean rate of sinking between two shares of the way, from the records (m/s). */
function rateBetween({ records, state }: Cut, from: number, to: number): number {
  const end = records.at(-1);
  if (!end) return 0;
  const start = state.scalars[SCALAR.startDepth] as number;
  // the last ligament breaks out at once: what it skips is no rate
  const sunk = (state.scalars[SCALAR.brokeThrough] as number) || end.depth;
  const depthAt = (share: number) => start + share * (sunk - start);
  const sinking = records.filter((r) => r.depth <= sunk);
  const first = sinking.findLast((r) => r.depth <= depthAt(from)) ?? { depth: start, time: 0 };
  const last = sinking.find((r) => r.depth >= depthAt(to)) ?? sinking.at(-1) ?? end;
  return last.time > first.time ? (last.depth - first.depth) / (last.time - first.time) : 0;
}

/** What the walls are measured along: the tool's outline, and the pilot's at the floor of a stepped cavity. */
function outlinesOf({ model }: Cut, cavity: OutlineSpec): { own: Measured; floor: Measured | null } {
  const own = { outline: makeOutline(model.spec.tool), cavity, pilot: false };
  if (model.face.flat) return { own, floor: own };
  const { pilot } = model.face;
  return { own, floor: pilot ? { outline: pilot.outline, cavity: pilot.outline.spec, pilot: true } : null };
}

/** Depth to which the tool's own outline has come (m): less than the tip's by what the face stands back there. */
function wallDepthOf({ model }: Cut, depth: number): number {
  let least = Number.POSITIVE_INFINITY;
  for (const { pilot, rises } of model.walls) {
    if (!pilot) for (const rise of rises) least = Math.min(least, rise);
  }
  return depth - least;
}

type WallFigures = Pick<CutMeasures, 'entrySize' | 'floorSize' | 'overcutEntry' | 'overcutFloor' | 'taper'>;

/** Sizes at entry and floor, overcut and taper. */
function wallFigures(cut: Cut, bricks: BrickField, cavity: OutlineSpec): WallFigures {
  const { through, depth } = endOf(cut);
  const { own, floor } = outlinesOf(cut, cavity);
  const walled = Math.max(0, wallDepthOf(cut, depth));
  const entry = entrySizeDepth(walled > 0 ? walled : depth);
  const low = through ? TAPER_TO * depth : floorSizeDepth(depth);
  const entrySize = sizesAt(cut, bricks, own, entry);
  const floorSize = floor ? sizesAt(cut, bricks, floor, low) : entrySize.map(() => Number.NaN);
  const above = through ? depth : depth - edgeNow(cut) - cut.model.spec.conditions.grit.largest;
  const to = Math.min(TAPER_TO * depth, above);
  const measurable = cut.model.face.flat && to >= TAPER_NEEDS * depth && depth > 0;
  return {
    entrySize,
    floorSize,
    overcutEntry: walled > 0 ? overcutOf(entrySize, cut.model.spec.tool, cavity) : Number.NaN,
    overcutFloor: floor ? overcutOf(floorSize, floor.outline.spec, floor.cavity) : Number.NaN,
    taper: measurable ? taperBetween(cut, bricks, own, { from: TAPER_FROM * depth, to, depth }) : Number.NaN,
  };
}

type FloorFigures = Pick<CutMeasures, 'cornerRadius' | 'floorFlatness' | 'floorHump' | 'flatnessMargin'>;

/** Corner and flatness of a flat floor; NaN where there is none. */
function floorFigures(cut: Cut, bricks: BrickField, cavity: OutlineSpec): FloorFigures {
  const { through, depth } = endOf(cut);
  const { grit } = cut.model.spec.conditions;
  if (through || !cut.model.face.flat || !(depth > 0)) {
    const flatnessMargin = edgeNow(cut) + grit.massMedian;
    return { cornerRadius: Number.NaN, floorFlatness: Number.NaN, floorHump: Number.NaN, flatnessMargin };
  }
  const surface = surfaceField(bricks);
  const measured = outlinesOf(cut, cavity).own;
  const corner = cornerOf(cut, bricks, { surface, depth, measured });
  const flatnessMargin = (Number.isFinite(corner) ? corner : edgeNow(cut)) + grit.massMedian;
  return {
    cornerRadius: corner,
    floorFlatness: flatnessOf(surface, cut, flatnessMargin),
    floorHump: humpOf(cut, surface, flatnessMargin),
    flatnessMargin,
  };
}

type RimFigures = Pick<CutMeasures, 'chipWidth' | 'chipDepth' | 'exitChips' | 'exitChip' | 'rim' | 'exitRim'>;

/** Chips along the entry rim, and along the exit rim of a cut that has come out. */
function rimFigures({ model, state }: Cut): RimFigures {
  const rim = rimProfile(model, state);
  const exitRim = exitRimProfile(model, state);
  const perimeter = model.outline.loops.slice(0, model.toolLoops).reduce((sum, { length }) => sum + length, 0);
  const figuresOf = ({ arc, width, depth }: RimProfile) => edgeChips({ s: arc, perimeter, width, depth });
  const chips = figuresOf(rim);
  const exitChips = exitRim ? figuresOf(exitRim) : null;
  return {
    chipWidth: chips.width,
    chipDepth: chips.depth,
    exitChips,
    exitChip: exitChips && { width: exitChips.width.largest, depth: exitChips.depth.largest },
    rim,
    exitRim,
  };
}

/** Mean height of the fifth of the floor furthest from its outline over that of the fifth nearest to it, a margin left out (m). */
function humpOf(cut: Cut, surface: HeightField, margin: number): number {
  const inside = insideOutline(surface, cut.model.outline, margin);
  const { nx, dx, dy, x0, y0, z } = inside;
  const cells: { off: number; height: number }[] = [];
  z.forEach((height, c) => {
    if (!Number.isFinite(height)) return;
    const { distance } = nearest(cut.model.outline, x0 + (c % nx) * dx, y0 + Math.floor(c / nx) * dy);
    cells.push({ off: -distance, height });
  });
  if (cells.length < FEWEST_CELLS) return Number.NaN;
  cells.sort((a, b) => a.off - b.off);
  const fifth = Math.floor(cells.length / 5);
  const mean = (part: readonly { height: number }[]) => part.reduce((sum, { height }) => sum + height, 0) / part.length;
  return mean(cells.slice(-fifth)) - mean(cells.slice(0, fifth));
}

/** NaN when the floor is too small to leave anything beside the margin. */
function flatnessOf(surface: HeightField, cut: Cut, margin: number): number {
  try {
    return floorFlatness(insideOutline(surface, cut.model.outline, margin)).flatness;
  } catch (problem) {
    if (problem instanceof RangeError) return Number.NaN;
    throw problem;
  }
}
