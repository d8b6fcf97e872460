import { makeOutline, nominalSizes, type OutlineSpec } from '#src/base/outline.ts';
import {
  CUBIC_METRES_PER_CUBIC_MILLIMETRE,
  DEGREES_PER_RADIAN,
  METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
  MICROMETRES_PER_METRE,
  MILLIMETRES_PER_METRE,
  SECONDS_PER_MINUTE,
} from '#src/base/units.ts';
import type { ResolvedPass } from '#src/formats/job/resolve.ts';
import type { Estimate } from '#src/physics/estimate.ts';
import {
  FIGURE_NAMES,
  type FigureName,
  type Figures,
  type FigureValues,
  NO_BAND,
  plainFigure,
} from '#src/planning/figures.ts';
import type { CutMeasures } from '#src/planning/measure.ts';
import type { DamageLeft } from '#src/voxel/left.ts';
import type { FloorTexture } from './trace.ts';

const um = (metres: number) => metres * MICROMETRES_PER_METRE;
const mm = (metres: number) => metres * MILLIMETRES_PER_METRE;
const mmPerMin = (speed: number) => speed / METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE;
const mm3PerMin = (cubicMetresPerSecond: number) =>
  (cubicMetresPerSecond / CUBIC_METRES_PER_CUBIC_MILLIMETRE) * SECONDS_PER_MINUTE;

/** Words about figures: what a value rests on, and why there is none. */
export interface FigureWords {
  /** What is said beside a value, after what its band covers. */
  readonly notes?: Readonly<Partial<Record<FigureName, string>>>;
  /** Why a figure has no value. */
  readonly missing?: Readonly<Partial<Record<FigureName, string>>>;
}

const NOTHING_REMOVED = 'not known: this setting removes nothing';
const NO_FLOOR = 'none: the cut goes through, and there is no floor';
const NO_EXIT = 'none: the cavity is blind';

const isWhole = (value: FigureValues[FigureName]) =>
  typeof value === 'number'
    ? Number.isFinite(value)
    : value !== null && value.length > 0 && value.every(Number.isFinite);

/** Figures of values, without bands; those without a value say why. */
export function figuresOf(values: FigureValues, { notes = {}, missing = {} }: FigureWords = {}): Figures {
  const entries = FIGURE_NAMES.map((name) => {
    const value = values[name];
    if (!isWhole(value)) return [name, plainFigure(null, missing[name] ?? NOTHING_REMOVED)];
    const note = notes[name];
    return [name, plainFigure(value, note === undefined ? NO_BAND : `${NO_BAND}; ${note}`)];
  });
  return Object.fromEntries(entries) as Figures;
}

/** Figures a through-cut has none of. */
const FLOOR_FIGURES = [
  'floorSizeMm',
  'floorFlatnessUm',
  'floorHumpUm',
  'floorRaUm',
  'floorRzUm',
  'cornerRadiusUm',
] as const;

function throughWords(through: boolean): Partial<Record<FigureName, string>> {
  if (!through) return { exitChipMaxUm: NO_EXIT };
  return Object.fromEntries(FLOOR_FIGURES.map((name) => [name, NO_FLOOR]));
}

/** Said of rates where the tool touches first with a small part of its face. */
function rateNotes(pass: ResolvedPass): Partial<Record<FigureName, string>> {
  return pass.face.kind === 'flat' ? {} : { rateMmPerMin: 'at first a small part of the face bears all of the load' };
}

const NOT_BALANCED = 'not known: the slurry\u2019s exchange does not break down at any load looked at';

/** Depth of the damage that earlier passes have left under floor or wall (m). */
function leftBy({ earlierDamage }: CutMeasures, of: (left: DamageLeft) => number): number {
  return earlierDamage ? Math.max(of(earlierDamage.floor), of(earlierDamage.wall)) : 0;
}

/** The values of one pass as measured on its voxels. */
export function cutValues(pass: ResolvedPass, measures: CutMeasures, texture: FloorTexture | null): FigureValues {
  const m = measures;
  return {
    timeMin: m.time / SECONDS_PER_MINUTE,
    depthMm: mm(m.depth),
    rateMmPerMin: [mmPerMin(m.rateStart), mmPerMin(m.rateEnd)],
    mrrMm3PerMin: mm3PerMin(m.removalRate),
    entrySizeMm: m.entrySize.map(mm),
    floorSizeMm: m.floorSize.map(mm),
    overcutEntryUm: um(m.overcutEntry),
    overcutFloorUm: um(m.overcutFloor),
    taperDeg: m.taper * DEGREES_PER_RADIAN,
    cornerRadiusUm: um(m.cornerRadius),
    floorFlatnessUm: um(m.floorFlatness),
    floorHumpUm: um(m.floorHump),
    floorRaUm: pass.exit ? null : um(texture?.ra ?? Number.NaN),
    floorRzUm: pass.exit ? null : um(texture?.rz ?? Number.NaN),
    edgeChipMaxUm: um(m.chipWidth.largest),
    edgeChipP95Um: um(m.chipWidth.p95),
    edgeChipDepthUm: um(m.chipDepth.largest),
    exitChipMaxUm: m.exitChip ? um(m.exitChip.width) : null,
    // of this pass, or what it left of the passes before
    damageDepthUm: um(
      Math.max(
        m.damageDepth,
        leftBy(m, ({ p99 }) => p99),
      ),
    ),
    damageDepthLargestUm: um(
      Math.max(
        m.damageLargest,
        leftBy(m, ({ deepest }) => deepest),
      ),
    ),
    stockNeededUm: um(m.damageLargest),
    toolWearLengthMm: mm(m.toolWearLength),
    toolWearRatio: m.toolWearRatio,
    toolEdgeRadiusUm: um(m.toolEdgeRadius),
    toolSideLossUm: um(m.toolSideLoss),
    // one where the exchange breaks down at no load that was looked at
    stallMargin: m.stallMargin ?? 1,
    rateBestLoadN: m.bestPressure === null ? null : m.bestPressure * pass.toolArea,
    impacts: m.impacts,
  };
}

/** What is said of a cut's figures. */
export function cutWords(pass: ResolvedPass, measures: CutMeasures, texture: FloorTexture | null): FigureWords {
  const noWall = 'not known: too little wall was found at this depth';
  const noChip = 'not known: no chip was found on the rim';
  const noTrace = 'not known: there is no trace';
  const departures = texture && texture.departures.length > 0 ? texture.departures.join('; ') : undefined;
  return {
    notes: {
      ...rateNotes(pass),
      ...(pass.exit && measures.exitChip && { floorSizeMm: 'at the exit', overcutFloorUm: 'at the exit' }),
      floorFlatnessUm: `${Math.round(um(measures.flatnessMargin))} um inside the tool's outline are left out`,
      ...(departures !== undefined && { floorRaUm: departures, floorRzUm: departures }),
    },
    missing: {
      entrySizeMm: noWall,
      floorSizeMm: noWall,
      overcutEntryUm: 'not known: no entry size',
      overcutFloorUm: 'not known: no floor size',
      taperDeg: 'not known: the cavity is too shallow, its fillet leaves too little wall',
      cornerRadiusUm: 'not known: the corner is too shallow or the voxel too coarse',
      floorFlatnessUm: 'not known: the floor is smaller than the margin left out',
      floorHumpUm: 'not known: the floor is smaller than the margin left out',
      floorRaUm: noTrace,
      floorRzUm: noTrace,
      edgeChipMaxUm: noChip,
      edgeChipP95Um: noChip,
      edgeChipDepthUm: noChip,
      stallMargin: NOT_BALANCED,
      rateBestLoadN: NOT_BALANCED,
      ...throughWords(pass.exit !== undefined),
    },
  };
}

/** Sizes of the cavity that a tool with this overcut per side opens (m); a ring's core gets smaller. */
export function openedSizes(tool: OutlineSpec, overcut: number): number[] {
  return nominalSizes(tool).map((size, index) => size + (tool.kind === 'ring' && index === 1 ? -2 : 2) * overcut);
}

/** The values of one pass as estimated; null where the estimate has no law. */
export function estimateValues(pass: ResolvedPass, cavity: OutlineSpec, e: Estimate): FigureValues {
  const area = makeOutline(cavity).area;
  const through = pass.exit !== undefined;
  return {
    timeMin: e.time / SECONDS_PER_MINUTE,
    depthMm: mm(e.depthReached),
    rateMmPerMin: [mmPerMin(e.rateStart), mmPerMin(e.rateEnd)],
    mrrMm3PerMin: mm3PerMin(area * e.rate),
    entrySizeMm: openedSizes(pass.tool, e.overcutEntry).map(mm),
    floorSizeMm: through ? null : openedSizes(pass.tool, e.overcutFloor).map(mm),
    overcutEntryUm: um(e.overcutEntry),
    overcutFloorUm: um(e.overcutFloor),
    taperDeg: e.taper * DEGREES_PER_RADIAN,
    cornerRadiusUm: through ? null : um(e.cornerRadius),
    floorFlatnessUm: null,
    floorHumpUm: through ? null : um(e.hump),
    floorRaUm: through ? null : um(e.floorRa),
    floorRzUm: null,
    edgeChipMaxUm: um(e.edgeChipLargest.width),
    edgeChipP95Um: um(e.edgeChipP95.width),
    edgeChipDepthUm: um(e.edgeChipLargest.depth),
    exitChipMaxUm: e.exit ? um(e.exit.chipWidth) : null,
    damageDepthUm: um(e.damageDepth),
    damageDepthLargestUm: um(e.largestDamage),
    stockNeededUm: um(e.largestDamage),
    toolWearLengthMm: mm(e.toolWearLength),
    toolWearRatio: e.toolWearRatio,
    toolEdgeRadiusUm: um(e.toolEdgeRadius),
    toolSideLossUm: um(e.toolSideLoss),
    stallMargin: e.stallMargin,
    rateBestLoadN: e.bestPressure === null ? null : e.bestPressure * pass.toolArea,
    impacts: e.engaged * pass.toolArea * pass.conditions.frequency * e.time,
  };
}

const NOT_ESTIMATED = 'not in the estimate: cut the job';

/** What is said of an estimate's figures. */
export function estimateWords(pass: ResolvedPass): FigureWords {
  return {
    notes: {
      ...rateNotes(pass),
      damageDepthLargestUm: '99.9 % of hits stay below',
      stockNeededUm: 'the damage that 99.9 % of hits stay below',
    },
    missing: {
      floorFlatnessUm: NOT_ESTIMATED,
      floorRzUm: NOT_ESTIMATED,
      taperDeg: 'not known: the cavity is too shallow to have a wall',
      stallMargin: NOT_BALANCED,
      rateBestLoadN: NOT_BALANCED,
      ...throughWords(pass.exit !== undefined),
    },
  };
}
