import { makeOutline, nominalSizes, type OutlineSpec } from '#src/base/outline.ts';
import {
  CUBIC_METRES_PER_CUBIC_MILLIMETRE,
  DEGREES_PER_RADIAN,
  METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
  MICROMETRES_PER_METRE,
  MILLIMETRES_PER_METRE,
  SECONDS_PER_MINUTE,
} from '#src/base/units.ts';
import type { ResolvedJob } from '#src/formats/job/resolve.ts';
import type { Estimate } from '#src/physics/estimate.ts';
import { type Figure, type Figures, NO_BAND, plainFigure } from '#src/planning/figures.ts';
import type { CutMeasures } from '#src/planning/measure.ts';
import type { FloorTexture } from './trace.ts';

const um = (metres: number) => metres * MICROMETRES_PER_METRE;
const mm = (metres: number) => metres * MILLIMETRES_PER_METRE;
const mmPerMin = (speed: number) => speed / METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE;
const mm3PerMin = (cubicMetresPerSecond: number) =>
  (cubicMetresPerSecond / CUBIC_METRES_PER_CUBIC_MILLIMETRE) * SECONDS_PER_MINUTE;

/** A figure without a band; one that could not be had says why. */
function figure(value: number | readonly number[], otherwise: string, covers = NO_BAND): Figure {
  const whole = typeof value === 'number' ? Number.isFinite(value) : value.every(Number.isFinite) && value.length > 0;
  return whole ? plainFigure(value, covers) : plainFigure(null, otherwise);
}

const NO_STALL = 'not known: this version renews the slurry everywhere, and the load has no stall';
const NO_EDGE_WEAR = `${NO_BAND}; the edge is taken as new, this version does not wear it`;
const NOTHING_REMOVED = 'not known: this setting removes nothing';
const NOT_ESTIMATED = 'not in the estimate: cut the job';

/** The figures of a cut as measured. */
export function cutFigures(measures: CutMeasures, texture: FloorTexture | null): Figures {
  const m = measures;
  const noChip = 'not known: no chip was found on the rim';
  const noTrace = 'not known: there is no trace';
  const stated = texture ? [NO_BAND, ...texture.departures].join('; ') : noTrace;
  const margin = `${NO_BAND}; ${Math.round(um(m.flatnessMargin))} um inside the tool's outline are left out`;
  return {
    timeMin: figure(m.time / SECONDS_PER_MINUTE, NOTHING_REMOVED),
    depthMm: figure(mm(m.depth), NOTHING_REMOVED),
    rateMmPerMin: figure([mmPerMin(m.rateStart), mmPerMin(m.rateEnd)], NOTHING_REMOVED),
    mrrMm3PerMin: figure(mm3PerMin(m.removalRate), NOTHING_REMOVED),
    entrySizeMm: figure(m.entrySize.map(mm), 'not known: too little wall was found at this depth'),
    floorSizeMm: figure(m.floorSize.map(mm), 'not known: too little wall was found at this depth'),
    overcutEntryUm: figure(um(m.overcutEntry), 'not known: no entry size'),
    overcutFloorUm: figure(um(m.overcutFloor), 'not known: no floor size'),
    taperDeg: figure(
      m.taper * DEGREES_PER_RADIAN,
      'not known: the cavity is too shallow, its fillet leaves too little wall',
    ),
    cornerRadiusUm: figure(um(m.cornerRadius), 'not known: the corner is too shallow or the voxel too coarse'),
    floorFlatnessUm: figure(um(m.floorFlatness), 'not known: the floor is smaller than the margin left out', margin),
    floorRaUm: figure(um(texture?.ra ?? Number.NaN), noTrace, stated),
    floorRzUm: figure(um(texture?.rz ?? Number.NaN), noTrace, stated),
    edgeChipMaxUm: figure(um(m.chipWidth.largest), noChip),
    edgeChipP95Um: figure(um(m.chipWidth.p95), noChip),
    edgeChipDepthUm: figure(um(m.chipDepth.largest), noChip),
    damageDepthUm: figure(um(m.damageDepth), NOTHING_REMOVED),
    damageDepthLargestUm: figure(um(m.damageLargest), NOTHING_REMOVED),
    toolWearLengthMm: figure(mm(m.toolWearLength), NOTHING_REMOVED),
    toolWearRatio: figure(m.toolWearRatio, NOTHING_REMOVED),
    toolEdgeRadiusUm: figure(um(m.toolEdgeRadius), NOTHING_REMOVED, NO_EDGE_WEAR),
    stallMargin: plainFigure(null, NO_STALL),
    impacts: figure(m.impacts, NOTHING_REMOVED),
  };
}

/** Sizes of the cavity that a tool with this overcut per side opens (m); a ring's core gets smaller. */
function openedSizes(tool: OutlineSpec, overcut: number): number[] {
  return nominalSizes(tool).map((size, index) => size + (tool.kind === 'ring' && index === 1 ? -2 : 2) * overcut);
}

/** The figures of an estimate; those it has no law for are null and say so. */
export function estimateFigures(job: ResolvedJob, estimated: Estimate): Figures {
  const e = estimated;
  const cavity = makeOutline(job.cavity);
  const rate = mmPerMin(e.rate);
  const frequency = job.conditions.frequency;
  return {
    timeMin: figure(e.time / SECONDS_PER_MINUTE, NOTHING_REMOVED),
    depthMm: figure(mm(job.depth), NOTHING_REMOVED),
    rateMmPerMin: figure([rate, rate], NOTHING_REMOVED),
    mrrMm3PerMin: figure(mm3PerMin(cavity.area * e.rate), NOTHING_REMOVED),
    entrySizeMm: figure(openedSizes(job.tool, e.overcutEntry).map(mm), NOTHING_REMOVED),
    floorSizeMm: figure(openedSizes(job.tool, e.overcutFloor).map(mm), NOTHING_REMOVED),
    overcutEntryUm: figure(um(e.overcutEntry), NOTHING_REMOVED),
    overcutFloorUm: figure(um(e.overcutFloor), NOTHING_REMOVED),
    taperDeg: figure(e.taper * DEGREES_PER_RADIAN, NOTHING_REMOVED),
    cornerRadiusUm: plainFigure(null, NOT_ESTIMATED),
    floorFlatnessUm: plainFigure(null, NOT_ESTIMATED),
    floorRaUm: figure(um(e.floorRa), NOTHING_REMOVED),
    floorRzUm: plainFigure(null, NOT_ESTIMATED),
    edgeChipMaxUm: figure(um(e.edgeChipLargest.width), NOTHING_REMOVED),
    edgeChipP95Um: figure(um(e.edgeChipP95.width), NOTHING_REMOVED),
    edgeChipDepthUm: figure(um(e.edgeChipLargest.depth), NOTHING_REMOVED),
    damageDepthUm: figure(um(e.damageDepth), NOTHING_REMOVED),
    damageDepthLargestUm: figure(um(e.largestDamage), NOTHING_REMOVED, `${NO_BAND}; 99.9 % of hits stay below`),
    toolWearLengthMm: figure(mm(e.toolWearLength), NOTHING_REMOVED),
    toolWearRatio: figure(e.toolWearRatio, NOTHING_REMOVED),
    toolEdgeRadiusUm: figure(um(job.edgeRadius), NOTHING_REMOVED, NO_EDGE_WEAR),
    stallMargin: plainFigure(null, NO_STALL),
    impacts: figure(e.engaged * job.toolArea * frequency * e.time, NOTHING_REMOVED),
  };
}
