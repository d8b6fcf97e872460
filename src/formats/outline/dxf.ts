import type { PathLoop } from '#src/base/outline.ts';
import { PATH_LIMITS } from '#src/base/outline-check.ts';
import { METRES_PER_MICROMETRE, METRES_PER_MILLIMETRE } from '#src/base/units.ts';
import { readDrawing } from './dxf-entities.ts';
import { dxfGroups, dxfText } from './dxf-groups.ts';
import { joinChains } from './dxf-join.ts';
import { finishLoops, JOIN_TOLERANCE, type OutlineOrigin, type ReadOutline } from './finish.ts';
import { fileWarning, type OutlineFileProblem, outlineFileProblem, Refusal, refusalProblem } from './problems.ts';

/** Metres per unit of a drawing. */
export const DRAWING_UNITS = {
  inch: 0.0254,
  mm: METRES_PER_MILLIMETRE,
  cm: 1e-2,
  m: 1,
  um: METRES_PER_MICROMETRE,
} as const;
export type DrawingUnit = keyof typeof DRAWING_UNITS;

/** $INSUNITS and the units it stands for; 0 is no unit. */
const INSUNITS: Readonly<Record<number, DrawingUnit>> = { 1: 'inch', 4: 'mm', 5: 'cm', 6: 'm', 13: 'um' };

export interface DxfOptions {
  /** The unit of a drawing that does not state one; without it such a drawing is refused. */
  readonly unitless?: DrawingUnit;
  /** The same in metres per unit, for units without a name here. */
  readonly unitlessScale?: number;
  /** The only layer read, whatever its case; all of them if left out. */
  readonly layer?: string;
  /** Ends nearer than this (m) are joined; 1 um. */
  readonly joinTolerance?: number;
  readonly origin?: OutlineOrigin;
}

/** What a DXF file held. */
export interface ReadDxf extends ReadOutline {
  readonly unit?: DrawingUnit;
  /** Metres per unit of the drawing. */
  readonly scale?: number;
  /** Who stated the unit. */
  readonly unitFrom?: 'file' | 'caller';
  /** Entities passed over, by kind, most first. */
  readonly ignored: readonly { readonly kind: string; readonly count: number }[];
}

interface StatedUnit {
  readonly unit?: DrawingUnit;
  readonly unitFrom: 'file' | 'caller';
  readonly scale: number;
}

function unitOf(stated: number | undefined, { unitless, unitlessScale }: DxfOptions): StatedUnit {
  const allowed = `$INSUNITS of ${Object.keys(INSUNITS).join(', ')}: ${Object.values(INSUNITS).join(', ')}`;
  if (stated !== undefined && stated !== 0) {
    const unit = INSUNITS[stated];
    if (unit !== undefined) return { unit, unitFrom: 'file', scale: DRAWING_UNITS[unit] };
    throw new Refusal(
      `The drawing's unit is not one of these: $INSUNITS is ${stated}. Save it in millimetres.`,
      allowed,
    );
  }
  if (unitless !== undefined) return { unit: unitless, unitFrom: 'caller', scale: DRAWING_UNITS[unitless] };
  if (unitlessScale !== undefined) return { unitFrom: 'caller', scale: unitlessScale };
  throw new Refusal(
    'The drawing states no unit. State it where you open it, or set $INSUNITS in the drawing.',
    allowed,
  );
}

function ignoredWarning(ignored: ReadDxf['ignored']): OutlineFileProblem[] {
  if (ignored.length === 0) return [];
  const list = ignored.map(({ kind, count }) => `${count} ${kind}`).join(', ');
  const message = `Passed over: ${list}. If the outline is among them, explode blocks, and turn splines and polylines into these.`;
  return [fileWarning(message, 'LINE, ARC, CIRCLE, LWPOLYLINE in model space')];
}

function branchProblem({ x, y, ends }: { x: number; y: number; ends: number }): OutlineFileProblem {
  const place = { fault: 'duplicatePoint', loop: 0, segment: 0, x, y } as const;
  const { value, mark } = outlineFileProblem(place);
  return {
    path: '',
    value,
    allowed: 'two ends at each corner',
    message: `${ends} ends meet here. Take out what is drawn twice, or whatever branches off.`,
    severity: 'refuse',
    ...(mark && { mark }),
  };
}

function scaled({ x, y, pieces }: PathLoop, scale: number): PathLoop {
  return { x: x * scale, y: y * scale, pieces: pieces.map((p) => ({ ...p, x: p.x * scale, y: p.y * scale })) };
}

function outlineOf(file: Uint8Array | string, options: DxfOptions): ReadDxf {
  const { joinTolerance = JOIN_TOLERANCE, origin = 'middle' } = options;
  const drawing = readDrawing(dxfGroups(dxfText(file)), options.layer);
  const ignored = [...drawing.ignored].map(([kind, count]) => ({ kind, count })).sort((a, b) => b.count - a.count);
  const warnings = ignoredWarning(ignored);
  if (drawing.chains.length === 0) {
    const refusal = new Refusal(
      options.layer === undefined
        ? 'There is no line, arc, circle or polyline in this drawing.'
        : `There is no line, arc, circle or polyline on the layer ${JSON.stringify(options.layer)}.`,
      'one closed loop or more',
    );
    return { loops: [], problems: [refusalProblem(refusal), ...warnings], ignored };
  }
  const unit = unitOf(drawing.units, options);
  const { scale } = unit;
  const joined = joinChains(drawing.chains, joinTolerance / scale);
  const loops = joined.loops.map((loop) => scaled(loop, scale));
  if (joined.branches.length > 0) {
    const marked = joined.branches.slice(0, PATH_LIMITS.problems);
    const problems = marked.map(({ x, y, ends }) => branchProblem({ x: x * scale, y: y * scale, ends }));
    return { loops, problems: [...problems, ...warnings], ...unit, ignored };
  }
  const finished = finishLoops(loops, { origin, tolerance: joinTolerance });
  return { ...finished, problems: [...finished.problems, ...warnings], ...unit, ignored };
}

/**
 * The outline drawn in an ASCII DXF file, up to 8 MB: LINE, ARC, CIRCLE and LWPOLYLINE with bulges in model space, on one layer or any,
 * joined into loops where their ends meet within the tolerance. Other entities are passed over and counted. Which loops are
 * holes follows from how they lie in each other. Never throws on any file.
 * @throws RangeError when the tolerance is not positive
 */
export function readDxf(file: Uint8Array | string, options: DxfOptions = {}): ReadDxf {
  const { joinTolerance } = options;
  if (joinTolerance !== undefined && !(joinTolerance > 0 && joinTolerance < Infinity)) {
    throw new RangeError(`the join tolerance is not positive: ${joinTolerance}`);
  }
  try {
    return outlineOf(file, options);
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    return { loops: [], problems: [refusalProblem(error)], ignored: [] };
  }
}
