import { drawCornerDetail } from './detail.ts';
import { drawHeight, drawScaleBar, drawWidth } from './dimension.ts';
import { inDegrees, inMm, inUm, shortLength } from './figures.ts';
import { LIGHT, type Palette, PEN } from './palette.ts';
import { captionLines, drawFoot, figureRows, footHeight } from './section-foot.ts';
import { DETAIL_RADIUS, PRINT_WIDTH, type SectionFrame, sectionFrame } from './section-layout.ts';
import {
  asides,
  askLabel,
  drawLabel,
  drawLine,
  newSheet,
  type PlacedLabel,
  placeLabels,
  type Sheet,
  type Stroke,
} from './sheet.ts';
import { element, pathData, svgDocument } from './svg.ts';
import { oneTwoFive } from './ticks.ts';
import { type ToolOutline, toolProfile } from './tool.ts';

/** Points x0, z0, x1, z1, ... in m, x across from any origin, z down from the entry face. */
export type SectionLine = ArrayLike<number>;

/** Limits of the drawing as they are to be written, e.g. "\u2264 0.50\u00b0". */
export type SectionLimits = Partial<Record<'entry' | 'floor' | 'depth' | 'taper' | 'corner' | 'chip', string>>;

/** Everything the annotated section shows. SI; angles in radians. */
export interface SectionDrawing {
  readonly title: string;
  /** Lines beneath the drawing: settings, seed, version. */
  readonly caption: readonly string[];
  readonly round: boolean;
  /** Middle of the cavity across (m). */
  readonly centre: number;
  /** Left wall with chips and corner, from the entry face down; right wall the same; floor from left to right. */
  readonly left: SectionLine;
  readonly right: SectionLine;
  readonly floor: SectionLine;
  readonly depth: number;
  readonly entrySize: number;
  readonly floorSize: number;
  /** Per side, positive where the cavity narrows downwards; NaN where it is too shallow to have one. */
  readonly taper: number;
  readonly cornerRadius: number;
  /** Largest chip of the rim: width on the entry face, depth down the wall, and on which side of the cut it is drawn. */
  readonly chip?: { readonly width: number; readonly depth: number; readonly side: 'left' | 'right' };
  readonly tool?: ToolOutline;
  readonly nominal: { readonly entrySize: number; readonly depth: number };
  readonly thickness: number;
  readonly limits?: SectionLimits;
}

/** A finished drawing, with what a test needs to see that labels are clear. */
export interface DrawnSection {
  readonly svg: string;
  readonly width: number;
  readonly height: number;
  readonly labels: readonly PlacedLabel[];
  readonly strokes: readonly Stroke[];
  /** Units per metre across, vertical over horizontal scale. */
  readonly across: number;
  readonly exaggeration: number;
}

interface Work {
  readonly sheet: Sheet;
  readonly frame: SectionFrame;
  readonly drawing: SectionDrawing;
  /** x0, z0, ... in m: left wall down, floor, right wall up. */
  readonly outline: Float64Array;
}

function reversed(line: SectionLine): number[] {
  const points: number[] = [];
  for (let n = line.length - 2; n >= 0; n -= 2) points.push(line[n] as number, line[n + 1] as number);
  return points;
}

function xAt(work: Work, x: number): number {
  return work.frame.middle + (x - work.drawing.centre) * work.frame.across;
}

function yAt(work: Work, z: number): number {
  return work.frame.face + z * work.frame.down;
}

function onSheet(work: Work, line: SectionLine): number[] {
  return Array.from(line, (value, n) => (n % 2 === 0 ? xAt(work, value) : yAt(work, value)));
}

function wave(x0: number, x1: number, y: number): number[] {
  const points: number[] = [];
  const count = 48;
  for (let n = 0; n <= count; n++) {
    points.push(x0 + ((x1 - x0) * n) / count, y + 3 * Math.sin((6 * Math.PI * n) / count));
  }
  return points;
}

/** Where the work is thicker than drawn: the gap of the break, and the strip of work shown beneath it. */
const BREAK_GAP = 8;
const BREAK_ABOVE = 18;

function drawMaterial(work: Work): void {
  const { sheet, frame, outline } = work;
  const { palette } = sheet;
  const cut = onSheet(work, outline).map((value, n) =>
    n % 2 === 0 ? Math.min(frame.right, Math.max(frame.left, value)) : value,
  );
  const top = [frame.left, frame.face, ...cut, frame.right, frame.face];
  const under = [frame.right, frame.bottom, frame.left, frame.bottom];
  sheet.parts.push(element('path', { d: pathData([...top, ...under], true), fill: palette.glass }));
  drawLine(sheet, top, { colour: palette.ink, width: PEN.cut });
  drawLine(sheet, under, { colour: palette.ink, width: PEN.cut });
  if (!frame.broken) return;
  const upper = wave(frame.left, frame.right, frame.bottom - BREAK_ABOVE - BREAK_GAP);
  const lower = reversed(wave(frame.left, frame.right, frame.bottom - BREAK_ABOVE));
  sheet.parts.push(element('path', { d: pathData([...upper, ...lower], true), fill: palette.paper }));
  drawLine(sheet, upper, { colour: palette.ink, width: PEN.dimension });
  drawLine(sheet, lower, { colour: palette.ink, width: PEN.dimension });
}

function drawReferences(work: Work): void {
  const { sheet, frame, drawing } = work;
  const { palette } = sheet;
  const { nominal } = drawing;
  const half = nominal.entrySize / 2;
  const box = [
    drawing.centre - half,
    0,
    drawing.centre - half,
    nominal.depth,
    drawing.centre + half,
    nominal.depth,
    drawing.centre + half,
    0,
  ];
  drawLine(sheet, onSheet(work, box), { colour: palette.ink2, width: PEN.dimension, dash: PEN.nominalDash });
  drawLine(sheet, [frame.middle, 50, frame.middle, frame.floor + 46], {
    colour: palette.ink2,
    width: PEN.dimension,
    dash: PEN.centreDash,
  });
  if (drawing.tool === undefined) return;
  const above = -34 / frame.down;
  const profile = onSheet(work, toolProfile(drawing.tool, above));
  const first = profile[0] as number;
  const last = profile[profile.length - 2] as number;
  const shank = wave(last, first, yAt(work, above));
  drawLine(sheet, [...profile, ...shank], { colour: palette.ink, width: 1, dash: PEN.toolDash, closed: true });
}

/** Too little work is left under the floor for a dimension to stand in it. */
function isThin(frame: SectionFrame): boolean {
  return !frame.broken && frame.bottom < frame.floor + 40;
}

function drawDimensions(work: Work): void {
  const { sheet, frame, drawing } = work;
  const sign = drawing.round ? '\u00d8\u2009' : '';
  const span = (size: number): { from: number; to: number } => ({
    from: xAt(work, drawing.centre - size / 2),
    to: xAt(work, drawing.centre + size / 2),
  });
  const entry = span(drawing.entrySize);
  drawWidth(sheet, {
    ...entry,
    at: frame.face - 60,
    origins: [frame.face, frame.face],
    text: `entry ${sign}${inMm(drawing.entrySize)}`,
  });
  const floor = span(drawing.floorSize);
  drawWidth(sheet, {
    ...floor,
    at: isThin(frame) ? frame.bottom + 28 : frame.floor + 32,
    origins: [frame.floor, frame.floor],
    text: `floor ${sign}${inMm(drawing.floorSize)}`,
  });
  drawHeight(sheet, {
    from: frame.face,
    to: frame.floor,
    at: entry.from - 52,
    origins: [entry.from - 6, floor.from - 6],
    text: inMm(drawing.depth),
  });
  drawHeight(sheet, {
    from: frame.face,
    to: frame.bottom,
    at: entry.from - 104,
    origins: [entry.from - 60, entry.from - 60],
    text: inMm(drawing.thickness),
    style: { weight: 400 },
  });
}

function drawCallouts(work: Work): void {
  const { sheet, frame, drawing } = work;
  const right = xAt(work, drawing.centre + drawing.entrySize / 2);
  const tall = frame.floor - frame.face;
  const slope = Number.isFinite(drawing.taper) ? drawing.taper : 0;
  const taper = `taper ${inDegrees(slope)}\u00b0 per side`;
  const wall = {
    x: right - (Math.tan(slope) * 0.35 * tall) / frame.exaggeration,
    y: frame.face + 0.35 * tall,
    gap: 0,
  };
  const outwards = [-8, 4, 16, -16, 30].flatMap((dy) => [18, 30].map((dx) => ({ dx, dy })));
  if (Number.isFinite(drawing.taper)) askLabel(sheet, taper, asides(sheet, wall, { text: taper, style: {} }, outwards));
  const { chip, tool } = drawing;
  if (chip !== undefined) {
    const side = chip.side === 'left' ? -1 : 1;
    const text = `chip ${inUm(chip.width)} \u00d7 ${inUm(chip.depth)} \u00b5m`;
    const rim = {
      x: xAt(work, drawing.centre + side * (drawing.entrySize / 2 + chip.width / 2)),
      y: frame.face,
      gap: 3,
    };
    const ways = [-18, -30, -42].flatMap((dy) => [20, 40, 8].map((dx) => ({ dx: side * dx, dy })));
    askLabel(sheet, text, asides(sheet, rim, { text, style: { weight: 600 } }, ways), { weight: 600 });
  }
  if (tool === undefined) return;
  const text = `tool ${drawing.round ? '\u00d8\u2009' : ''}${inMm(tool.width)}`;
  const x = xAt(work, tool.centre + tool.width / 2);
  const inwards = [0, 10, -8, 20].flatMap((dy) => [-16, -30].map((dx) => ({ dx, dy })));
  const outside = [-12, -24].flatMap((dy) => [26, 44].map((dx) => ({ dx, dy })));
  const shank = { x, y: frame.face - 16, gap: 0 };
  askLabel(sheet, text, asides(sheet, shank, { text, style: {} }, [...inwards, ...outside]));
}

function drawNominal(work: Work): void {
  const { sheet, drawing, frame } = work;
  const { nominal } = drawing;
  const sign = drawing.round ? '\u00d8\u2009' : '';
  const text = `nominal ${sign}${inMm(nominal.entrySize)} \u00d7 ${inMm(nominal.depth)}`;
  const x = xAt(work, drawing.centre - nominal.entrySize / 2) + 9;
  const y = yAt(work, nominal.depth);
  const places = [14, 46, 60, -8].map((dy) => ({ x, y: y + dy }));
  const right = xAt(work, drawing.centre + nominal.entrySize / 2) + 14;
  for (const dy of [-14, -30, 12, -60, -90, 30]) places.push({ x: right, y: y + dy });
  if (!frame.broken) places.push({ x, y: frame.bottom + 16 });
  if (isThin(frame)) places.unshift({ x, y: frame.bottom + 15 }, { x, y: frame.bottom + 46 });
  askLabel(sheet, text, places, { colour: sheet.palette.ink2 });
}

function drawCorner(work: Work): void {
  const { sheet, frame, drawing, outline } = work;
  const radius = DETAIL_RADIUS;
  const times = Math.max(
    2,
    Math.min(12, Math.round((0.5 * radius) / Math.max(1e-9, drawing.cornerRadius * frame.across))),
  );
  const scale = times * frame.across;
  const shift = (0.36 * radius) / scale;
  const x = drawing.centre + drawing.floorSize / 2 - shift;
  const z = drawing.depth - shift;
  const reach = (2.2 * radius) / scale;
  const near: number[] = [];
  for (let n = 0; n < outline.length; n += 2) {
    const dx = (outline[n] as number) - x;
    const dz = (outline[n + 1] as number) - z;
    if (dx * dx + dz * dz < reach * reach) near.push(outline[n] as number, outline[n + 1] as number);
  }
  if (near.length < 4) return;
  const inWork = Math.max(frame.face + radius + 46, frame.floor - radius * 0.4);
  const centre = [frame.right - radius - 16, frame.cornerBelow ? frame.bottom + radius + 14 : inWork] as const;
  const markRadius = Math.max(7, radius / times);
  drawCornerDetail(
    sheet,
    {
      x,
      z,
      outline: near,
      centre,
      radius,
      scale,
      mark: [xAt(work, x + shift) - 0.36 * markRadius, yAt(work, z + shift) - 0.36 * markRadius],
      markRadius,
      id: 'section-corner',
      ...(drawing.tool === undefined ? {} : { tool: drawing.tool }),
    },
    `corner \u00d7${times}, R\u2009${inMm(drawing.cornerRadius)}${frame.exaggeration === 1 ? '' : ', true scale'}`,
  );
}

/** The annotated half-section of a cavity as an SVG drawing for a page 180 mm wide. */
export function drawSection(drawing: SectionDrawing, palette: Palette = LIGHT): DrawnSection {
  const rows = figureRows(drawing);
  const deepest = Math.max(drawing.depth, drawing.nominal.depth);
  const probe = sectionFrame(deepest, drawing.entrySize, drawing.thickness, 0);
  const lines = captionLines(drawing, probe.exaggeration);
  const full = sectionFrame(deepest, drawing.entrySize, drawing.thickness, footHeight(lines.length, rows.length));
  const frame = { ...full, floor: full.face + drawing.depth * full.down };
  const sheet = newSheet(palette, { x: 0, y: 0, width: frame.width, height: frame.height });
  const outline = Float64Array.from([
    ...Array.from(drawing.left),
    ...Array.from(drawing.floor),
    ...reversed(drawing.right),
  ]);
  const work: Work = { sheet, frame, drawing, outline };
  sheet.parts.push(element('rect', { x: 0, y: 0, width: frame.width, height: frame.height, fill: palette.paper }));
  drawLabel(sheet, drawing.title, [{ x: frame.left, y: 20 }], { weight: 600, size: 15, widest: frame.width - 16 });
  drawMaterial(work);
  drawReferences(work);
  drawDimensions(work);
  drawCallouts(work);
  drawNominal(work);
  drawCorner(work);
  const length = oneTwoFive(0.3 * drawing.entrySize);
  drawScaleBar(sheet, { x: frame.right - 150, y: 44, length: length * frame.across, text: shortLength(length) });
  placeLabels(sheet);
  drawFoot(sheet, lines, rows);
  return {
    svg: svgDocument(
      { width: frame.width, height: frame.height, printWidth: PRINT_WIDTH, title: `Section of ${drawing.title}` },
      sheet.parts,
    ),
    width: frame.width,
    height: frame.height,
    labels: sheet.labels,
    strokes: sheet.strokes,
    across: frame.across,
    exaggeration: frame.exaggeration,
  };
}
