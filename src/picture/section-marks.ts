import { drawCornerDetail } from './detail.ts';
import { drawHeight, drawWidth } from './dimension.ts';
import { inDegrees, inMm, inUm } from './figures.ts';
import { DETAIL_RADIUS, HEIGHT_STEP, type SectionFrame } from './section-layout.ts';
import { onSheet, type SectionWork, xAt, yAt } from './section-work.ts';
import { asides, askLabel, type Place } from './sheet.ts';
import { partsOf, sideAt, toolProfiles } from './tool.ts';
import { textWidth } from './type.ts';

/** Dimensions, call-outs and the enlarged corner of the section drawing. */

const diameter = (round: boolean): string => (round ? '\u00d8\u2009' : '');

/** Too little work is left under the floor for a dimension to stand in it. */
function isThin(frame: SectionFrame): boolean {
  return !frame.broken && frame.bottom < frame.floor + 40;
}

interface Span {
  readonly from: number;
  readonly to: number;
}

function spanOf(work: SectionWork, size: number): Span {
  const { centre } = work.drawing;
  return { from: xAt(work, centre - size / 2), to: xAt(work, centre + size / 2) };
}

/** Depth from which the outline is no longer the entry face (m). */
const BELOW_FACE = 2e-6;

/** Where the work ends left of the cut at the entry face, chips taken off, and at the far face, on the sheet. */
function leftEdges(work: SectionWork): { readonly face: number; readonly exit: number } {
  const { outline, drawing } = work;
  const edge = { face: drawing.centre, exit: drawing.centre };
  for (let n = 0; n < outline.length; n += 2) {
    const [x, z] = [outline[n], outline[n + 1]] as [number, number];
    if (z > BELOW_FACE) edge.face = Math.min(edge.face, x);
    if (z >= drawing.thickness) edge.exit = Math.min(edge.exit, x);
  }
  return { face: xAt(work, edge.face), exit: xAt(work, edge.exit) };
}

/** Vertical dimensions of the drawing, from the innermost outwards: depth (m), where its extension line starts, weight. */
function heightsOf(work: SectionWork): { to: number; origin: number; weight: 400 | 600 }[] {
  const { drawing, frame } = work;
  const { shoulder } = drawing;
  const entry = spanOf(work, drawing.entrySize).from;
  const floor = drawing.shaped ? tipOf(work) : spanOf(work, drawing.floorSize).from;
  const heights: { to: number; origin: number; weight: 400 | 600 }[] = [];
  if (shoulder !== undefined) heights.push({ to: yAt(work, shoulder.depth), origin: entry - 6, weight: 600 });
  if (drawing.exit === undefined) {
    heights.push({ to: frame.floor, origin: (Number.isFinite(floor) ? floor : entry) - 6, weight: 600 });
  }
  const origin = drawing.exit === undefined ? entry - 60 : Math.min(entry, leftEdges(work).exit) - 6;
  return [...heights, { to: frame.bottom, origin, weight: 400 }];
}

/** How many vertical dimensions a drawing has. */
export function heightCount({ shoulder, exit }: SectionWork['drawing']): number {
  return 1 + (shoulder === undefined ? 0 : 1) + (exit === undefined ? 1 : 0);
}

/** Where the deepest point of the dimensioned island stands on the sheet. */
function tipOf(work: SectionWork): number {
  const { drawing, outline } = work;
  let deepest = { x: drawing.centre, z: Number.NEGATIVE_INFINITY };
  for (let n = 0; n < outline.length; n += 2) {
    const [x, z] = [outline[n], outline[n + 1]] as [number, number];
    if (Math.abs(x - drawing.centre) < drawing.entrySize / 2 && z > deepest.z) deepest = { x, z };
  }
  return xAt(work, deepest.x);
}

/** Draws the sizes, the pitch, the depths and the thickness. */
export function drawDimensions(work: SectionWork): void {
  const { sheet, frame, drawing } = work;
  const { shoulder, exit, centres = [] } = drawing;
  const sign = diameter(drawing.round);
  const entry = spanOf(work, drawing.entrySize);
  drawWidth(sheet, {
    ...entry,
    at: frame.face - 60,
    origins: [frame.face, frame.face],
    text: `entry ${sign}${inMm(drawing.entrySize)}`,
  });
  if (centres.length > 1) drawPitch(work, centres);
  if (exit !== undefined && Number.isFinite(exit.size)) {
    const text = `exit ${sign}${inMm(exit.size)}`;
    drawWidth(sheet, {
      ...spanOf(work, exit.size),
      at: frame.backing + 34,
      origins: [frame.bottom, frame.bottom],
      text,
    });
  } else if (exit === undefined && !drawing.shaped && Number.isFinite(drawing.floorSize)) {
    drawWidth(sheet, {
      ...spanOf(work, drawing.floorSize),
      at: isThin(frame) ? frame.bottom + 28 : frame.floor + 32,
      origins: [frame.floor, frame.floor],
      text: `${shoulder === undefined ? 'floor' : 'pilot'} ${sign}${inMm(drawing.floorSize)}`,
    });
  }
  const texts = [
    ...(shoulder === undefined ? [] : [inMm(shoulder.depth)]),
    ...(exit === undefined ? [inMm(drawing.depth)] : []),
    inMm(drawing.thickness),
  ];
  const rim = Math.min(entry.from, leftEdges(work).face);
  heightsOf(work).forEach(({ to, origin, weight }, n) => {
    drawHeight(sheet, {
      from: frame.face,
      to,
      at: entry.from - HEIGHT_STEP * (n + 1),
      origins: [n === 0 ? rim - 6 : entry.from - HEIGHT_STEP * n - 8, origin],
      text: texts[n] as string,
      style: { weight },
    });
  });
}

function drawPitch(work: SectionWork, centres: readonly number[]): void {
  const { sheet, frame } = work;
  const [first, second] = centres as [number, number];
  drawWidth(sheet, {
    from: xAt(work, first),
    to: xAt(work, second),
    at: frame.face - 84,
    origins: [frame.face, frame.face],
    bare: true,
    text: `pitch ${inMm(second - first)}`,
  });
}

/** Draws what is written beside walls, rim, exit and tool. */
export function drawCallouts(work: SectionWork): void {
  drawTaper(work);
  drawChips(work);
  drawToolName(work);
  drawBackingName(work);
}

function drawTaper(work: SectionWork): void {
  const { sheet, frame, drawing, extent } = work;
  if (!Number.isFinite(drawing.taper)) return;
  const tall = frame.floor - frame.face;
  const height = drawing.shoulder === undefined ? 0.35 * tall : 0.5 * drawing.shoulder.depth * frame.down;
  const text = `taper ${inDegrees(drawing.taper)}\u00b0 per side`;
  const wall = {
    x: xAt(work, extent.to) - (Math.tan(drawing.taper) * height) / frame.exaggeration,
    y: frame.face + height,
    gap: 0,
  };
  const outwards = [-8, 4, 16, -16, 30].flatMap((dy) => [18, 30].map((dx) => ({ dx, dy })));
  askLabel(sheet, text, asides(sheet, wall, { text, style: {} }, outwards));
}

function drawChips(work: SectionWork): void {
  const { sheet, frame, drawing, extent } = work;
  const style = { weight: 600 } as const;
  const { chip, exit } = drawing;
  if (chip !== undefined) {
    const side = chip.side === 'left' ? -1 : 1;
    const text = `chip ${inUm(chip.width)} \u00d7 ${inUm(chip.depth)} \u00b5m`;
    const edge = side < 0 ? extent.from : extent.to;
    const rim = { x: xAt(work, edge + (side * chip.width) / 2), y: frame.face, gap: 3 };
    const ways = [-18, -30, -42].flatMap((dy) => [20, 40, 8].map((dx) => ({ dx: side * dx, dy })));
    askLabel(sheet, text, asides(sheet, rim, { text, style }, ways), style);
  }
  if (exit?.chip === undefined) return;
  const side = exit.chip.side === 'left' ? -1 : 1;
  const text = `exit chip ${inUm(exit.chip.width)} \u00d7 ${inUm(exit.chip.depth)} \u00b5m`;
  const edge = side < 0 ? drawing.centre - exit.size / 2 : extent.to - (drawing.entrySize - exit.size) / 2;
  const rim = { x: xAt(work, edge + (side * exit.chip.width) / 2), y: frame.bottom, gap: 3 };
  // into the work, and where there is air beneath, there first
  const up = [-22, -34, -46, -60].flatMap((dy) => [24, 44, 12].map((dx) => ({ dx: side * dx, dy })));
  const down = [24, 38, 50].flatMap((dy) => [24, 44, 12].map((dx) => ({ dx: side * dx, dy })));
  const ways = exit.backing ? up : [...down, ...up];
  askLabel(sheet, text, asides(sheet, rim, { text, style }, ways), style);
}

function drawToolName(work: SectionWork): void {
  const { sheet, frame, drawing } = work;
  const { tool } = drawing;
  if (tool === undefined) return;
  // the part at the right of the width, which a bore may have cut in two
  const end = tool.centre + 0.5001 * tool.width;
  const index = partsOf(tool).findLastIndex(({ to }) => to <= end);
  const profile = toolProfiles(tool, -34 / frame.down)[index];
  if (profile === undefined) return;
  const text = `tool ${diameter(drawing.round)}${inMm(tool.width)}`;
  const shank = { x: xAt(work, sideAt(profile, -16 / frame.down, 'right')), y: frame.face - 16, gap: 0 };
  const inwards = [0, 10, -8, 20].flatMap((dy) => [-16, -30].map((dx) => ({ dx, dy })));
  const outside = [-12, -24].flatMap((dy) => [26, 44, 16].map((dx) => ({ dx, dy })));
  const other = { ...shank, x: 2 * xAt(work, tool.centre) - shank.x };
  const leftwards = [-12, -24, 0].flatMap((dy) => [-26, -44].map((dx) => ({ dx, dy })));
  askLabel(sheet, text, [
    ...asides(sheet, shank, { text, style: {} }, [...inwards, ...outside]),
    ...asides(sheet, other, { text, style: {} }, leftwards),
  ]);
}

function drawBackingName({ sheet, frame, drawing }: SectionWork): void {
  if (!drawing.exit?.backing) return;
  const text = 'backing';
  const y = (frame.bottom + frame.backing) / 2 + 4;
  const right = frame.right - 14 - textWidth(text, 12);
  const places: Place[] = [
    { x: right, y },
    { x: frame.left + 14, y },
    { x: right - 90, y },
  ];
  askLabel(sheet, text, places, { ground: sheet.palette.plotGround });
}

/** Draws the words of the drawing's outline. */
export function drawNominal(work: SectionWork): void {
  const { sheet, drawing, frame, extent } = work;
  const { nominal, exit } = drawing;
  const sign = diameter(drawing.round);
  const text =
    exit === undefined
      ? `nominal ${sign}${inMm(nominal.entrySize)} \u00d7 ${inMm(nominal.depth)}`
      : `nominal ${sign}${inMm(nominal.entrySize)}, through`;
  const x = xAt(work, drawing.centre - nominal.entrySize / 2) + 9;
  const y = yAt(work, nominal.depth);
  const places = [14, 46, 60, -8].map((dy) => ({ x, y: y + dy }));
  if (drawing.shaped)
    places.unshift(...[16, 30].map((dy) => ({ x: tipOf(work) + 12, y: yAt(work, drawing.depth) + dy })));
  const right = xAt(work, Math.max(extent.to, drawing.centre + nominal.entrySize / 2)) + 14;
  if (exit !== undefined) {
    const shallow = [44, 60, 76, 28, 92].map((dy) => ({ x: right, y: frame.face + dy }));
    places.splice(0, places.length, ...shallow);
  }
  for (const dy of [-14, -30, 12, -60, -90, 30]) places.push({ x: right, y: y + dy });
  if (!frame.broken && exit === undefined) places.push({ x, y: frame.bottom + 16 });
  if (isThin(frame) && exit === undefined) {
    places.unshift({ x, y: frame.bottom + 15 }, { x, y: frame.bottom + 46 });
  }
  askLabel(sheet, text, places, { colour: sheet.palette.ink2 });
}

/** Whether the corner between wall and floor is drawn enlarged. */
export function hasCorner({ shaped, exit, floorSize }: SectionWork['drawing']): boolean {
  return !shaped && exit === undefined && Number.isFinite(floorSize);
}

/** Draws the corner enlarged, where there is one. */
export function drawCorner(work: SectionWork): void {
  const { sheet, frame, drawing, outline, extent } = work;
  if (!hasCorner(drawing)) return;
  const radius = DETAIL_RADIUS;
  const measured = Number.isFinite(drawing.cornerRadius);
  const corner = measured ? drawing.cornerRadius : (drawing.tool?.edgeRadius ?? 0);
  const times = Math.max(2, Math.min(12, Math.round((0.5 * radius) / Math.max(1e-9, corner * frame.across))));
  const scale = times * frame.across;
  const shift = (0.36 * radius) / scale;
  // of the island at the right, so that the line to the circle crosses nothing
  const x = extent.to - (drawing.entrySize - drawing.floorSize) / 2 - shift;
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
  const [markX, markY] = onSheet(work, [x + shift, z + shift]) as [number, number];
  const markRadius = Math.max(7, radius / times);
  drawCornerDetail(
    sheet,
    {
      x,
      z,
      outline: near,
      centre: [frame.right - radius - 16, frame.cornerBelow ? frame.bottom + radius + 14 : inWork],
      radius,
      scale,
      mark: [markX - 0.36 * markRadius, markY - 0.36 * markRadius],
      markRadius,
      id: 'section-corner',
      ...(drawing.tool === undefined ? {} : { tool: drawing.tool }),
    },
    `corner \u00d7${times}${measured ? `, R\u2009${inMm(drawing.cornerRadius)}` : ''}${frame.exaggeration === 1 ? '' : ', true scale'}`,
  );
}
