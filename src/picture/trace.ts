import type { Profile } from '#src/base/field.ts';
import { MICROMETRES_PER_METRE, MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import { figure, inMm, inUm } from './figures.ts';
import { LIGHT, type Palette, PEN } from './palette.ts';
import { drawLabel, drawLine, keepClear, newSheet, type PlacedLabel, type Sheet, type Stroke } from './sheet.ts';
import { element, pathData, svgDocument } from './svg.ts';
import { ticks } from './ticks.ts';
import { textWidth, wrapText } from './type.ts';

/** One roughness figure as it stands in the heading. */
export interface TraceFigure {
  /** Symbol of the standard: Ra, Rz, Rsk, ... */
  readonly symbol: string;
  /** In m, or a pure number. */
  readonly value: number;
  readonly kind: 'length' | 'number';
}

/** The roughness trace and the settings it was evaluated with. SI. */
export interface TraceDrawing {
  readonly title: string;
  /** Heights along the floor (m), up positive. */
  readonly profile: Profile;
  /** Mean line: one height (m), or one per point of the profile. */
  readonly mean: number | ArrayLike<number>;
  readonly figures: readonly TraceFigure[];
  /** Nesting indices and evaluation length (m). */
  readonly lambdaC: number;
  readonly lambdaS: number;
  readonly evaluationLength: number;
  /** Where the evaluation departs from the standard, one sentence each. */
  readonly departures: readonly string[];
  /** Earlier traces, oldest first, drawn pale above the present one. */
  readonly earlier?: readonly { readonly label: string; readonly profile: Profile }[];
}

export interface DrawnTrace {
  readonly svg: string;
  readonly width: number;
  readonly height: number;
  readonly labels: readonly PlacedLabel[];
  readonly strokes: readonly Stroke[];
  /** Units per metre along and up. */
  readonly along: number;
  readonly up: number;
}

const WIDTH = 680;
const PRINT_WIDTH = (WIDTH * 25.4e-3) / 96;
const PLOT = { x: 46, y: 62, width: 622, height: 150 } as const;
const GHOST_STEP = 22;

interface Plot {
  readonly sheet: Sheet;
  readonly along: number;
  readonly up: number;
  /** Sheet height of zero. */
  readonly zero: number;
}

/** The profile as a polyline with at most two points a drawing unit: lowest and highest in each, in order. */
function polyline(profile: Profile, along: number, up: number, zero: number): number[] {
  const points: number[] = [];
  const { z, spacing } = profile;
  const y = (n: number): number => zero - (z[n] as number) * up;
  const perUnit = 1 / (spacing * along);
  const stride = Math.max(1, perUnit / 1.5);
  for (let from = 0; from < z.length; from += stride) {
    const first = Math.floor(from);
    const last = Math.min(z.length - 1, Math.floor(from + stride) - 1);
    let low = first;
    let high = first;
    for (let n = first; n <= last; n++) {
      if ((z[n] as number) < (z[low] as number)) low = n;
      if ((z[n] as number) > (z[high] as number)) high = n;
    }
    for (const n of low === high ? [low] : [Math.min(low, high), Math.max(low, high)]) {
      points.push(PLOT.x + n * spacing * along, y(n));
    }
  }
  return points;
}

function extremes(z: ArrayLike<number>): readonly [number, number] {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (let n = 0; n < z.length; n++) {
    low = Math.min(low, z[n] as number);
    high = Math.max(high, z[n] as number);
  }
  return [low, high];
}

function drawAxes(plot: Plot, length: number, low: number, high: number): void {
  const { sheet, along, up, zero } = plot;
  const { palette } = sheet;
  const pen = { colour: palette.rule, width: 1 };
  const bottom = PLOT.y + PLOT.height;
  const axis = { size: 11, colour: palette.ink2 } as const;
  drawLine(sheet, [PLOT.x, PLOT.y, PLOT.x, bottom, PLOT.x + PLOT.width, bottom], pen);
  const heights = ticks(low * MICROMETRES_PER_METRE, high * MICROMETRES_PER_METRE, 6);
  for (const um of heights.values) {
    const y = zero - (um / MICROMETRES_PER_METRE) * up;
    drawLine(sheet, [PLOT.x - 5, y, PLOT.x, y], pen);
    drawLabel(sheet, figure(um, heights.decimals), [{ x: PLOT.x - 8, y: y + 4, anchor: 'end' }], axis);
  }
  drawLabel(sheet, '\u00b5m', [{ x: PLOT.x - 8, y: PLOT.y - 6, anchor: 'end' }], axis);
  const lengths = ticks(0, length * MILLIMETRES_PER_METRE, 8);
  for (const mm of lengths.values) {
    const x = PLOT.x + (mm / MILLIMETRES_PER_METRE) * along;
    drawLine(sheet, [x, bottom, x, bottom + 5], pen);
    const last = mm === lengths.values[lengths.values.length - 1];
    const text = `${figure(mm, lengths.decimals)}${last ? ' mm' : ''}`;
    const half = textWidth(text, axis.size) / 2;
    drawLabel(sheet, text, [{ x: Math.min(x, WIDTH - 2 - half), y: bottom + 18, anchor: 'middle' }], axis);
  }
}

function drawMean(plot: Plot, drawing: TraceDrawing): void {
  const { sheet, along, up, zero } = plot;
  const { mean, profile } = drawing;
  const level = (n: number): number => (typeof mean === 'number' ? mean : (mean[n] as number));
  const last = profile.z.length - 1;
  const points: number[] = [];
  const stride = typeof mean === 'number' ? Math.max(1, last) : Math.max(1, Math.floor(last / 200));
  for (let n = 0; n <= last; n += stride) points.push(PLOT.x + n * profile.spacing * along, zero - level(n) * up);
  drawLine(sheet, points, { colour: sheet.palette.ink, width: PEN.dimension, dash: PEN.centreDash });
}

function drawHeading(sheet: Sheet, drawing: TraceDrawing): void {
  const words = drawing.figures.map(({ symbol, value, kind }) =>
    kind === 'length' ? `${symbol} ${inUm(value)} \u00b5m` : `${symbol} ${figure(value, 2)}`,
  );
  drawLabel(sheet, drawing.title, [{ x: 8, y: 18 }], { weight: 600, size: 13, widest: WIDTH - 16 });
  const line = words.join('   ').replaceAll('   ', ' \u00b7 ');
  drawLabel(sheet, line, [{ x: 8, y: 36 }], { weight: 600, widest: WIDTH - 16 });
}

function footLines(drawing: TraceDrawing, times: number): string[] {
  const settings =
    `\u03bbc ${inMm(drawing.lambdaC, 2)} mm \u00b7 \u03bbs ${inUm(drawing.lambdaS)} \u00b5m \u00b7 ` +
    `evaluation length ${inMm(drawing.evaluationLength, 2)} mm \u00b7 heights drawn \u00d7${Math.round(times)}`;
  const departures = drawing.departures.length === 0 ? 'As the standard asks.' : drawing.departures.join(' ');
  return [...wrapText(settings, WIDTH - 16, 11, 2), ...wrapText(departures, WIDTH - 16, 11, 4)];
}

/** The roughness trace as an SVG drawing for a page 180 mm wide. Throws RangeError on a profile of fewer than two points. */
export function drawTrace(drawing: TraceDrawing, palette: Palette = LIGHT): DrawnTrace {
  const { profile, earlier = [] } = drawing;
  if (profile.z.length < 2) throw new RangeError('a trace needs two points at least');
  const length = (profile.z.length - 1) * profile.spacing;
  const [least, most] = extremes(profile.z);
  const margin = Math.max(0.12 * (most - least), 1e-9);
  const [low, high] = [least - 1.6 * margin, most + margin];
  const ghosts = earlier.length * GHOST_STEP;
  const along = PLOT.width / length;
  const up = (PLOT.height - ghosts) / (high - low);
  const zero = PLOT.y + PLOT.height + low * up;
  const foot = footLines(drawing, up / along);
  const height = PLOT.y + PLOT.height + 34 + foot.length * 15;
  const sheet = newSheet(palette, { x: 0, y: 0, width: WIDTH, height });
  const plot: Plot = { sheet, along, up, zero };
  sheet.parts.push(
    element('rect', { x: 0, y: 0, width: WIDTH, height, fill: palette.paper }),
    element('rect', { ...PLOT, fill: palette.plotGround }),
  );
  earlier.forEach(({ profile: ghost }, n) => {
    const lift = (earlier.length - n) * GHOST_STEP;
    drawLine(sheet, polyline(ghost, along, up, zero - lift), { colour: palette.rule, width: 0.6, open: true });
  });
  const line = polyline(profile, along, up, zero);
  const bottom = PLOT.y + PLOT.height;
  const ground = [...line, line[line.length - 2] as number, bottom, PLOT.x, bottom];
  sheet.parts.push(element('path', { d: pathData(ground, true), fill: palette.glass }));
  drawLine(sheet, line, { colour: palette.ink, width: 1.2 });
  drawMean(plot, drawing);
  keepClear(sheet, [PLOT.x, bottom, PLOT.x + PLOT.width, bottom]);
  drawAxes(plot, length, low, high);
  drawHeading(sheet, drawing);
  if (earlier.length > 0) {
    const words = `earlier, raised: ${earlier.map(({ label }) => label).join(', ')}`;
    drawLabel(sheet, words, [{ x: PLOT.x + PLOT.width, y: PLOT.y - 6, anchor: 'end' }], {
      size: 11,
      colour: palette.ink2,
      widest: PLOT.width - 40,
    });
  }
  foot.forEach((text, n) => {
    drawLabel(sheet, text, [{ x: 8, y: bottom + 38 + n * 15 }], { size: 11, colour: palette.ink2 });
  });
  return {
    svg: svgDocument({ width: WIDTH, height, printWidth: PRINT_WIDTH, title: drawing.title }, sheet.parts),
    width: WIDTH,
    height,
    labels: sheet.labels,
    strokes: sheet.strokes,
    along,
    up,
  };
}
