import { type Palette, PEN } from './palette.ts';
import type { SectionDrawing } from './section.ts';
import type { SectionFrame } from './section-layout.ts';
import { drawLine, type Sheet } from './sheet.ts';
import { element, type Markup, pathData } from './svg.ts';
import { strokesAbove } from './through.ts';
import { partsOf, recessProfiles, type ToolOutline, toolProfiles } from './tool.ts';

/** The section of the work itself: cut faces, breaks, backing, and the outlines of tool and drawing laid over. */
export interface SectionWork {
  readonly sheet: Sheet;
  readonly frame: SectionFrame;
  readonly drawing: SectionDrawing;
  /** x0, z0, ... in m: left wall down, floor, right wall up. */
  readonly outline: Float64Array;
  /** From the leftmost wall to the rightmost (m). */
  readonly extent: { readonly from: number; readonly to: number };
}

/** Sheet position of a place across (m). */
export function xAt({ frame, extent }: SectionWork, x: number): number {
  return frame.middle + (x - (extent.from + extent.to) / 2) * frame.across;
}

/** Sheet position of a depth (m). */
export function yAt({ frame }: SectionWork, z: number): number {
  return frame.face + z * frame.down;
}

/** Points x0, z0, ... (m) on the sheet. */
export function onSheet(work: SectionWork, line: ArrayLike<number>): number[] {
  return Array.from(line, (value, n) => (n % 2 === 0 ? xAt(work, value) : yAt(work, value)));
}

/** A break line from x0 to x1, about three units high, one wave per 106 units. */
function wave(x0: number, x1: number, y: number): number[] {
  const points: number[] = [];
  const count = 48;
  for (let n = 0; n <= count; n++) {
    points.push(x0 + ((x1 - x0) * n) / count, y + 3 * Math.sin((6 * Math.PI * n) / count));
  }
  return points;
}

function reversed(line: ArrayLike<number>): number[] {
  const points: number[] = [];
  for (let n = line.length - 2; n >= 0; n -= 2) points.push(line[n] as number, line[n + 1] as number);
  return points;
}

/** Where the work is thicker than drawn: the gap of the break, and the strip of work shown beneath it. */
const BREAK_GAP = 8;
const BREAK_ABOVE = 18;

/** Pattern of thin lines at 45 degrees for a material that is not the work. */
export function hatching(id: string, palette: Palette, unit: number, spacing = 7): Markup {
  const gap = spacing * unit;
  return element(
    'defs',
    {},
    element(
      'pattern',
      { id, width: gap, height: gap, patternUnits: 'userSpaceOnUse', patternTransform: 'rotate(45)' },
      element('path', { d: `M0 0V${gap}`, stroke: palette.ink3, 'stroke-width': 0.7 * unit }),
    ),
  );
}

function drawBacking(work: SectionWork): void {
  const { sheet, frame, drawing } = work;
  const { palette, parts } = sheet;
  const lower = wave(frame.right, frame.left, frame.backing);
  const d = pathData([frame.left, frame.bottom, frame.right, frame.bottom, ...lower], true);
  parts.push(
    hatching('section-backing', palette, 1),
    element('path', { d, fill: palette.plotGround }),
    element('path', { d, fill: 'url(#section-backing)' }),
  );
  drawLine(sheet, lower, { colour: palette.ink, width: PEN.dimension });
  // the face between work and backing, and what the tool has cut into that
  const pen = { colour: palette.ink, width: PEN.dimension };
  const recesses = recessProfiles(drawing.tool ?? NO_TOOL, drawing.thickness, drawing.exit?.into ?? 0);
  let x = frame.left;
  for (const recess of recesses.map((profile) => onSheet(work, profile))) {
    drawLine(sheet, recess, { ...pen, fill: palette.paper });
    drawLine(sheet, [x, frame.bottom, recess[0] as number, frame.bottom], pen);
    x = recess[recess.length - 2] as number;
  }
  drawLine(sheet, [x, frame.bottom, frame.right, frame.bottom], pen);
}

/** Takes nothing out of anything. */
const NO_TOOL: ToolOutline = {
  width: 0,
  centre: 0,
  faceDepth: 0,
  edgeRadius: 0,
  worn: 0,
  newEdgeRadius: 0,
  parts: [],
};

/** The work of a cut that goes through: cut faces either side, and between the holes of a gang. */
function drawPierced(work: SectionWork, top: readonly number[]): void {
  const { sheet, frame, drawing, extent } = work;
  const { palette } = sheet;
  if (drawing.exit?.backing) drawBacking(work);
  const under = [frame.right, frame.bottom, frame.left, frame.bottom];
  sheet.parts.push(element('path', { d: pathData([...top, ...under], true), fill: palette.glass }));
  const middle = (extent.from + extent.to) / 2;
  const ends = {
    from: middle + (frame.left - frame.middle) / frame.across,
    to: middle + (frame.right - frame.middle) / frame.across,
  };
  const line = [ends.from, 0, ...work.outline, ends.to, 0];
  const { lines, face } = strokesAbove(line, drawing.thickness, ends);
  const pen = { colour: palette.ink, width: PEN.cut };
  const inFrame = (points: readonly number[]) =>
    onSheet(work, points).map((v, n) => (n % 2 === 0 ? Math.min(frame.right, Math.max(frame.left, v)) : v));
  for (const part of lines) drawLine(sheet, inFrame(part), pen);
  for (const { from, to } of face) drawLine(sheet, inFrame([from, drawing.thickness, to, drawing.thickness]), pen);
}

/** Draws the work, and what lies beneath it. */
export function drawMaterial(work: SectionWork): void {
  drawBody(work);
  const { sheet } = work;
  for (const line of work.drawing.loose ?? []) {
    const pen = { colour: sheet.palette.ink, width: PEN.cut, fill: sheet.palette.glass, closed: true };
    drawLine(sheet, onSheet(work, line), pen);
  }
}

function drawBody(work: SectionWork): void {
  const { sheet, frame, outline } = work;
  const { palette } = sheet;
  const cut = onSheet(work, outline).map((value, n) =>
    n % 2 === 0 ? Math.min(frame.right, Math.max(frame.left, value)) : value,
  );
  const top = [frame.left, frame.face, ...cut, frame.right, frame.face];
  if (work.drawing.exit !== undefined) {
    drawPierced(work, top);
    return;
  }
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

/** The drawing's outline where none is given: a box, open below where the cut goes through. */
function nominalBox({ nominal, centre, exit, thickness }: SectionDrawing): number[][] {
  const left = centre - nominal.entrySize / 2;
  const right = centre + nominal.entrySize / 2;
  if (exit !== undefined)
    return [
      [left, 0, left, thickness],
      [right, 0, right, thickness],
    ];
  return [[left, 0, left, nominal.depth, right, nominal.depth, right, 0]];
}

/** How far above the entry face the tool is drawn (units). */
const SHANK = 34;

/** Least difference between new and worn that is drawn (units). */
const SEEN = 1;

function looksWorn(tool: ToolOutline, { across, down }: SectionFrame): boolean {
  const rounder = tool.edgeRadius - tool.newEdgeRadius;
  return tool.worn * down > SEEN || 0.3 * rounder * down > SEEN || (tool.sideLoss ?? 0) * across > SEEN;
}

function drawTool(work: SectionWork, tool: ToolOutline, faint: boolean): void {
  const { sheet, frame } = work;
  const { palette } = sheet;
  const above = -SHANK / frame.down;
  if (!faint && looksWorn(tool, frame)) {
    // where only its face has worn, the sides are those of the worn tool
    const rim = tool.faceDepth - Math.max(tool.edgeRadius, tool.newEdgeRadius);
    const plain = (tool.sideLoss ?? 0) === 0 && partsOf(tool).every(({ face, pilots }) => !face && !pilots);
    for (const profile of toolProfiles(tool, plain ? Math.max(above, rim) : above, 'new')) {
      drawLine(sheet, onSheet(work, profile), { colour: palette.ink, width: 0.7, dash: PEN.newToolDash });
    }
  }
  for (const profile of toolProfiles(tool, above)) {
    const points = onSheet(work, profile);
    const shank = wave(points[points.length - 2] as number, points[0] as number, yAt(work, above));
    const pen = faint
      ? { colour: palette.rule, width: 0.8, dash: PEN.earlierToolDash }
      : { colour: palette.ink, width: 1, dash: PEN.toolDash };
    drawLine(sheet, faint ? points : [...points, ...shank], { ...pen, closed: !faint });
  }
}

/** Draws what the section is held against: the drawing's outline, centre lines and the tools. */
export function drawReferences(work: SectionWork): void {
  const { sheet, frame, drawing } = work;
  const { palette } = sheet;
  for (const line of drawing.nominal.lines ?? nominalBox(drawing)) {
    drawLine(sheet, onSheet(work, line), { colour: palette.ink2, width: PEN.dimension, dash: PEN.nominalDash });
  }
  const foot = drawing.exit === undefined ? frame.floor + 46 : frame.backing + 46;
  for (const centre of drawing.centres ?? [drawing.centre]) {
    const x = xAt(work, centre);
    const top = (drawing.centres?.length ?? 1) > 1 ? frame.face - 88 : 50;
    drawLine(sheet, [x, top, x, foot], { colour: palette.ink2, width: PEN.dimension, dash: PEN.centreDash });
  }
  for (const tool of drawing.earlier ?? []) drawTool(work, tool, true);
  if (drawing.tool !== undefined) drawTool(work, drawing.tool, false);
}
