import { cividis } from '../cividis.ts';
import { duration, inMm, inUm } from '../figures.ts';
import { hexOf } from '../palette.ts';
import { askLabel, drawLabel, drawLine, keepClear, type Sheet } from '../sheet.ts';
import { element } from '../svg.ts';
import { fitText, textWidth } from '../type.ts';
import type { CavityLabels, OverlayOptions } from './overlay.ts';
import type { SectionView } from './view.ts';

/** Height of the caption strip, 1/96 inch. */
export const CAPTION_HEIGHT = 34;

/** Height of the backing drawn beneath the work, 1/96 inch. */
export const BACKING_DRAWN = 40;

const LEGEND_STOPS = 32;

/** What the colours mean: name, both ends, unit. */
function legendWords(labels: CavityLabels, options: OverlayOptions): readonly [string, string] | undefined {
  const { shading } = options;
  if (shading === undefined || shading.kind === 'plain') return undefined;
  if (shading.kind === 'depth') return ['depth 0', `${inMm(shading.high)} mm`];
  if (shading.kind === 'damage') return ['damage depth 0', `${inUm(shading.high)} \u00b5m`];
  return ['last hit at 0', duration(options.recorded ?? labels.caption.time)];
}

/** Draws the colour bar with its name, both ends and the unit, ending at `right`; nothing for plain shading. */
export function drawLegend(
  sheet: Sheet,
  at: { readonly right: number; readonly y: number },
  labels: CavityLabels,
  options: OverlayOptions,
): void {
  const { y } = at;
  const words = legendWords(labels, options);
  if (words === undefined) return;
  const { unit } = sheet;
  const length = 150 * unit;
  const x = at.right - length;
  const stops = Array.from({ length: LEGEND_STOPS + 1 }, (_, n) =>
    element('stop', { offset: `${(100 * n) / LEGEND_STOPS}%`, 'stop-color': hexOf(...cividis(n / LEGEND_STOPS)) }),
  );
  sheet.parts.push(
    element('defs', {}, element('linearGradient', { id: 'map' }, ...stops)),
    element('rect', { x, y: y - 5 * unit, width: length, height: 10 * unit, fill: 'url(#map)' }),
  );
  keepClear(sheet, [x, y, x + length, y]);
  askLabel(sheet, words[0], [{ x: x - 8 * unit, y: y + 4 * unit, anchor: 'end' }]);
  askLabel(sheet, words[1], [{ x: x + length + 8 * unit, y: y + 4 * unit }]);
}

/** Draws the strip at the foot: title, then grit, time, depth, seed and version. */
export function drawCaption(sheet: Sheet, view: SectionView, labels: CavityLabels): void {
  const { palette, unit } = sheet;
  const { caption } = labels;
  const top = view.height - CAPTION_HEIGHT * unit;
  const y = top + 21.5 * unit;
  const edge = 16 * unit;
  sheet.parts.push(
    element('rect', { x: 0, y: top, width: view.width, height: CAPTION_HEIGHT * unit, fill: palette.paper }),
  );
  drawLine(sheet, [0, top, view.width, top], { colour: palette.ink, width: 1 });
  const room = view.width - 2 * edge;
  const settings = [
    fitText(caption.grit, 0.25 * room, 12 * unit),
    duration(caption.time),
    `${inMm(labels.depth)} mm deep`,
    `seed ${caption.seed}`,
    `version ${fitText(caption.version, 0.12 * room, 12 * unit)}`,
  ].join(' \u00b7 ');
  drawLabel(sheet, settings, [{ x: view.width - edge, y, anchor: 'end' }], { colour: palette.ink2 });
  const left = room - textWidth(settings, 12 * unit) - 20 * unit;
  drawLabel(sheet, caption.title, [{ x: edge, y }], { weight: 600, size: 13, widest: left });
}
