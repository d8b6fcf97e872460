import { drawWidth } from '../dimension.ts';
import { inMm, inUm } from '../figures.ts';
import { PEN } from '../palette.ts';
import { hatching } from '../section-work.ts';
import { asides, askLabel, drawLine } from '../sheet.ts';
import { element } from '../svg.ts';
import type { ExitFigures } from '../through.ts';
import { recessProfiles } from '../tool.ts';
import type { OverlayDrawing } from './overlay.ts';
import { BACKING_DRAWN } from './overlay-foot.ts';
import { lineInPicture } from './render.ts';

/** Hatches the backing beneath the work, and names it. */
export function drawBacking({ sheet, view, labels, floor }: OverlayDrawing): void {
  const { unit, palette } = sheet;
  const height = BACKING_DRAWN * unit;
  sheet.parts.push(
    hatching('backing', palette, unit),
    element('rect', { x: 0, y: floor, width: view.width, height, fill: 'url(#backing)' }),
  );
  const pen = { colour: palette.ink, width: PEN.dimension };
  const recesses = labels.tool ? recessProfiles(labels.tool, labels.depth, labels.exit?.into ?? 0) : [];
  let x = 0;
  for (const recess of recesses.map((profile) => lineInPicture(view, profile))) {
    drawLine(sheet, recess, { ...pen, fill: palette.plotGround });
    drawLine(sheet, [x, floor, recess[0] as number, floor], pen);
    x = recess[recess.length - 2] as number;
  }
  drawLine(sheet, [x, floor, view.width, floor], pen);
  drawLine(sheet, [0, floor + height, view.width, floor + height], pen);
  const y = floor + height / 2 + 4 * unit;
  const places = [
    { x: view.width - 24 * unit, y, anchor: 'end' },
    { x: 24 * unit, y, anchor: 'start' },
  ] as const;
  askLabel(sheet, 'backing', places, { ground: palette.plotGround });
}

/** Draws the size on the exit face and its largest chip. */
export function drawExit(drawing: OverlayDrawing, exit: ExitFigures): void {
  const { sheet, view, labels, floor } = drawing;
  const { unit } = sheet;
  const base = floor + (exit.backing ? BACKING_DRAWN * unit : 0);
  if (Number.isFinite(exit.size)) {
    drawWidth(sheet, {
      from: (labels.centre - exit.size / 2 - view.left) / view.pixel,
      to: (labels.centre + exit.size / 2 - view.left) / view.pixel,
      at: base + 32 * unit,
      origins: [floor, floor],
      text: `exit ${labels.round ? '\u00d8\u2009' : ''}${inMm(exit.size)}`,
    });
  }
  const { chip } = exit;
  if (chip === undefined) return;
  const side = chip.side === 'left' ? -1 : 1;
  const text = `exit chip ${inUm(chip.width)} \u00d7 ${inUm(chip.depth)} \u00b5m`;
  const style = { weight: 600 } as const;
  const x = (side < 0 ? drawing.left : drawing.right) + (0.5 * side * chip.width) / view.pixel;
  const up = [-16, -30, -44].flatMap((dy) => [30, 50, 16].map((dx) => ({ dx: side * dx * unit, dy: dy * unit })));
  const down = [26, 40].flatMap((dy) => [30, 50, 16].map((dx) => ({ dx: side * dx * unit, dy: dy * unit })));
  const ways = exit.backing ? up : [...down, ...up];
  askLabel(sheet, text, asides(sheet, { x, y: floor, gap: 3 * unit }, { text, style }, ways), style);
}
