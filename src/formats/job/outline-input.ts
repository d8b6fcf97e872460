import { makeOutline, type Outline, type OutlineSpec, offsetSpec, type PathSpec } from '#src/base/outline.ts';
import { insetLoops } from '#src/base/outline-inset.ts';
import { moveLoop, type PathLoop, pathLoops } from '#src/base/outline-path.ts';
import { METRES_PER_MILLIMETRE, MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import { formatNumber } from '../numbers.ts';
import { readDxf } from '../outline/dxf.ts';
import { finishLoops, JOIN_TOLERANCE, type OutlineOrigin, type ReadOutline } from '../outline/finish.ts';
import { readSvgPath } from '../outline/svg-path.ts';
import { attachmentOf } from './attachments.ts';
import { type Desk, refuse, warn } from './desk.ts';
import { featureOf, noteFeature, sideGap } from './fit.ts';
import { outlineFaults, outlineSpecOf } from './outline-file.ts';
import type { OutlineFile } from './schema.ts';
import { outlineSchema, type SimpleOutlineFile } from './schema-outline.ts';

/** Point of a drawing that became the origin (m). */
export interface Origin {
  readonly x: number;
  readonly y: number;
}

/** An outline of a job, with what its kind knows about it. */
export interface JobOutline {
  readonly outline: Outline;
  /** Where the origin lies in the drawing's own coordinates; undefined for an outline given by sizes. */
  readonly origin: Origin | undefined;
  /** Smallest gap between the islands of a gang (m). */
  readonly islandGap: number | undefined;
  /** The outline moved inward by a distance (m); undefined when nothing is left of it, or it cannot be told. */
  readonly inside: (distance: number) => OutlineSpec | undefined;
}

type GangFile = Extract<OutlineFile, { kind: 'gang' }>;
type PolygonFile = Extract<OutlineFile, { kind: 'polygon' }>;
type DrawingFile = Extract<OutlineFile, { kind: 'drawing' }>;
type PathFile = Extract<OutlineFile, { kind: 'path' }>;

/** How far the gap of a moved path may be from the distance it was moved by (m): pieces too short for a tool are left out. */
const INSET_TOLERANCE = 2e-6;

/** An outline moved inward; undefined when nothing is left of it, or when its loops cannot be told. */
export function insideBy(outline: Outline, distance: number): OutlineSpec | undefined {
  if (!(distance > 0)) return outline.spec;
  if (outline.spec.kind === 'path') return insidePath(outline, distance);
  try {
    return offsetSpec(outline.spec, -distance);
  } catch {
    return undefined;
  }
}

function insidePath(outline: Outline, distance: number): OutlineSpec | undefined {
  const loops = insetLoops(outline, distance);
  if (loops === undefined || loops.length === 0) return undefined;
  const { outline: spec } = finishLoops(loops, { origin: 'file', tolerance: JOIN_TOLERANCE });
  if (spec === undefined) return undefined;
  const gap = sideGap(outline, makeOutline(spec));
  return Math.abs(gap - distance) <= INSET_TOLERANCE ? spec : undefined;
}

function simpleOutline(desk: Desk, path: string, file: SimpleOutlineFile): JobOutline | undefined {
  const faults = outlineFaults(file);
  for (const { field, value, allowed, message } of faults) refuse(desk, `${path}.${field}`, value, allowed, message);
  if (faults.length > 0) return undefined;
  const outline = makeOutline(outlineSpecOf(file));
  return { outline, origin: undefined, islandGap: undefined, inside: (distance) => insideBy(outline, distance) };
}

/** Copies of an outline in columns and rows about the origin. @param gap between the islands (m) */
function ganged(one: Outline, { columns, rows, pitchXMm, pitchYMm }: GangFile, gap: number): PathSpec {
  const base = pathLoops(one.loops);
  const loops: PathLoop[] = [];
  for (let j = 0; j < rows; j++) {
    for (let i = 0; i < columns; i++) {
      const x = (i - (columns - 1) / 2) * pitchXMm * METRES_PER_MILLIMETRE;
      const y = (j - (rows - 1) / 2) * pitchYMm * METRES_PER_MILLIMETRE;
      for (const loop of base) loops.push(moveLoop(loop, x, y));
    }
  }
  const spec = { kind: 'path', loops } as const;
  noteFeature(spec, Math.min(featureOf(one.spec), gap));
  return spec;
}

/** Most islands of a gang. */
const MOST_ISLANDS = 400;

function gangOutline(desk: Desk, path: string, file: GangFile): JobOutline | undefined {
  const one = simpleOutline(desk, `${path}.outline`, file.outline);
  if (!one) return undefined;
  if (file.columns * file.rows > MOST_ISLANDS) {
    const message = `This gang has ${file.columns * file.rows} islands. Take fewer.`;
    return refuse(desk, `${path}.columns`, file.columns, `at most ${MOST_ISLANDS} islands`, message);
  }
  const { xMin, xMax, yMin, yMax } = one.outline.bounds;
  const gaps = [
    { field: 'pitchXMm', count: file.columns, pitchMm: file.pitchXMm, size: xMax - xMin },
    { field: 'pitchYMm', count: file.rows, pitchMm: file.pitchYMm, size: yMax - yMin },
  ].filter(({ count }) => count > 1);
  let islandGap = Infinity;
  for (const { field, pitchMm, size } of gaps) {
    const gap = pitchMm * METRES_PER_MILLIMETRE - size;
    islandGap = Math.min(islandGap, gap);
    if (gap > JOIN_TOLERANCE) continue;
    const allowed = `more than ${formatNumber(size * MILLIMETRES_PER_METRE, 5)} mm`;
    refuse(desk, `${path}.${field}`, pitchMm, allowed, 'The islands run into each other. Set them farther apart.');
  }
  if (islandGap <= JOIN_TOLERANCE) return undefined;
  const outline = makeOutline(ganged(one.outline, file, islandGap));
  const inside = (distance: number) => {
    const spec = one.inside(distance);
    return spec && ganged(makeOutline(spec), file, islandGap + 2 * distance);
  };
  return { outline, origin: undefined, islandGap: Number.isFinite(islandGap) ? islandGap : undefined, inside };
}

function polygonLoops({ pointsMm, holesMm }: PolygonFile): PathLoop[] {
  return [pointsMm, ...(holesMm ?? [])].map((given): PathLoop => {
    const points = given.map(([x, y]) => ({ x: x * METRES_PER_MILLIMETRE, y: y * METRES_PER_MILLIMETRE }));
    const first = points[0] as { x: number; y: number };
    const last = points[points.length - 1] as { x: number; y: number };
    // the first corner given again at the end closes the loop and adds nothing
    const closed = last.x === first.x && last.y === first.y ? points.slice(1) : [...points.slice(1), first];
    return { ...first, pieces: closed.map(({ x, y }) => ({ kind: 'line', x, y })) };
  });
}

/** Most problems of one drawing that are told. */
const MOST_TOLD = 20;

/** What the reader of a drawing says, as problems of the job's field. */
function tell(desk: Desk, path: string, value: string | undefined, { problems }: ReadOutline): void {
  for (const { severity, message, allowed, mark, place, value: found } of problems.slice(0, MOST_TOLD)) {
    const where = [
      ...(place ? [`line ${place.line}${place.column > 1 ? `, column ${place.column}` : ''}`] : []),
      ...(mark ? [`at x ${mark.xMm}, y ${mark.yMm} mm, loop ${mark.loop}, piece ${mark.piece}`] : []),
    ].join(', ');
    const text = where === '' ? message : `${where[0]?.toUpperCase()}${where.slice(1)}: ${message}`;
    (severity === 'refuse' ? refuse : warn)(desk, path, value ?? found, allowed, text);
    const last = desk.problems[desk.problems.length - 1];
    if (mark && last) desk.problems[desk.problems.length - 1] = { ...last, mark } as typeof last;
  }
  const more = problems.length - MOST_TOLD;
  if (more > 0) refuse(desk, path, value, '', `There are ${more} problems more in this outline.`);
}

function drawn(read: ReadOutline): JobOutline | undefined {
  if (read.outline === undefined) return undefined;
  const outline = makeOutline(read.outline);
  const inside = (distance: number) => insideBy(outline, distance);
  return { outline, origin: read.origin ?? { x: 0, y: 0 }, islandGap: undefined, inside };
}

function polygonOutline(desk: Desk, path: string, file: PolygonFile, origin: OutlineOrigin): JobOutline | undefined {
  const read = finishLoops(polygonLoops(file), { origin, tolerance: JOIN_TOLERANCE });
  tell(desk, `${path}.pointsMm`, undefined, read);
  return drawn(read);
}

function pathOutline(desk: Desk, path: string, file: PathFile, origin: OutlineOrigin): JobOutline | undefined {
  const read = readSvgPath(file.svgPath, { scale: (file.unitMm ?? 1) * METRES_PER_MILLIMETRE, origin });
  tell(desk, `${path}.svgPath`, file.svgPath.slice(0, 200), read);
  return drawn(read);
}

function drawingOutline(desk: Desk, path: string, file: DrawingFile, origin: OutlineOrigin): JobOutline | undefined {
  if (/\.svg$/i.test(file.file)) {
    const message = 'An SVG file is not read. Put the d attribute of its path into an outline of the kind path.';
    return refuse(desk, `${path}.file`, file.file, 'an ASCII DXF file', message);
  }
  const bytes = attachmentOf(desk, `${path}.file`, file.file);
  if (!bytes) return undefined;
  const { unitMm, layer } = file;
  const read = readDxf(bytes, {
    origin,
    ...(unitMm !== undefined && { unitlessScale: unitMm * METRES_PER_MILLIMETRE }),
    ...(layer !== undefined && { layer }),
  });
  tell(desk, `${path}.file`, file.file, read);
  const scale = read.scale ?? 0;
  if (
    unitMm !== undefined &&
    read.unitFrom === 'file' &&
    Math.abs(unitMm * METRES_PER_MILLIMETRE - scale) > 1e-9 * scale
  ) {
    const stated = `${formatNumber(scale * MILLIMETRES_PER_METRE, 6)} mm`;
    warn(
      desk,
      `${path}.unitMm`,
      unitMm,
      stated,
      `The drawing states its unit itself, ${stated}, and that counts. Take unitMm out.`,
    );
  }
  return drawn(read);
}

/**
 * The outline a field of the job describes, in SI; undefined when it is not whole, or refused (then the desk says why).
 * @param origin where the origin of a drawn outline is; in the middle of the box around it if left out
 */
export function readOutline(
  desk: Desk,
  path: string,
  file: unknown,
  origin: OutlineOrigin = 'middle',
): JobOutline | undefined {
  const whole = outlineSchema.safeParse(file);
  if (!whole.success) return undefined;
  const { data } = whole;
  switch (data.kind) {
    case 'polygon':
      return polygonOutline(desk, path, data, origin);
    case 'path':
      return pathOutline(desk, path, data, origin);
    case 'drawing':
      return drawingOutline(desk, path, data, origin);
    case 'gang':
      return gangOutline(desk, path, data);
    default:
      return simpleOutline(desk, path, data);
  }
}
