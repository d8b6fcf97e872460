import { PEN } from './palette.ts';
import { askLabel, drawLine, keepClear, type Sheet } from './sheet.ts';
import { element, pathData } from './svg.ts';
import { type ToolOutline, toolProfiles } from './tool.ts';
import { textWidth } from './type.ts';

/** A corner of the cut enlarged in a circle: the work in the glass tone, the tool hatched, as new dotted. */
export interface CornerDetail {
  /** The corner in the work (m). */
  readonly x: number;
  readonly z: number;
  /** Cut outline (x0, z0, x1, z1, ... in m), the work to its right going along, running well past the corner. */
  readonly outline: ArrayLike<number>;
  readonly tool?: ToolOutline;
  /** Straight strokes of cracks (x0, z0, x1, z1 each, m). */
  readonly cracks?: ArrayLike<number>;
  /** Middle and radius of the circle on the sheet. */
  readonly centre: readonly [number, number];
  readonly radius: number;
  /** Sheet units per metre in the circle. */
  readonly scale: number;
  /** Where the corner lies on the sheet and how large the circle about it is. */
  readonly mark: readonly [number, number];
  readonly markRadius: number;
  readonly id: string;
}

function circlePoints(x: number, y: number, radius: number): number[] {
  const points: number[] = [];
  for (let n = 0; n < 16; n++) {
    const angle = (n * Math.PI) / 8;
    points.push(x + radius * Math.cos(angle), y + radius * Math.sin(angle));
  }
  return points;
}

/** A ring that labels keep clear of. */
export function drawRing(sheet: Sheet, x: number, y: number, radius: number, width = 1.2): void {
  sheet.parts.push(
    element('circle', {
      cx: x,
      cy: y,
      r: radius,
      fill: 'none',
      stroke: sheet.palette.ink,
      'stroke-width': width * sheet.unit,
    }),
  );
  keepClear(sheet, circlePoints(x, y, radius), true);
}

function drawInside(sheet: Sheet, detail: CornerDetail): void {
  const { palette, unit, parts } = sheet;
  const [cx, cy] = detail.centre;
  const at = (points: ArrayLike<number>): number[] =>
    Array.from(points, (value, n) =>
      n % 2 === 0 ? cx + (value - detail.x) * detail.scale : cy + (value - detail.z) * detail.scale,
    );
  const curve = at(detail.outline);
  const firstY = curve[1] as number;
  const lastY = curve[curve.length - 1] as number;
  const wide = 4 * detail.radius;
  const work = [...curve, cx + wide, lastY, cx + wide, cy + wide, cx - wide, cy + wide, cx - wide, firstY];
  const inner: ReturnType<typeof element>[] = [
    element('rect', {
      x: cx - detail.radius,
      y: cy - detail.radius,
      width: 2 * detail.radius,
      height: 2 * detail.radius,
      fill: palette.paper,
    }),
    element('path', { d: pathData(work, true), fill: palette.glass }),
  ];
  if (detail.tool !== undefined) {
    const above = detail.z - (2 * detail.radius) / detail.scale;
    for (const profile of toolProfiles(detail.tool, above)) {
      const d = pathData(at(profile), true);
      const stroke = { stroke: palette.ink, 'stroke-width': 1.2 * unit };
      inner.push(element('path', { d, fill: `url(#${detail.id}-hatch)`, ...stroke }));
    }
    for (const profile of toolProfiles(detail.tool, above, 'new')) {
      inner.push(
        element('path', {
          d: pathData(at(profile)),
          fill: 'none',
          stroke: palette.ink,
          'stroke-width': PEN.dimension * unit,
          'stroke-dasharray': `${1.2 * unit} ${2 * unit}`,
        }),
      );
    }
  }
  const strokes = at(detail.cracks ?? []);
  let cracks = '';
  for (let n = 0; n + 3 < strokes.length; n += 4) cracks += pathData(strokes.slice(n, n + 4));
  if (cracks !== '')
    inner.push(element('path', { d: cracks, fill: 'none', stroke: palette.ink2, 'stroke-width': 0.7 * unit }));
  inner.push(
    element('path', {
      d: pathData(curve),
      fill: 'none',
      stroke: palette.ink,
      'stroke-width': PEN.cut * unit,
      'stroke-linejoin': 'round',
    }),
  );
  parts.push(element('g', { 'clip-path': `url(#${detail.id}-clip)` }, ...inner));
}

/** Draws the enlarged corner, the ring about the corner itself, the line between them, and the text beneath. */
export function drawCornerDetail(sheet: Sheet, detail: CornerDetail, text: string): void {
  const { palette, unit } = sheet;
  const [cx, cy] = detail.centre;
  const [mx, my] = detail.mark;
  const gap = 4 * unit;
  sheet.parts.push(
    element(
      'defs',
      {},
      element('clipPath', { id: `${detail.id}-clip` }, element('circle', { cx, cy, r: detail.radius })),
      element(
        'pattern',
        {
          id: `${detail.id}-hatch`,
          width: gap,
          height: gap,
          patternUnits: 'userSpaceOnUse',
          patternTransform: 'rotate(45)',
        },
        element('path', { d: `M0 0V${gap}`, stroke: palette.ink2, 'stroke-width': 0.7 * unit }),
      ),
    ),
  );
  drawInside(sheet, detail);
  drawRing(sheet, cx, cy, detail.radius);
  keepClear(sheet, [cx - detail.radius, cy, cx + detail.radius, cy]);
  drawRing(sheet, mx, my, detail.markRadius);
  const length = Math.sqrt((cx - mx) ** 2 + (cy - my) ** 2);
  const [ux, uy] = [(cx - mx) / length, (cy - my) / length];
  drawLine(
    sheet,
    [mx + ux * detail.markRadius, my + uy * detail.markRadius, cx - ux * detail.radius, cy - uy * detail.radius],
    { colour: palette.ink, width: PEN.dimension },
  );
  const half = textWidth(text, 12 * unit) / 2 + 14 * unit;
  const x = Math.max(sheet.area.x + half, Math.min(cx, sheet.area.x + sheet.area.width - half));
  askLabel(sheet, text, [
    { x, y: cy + detail.radius + 16 * unit, anchor: 'middle' },
    { x, y: cy - detail.radius - 7 * unit, anchor: 'middle' },
  ]);
}
