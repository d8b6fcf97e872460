import { figure, inDegrees, inMm, inUm } from './figures.ts';
import type { SectionDrawing } from './section.ts';
import { drawLabel, type Sheet } from './sheet.ts';
import { textWidth, wrapText } from './type.ts';

const EDGE = 8;

/** One line of the table of figures. */
export interface Row {
  readonly name: string;
  readonly value: string;
  readonly limit: string | undefined;
}

/** The figures of the section with the limits they are held against. */
export function figureRows(drawing: SectionDrawing): Row[] {
  const { limits = {}, chip, tool } = drawing;
  const taper = Number.isFinite(drawing.taper) ? `${inDegrees(drawing.taper)}\u00b0` : 'too shallow to measure';
  return [
    { name: 'Entry size', value: `${inMm(drawing.entrySize)} mm`, limit: limits.entry },
    { name: 'Floor size', value: `${inMm(drawing.floorSize)} mm`, limit: limits.floor },
    { name: 'Depth', value: `${inMm(drawing.depth)} mm`, limit: limits.depth },
    { name: 'Taper, per side', value: taper, limit: limits.taper },
    { name: 'Corner radius', value: `${inMm(drawing.cornerRadius)} mm`, limit: limits.corner },
    {
      name: 'Largest chip',
      value: chip === undefined ? 'none' : `${inUm(chip.width)} \u00b5m, ${inUm(chip.depth)} \u00b5m deep`,
      limit: limits.chip,
    },
    { name: 'Tool, lost length', value: tool === undefined ? 'not drawn' : `${inMm(tool.worn)} mm`, limit: undefined },
    {
      name: 'Tool, edge radius',
      value: tool === undefined ? 'not drawn' : `${inMm(tool.edgeRadius)} mm`,
      limit: undefined,
    },
  ];
}

const ROW = 17;
const FOOT_GAP = 30;

/** Draws the figures in two columns and the caption beneath at the foot of the sheet. */
export function drawFoot(sheet: Sheet, lines: readonly string[], rows: readonly Row[]): void {
  const { palette } = sheet;
  const half = Math.ceil(rows.length / 2);
  const top = sheet.area.height - footHeight(lines.length, rows.length) + FOOT_GAP;
  rows.forEach((row, n) => {
    const x = n < half ? EDGE : sheet.area.width / 2 + 12;
    const y = top + (n % half) * ROW;
    drawLabel(sheet, row.name, [{ x, y }], { weight: 600 });
    drawLabel(sheet, row.value, [{ x: x + 112, y }]);
    const used = 112 + textWidth(row.value, 12) + 10;
    if (row.limit !== undefined)
      drawLabel(sheet, row.limit, [{ x: x + used, y }], {
        colour: palette.ink2,
        widest: sheet.area.width / 2 - 18 - used,
      });
  });
  lines.forEach((line, n) => {
    drawLabel(sheet, line, [{ x: EDGE, y: top + half * ROW + 8 + n * 15 }], { colour: palette.ink2, size: 11 });
  });
}

/** Height (drawing units) of the foot with this many caption lines and rows of figures. */
export function footHeight(lines: number, rows: number): number {
  return FOOT_GAP + Math.ceil(rows / 2) * ROW + 8 + lines * 15 + 2;
}

/** The caption wrapped to the sheet; its last line says whether the drawing is to scale. */
export function captionLines(drawing: SectionDrawing, exaggeration: number): string[] {
  const stretched =
    exaggeration === 1
      ? 'True scale, across and down.'
      : `Not to true scale: heights drawn \u00d7${figure(exaggeration, exaggeration < 1 ? 2 : 0)} against widths.`;
  return [...drawing.caption.slice(0, 4), stretched].flatMap((line) => wrapText(line, 660, 11, 2));
}
