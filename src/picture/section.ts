import { drawScaleBar } from './dimension.ts';
import { shortLength } from './figures.ts';
import { LIGHT, type Palette } from './palette.ts';
import { captionLines, drawFoot, figureRows, footHeight } from './section-foot.ts';
import { PRINT_WIDTH, sectionFrame } from './section-layout.ts';
import { drawCallouts, drawCorner, drawDimensions, drawNominal, hasCorner, heightCount } from './section-marks.ts';
import { drawMaterial, drawReferences, type SectionWork } from './section-work.ts';
import { drawLabel, newSheet, type PlacedLabel, placeLabels, type Stroke } from './sheet.ts';
import { element, svgDocument } from './svg.ts';
import type { ExitFigures } from './through.ts';
import { oneTwoFive } from './ticks.ts';
import type { ToolOutline } from './tool.ts';

/** Points x0, z0, x1, z1, ... in m, x across from any origin, z down from the entry face. */
export type SectionLine = ArrayLike<number>;

/** Limits of the drawing as they are to be written, e.g. "\u2264 0.50\u00b0". */
export type SectionLimits = Partial<
  Record<'entry' | 'floor' | 'depth' | 'taper' | 'corner' | 'chip' | 'exitChip', string>
>;

/** Everything the annotated section shows. SI; angles in radians. */
export interface SectionDrawing {
  readonly title: string;
  /** Lines beneath the drawing: settings, seed, version. */
  readonly caption: readonly string[];
  readonly round: boolean;
  /** Middle across of the cavity, of the dimensioned island where there are several (m). */
  readonly centre: number;
  /** Middles of all islands the plane cuts, left to right (m); left out, `centre` alone. */
  readonly centres?: readonly number[];
  /** From the leftmost wall to the rightmost (m); left out, the entry size about the centre. */
  readonly extent?: { readonly from: number; readonly to: number };
  /** Left wall with chips and corner, from the entry face down; right wall the same; floor from left to right. */
  readonly left: SectionLine;
  readonly right: SectionLine;
  readonly floor: SectionLine;
  /** Pieces of work that the plane cuts apart from the rest, closed. */
  readonly loose?: readonly SectionLine[];
  /** Depth to the tip; the thickness where the cut goes through. */
  readonly depth: number;
  readonly entrySize: number;
  /** Of the pilot where there is a shoulder; NaN where there is none to measure. */
  readonly floorSize: number;
  /** All sizes of the cavity (m) for the table of figures, over all islands where `overall`; left out, the two above. */
  readonly sizes?: {
    readonly entry: readonly number[];
    readonly floor: readonly number[];
    readonly overall?: boolean;
  };
  /** The floor is no plane: neither its size nor a corner is drawn. */
  readonly shaped?: boolean;
  /** The shoulder of a stepped hole. */
  readonly shoulder?: { readonly depth: number };
  /** The cut goes through. */
  readonly exit?: ExitFigures;
  /** Per side, positive where the cavity narrows downwards; NaN where it is too shallow to have one. */
  readonly taper: number;
  readonly cornerRadius: number;
  /** Largest chip of the rim: width on the entry face, depth down the wall, and on which side of the cut it is drawn. */
  readonly chip?: { readonly width: number; readonly depth: number; readonly side: 'left' | 'right' };
  readonly tool?: ToolOutline;
  /** Tools of the passes before, drawn faint. */
  readonly earlier?: readonly ToolOutline[];
  /** As drawn; `lines` are its outlines in the plane (x0, z0, ... each, m), a box where left out. */
  readonly nominal: { readonly entrySize: number; readonly depth: number; readonly lines?: readonly SectionLine[] };
  readonly thickness: number;
  /** Where the plane lies (y, m) when it is not the middle one. */
  readonly plane?: number;
  readonly limits?: SectionLimits;
}

/** A finished drawing, with what a test needs to see that labels are clear. */
export interface DrawnSection {
  readonly svg: string;
  readonly width: number;
  readonly height: number;
  readonly labels: readonly PlacedLabel[];
  readonly strokes: readonly Stroke[];
  /** Units per metre across, vertical over horizontal scale. */
  readonly across: number;
  readonly exaggeration: number;
}

function reversed(line: SectionLine): number[] {
  const points: number[] = [];
  for (let n = line.length - 2; n >= 0; n -= 2) points.push(line[n] as number, line[n + 1] as number);
  return points;
}

/** Least length of the scale bar before it is rounded down to 1, 2 or 5 (units). */
const SHORTEST_BAR = 80;

function layOut(drawing: SectionDrawing, palette: Palette) {
  const { centre, entrySize, exit } = drawing;
  const extent = drawing.extent ?? { from: centre - entrySize / 2, to: centre + entrySize / 2 };
  const rows = figureRows(drawing);
  const space = {
    depth: exit === undefined ? Math.max(drawing.depth, drawing.nominal.depth) : drawing.thickness,
    span: extent.to - extent.from,
    thickness: drawing.thickness,
    heights: heightCount(drawing),
    cornerless: !hasCorner(drawing),
    ...(exit !== undefined && { through: exit.backing ? ('backing' as const) : ('air' as const) }),
  };
  const lines = captionLines(drawing, sectionFrame({ ...space, foot: 0 }).exaggeration);
  const full = sectionFrame({ ...space, foot: footHeight(lines.length, rows.length) });
  const floor = exit === undefined ? full.face + drawing.depth * full.down : full.floor;
  const frame = { ...full, floor };
  const sheet = newSheet(palette, { x: 0, y: 0, width: frame.width, height: frame.height });
  const outline = Float64Array.from([
    ...Array.from(drawing.left),
    ...Array.from(drawing.floor),
    ...reversed(drawing.right),
  ]);
  const work: SectionWork = { sheet, frame, drawing, outline, extent };
  return { work, rows, lines };
}

/** The annotated half-section of a cavity as an SVG drawing for a page 180 mm wide. */
export function drawSection(drawing: SectionDrawing, palette: Palette = LIGHT): DrawnSection {
  const { work, rows, lines } = layOut(drawing, palette);
  const { sheet, frame, extent } = work;
  sheet.parts.push(element('rect', { x: 0, y: 0, width: frame.width, height: frame.height, fill: palette.paper }));
  drawLabel(sheet, drawing.title, [{ x: frame.left, y: 20 }], { weight: 600, size: 15, widest: frame.width - 16 });
  drawMaterial(work);
  drawReferences(work);
  drawDimensions(work);
  drawCallouts(work);
  drawNominal(work);
  drawCorner(work);
  const length = oneTwoFive(Math.max(0.3 * (extent.to - extent.from), SHORTEST_BAR / frame.across));
  drawScaleBar(sheet, { x: frame.right - 150, y: 44, length: length * frame.across, text: shortLength(length) });
  placeLabels(sheet);
  drawFoot(sheet, lines, rows);
  return {
    svg: svgDocument(
      { width: frame.width, height: frame.height, printWidth: PRINT_WIDTH, title: `Section of ${drawing.title}` },
      sheet.parts,
    ),
    width: frame.width,
    height: frame.height,
    labels: sheet.labels,
    strokes: sheet.strokes,
    across: frame.across,
    exaggeration: frame.exaggeration,
  };
}
