import { MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import { drawCornerDetail, drawRing } from '../detail.ts';
import { drawScaleBar, drawWidth } from '../dimension.ts';
import { figure, inMm, inUm, shortLength } from '../figures.ts';
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
import { oneTwoFive, ticks } from '../ticks.ts';
import { type ToolOutline, toolProfile } from '../tool.ts';
import { type CutCurve, stretchNear } from './contour.ts';
import { CAPTION_HEIGHT, drawCaption, drawLegend } from './overlay-foot.ts';
import { curveInPicture } from './render.ts';
import type { Shading } from './shade.ts';
import { type Margins, type SectionView, toPicture } from './view.ts';

/** What is written on the picture of the cavity. SI. */
export interface CavityLabels {
  /** Round outlines carry the diameter sign. */
  readonly round: boolean;
  /** Middle of the cavity across the picture (m). */
  readonly centre: number;
  /** How far the cavity reaches behind the cutting plane (m): the entry size's line stands clear above it. */
  readonly behind: number;
  readonly entrySize: number;
  readonly floorSize: number;
  readonly depth: number;
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

const DETAIL_RADIUS = 60;

/** Room the labels need round the cavity, in pixels. */
export function overlayMargins(unit = 1): Margins {
  return { left: 190 * unit, right: 200 * unit, top: 62 * unit, bottom: (96 + CAPTION_HEIGHT) * unit };
}

interface Drawing {
  readonly sheet: Sheet;
  readonly view: SectionView;
  readonly labels: CavityLabels;
  readonly left: number;
  readonly right: number;
  /** Picture heights of the farthest rim, the entry face and the floor. */
  readonly back: number;
  readonly face: number;
  readonly floor: number;
}

function picturePoints(view: SectionView, points: ArrayLike<number>): number[] {
  return Array.from(points, (value, n) => (value - (n % 2 === 0 ? view.left : view.top)) / view.pixel);
}

function drawSizes(drawing: Drawing): void {
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
  drawWidth(sheet, {
    ...span(labels.floorSize),
    at: floor + 28 * unit,
    origins: [floor, floor],
    text: `floor ${sign}${inMm(labels.floorSize)}`,
  });
}

function drawRuler(drawing: Drawing): void {
  const { sheet, view, labels, face, floor } = drawing;
  const { unit, palette } = sheet;
  const deepest = Math.max(labels.depth, labels.wantedDepth);
  const x = drawing.left - 76 * unit;
  const down = (z: number): number => toPicture(view, 0, view.yCut, z).py;
  const pen = { colour: palette.ink, width: PEN.dimension };
  const major = ticks(0, deepest * MILLIMETRES_PER_METRE, Math.max(2, Math.min(6, (floor - face) / (44 * unit))));
  const minor = ticks(0, deepest * MILLIMETRES_PER_METRE, major.values.length * 5);
  drawLine(sheet, [x, face, x, down(deepest)], { ...pen, width: 1.2 });
  for (const mm of minor.values) drawLine(sheet, [x - 5 * unit, down(mm * 1e-3), x, down(mm * 1e-3)], pen);
  for (const mm of major.values) {
    const y = down(mm * 1e-3);
    drawLine(sheet, [x - 9 * unit, y, x, y], { ...pen, width: 1.2 });
    const at = mm === 0 ? y - 7 * unit : y + 4 * unit;
    askLabel(sheet, figure(mm, Math.max(1, major.decimals)), [{ x: x - 14 * unit, y: at, anchor: 'end' }]);
  }
  askLabel(
    sheet,
    'mm',
    [
      { x: x - 14 * unit, y: down(deepest) + 18 * unit, anchor: 'end' },
      { x: x + 8 * unit, y: down(deepest) + 4 * unit },
    ],
    { colour: palette.ink2, size: 11 },
  );
  // the depth reached, pointed at from the cavity's side
  const y = down(labels.depth);
  const tip = [x + 3 * unit, y, x + 11 * unit, y - 4.5 * unit, x + 11 * unit, y + 4.5 * unit];
  sheet.parts.push(element('path', { d: pathData(tip, true), fill: palette.ink }));
  askLabel(sheet, inMm(labels.depth), [{ x: x + 14 * unit, y: y + 4.5 * unit }], { weight: 600, size: 13 });
}

function drawStillToCut(drawing: Drawing): void {
  const { sheet, view, labels, floor } = drawing;
  const { unit, palette } = sheet;
  const left = labels.wantedDepth - labels.depth;
  if (left < 0.5e-6) return;
  const wanted = toPicture(view, 0, view.yCut, labels.wantedDepth).py;
  const pen = { colour: palette.ink2, width: PEN.dimension, dash: PEN.nominalDash };
  drawLine(sheet, [drawing.left, floor, drawing.left, wanted, drawing.right, wanted, drawing.right, floor], pen);
  askLabel(sheet, `${inMm(left)} to go`, [{ x: drawing.left + 9 * unit, y: wanted - 8 * unit }], {
    colour: palette.ink2,
  });
}

function drawTool(drawing: Drawing): void {
  const { sheet, view, labels, face } = drawing;
  const { tool } = labels;
  if (tool === undefined) return;
  const { unit, palette } = sheet;
  const above = -0.115 * labels.entrySize;
  const points = picturePoints(view, toolProfile(tool, above));
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
  const text = tool.worn > 0 ? `tool, worn ${inMm(tool.worn)} mm` : 'tool';
  const target = { x: first[0], y: Math.min(face - 12 * unit, first[1] + 0.35 * (face - first[1])), gap: 0 };
  const ways = [
    { dx: -26 * unit, dy: -18 * unit },
    { dx: -40 * unit, dy: -30 * unit },
    { dx: -26 * unit, dy: 4 * unit },
  ];
  askLabel(sheet, text, asides(sheet, target, { text, style: {} }, ways));
}

function drawChip(drawing: Drawing): void {
  const { sheet, view, labels } = drawing;
  const { chip } = labels;
  if (chip === undefined) return;
  const { unit } = sheet;
  const behind = chip.y >= view.yCut;
  const text = `largest chip ${inUm(chip.width)} \u00b5m${behind ? '' : ', in the half cut away'}`;
  const style = { weight: 600 } as const;
  if (!behind) {
    askLabel(sheet, text, [{ x: 16 * unit, y: 30 * unit }], style);
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

function drawCorner(drawing: Drawing): void {
  const { sheet, view, labels, floor } = drawing;
  const { outline } = labels;
  if (outline === undefined) return;
  const { unit } = sheet;
  const radius = DETAIL_RADIUS * unit;
  const centre = [
    view.width - radius - 26 * unit,
    Math.max(drawing.face + radius + 12 * unit, floor - radius * 0.6),
  ] as const;
  const room = 14 * unit;
  const times = Math.max(2, Math.round(radius / room));
  const scale = times / view.pixel;
  // the middle of the ring lies inside the corner, so that the tool's edge shows
  const shift = (0.42 * radius) / scale;
  const x = labels.centre + labels.floorSize / 2 - shift;
  const z = labels.depth - shift;
  const mark = toPicture(view, x, view.yCut, z);
  const reach = (2.2 * radius) / scale;
  const detail = {
    x,
    z,
    outline: stretchNear(outline, x + shift, z + shift, reach),
    centre,
    radius,
    scale,
    mark: [mark.px, mark.py] as const,
    markRadius: radius / times,
    id: 'corner',
    ...(labels.tool === undefined ? {} : { tool: labels.tool }),
    ...(labels.cracks === undefined ? {} : { cracks: labels.cracks }),
  };
  drawCornerDetail(sheet, detail, `corner \u00d7${times}`);
}

function drawCracks(drawing: Drawing): void {
  const { sheet, view, labels } = drawing;
  const strokes = picturePoints(view, labels.cracks ?? []);
  let data = '';
  for (let n = 0; n + 3 < strokes.length; n += 4) data += pathData(strokes.slice(n, n + 4));
  if (data === '') return;
  const { palette, unit } = sheet;
  sheet.parts.push(element('path', { d: data, fill: 'none', stroke: palette.ink2, 'stroke-width': 0.6 * unit }));
}

/** Dimensions, ruler, scale bar, marks, legend and caption over a picture of the same view. */
export function cavityOverlay(view: SectionView, labels: CavityLabels, options: OverlayOptions = {}): Overlay {
  const unit = options.unit ?? 1;
  const sheet = newSheet(options.palette ?? LIGHT, { x: 0, y: 0, width: view.width, height: view.height }, unit);
  const drawing: Drawing = {
    sheet,
    view,
    labels,
    left: toPicture(view, labels.centre - labels.entrySize / 2, view.yCut, 0).px,
    right: toPicture(view, labels.centre + labels.entrySize / 2, view.yCut, 0).px,
    back: toPicture(view, 0, view.yCut + labels.behind, 0).py,
    face: toPicture(view, 0, view.yCut, 0).py,
    floor: toPicture(view, 0, view.yCut, labels.depth).py,
  };
  if (labels.outline !== undefined) keepClear(sheet, curveInPicture(view, labels.outline));
  drawCracks(drawing);
  drawStillToCut(drawing);
  const middle = toPicture(view, labels.centre, view.yCut, 0).px;
  const bottom = toPicture(view, 0, view.yCut, Math.max(labels.depth, labels.wantedDepth)).py;
  drawLine(sheet, [middle, drawing.back - 52 * unit, middle, Math.max(drawing.floor + 44 * unit, bottom + 14 * unit)], {
    colour: sheet.palette.ink2,
    width: PEN.dimension,
    dash: PEN.centreDash,
  });
  drawTool(drawing);
  drawSizes(drawing);
  drawRuler(drawing);
  drawChip(drawing);
  drawCorner(drawing);
  const length = oneTwoFive(0.3 * labels.entrySize);
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
