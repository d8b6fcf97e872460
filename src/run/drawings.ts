import { nominalSizes, pointAt } from '#src/base/outline.ts';
import {
  DEGREES_PER_RADIAN,
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
} from '#src/base/units.ts';
import type { Limits, ResolvedJob } from '#src/formats/job/resolve.ts';
import { formatNumber } from '#src/formats/numbers.ts';
import { encodePng } from '#src/formats/png.ts';
import { laidOver, type Rasteriser } from '#src/formats/raster.ts';
import { stockLibrary } from '#src/formats/stock-library.ts';
import { type CutCurve, cutCurves, mainCurve, splitCurve } from '#src/picture/cavity/contour.ts';
import { crackStrokes } from '#src/picture/cavity/cracks.ts';
import { makeGrid } from '#src/picture/cavity/grid.ts';
import { cavityOverlay, overlayMargins } from '#src/picture/cavity/overlay.ts';
import { renderSteps } from '#src/picture/cavity/render.ts';
import { cavityBounds, fitView, naturalHeight, type SectionView } from '#src/picture/cavity/view.ts';
import { drawSection, type SectionLimits } from '#src/picture/section.ts';
import type { ToolOutline } from '#src/picture/tool.ts';
import { drawTrace } from '#src/picture/trace.ts';
import type { CutMeasures } from '#src/planning/measure.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import type { Cut } from '#src/voxel/cut.ts';
import { SCALAR } from '#src/voxel/state.ts';
import type { FloorTexture } from './trace.ts';
import { version } from './version.ts';

/** Everything the pictures of a cut are drawn from. */
export interface Drawable {
  readonly job: ResolvedJob;
  readonly cut: Cut;
  readonly bricks: BrickField;
  readonly measures: CutMeasures;
  readonly texture: FloorTexture | null;
}

/** Width of the cavity's picture (pixels), its largest height, and pixels per 1/96 inch. */
const PICTURE_WIDTH = 1600;
const PICTURE_HEIGHT = 1800;
const PICTURE_UNIT = 1.6;

const text = (bytes: string) => new TextEncoder().encode(bytes);

const nameIn = (records: readonly { readonly id: string; readonly name: string }[], id: string | undefined) =>
  records.find((record) => record.id === id)?.name;

/** Abrasive and grade in words. */
export function gritText({ file, conditions }: ResolvedJob): string {
  const { grit } = file.slurry;
  const abrasive = nameIn(stockLibrary.abrasives, file.slurry.abrasive) ?? file.slurry.abrasive;
  const size = grit ?? `d50 ${formatNumber(conditions.grit.massMedian / METRES_PER_MICROMETRE, 3)} \u00b5m`;
  return `${abrasive} ${size}`;
}

/** What was set, in two lines. */
function captionOf({ job, cut }: Drawable): string[] {
  const { conditions, file } = job;
  const { magnification, floor } = cut.model;
  const amplitude = formatNumber(conditions.amplitude / METRES_PER_MICROMETRE, 3);
  const work = nameIn(stockLibrary.materials, file.workpiece.material) ?? 'a material of the job\u2019s own';
  const voxel = formatNumber(floor.dx / METRES_PER_MICROMETRE, 3);
  const magnified = magnification > 1 ? `, lateral magnification ${formatNumber(magnification, 3)}` : '';
  return [
    `${work}, ${gritText(job)}, ${formatNumber(100 * conditions.concentration, 3)} vol%, ${amplitude} \u00b5m zero to peak at ` +
      `${formatNumber(conditions.frequency / 1e3, 4)} kHz, ${driveText(job)}`,
    `Voxel ${voxel} \u00b5m${magnified}, seed ${job.cut.seed}, Spallwright ${version}. An estimate, to be confirmed by a trial cut.`,
  ];
}

/** How the tool was driven, as a caption says it. */
function driveText({ feed, staticLoad }: ResolvedJob): string {
  if (feed === undefined) return `${formatNumber(staticLoad, 3)} N`;
  return `fed at ${formatNumber(feed / METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE, 3)} mm/min`;
}

const titleOf = (job: ResolvedJob) => (job.title === '' ? 'Cavity' : job.title);

/** The tool where it stands at the end; an annular one has no one profile to draw. */
function toolOf({ job, cut, measures }: Drawable): ToolOutline | undefined {
  if (job.tool.kind === 'ring') return undefined;
  const { bounds } = cut.model.outline;
  return {
    width: bounds.xMax - bounds.xMin,
    centre: (bounds.xMin + bounds.xMax) / 2,
    faceDepth: -(cut.state.scalars[SCALAR.face] as number),
    edgeRadius: measures.toolEdgeRadius,
    worn: measures.toolWearLength,
    newEdgeRadius: job.edgeRadius,
  };
}

/** The drawing's limits as the section writes them. */
function limitTexts(limits: Limits, nominal: number): SectionLimits {
  const mm = (metres: number) => (metres / METRES_PER_MILLIMETRE).toFixed(3);
  const entry = [
    ...(limits.entrySizeLower === undefined ? [] : [mm(nominal + limits.entrySizeLower)]),
    ...(limits.entrySizeUpper === undefined ? [] : [mm(nominal + limits.entrySizeUpper)]),
  ].join(' to ');
  return {
    ...(entry !== '' && { entry: `${entry} mm` }),
    ...(limits.taper !== undefined && { taper: `\u2264 ${(limits.taper * DEGREES_PER_RADIAN).toFixed(2)}\u00b0` }),
    ...(limits.cornerRadius !== undefined && { corner: `\u2264 ${mm(limits.cornerRadius)} mm` }),
    ...(limits.edgeChip !== undefined && {
      chip: `\u2264 ${formatNumber(limits.edgeChip / METRES_PER_MICROMETRE, 3)} \u00b5m`,
    }),
  };
}

/** Whether the cavity has the sizes that drawings are dimensioned with: one all in chips has none. */
export function isMeasured({ measures }: Drawable): boolean {
  return [measures.entrySize[0], measures.floorSize[0]].every(Number.isFinite);
}

/** The annotated half-section as SVG; null where the cut is too shallow to have walls that can be measured. */
export function sectionSvg(drawable: Drawable, curve: CutCurve | undefined): Uint8Array<ArrayBuffer> | null {
  const { job, cut, measures } = drawable;
  const split = curve && isMeasured(drawable) && splitCurve(curve, measures.depth);
  if (!split) return null;
  const centre = cut.model.x0 + ((cut.model.floor.nx - 1) / 2) * cut.model.floor.dx;
  const chipAt = pointAt(cut.model.outline, measures.chipWidth.at);
  const tool = toolOf(drawable);
  const { largest } = measures.chipWidth;
  const nominal = nominalSizes(job.cavity)[0] as number;
  const drawn = drawSection({
    title: titleOf(job),
    caption: captionOf(drawable),
    round: job.cavity.kind === 'circle' || job.cavity.kind === 'ring',
    centre,
    ...split,
    depth: measures.depth,
    entrySize: measures.entrySize[0] as number,
    floorSize: measures.floorSize[0] as number,
    taper: measures.taper,
    cornerRadius: measures.cornerRadius,
    ...(largest > 0 && {
      chip: { width: largest, depth: measures.chipDepth.largest, side: chipAt.x < centre ? 'left' : 'right' },
    }),
    ...(tool && { tool }),
    nominal: { entrySize: nominal, depth: job.depth },
    thickness: job.stock.thickness,
    limits: limitTexts(job.limits, nominal),
  });
  return text(drawn.svg);
}

/** The roughness trace as SVG. */
export function traceSvg({ job }: Drawable, floor: FloorTexture): Uint8Array<ArrayBuffer> {
  const { parameters, settings } = floor.texture;
  const drawn = drawTrace({
    title: `Floor trace, ${titleOf(job)}`,
    profile: floor.trace,
    mean: 0,
    figures: [
      { symbol: 'Ra', value: parameters.ra, kind: 'length' },
      { symbol: 'Rq', value: parameters.rq, kind: 'length' },
      { symbol: 'Rz', value: parameters.rz, kind: 'length' },
      { symbol: 'Rsk', value: parameters.rsk, kind: 'number' },
      { symbol: 'RSm', value: parameters.rsm, kind: 'length' },
    ],
    lambdaC: settings.lFilter,
    lambdaS: settings.sFilter ?? 0,
    evaluationLength: settings.evaluationLength,
    departures: floor.departures,
  });
  return text(drawn.svg);
}

/** The dimensioned picture over a view of the cavity, as SVG. */
function overlaySvg(drawable: Drawable, view: SectionView, behind: number, curve: CutCurve | undefined): string {
  const { job, cut, bricks, measures } = drawable;
  const chip = pointAt(cut.model.outline, measures.chipWidth.at);
  const seen = measures.chipWidth.largest > 0 && chip.y >= view.yCut;
  const tool = toolOf(drawable);
  return cavityOverlay(
    view,
    {
      round: job.cavity.kind === 'circle' || job.cavity.kind === 'ring',
      centre: cut.model.x0 + ((cut.model.floor.nx - 1) / 2) * cut.model.floor.dx,
      behind,
      entrySize: measures.entrySize[0] as number,
      floorSize: measures.floorSize[0] as number,
      depth: measures.depth,
      wantedDepth: job.depth,
      ...(seen && { chip: { width: measures.chipWidth.largest, x: chip.x, y: chip.y } }),
      ...(tool && { tool }),
      ...(curve && { outline: curve, cracks: crackStrokes(bricks, curve, view.yCut) }),
      caption: {
        title: titleOf(job),
        grit: gritText(job),
        time: measures.time,
        seed: job.cut.seed,
        version,
      },
    },
    { unit: PICTURE_UNIT },
  ).svg;
}

/**
 * The half-section as a PNG with the size of its pixels on the cut face, dimensioned where the cavity could be measured.
 * Yields between bounded pieces of work; null where nothing was removed.
 */
export function* cavityPng(
  drawable: Drawable,
  curve: CutCurve | undefined,
  rasteriser: Rasteriser,
): Generator<number, Uint8Array<ArrayBuffer> | null> {
  const { job, bricks } = drawable;
  const bounds = cavityBounds(bricks);
  if (!bounds) return null;
  const margins = overlayMargins(PICTURE_UNIT);
  const natural = naturalHeight(PICTURE_WIDTH, bounds, margins);
  const view = fitView({ width: PICTURE_WIDTH, height: Math.min(natural, PICTURE_HEIGHT) }, bounds, margins, 0);
  const under = yield* renderSteps(bricks, view, { unit: PICTURE_UNIT, thickness: job.stock.thickness });
  const marked = isMeasured(drawable)
    ? laidOver(under, rasteriser.rasterise(overlaySvg(drawable, view, bounds.yMax, curve), PICTURE_WIDTH))
    : under;
  yield 1;
  const bytes = encodePng(marked, {
    pixel: view.pixel,
    text: { Title: titleOf(job), Software: `Spallwright ${version}`, Comment: captionOf(drawable).join(' ') },
  });
  return Uint8Array.from(bytes);
}

/** The cut line in the plane of the pictures. */
export function sectionCurve(bricks: BrickField): CutCurve | undefined {
  return mainCurve(cutCurves(bricks, 0, makeGrid(bricks)));
}
