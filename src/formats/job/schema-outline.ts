import { z } from '../zod.ts';
import { count, list, mm, pair, quantity, words } from './fields.ts';

const cornerRadius = mm(0, 500, 'Corner radius', 'Radius of the corners in plan; 0 for sharp ones.').optional();

/** The word that says which of several things a record is. */
export const kind = <const K extends string>(name: K) =>
  z.literal(name).meta({ title: 'Kind', description: 'Which of the kinds this is.', unit: '' });

const circle = z.strictObject({
  kind: kind('circle'),
  diameterMm: mm(0.05, 300, 'Diameter', 'Diameter of the circle.'),
});
const rectangle = z.strictObject({
  kind: kind('rectangle'),
  lengthMm: mm(0.05, 500, 'Length', 'Side along x.'),
  widthMm: mm(0.05, 500, 'Width', 'Side along y.'),
  cornerRadiusMm: cornerRadius,
});
const slot = z.strictObject({
  kind: kind('slot'),
  lengthMm: mm(0.05, 500, 'Length', 'Over all, along x, round ends included.'),
  widthMm: mm(0.05, 500, 'Width', 'Across, along y; the ends are half circles of this diameter.'),
});
const regularPolygon = z.strictObject({
  kind: kind('regularPolygon'),
  sides: count(3, 60, 'Sides', 'Number of equal sides.'),
  acrossFlatsMm: mm(0.05, 300, 'Across flats', 'Twice the distance from the middle to a side.'),
  cornerRadiusMm: cornerRadius,
});
const ring = z.strictObject({
  kind: kind('ring'),
  outerDiameterMm: mm(0.05, 300, 'Outer diameter', 'Outer diameter of the trepanned ring.'),
  innerDiameterMm: mm(0.05, 300, 'Inner diameter', 'Diameter of the core that stays.'),
});

/** Most corners of one polygon, and most holes in it. */
const MOST_POINTS = 2000;
const MOST_HOLES = 200;

const point = pair(-1000, 1000, 'mm', 'Point', 'x and y of a corner.');
const corners = (title: string, description: string) => list(point, 3, MOST_POINTS, title, description);

const polygon = z.strictObject({
  kind: kind('polygon'),
  pointsMm: corners('Points', 'Corners in order, as [x, y]; the last is joined to the first.'),
  holesMm: list(
    corners('Hole', 'Corners of one hole, in order.'),
    1,
    MOST_HOLES,
    'Holes',
    'What stays standing inside, each a list of corners.',
  ).optional(),
});

const unit = quantity(1e-6, 1000, 'mm', 'Unit', 'Length of one unit of the drawing.');

const path = z.strictObject({
  kind: kind('path'),
  svgPath: words(1_000_000, 'SVG path', 'Path data, the d attribute; y grows downward, as on a page.'),
  unitMm: unit.optional(),
});

/** A file that stands beside the job: a plain name, without folders. */
export const fileName = (title: string, description: string) =>
  z
    .string()
    .min(1)
    .max(200)
    .regex(
      /^[^\\/:*?"<>|.\p{Cc}][^\\/:*?"<>|\p{Cc}]*$/u,
      'This is no plain file name. Name a file beside the job, without a folder.',
    )
    .meta({ title, description, unit: '' });

const drawing = z.strictObject({
  kind: kind('drawing'),
  file: fileName('File', 'ASCII DXF file beside the job, as in pocket.dxf.'),
  unitMm: unit.optional(),
  layer: words(255, 'Layer', 'Layer that is read; all of them when left out.').optional(),
});

const SIMPLE = [circle, rectangle, slot, regularPolygon, ring] as const;

const gang = z.strictObject({
  kind: kind('gang'),
  outline: z
    .discriminatedUnion('kind', SIMPLE)
    .meta({ title: 'Island', description: 'One of the equal outlines.', unit: '' }),
  columns: count(1, 100, 'Columns', 'Outlines in a row, along x.'),
  rows: count(1, 100, 'Rows', 'Rows of outlines, along y.'),
  pitchXMm: mm(0, 500, 'Pitch along x', 'From the middle of one outline to the middle of the next along x.'),
  pitchYMm: mm(0, 500, 'Pitch along y', 'From the middle of one row to the middle of the next.'),
});

const KINDS = [...SIMPLE, polygon, path, drawing, gang] as const;

/** Any outline. */
export const outlineSchema = z.discriminatedUnion('kind', KINDS);

/** An outline as one field. */
export const outline = (title: string, description: string) => outlineSchema.meta({ title, description, unit: '' });

/** An outline given by its sizes, about its own middle (mm). */
export type SimpleOutlineFile = z.infer<(typeof SIMPLE)[number]>;
/** An outline as a job file has it (mm). */
export type OutlineFile = z.infer<typeof outlineSchema>;
