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

/** Sizes as a drawing writes them: one, or length by width. */
function sizesText(all: readonly number[] | undefined, one: number): string {
  const sizes = all?.some(Number.isFinite) ? all : [one];
  if (!sizes.some(Number.isFinite)) return 'not measured';
  return `${sizes.map((size) => inMm(size)).join(' \u00d7 ')} mm`;
}

function chipText(chip: { readonly width: number; readonly depth: number } | undefined): string {
  return chip === undefined ? 'none' : `${inUm(chip.width)} \u00b5m, ${inUm(chip.depth)} \u00b5m deep`;
}

function floorRows(drawing: SectionDrawing): Row[] {
  const { limits = {}, exit, shoulder, shaped } = drawing;
  const depth = { name: 'Depth', value: `${inMm(drawing.depth)} mm`, limit: limits.depth };
  if (exit !== undefined) {
    const size = Number.isFinite(exit.size) ? `${inMm(exit.size)} mm` : 'not measured';
    return [
      { name: 'Exit size', value: size, limit: undefined },
      { name: 'Through', value: `${inMm(drawing.thickness)} mm`, limit: undefined },
    ];
  }
  if (shaped) return [{ ...depth, name: 'Depth, tip' }];
  if (shoulder !== undefined)
    return [{ name: 'Pilot size', value: sizesText(undefined, drawing.floorSize), limit: limits.floor }, depth];
  const name = drawing.sizes?.overall ? 'Floor, overall' : 'Floor size';
  return [{ name, value: sizesText(drawing.sizes?.floor, drawing.floorSize), limit: limits.floor }, depth];
}

/** Least loss of the tool's side that three decimals of a millimetre show (m). */
const SHOWN_LOSS = 0.5e-6;

function toolRows({ tool }: SectionDrawing): Row[] {
  const value = (length: number | undefined) => (length === undefined ? 'not drawn' : `${inMm(length)} mm`);
  const rows = [
    { name: 'Tool, lost length', value: value(tool?.worn), limit: undefined },
    { name: 'Tool, edge radius', value: value(tool?.edgeRadius), limit: undefined },
  ];
  const side = tool?.sideLoss ?? 0;
  return side >= SHOWN_LOSS ? [...rows, { name: 'Tool, lost per side', value: value(side), limit: undefined }] : rows;
}

/** The figures of the section with the limits they are held against. */
export function figureRows(drawing: SectionDrawing): Row[] {
  const { limits = {}, chip, exit, shoulder } = drawing;
  const taper = Number.isFinite(drawing.taper) ? `${inDegrees(drawing.taper)}\u00b0` : 'too shallow to measure';
  const corner = Number.isFinite(drawing.cornerRadius) ? `${inMm(drawing.cornerRadius)} mm` : 'not measured';
  const flat = exit === undefined && !drawing.shaped;
  return [
    {
      name: drawing.sizes?.overall ? 'Entry, overall' : 'Entry size',
      value: sizesText(drawing.sizes?.entry, drawing.entrySize),
      limit: limits.entry,
    },
    ...floorRows(drawing),
    ...(shoulder === undefined
      ? []
      : [{ name: 'Shoulder depth', value: `${inMm(shoulder.depth)} mm`, limit: undefined }]),
    // a shaped floor may leave no wall to have a taper
    ...(drawing.shaped && !Number.isFinite(drawing.taper)
      ? []
      : [{ name: 'Taper, per side', value: taper, limit: limits.taper }]),
    ...(flat ? [{ name: 'Corner radius', value: corner, limit: limits.corner }] : []),
    { name: exit === undefined ? 'Largest chip' : 'Chip, entry', value: chipText(chip), limit: limits.chip },
    ...(exit === undefined ? [] : [{ name: 'Chip, exit', value: chipText(exit.chip), limit: limits.exitChip }]),
    ...toolRows(drawing),
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

/** Most lines of the caption's own, each wrapped to two. */
const CAPTION_LINES = 7;

/** The caption wrapped to the sheet; its last line says whether the drawing is to scale, and where the plane lies. */
export function captionLines(drawing: SectionDrawing, exaggeration: number): string[] {
  const stretched =
    exaggeration === 1
      ? 'True scale, across and down.'
      : `Not to true scale: heights drawn \u00d7${figure(exaggeration, exaggeration < 1 ? 2 : 0)} against widths.`;
  const plane = drawing.plane === undefined ? '' : ` Section in the plane y = ${inMm(drawing.plane)} mm.`;
  const faint = drawing.earlier?.length ? ' Faint: the tool of the pass before, at its depth.' : '';
  const lines = [...drawing.caption.slice(0, CAPTION_LINES), `${stretched}${plane}${faint}`];
  return lines.flatMap((line) => wrapText(line, 660, 11, 2));
}
