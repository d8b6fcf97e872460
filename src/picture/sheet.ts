import type { Palette } from './palette.ts';
import { PEN } from './palette.ts';
import { element, escapeText, type Markup, pathData } from './svg.ts';
import { fitText, textWidth, type Weight } from './type.ts';

/**
 * A drawing in the making: what is drawn so far, and where lines and labels lie, so that the next label can be put where
 * it touches neither. Lines first, labels after. Drawing units, y down.
 */
export interface Sheet {
  readonly palette: Palette;
  /** Labels stay inside. */
  readonly area: Box;
  /** Drawing units per 1/96 inch: all weights and sizes scale with it. */
  readonly unit: number;
  readonly parts: Markup[];
  readonly labels: PlacedLabel[];
  readonly strokes: Stroke[];
  /** Labels still to be placed, when all lines are drawn. */
  readonly waiting: WaitingLabel[];
}

interface WaitingLabel {
  readonly text: string;
  readonly places: readonly Place[];
  readonly style: LabelStyle;
}

export interface Box {
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

export interface Stroke {
  readonly x0: number;
  readonly y0: number;
  readonly x1: number;
  readonly y1: number;
}

export interface PlacedLabel {
  readonly text: string;
  readonly box: Box;
  /** Touches counted where it was put: 0 when it is clear of everything. */
  readonly conflicts: number;
}

export function newSheet(palette: Palette, area: Box, unit = 1): Sheet {
  return { palette, area, unit, parts: [], labels: [], strokes: [], waiting: [] };
}

export function boxesTouch(a: Box, b: Box, clear = 0): boolean {
  return (
    a.x < b.x + b.width + clear &&
    b.x < a.x + a.width + clear &&
    a.y < b.y + b.height + clear &&
    b.y < a.y + a.height + clear
  );
}

/** Whether the stroke comes nearer than `clear` to the box (the box grown by `clear` and the stroke share a point). */
export function strokeTouchesBox(stroke: Stroke, box: Box, clear = 0): boolean {
  const dx = stroke.x1 - stroke.x0;
  const dy = stroke.y1 - stroke.y0;
  let enter = 0;
  let leave = 1;
  const bounds = [
    [stroke.x0, dx, box.x - clear, box.x + box.width + clear],
    [stroke.y0, dy, box.y - clear, box.y + box.height + clear],
  ] as const;
  for (const [from, delta, low, high] of bounds) {
    if (delta === 0) {
      if (from < low || from > high) return false;
      continue;
    }
    const a = (low - from) / delta;
    const b = (high - from) / delta;
    enter = Math.max(enter, Math.min(a, b));
    leave = Math.min(leave, Math.max(a, b));
  }
  return enter <= leave;
}

export interface Pen {
  readonly colour: string;
  /** In 1/96 inch. */
  readonly width: number;
  readonly dash?: readonly number[];
  readonly fill?: string;
  readonly closed?: boolean;
  /** Colour of a wider line beneath, so that the line shows on any ground. */
  readonly casing?: string;
  /** Labels may lie across it. */
  readonly open?: boolean;
  readonly opacity?: number;
}

/** A polyline (x0, y0, x1, y1, ...) in drawing units. */
export function drawLine(sheet: Sheet, points: ArrayLike<number>, pen: Pen): void {
  const { unit } = sheet;
  const data = pathData(points, pen.closed);
  const common = { d: data, fill: pen.fill ?? 'none', 'stroke-linejoin': 'round' };
  if (pen.casing !== undefined) {
    sheet.parts.push(element('path', { ...common, stroke: pen.casing, 'stroke-width': (pen.width + 1.2) * unit }));
  }
  const dash = pen.dash?.map((length) => length * unit).join(' ');
  sheet.parts.push(
    element('path', {
      ...common,
      stroke: pen.colour,
      'stroke-width': pen.width * unit,
      'stroke-dasharray': dash,
      opacity: pen.opacity,
    }),
  );
  if (!pen.open) keepClear(sheet, points, pen.closed);
}

/** Keeps labels off a polyline that something else draws. */
export function keepClear(sheet: Sheet, points: ArrayLike<number>, closed = false): void {
  const count = points.length / 2;
  const segments = closed ? count : count - 1;
  for (let n = 0; n < segments; n++) {
    const m = (n + 1) % count;
    sheet.strokes.push({
      x0: points[2 * n] as number,
      y0: points[2 * n + 1] as number,
      x1: points[2 * m] as number,
      y1: points[2 * m + 1] as number,
    });
  }
}

export interface LabelStyle {
  /** In 1/96 inch; 12 when left out. */
  readonly size?: number;
  readonly weight?: Weight;
  readonly colour?: string;
  /** Longer text ends in an ellipsis (drawing units). */
  readonly widest?: number;
  /** Colour of a box behind the text, where the ground is hatched. */
  readonly ground?: string;
}

/** A place for a label: the end, middle or start of its base line, with the leader it then needs. */
export interface Place {
  readonly x: number;
  readonly y: number;
  readonly anchor?: 'start' | 'middle' | 'end';
  /** Turned to read from the right, about (x, y). */
  readonly upright?: boolean;
  /** Leader line to draw when the label lands here. */
  readonly leader?: readonly number[];
}

const CAP = 0.76;
const DROP = 0.24;

function boxOf(place: Place, width: number, size: number): Box {
  const anchor = place.anchor ?? 'start';
  const back = anchor === 'start' ? 0 : anchor === 'middle' ? width / 2 : width;
  if (place.upright)
    return { x: place.x - CAP * size, y: place.y - width + back, width: (CAP + DROP) * size, height: width };
  return { x: place.x - back, y: place.y - CAP * size, width, height: (CAP + DROP) * size };
}

function inside(area: Box, box: Box): boolean {
  return (
    box.x >= area.x &&
    box.y >= area.y &&
    box.x + box.width <= area.x + area.width &&
    box.y + box.height <= area.y + area.height
  );
}

function leaderStrokes(leader: readonly number[] | undefined): Stroke[] {
  const strokes: Stroke[] = [];
  if (leader === undefined) return strokes;
  for (let n = 0; n + 3 < leader.length; n += 2) {
    const [x0, y0, x1, y1] = leader.slice(n, n + 4) as [number, number, number, number];
    strokes.push({ x0, y0, x1, y1 });
  }
  return strokes;
}

function conflictsAt(sheet: Sheet, box: Box, leader: readonly Stroke[]): number {
  const clear = 1.5 * sheet.unit;
  let count = inside(sheet.area, box) ? 0 : 10;
  for (const label of sheet.labels) {
    if (boxesTouch(box, label.box, clear)) count += 4;
    for (const stroke of leader) if (strokeTouchesBox(stroke, label.box, clear)) count += 1;
  }
  for (const stroke of sheet.strokes) if (strokeTouchesBox(stroke, box, clear)) count += 1;
  return count;
}

/** Asks for a label; it is put at the first of the places where it touches nothing once all lines are drawn. */
export function askLabel(sheet: Sheet, text: string, places: readonly Place[], style: LabelStyle = {}): void {
  sheet.waiting.push({ text, places, style });
}

/** Places the labels asked for, in order. */
export function placeLabels(sheet: Sheet): void {
  for (const { text, places, style } of sheet.waiting.splice(0)) drawLabel(sheet, text, places, style);
}

/** Puts the text at the first of the places where it touches nothing, else where it touches least. */
export function drawLabel(sheet: Sheet, text: string, places: readonly Place[], style: LabelStyle = {}): PlacedLabel {
  const { unit } = sheet;
  const size = (style.size ?? 12) * unit;
  const weight = style.weight ?? 400;
  const line = style.widest === undefined ? text : fitText(text, style.widest, size, weight);
  const width = textWidth(line, size, weight);
  let best: { place: Place; box: Box; conflicts: number } | undefined;
  for (const place of places) {
    const box = boxOf(place, width, size);
    const conflicts = conflictsAt(sheet, box, leaderStrokes(place.leader));
    if (best === undefined || conflicts < best.conflicts) best = { place, box, conflicts };
    if (conflicts === 0) break;
  }
  if (best === undefined) throw new RangeError(`the label "${line}" was given no place`);
  const { place, box, conflicts } = best;
  if (place.leader !== undefined) {
    drawLine(sheet, place.leader, { colour: sheet.palette.ink, width: PEN.dimension });
  }
  const label = { text: line, box, conflicts };
  sheet.labels.push(label);
  if (style.ground !== undefined) {
    const room = 4 * unit;
    const size = { width: box.width + 2 * room, height: box.height + room };
    sheet.parts.push(element('rect', { x: box.x - room, y: box.y - room / 2, ...size, fill: style.ground }));
  }
  sheet.parts.push(
    element(
      'text',
      {
        x: place.x,
        y: place.y,
        'font-size': size,
        'font-weight': weight === 600 ? '600' : undefined,
        'text-anchor': place.anchor === undefined || place.anchor === 'start' ? undefined : place.anchor,
        transform: place.upright ? `rotate(-90 ${place.x.toFixed(2)} ${place.y.toFixed(2)})` : undefined,
        fill: style.colour ?? sheet.palette.ink,
        'font-feature-settings': "'tnum'",
      },
      escapeText(line),
    ),
  );
  return label;
}

/** Which way a label lies from what it points at, and how far (drawing units). */
export interface Aside {
  readonly dx: number;
  readonly dy: number;
}

/**
 * Places for a label that is joined to (x, y) by a thin line running on beneath it; `gap` keeps the line's end off the
 * point.
 */
export function asides(
  sheet: Sheet,
  target: { readonly x: number; readonly y: number; readonly gap: number },
  label: { readonly text: string; readonly style: LabelStyle },
  ways: readonly Aside[],
): Place[] {
  const { unit } = sheet;
  const width = textWidth(label.text, (label.style.size ?? 12) * unit, label.style.weight);
  return ways.map(({ dx, dy }) => {
    const side = Math.sign(dx) || 1;
    const kneeX = target.x + dx;
    const kneeY = target.y + dy;
    const length = Math.sqrt(dx * dx + dy * dy);
    const fromX = target.x + (target.gap * dx) / length;
    const fromY = target.y + (target.gap * dy) / length;
    return {
      x: side > 0 ? kneeX : kneeX - width,
      y: kneeY - 5 * unit,
      leader: [fromX, fromY, kneeX, kneeY, kneeX + side * width, kneeY],
    };
  });
}
