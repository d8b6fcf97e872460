import { makeOutline, nominalSizes, pointAt } from '#src/base/outline.ts';
import type { ResolvedJob, ResolvedPass } from '#src/formats/job/resolve.ts';
import { encodePng } from '#src/formats/png.ts';
import { laidOver, type Rasteriser } from '#src/formats/raster.ts';
import { type CutCurve, curveLine, curveLines, cutCurves, mainCurve, splitCurve } from '#src/picture/cavity/contour.ts';
import { crackStrokes } from '#src/picture/cavity/cracks.ts';
import { makeGrid } from '#src/picture/cavity/grid.ts';
import { cavityOverlay, overlayMargins } from '#src/picture/cavity/overlay.ts';
import { BACKING_DRAWN } from '#src/picture/cavity/overlay-foot.ts';
import { renderSteps } from '#src/picture/cavity/render.ts';
import { type CavityBounds, cavityBounds, fitView, naturalHeight, type SectionView } from '#src/picture/cavity/view.ts';
import { sectionPlane } from '#src/picture/plane.ts';
import { type Scene, type SceneSizes, sceneOf, sizesIn } from '#src/picture/scene.ts';
import { drawSection } from '#src/picture/section.ts';
import type { ExitFigures } from '#src/picture/through.ts';
import { type ToolOutline, toolParts } from '#src/picture/tool.ts';
import { drawTrace } from '#src/picture/trace.ts';
import type { CutMeasures } from '#src/planning/measure.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import type { Cut } from '#src/voxel/cut.ts';
import { SCALAR } from '#src/voxel/state.ts';
import { captionOf, gritText, limitTexts } from './captions.ts';
import type { FloorTexture } from './trace.ts';
import { version } from './version.ts';

/** Everything the pictures of a cut are drawn from. */
export interface Drawable {
  readonly job: ResolvedJob;
  /** The pass that has just been cut; the last one where left out. */
  readonly pass?: ResolvedPass;
  /** Machining time of all passes so far (s); that of the pass where left out. */
  readonly time?: number;
  readonly cut: Cut;
  readonly bricks: BrickField;
  readonly measures: CutMeasures;
  readonly texture: FloorTexture | null;
}

/** Width of the cavity's picture (pixels), its largest height, and pixels per 1/96 inch. */
const PICTURE_WIDTH = 1600;
const PICTURE_HEIGHT = 1800;
const PICTURE_UNIT = 1.6;

/** Voxels within which stretches of the section count as one. */
const JOINED = 4;

const text = (bytes: string) => new TextEncoder().encode(bytes);

const titleOf = (job: ResolvedJob) => (job.title === '' ? 'Cavity' : job.title);

const passOf = ({ job, pass }: Drawable): ResolvedPass => pass ?? (job.passes.at(-1) as ResolvedPass);

/** The job's passes up to the one that is shown. */
function passesSoFar(drawable: Drawable): readonly ResolvedPass[] {
  const { passes } = drawable.job;
  return passes.slice(0, passes.indexOf(passOf(drawable)) + 1);
}

/** The section's plane, and what it cuts. */
function sceneFor(job: ResolvedJob, pass: ResolvedPass): Scene {
  return sceneOf({
    cavity: job.cavity,
    tool: pass.tool,
    face: pass.face,
    bores: pass.bores,
    depth: job.depth,
    ...(job.through && { through: job.stock.thickness }),
  });
}

/** The tool where it stands at the end, worn as it is. */
function toolOf(drawable: Drawable, scene: Scene): ToolOutline {
  const { cut, measures } = drawable;
  const { from, to } = scene.toolChord;
  return {
    width: to - from,
    centre: (from + to) / 2,
    faceDepth: -(cut.state.scalars[SCALAR.face] as number),
    edgeRadius: measures.toolEdgeRadius,
    worn: measures.toolWearLength,
    newEdgeRadius: passOf(drawable).edgeRadius,
    sideLoss: measures.toolSideLoss,
    parts: scene.toolParts,
  };
}

/** Tools of the passes before the one shown, new, where their cut ended. */
function earlierTools(drawable: Drawable, scene: Scene): ToolOutline[] {
  return passesSoFar(drawable)
    .slice(0, -1)
    .map((pass): ToolOutline => {
      const parts = toolParts(makeOutline(pass.tool), pass.face, scene.plane, pass.bores);
      const edge = { edgeRadius: pass.edgeRadius, newEdgeRadius: pass.edgeRadius, worn: 0 };
      return { width: 0, centre: 0, faceDepth: pass.depth, ...edge, parts };
    });
}

/** Whether the cavity has the sizes that drawings are dimensioned with: one all in chips has none. */
export function isMeasured(drawable: Drawable): boolean {
  const { measures, job } = drawable;
  const plain = passOf(drawable).face.kind === 'flat' && !job.through && job.cavity.kind !== 'path';
  const sizes = plain ? [measures.entrySize[0], measures.floorSize[0]] : [measures.depth];
  return sizes.every(Number.isFinite);
}

/** What both pictures say of a cut: plane, sizes, far side and tool. */
interface Marks {
  readonly scene: Scene;
  readonly sizes: SceneSizes;
  readonly depth: number;
  readonly tool: ToolOutline;
  readonly exit?: ExitFigures;
}

/** The largest chip of the exit; it breaks out all round, and is named where there is most room. */
function exitChipOf({ measures }: Drawable): ExitFigures['chip'] {
  const { exitChip } = measures;
  return exitChip && exitChip.width > 0 ? { ...exitChip, side: 'right' } : undefined;
}

/** Whether the cut has come out at the far face in the plane of the section. */
function comesOut({ job }: Drawable, curve: CutCurve): boolean {
  return job.through && curve.z.some((z) => z >= job.stock.thickness);
}

function marksOf(drawable: Drawable, curve: CutCurve | undefined): Marks | undefined {
  if (!curve || !isMeasured(drawable)) return undefined;
  const { job, measures, bricks } = drawable;
  const scene = sceneFor(job, passOf(drawable));
  const out = comesOut(drawable, curve);
  const chip = out ? exitChipOf(drawable) : undefined;
  const { thickness } = job.stock;
  const whole = {
    depth: out ? thickness : measures.depth,
    entrySize: measures.entrySize[0] as number,
    floorSize: measures.floorSize[0] as number,
    chipDepth: measures.chipDepth.largest,
    ...(chip && { exitChipDepth: chip.depth }),
    ...(out && { through: thickness }),
  };
  const sizes = sizesIn(scene, curveLines(curve), whole, JOINED * bricks.pitch);
  if (sizes === undefined) return undefined;
  const backing = passOf(drawable).exit?.backing ?? false;
  const into = Math.max(0, -(drawable.cut.state.scalars[SCALAR.floorMean] as number) - thickness);
  return {
    scene,
    sizes,
    depth: whole.depth,
    tool: toolOf(drawable, scene),
    ...(out && { exit: { size: sizes.floorSize, backing, ...(chip && { chip }), ...(backing && { into }) } }),
  };
}

/** What the section and the cavity's picture have in common. */
function commonMarks({ scene, sizes, depth, tool, exit }: Marks) {
  return {
    ...sizes,
    round: scene.round,
    depth,
    tool,
    ...(scene.shaped && { shaped: true }),
    ...(scene.step !== undefined && { shoulder: { depth: depth - scene.step } }),
    ...(exit && { exit }),
  };
}

/** The annotated half-section as SVG; null where the cut is too shallow to have walls that can be measured. */
export function sectionSvg(drawable: Drawable, curve: CutCurve | undefined): Uint8Array<ArrayBuffer> | null {
  const { job, cut, measures } = drawable;
  const marks = marksOf(drawable, curve);
  const split = curve && marks && splitCurve(curve, marks.depth);
  if (!marks || !split) return null;
  const { scene, sizes } = marks;
  const chipAt = pointAt(cut.model.outline, measures.chipWidth.at);
  const { largest } = measures.chipWidth;
  const middle = (sizes.extent.from + sizes.extent.to) / 2;
  const earlier = earlierTools(drawable, scene);
  const overall = scene.bySection && scene.walled;
  const drawn = drawSection({
    title: titleOf(job),
    caption: captionOf(job, passesSoFar(drawable), drawable.cut),
    ...commonMarks(marks),
    ...split,
    ...(curve.loose && { loose: curve.loose.map(curveLine) }),
    ...(scene.walled && { sizes: { entry: measures.entrySize, floor: measures.floorSize, overall } }),
    taper: scene.walled ? measures.taper : Number.NaN,
    cornerRadius: measures.cornerRadius,
    ...(largest > 0 && {
      chip: { width: largest, depth: measures.chipDepth.largest, side: chipAt.x < middle ? 'left' : 'right' },
    }),
    ...(earlier.length > 0 && { earlier }),
    nominal: { entrySize: scene.nominalSize, depth: job.depth, lines: scene.nominalLines },
    thickness: job.stock.thickness,
    ...(scene.plane !== 0 && { plane: scene.plane }),
    limits: limitTexts(job.limits, nominalSizes(job.cavity)),
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
function overlaySvg(
  drawable: Drawable,
  seen: { readonly view: SectionView; readonly behind: number; readonly curve: CutCurve },
  marks: Marks,
): string {
  const { job, cut, bricks, measures } = drawable;
  const { view, behind, curve } = seen;
  const chip = pointAt(cut.model.outline, measures.chipWidth.at);
  const shown = measures.chipWidth.largest > 0 && chip.y >= view.yCut;
  return cavityOverlay(
    view,
    {
      ...commonMarks(marks),
      behind,
      wantedDepth: job.depth,
      ...(shown && { chip: { width: measures.chipWidth.largest, x: chip.x, y: chip.y } }),
      outline: curve,
      cracks: crackStrokes(bricks, curve, view.yCut),
      caption: {
        title: titleOf(job),
        grit: gritText(job, passOf(drawable)),
        time: drawable.time ?? measures.time,
        seed: job.cut.seed,
        version,
      },
    },
    { unit: PICTURE_UNIT },
  ).svg;
}

/** The removed work, no deeper than the work is thick. */
function shownBounds({ job, bricks }: Drawable): CavityBounds | undefined {
  if (!job.through) return cavityBounds(bricks);
  const { thickness } = job.stock;
  const bounds = cavityBounds(bricks, thickness);
  return bounds && { ...bounds, depth: Math.min(bounds.depth, thickness) };
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
  const bounds = shownBounds(drawable);
  if (!bounds) return null;
  const { plane } = sceneFor(job, passOf(drawable));
  const marks = marksOf(drawable, curve);
  const backing = marks?.exit?.backing ?? false;
  const margins = overlayMargins(PICTURE_UNIT, { backing, gang: marks?.sizes.centres !== undefined });
  const natural = naturalHeight(PICTURE_WIDTH, bounds, margins, plane);
  const view = fitView({ width: PICTURE_WIDTH, height: Math.min(natural, PICTURE_HEIGHT) }, bounds, margins, plane);
  const through = curve && comesOut(drawable, curve);
  const slab = backing ? BACKING_DRAWN * PICTURE_UNIT * view.pixel : 0;
  const under = yield* renderSteps(bricks, view, {
    unit: PICTURE_UNIT,
    thickness: job.stock.thickness,
    ...(through && { through: { backing: slab } }),
  });
  const behind = bounds.yMax - plane;
  const marked =
    marks && curve
      ? laidOver(under, rasteriser.rasterise(overlaySvg(drawable, { view, behind, curve }, marks), PICTURE_WIDTH))
      : under;
  yield 1;
  const bytes = encodePng(marked, {
    pixel: view.pixel,
    text: {
      Title: titleOf(job),
      Software: `Spallwright ${version}`,
      Comment: captionOf(job, passesSoFar(drawable), drawable.cut).join(' '),
    },
  });
  return Uint8Array.from(bytes);
}

/**
 * The cut line in the plane of the pictures: that of the job's outline, y = 0 where no job is given. Of a work that is cut
 * through the line runs along the far face.
 */
export function sectionCurve(bricks: BrickField, job?: ResolvedJob): CutCurve | undefined {
  const plane = job === undefined ? 0 : sectionPlane(makeOutline(job.cavity));
  const thickness = bricks.thickness ?? (job?.through ? job.stock.thickness : undefined);
  return mainCurve(cutCurves(bricks, plane, makeGrid(bricks), thickness));
}
