import { MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import { drawCornerDetail } from '../detail.ts';
import { figure, inMm } from '../figures.ts';
import { PEN } from '../palette.ts';
import { askLabel, drawLine } from '../sheet.ts';
import { element, pathData } from '../svg.ts';
import { ticks } from '../ticks.ts';
import { stretchNear } from './contour.ts';
import type { OverlayDrawing } from './overlay.ts';
import { toPicture } from './view.ts';

/** Radius of the circle with the corner enlarged, 1/96 inch. */
const DETAIL_RADIUS = 60;

/** Draws the depth ruler at the left, with the depths reached pointed at. */
export function drawRuler(drawing: OverlayDrawing): void {
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
    const ways = mm === 0 ? [-7] : [4, -6, 15];
    const places = ways.map((dy) => ({ x: x - 14 * unit, y: y + dy * unit, anchor: 'end' }) as const);
    askLabel(sheet, figure(mm, Math.max(1, major.decimals)), places);
  }
  askLabel(
    sheet,
    'mm',
    [
      { x: x - 14 * unit, y: down(deepest) + 18 * unit, anchor: 'end' },
      { x: x - 14 * unit, y: face - 22 * unit, anchor: 'end' },
      { x: x + 8 * unit, y: down(deepest) + 4 * unit },
    ],
    { colour: palette.ink2, size: 11 },
  );
  // the depths reached, pointed at from the cavity's side
  for (const z of labels.shoulder === undefined ? [labels.depth] : [labels.shoulder.depth, labels.depth]) {
    const y = down(z);
    const tip = [x + 3 * unit, y, x + 11 * unit, y - 4.5 * unit, x + 11 * unit, y + 4.5 * unit];
    sheet.parts.push(element('path', { d: pathData(tip, true), fill: palette.ink }));
    const places = [4.5, -6, 15].map((dy) => ({ x: x + 14 * unit, y: y + dy * unit }));
    askLabel(sheet, inMm(z), places, { weight: 600, size: 13 });
  }
}

/** Draws the corner between wall and floor enlarged, where there is one. */
export function drawCorner(drawing: OverlayDrawing): void {
  const { sheet, view, labels, floor } = drawing;
  const { outline } = labels;
  const flat = !labels.shaped && labels.exit === undefined && Number.isFinite(labels.floorSize);
  if (outline === undefined || !flat) return;
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
  // of the island at the right, so that the line to the circle crosses nothing
  const x = drawing.extent.to - (labels.entrySize - labels.floorSize) / 2 - shift;
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
