import { drawRing } from '../detail.ts';
import { drawScaleBar, drawWidth } from '../dimension.ts';
import { inMm, inUm, shortLength } from '../figures.ts';
import { LIGHT, type Palette, PEN } from '../palette.ts';
import {
  asides,
  askLabel,
  drawLine,
  keepClear,
  newSheet,
  type PlacedLabel,
  placeLabels,
  type Sheet,
  type Stroke,
} from '../sheet.ts';
import { element, pathData, svgDocument } from '../svg.ts';
import { type ExitFigures, strokesAbove } from '../through.ts';
import { oneTwoFive } from '../ticks.ts';
import { sideAt, type ToolOutline, toolProfiles } from '../tool.ts';
import { type CutCurve, curveLine } from './contour.ts';
import { drawBacking, drawExit } from './overlay-exit.ts';
import { BACKING_DRAWN, CAPTION_HEIGHT, drawCaption, drawLegend } from './overlay-foot.ts';
import { drawCorner, drawRuler } from './overlay-marks.ts';
import { curveInPicture, lineInPicture } from './render.ts';
import type { Shading } from './shade.ts';
import { type Margins, type SectionView, toPicture } from './view.ts';

/** What is written on the picture of the cavity. SI. */
export interface CavityLabels {
  /** Round outlines carry the diameter sign. */
  readonly round: boolean;
  /** Middle across the picture of the cavity, of the dimensioned island where there are several (m). */
  readonly centre: number;
  /** Middles of all islands the plane cuts, left to right (m); left out, `centre` alone. */
  readonly centres?: readonly number[];
  /** From the leftmost wall to the rightmost (m); left out, the entry size about the centre. */
  readonly extent?: { readonly from: number; readonly to: number };
  /** How far the cavity reaches behind the cutting plane (m): the entry size's line stands clear above it. */
  readonly behind: number;
  readonly entrySize: number;
  /** Of the pilot where there is a shoulder; NaN where there is none to measure. */
  readonly floorSize: number;
  /** Depth to the tip; the thickness where the cut goes through. */
  readonly depth: number;
  /** The floor is no plane: neither its size nor a corner is drawn. */
  readonly shaped?: boolean;
  /** The shoulder of a stepped hole. */
  readonly shoulder?: { readonly depth: number };
  /** The cut goes through. */
  readonly exit?: ExitFigures;
  /** Depth wanted; drawn where it is not reached yet. */
  readonly wantedDepth: number;
  /** Widest chip of the rim and where it lies on the entry face. */
  readonly chip?: { readonly width: number; readonly x: number; readonly y: number };
  readonly tool?: ToolOutline;
  /** The cut outline, for the corner enlarged and for keeping labels off it. */
  readonly outline?: CutCurve;
  /** Strokes of cracks (x0, z0, x1, z1 each, m). */
  readonly cracks?: ArrayLike<number>;
  readonly caption: CavityCaption;
}

export interface CavityCaption {
  readonly title: string;
  /** Abrasive and grade, as the job names them. */
  readonly grit: string;
  readonly time: number;
  readonly seed: number;
  readonly version: string;
}

export interface OverlayOptions {
  readonly palette?: Palette;
  /** Pixels per 1/96 inch, the same as the picture was drawn with. */
  readonly unit?: number;
  readonly shading?: Shading;
  /** End of the recorded time (s), the light end of an age map. */
  readonly recorded?: number;
}

export interface Overlay {
  /** SVG text of the picture's size, transparent where nothing is written. */
  readonly svg: string;
  readonly labels: readonly PlacedLabel[];
  readonly strokes: readonly Stroke[];
  /** Length of the scale bar (m) and where it lies in the picture (pixels). */
  readonly scaleBar: { readonly length: number; readonly x0: number; readonly x1: number };
}

/** Least length of the scale bar before it is rounded down to 1, 2 or 5, 1/96 inch. */
const SHORTEST_BAR = 80;

/** Room the labels need round the cavity, in pixels. */
export function overlayMargins(unit = 1, what: { readonly backing?: boolean; readonly gang?: boolean } = {}): Margins {
  const top = what.gang ? 86 : 62;
  const bottom = 96 + CAPTION_HEIGHT + (what.backing ? BACKING_DRAWN : 0);
  return { left: 190 * unit, right: 200 * unit, top: top * unit, bottom: bottom * unit };
}

/** What is drawn, with where its main lines lie. */
export interface OverlayDrawing {
  readonly sheet: Sheet;
  readonly view: SectionView;
  readonly labels: CavityLabels;
  /** From the leftmost wall to the rightmost (m), and in the picture. */
  readonly extent: { readonly from: number; readonly to: number };
  readonly left: number;
  readonly right: number;
  /** Picture heights of the farthest rim, the entry face and the floor. */
  readonly back: number;
  readonly face: number;
  readonly floor: number;
}

function drawSizes(drawing: OverlayDrawing): void {
  const { sheet, view, labels, face, floor } = drawing;
  const { unit } = sheet;
  const sign = labels.round ? '\u00d8\u2009' : '';
  const span = (size: number): { from: number; to: number } => ({
    from: (labels.centre - size / 2 - view.left) / view.pixel,
    to: (labels.centre + size / 2 - view.left) / view.pixel,
  });
  drawWidth(sheet, {
    ...span(labels.entrySize),
    at: drawing.back - 36 * unit,
    origins: [face, face],
    text: `entry ${sign}${inMm(labels.entrySize)}`,
  });
  const { centres = [] } = labels;
  if (centres.length > 1) {
    const [from, to] = centres.slice(0, 2).map((x) => (x - view.left) / view.pixel) as [number, number];
    const text = `pitch ${inMm((centres[1] as number) - (centres[0] as number))}`;
    drawWidth(sheet, { from, to, at: drawing.back - 60 * unit, origins: [face, face], text, bare: true });
  }
  if (labels.shaped || labels.exit !== undefined || !Number.isFinite(labels.floorSize)) return;
  drawWidth(sheet, {
    ...span(labels.floorSize),
    at: floor + 28 * unit,
    origins: [floor, floor],
    text: `${labels.shoulder === undefined ? 'floor' : 'pilot'} ${sign}${inMm(labels.floorSize)}`,
  });
}

function drawStillToCut(drawing: OverlayDrawing): void {
  const { sheet, view, labels, floor } = drawing;
  const { unit, palette } = sheet;
  const left = labels.wantedDepth - labels.depth;
  if (left < 0.5e-6 || labels.exit !== undefined) return;
  const wanted = toPicture(view, 0, view.yCut, labels.wantedDepth).py;
  const pen = { colour: palette.ink2, width: PEN.dimension, dash: PEN.nominalDash };
  drawLine(sheet, [drawing.left, floor, drawing.left, wanted, drawing.right, wanted, drawing.right, floor], pen);
  askLabel(sheet, `${inMm(left)} to go`, [{ x: drawing.left + 9 * unit, y: wanted - 8 * unit }], {
    colour: palette.ink2,
  });
}

function drawTool(drawing: OverlayDrawing): void {
  const { sheet, view, labels, face } = drawing;
  const { tool } = labels;
  if (tool === undefined) return;
  const { unit, palette } = sheet;
  const above = -0.115 * labels.entrySize;
  const profiles = toolProfiles(tool, above);
  for (const profile of profiles) {
    const points = lineInPicture(view, profile);
    const first = [points[0] as number, points[1] as number] as const;
    const last = [points[points.length - 2] as number, points[points.length - 1] as number] as const;
    // a break line closes the shank
    const wave: number[] = [];
    for (let n = 0; n <= 32; n++) {
      const share = n / 32;
      wave.push(last[0] + share * (first[0] - last[0]), last[1] + 3.5 * unit * Math.sin(2 * Math.PI * share));
    }
    drawLine(sheet, [...points, ...wave], {
      colour: palette.ink,
      width: 1.1,
      dash: PEN.toolDash,
      casing: palette.paper,
      closed: true,
    });
  }
  const [left] = profiles;
  if (left === undefined) return;
  const text = tool.worn > 0 ? `tool, worn ${inMm(tool.worn)} mm` : 'tool';
  const y = Math.min(face - 12 * unit, face + (0.65 * above) / view.pixel);
  const target = { x: (sideAt(left, view.top + y * view.pixel, 'left') - view.left) / view.pixel, y, gap: 0 };
  const ways = [
    { dx: -26 * unit, dy: -18 * unit },
    { dx: -40 * unit, dy: -30 * unit },
    { dx: -26 * unit, dy: 4 * unit },
  ];
  askLabel(sheet, text, asides(sheet, target, { text, style: {} }, ways));
}

function drawChip(drawing: OverlayDrawing): void {
  const { sheet, view, labels } = drawing;
  const { chip } = labels;
  if (chip === undefined) return;
  const { unit } = sheet;
  const behind = chip.y >= view.yCut;
  const text = `largest chip ${inUm(chip.width)} \u00b5m${behind ? '' : ', in the half cut away'}`;
  const style = { weight: 600 } as const;
  if (!behind) {
    const ends = [
      { x: 16 * unit, anchor: 'start' },
      { x: view.width - 16 * unit, anchor: 'end' },
    ] as const;
    const rows = [30, 50, 70, view.height / unit - CAPTION_HEIGHT - 18];
    const places = rows.flatMap((y) => ends.map((end) => ({ ...end, y: y * unit })));
    askLabel(sheet, text, places, style);
    return;
  }
  const { px, py } = toPicture(view, chip.x, chip.y, 0);
  const radius = Math.max(12 * unit, (0.5 * chip.width) / view.pixel + 6 * unit);
  drawRing(sheet, px, py, radius);
  const out = px <= (drawing.left + drawing.right) / 2 ? -1 : 1;
  const ways = [48, 24, 70, -24, 95, -48, 130].flatMap((dx) =>
    [-9, -20, -32, 8].map((dy) => ({ dx: out * dx * unit, dy: dy * unit })),
  );
  askLabel(sheet, text, asides(sheet, { x: px, y: py, gap: radius }, { text, style }, ways), style);
}

function drawCracks(drawing: OverlayDrawing): void {
  const { sheet, view, labels } = drawing;
  const strokes = lineInPicture(view, labels.cracks ?? []);
  let data = '';
  for (let n = 0; n + 3 < strokes.length; n += 4) data += pathData(strokes.slice(n, n + 4));
  if (data === '') return;
  const { palette, unit } = sheet;
  sheet.parts.push(element('path', { d: data, fill: 'none', stroke: palette.ink2, 'stroke-width': 0.6 * unit }));
}

/** The lines the picture draws of the cut outline, for labels to keep clear of. */
function outlineInPicture(view: SectionView, { outline, exit, depth }: CavityLabels): ArrayLike<number>[] {
  if (outline === undefined) return [];
  if (exit === undefined) return [curveInPicture(view, outline)];
  const ends = { from: view.left, to: view.left + view.width * view.pixel };
  const loose = (outline.loose ?? []).map((piece) => curveInPicture(view, piece));
  const { lines, face } = strokesAbove([ends.from, 0, ...curveLine(outline), ends.to, 0], depth, ends);
  const faces = face.map(({ from, to }) => [from, depth, to, depth]);
  return [...loose, ...[...lines, ...faces].map((line) => lineInPicture(view, line))];
}

function drawCentres({ sheet, view, labels, back, floor }: OverlayDrawing): void {
  const { unit, palette } = sheet;
  const { centres = [labels.centre], exit } = labels;
  const bottom = toPicture(view, 0, view.yCut, exit ? labels.depth : Math.max(labels.depth, labels.wantedDepth)).py;
  const foot = Math.max(floor + (exit?.backing ? 44 + BACKING_DRAWN : 44) * unit, bottom + 14 * unit);
  for (const centre of centres) {
    const x = toPicture(view, centre, view.yCut, 0).px;
    drawLine(sheet, [x, back - (centres.length > 1 ? 66 : 52) * unit, x, foot], {
      colour: palette.ink2,
      width: PEN.dimension,
      dash: PEN.centreDash,
    });
  }
}

/** Dimensions, ruler, scale bar, marks, legend and caption over a picture of the same view. */
export function cavityOverlay(view: SectionView, labels: CavityLabels, options: OverlayOptions = {}): Overlay {
  const unit = options.unit ?? 1;
  const sheet = newSheet(options.palette ?? LIGHT, { x: 0, y: 0, width: view.width, height: view.height }, unit);
  const half = labels.entrySize / 2;
  const extent = labels.extent ?? { from: labels.centre - half, to: labels.centre + half };
  const drawing: OverlayDrawing = {
    sheet,
    view,
    labels,
    extent,
    left: toPicture(view, extent.from, view.yCut, 0).px,
    right: toPicture(view, extent.to, view.yCut, 0).px,
    back: toPicture(view, 0, view.yCut + labels.behind, 0).py,
    face: toPicture(view, 0, view.yCut, 0).py,
    floor: toPicture(view, 0, view.yCut, labels.depth).py,
  };
  if (labels.outline !== undefined) {
    for (const line of outlineInPicture(view, labels)) keepClear(sheet, line);
  }
  if (labels.exit?.backing) drawBacking(drawing);
  drawCracks(drawing);
  drawStillToCut(drawing);
  drawCentres(drawing);
  drawTool(drawing);
  drawSizes(drawing);
  if (labels.exit !== undefined) drawExit(drawing, labels.exit);
  drawRuler(drawing);
  drawChip(drawing);
  drawCorner(drawing);
  const length = oneTwoFive(Math.max(0.3 * (extent.to - extent.from), SHORTEST_BAR * unit * view.pixel));
  const barY = view.height - (CAPTION_HEIGHT + 22) * unit;
  drawScaleBar(sheet, { x: drawing.left, y: barY, length: length / view.pixel, text: shortLength(length) });
  drawLegend(sheet, { right: drawing.right, y: barY }, labels, options);
  drawCaption(sheet, view, labels);
  placeLabels(sheet);
  const title = `Half-section of the cavity, ${inMm(labels.depth)} mm deep`;
  return {
    svg: svgDocument({ width: view.width, height: view.height, title }, sheet.parts),
    labels: sheet.labels,
    strokes: sheet.strokes,
    scaleBar: { length, x0: drawing.left, x1: drawing.left + length / view.pixel },
  };
}
