import { PEN } from './palette.ts';
import { askLabel, drawLine, type LabelStyle, type Place, type Sheet } from './sheet.ts';
import { element, pathData } from './svg.ts';

/** Dimension lines, rulers and scale bars on a sheet, after drawing practice: thin lines, filled arrowheads, text above. */

const ARROW_LENGTH = 8.5;
const ARROW_HALF_WIDTH = 1.6;
const OVERRUN = 3;

function arrow(sheet: Sheet, x: number, y: number, towards: readonly [number, number]): void {
  const { unit, palette } = sheet;
  const [ux, uy] = towards;
  const bx = x - ux * ARROW_LENGTH * unit;
  const by = y - uy * ARROW_LENGTH * unit;
  const w = ARROW_HALF_WIDTH * unit;
  const points = [x, y, bx - uy * w, by + ux * w, bx + uy * w, by - ux * w];
  sheet.parts.push(element('path', { d: pathData(points, true), fill: palette.ink }));
}

export interface LinearDimension {
  /** Ends along the measured direction. */
  readonly from: number;
  readonly to: number;
  /** Where the dimension line lies across it. */
  readonly at: number;
  /** Where the two extension lines start across it. */
  readonly origins: readonly [number, number];
  readonly text: string;
  readonly style?: LabelStyle;
  /** Lines that stand already take the place of the extension lines. */
  readonly bare?: boolean;
}

/** Shares along the dimension line at which its text is tried: the middle, then away from a centre line. */
const SHARES = [0.5, 0.5 + 0.12, 0.5 - 0.12, 0.7, 0.3, 0.8, 0.2];

/** A horizontal dimension: `from` and `to` are x, `at` and `origins` are y. The text stands above the line. */
export function drawWidth(sheet: Sheet, dimension: LinearDimension): void {
  const { from, to, at, origins } = dimension;
  const { unit } = sheet;
  const pen = { colour: sheet.palette.ink, width: PEN.dimension };
  for (const [x, origin] of dimension.bare
    ? []
    : ([
        [from, origins[0]],
        [to, origins[1]],
      ] as const)) {
    const side = Math.sign(at - origin);
    drawLine(sheet, [x, origin + side * 2 * unit, x, at + side * OVERRUN * unit], pen);
  }
  const tight = to - from < 3 * ARROW_LENGTH * unit;
  const reach = tight ? 2 * ARROW_LENGTH * unit : 0;
  drawLine(sheet, [from - reach, at, to + reach, at], pen);
  arrow(sheet, from, at, tight ? [1, 0] : [-1, 0]);
  arrow(sheet, to, at, tight ? [-1, 0] : [1, 0]);
  const above = at - 5 * unit;
  const places: Place[] = SHARES.map((share) => ({ x: from + share * (to - from), y: above, anchor: 'middle' }));
  places.push(
    { x: to + reach + 4 * unit, y: above, anchor: 'start' },
    { x: from - reach - 4 * unit, y: above, anchor: 'end' },
  );
  askLabel(sheet, dimension.text, places, { weight: 600, ...dimension.style });
}

/** A vertical dimension: `from` and `to` are y, `at` and `origins` are x. The text reads from the right, left of the line. */
export function drawHeight(sheet: Sheet, dimension: LinearDimension): void {
  const { from, to, at, origins } = dimension;
  const { unit } = sheet;
  const pen = { colour: sheet.palette.ink, width: PEN.dimension };
  [from, to].forEach((y, n) => {
    const origin = origins[n] as number;
    const side = Math.sign(at - origin);
    drawLine(sheet, [origin + side * 2 * unit, y, at + side * OVERRUN * unit, y], pen);
  });
  const tight = to - from < 3 * ARROW_LENGTH * unit;
  const reach = tight ? 2 * ARROW_LENGTH * unit : 0;
  drawLine(sheet, [at, from - reach, at, to + reach], pen);
  arrow(sheet, at, from, tight ? [0, 1] : [0, -1]);
  arrow(sheet, at, to, tight ? [0, -1] : [0, 1]);
  const middle = (from + to) / 2;
  const places: Place[] = [
    { x: at - 5 * unit, y: middle, anchor: 'middle', upright: true },
    { x: at - 6 * unit, y: middle + 4 * unit, anchor: 'end' },
    { x: at - 6 * unit, y: to + reach + 12 * unit, anchor: 'end' },
    { x: at + 14 * unit, y: middle, anchor: 'middle', upright: true },
    { x: at + 6 * unit, y: middle + 4 * unit, anchor: 'start' },
  ];
  askLabel(sheet, dimension.text, places, { weight: 600, ...dimension.style });
}

/** A scale bar from (x, y) to the right with end strokes and its length written behind. */
export function drawScaleBar(sheet: Sheet, bar: { x: number; y: number; length: number; text: string }): void {
  const { unit } = sheet;
  const { x, y, length } = bar;
  const end = 4 * unit;
  drawLine(sheet, [x, y, x + length, y], { colour: sheet.palette.ink, width: 2 });
  for (const at of [x, x + length]) {
    drawLine(sheet, [at, y - end, at, y + end], { colour: sheet.palette.ink, width: 1.2 });
  }
  askLabel(sheet, bar.text, [{ x: x + length + 8 * unit, y: y + 4 * unit }]);
}
