import { type SVGCommand, SVGPathData, SVGPathDataParser } from 'svg-pathdata';
import type { PathLoop, PathPiece } from '#src/base/outline.ts';
import { PATH_LIMITS } from '#src/base/outline-check.ts';
import { finishLoops, JOIN_TOLERANCE, type OutlineOrigin, type ReadOutline } from './finish.ts';
import { type DrawnPiece, flattenArc, flattenBezier, type XY } from './flatten.ts';
import { Refusal, refusalProblem } from './problems.ts';

/** Longest path data read (characters): forty for each piece there may be. */
const LONGEST = 1_000_000;
/** Greatest coordinate accepted (m), before the outline is moved to its middle. */
const FARTHEST = 1000;
/** Farthest a chord may be from the curve it stands for (m), unless told otherwise. */
export const CHORD_TOLERANCE = 1e-6;

/** How path data are to be understood. */
export interface SvgPathOptions {
  /** Length of one user unit (m), as in 1e-3 for a drawing in millimetres. */
  readonly scale: number;
  /** Farthest a chord may be from its curve (m); 1 um. Elliptical arcs and Bezier curves become chords, circular arcs stay arcs. */
  readonly chordTolerance?: number;
  /** Whether y grows downward, as on a page; then the outline is turned over to look as drawn. True. */
  readonly yDown?: boolean;
  readonly origin?: OutlineOrigin;
}

/** The shape of the one subpath being drawn. */
interface Subpath {
  readonly start: XY;
  readonly pieces: DrawnPiece[];
}

/** The pen: where it is, and the control point the next smooth curve is mirrored from. */
interface Pen {
  at: XY;
  readonly subpaths: Subpath[];
  open: Subpath | undefined;
  cubic: XY | undefined;
  quadratic: XY | undefined;
  count: number;
}

const PLACE_IN_TEXT = /\b(?:index "?|at )(\d+)/;

/** Line and column (from 1) of a character. */
function placeOf(text: string, index: number): { line: number; column: number } {
  const before = text.slice(0, index).split('\n');
  return { line: before.length, column: (before[before.length - 1] as string).length + 1 };
}

/**
 * Commands of path data, read with svg-pathdata: small, typed, MIT, without dependencies, and still kept up (its
 * 7.2 line runs on Node 20). It passes over numbers before the first command and after a Z, so those are refused here.
 * @throws Refusal
 */
function commandsOf(text: string): SVGCommand[] {
  const allowed = 'SVG path data: M L H V C S Q T A Z and numbers';
  if (text.length > LONGEST) {
    throw new Refusal(`The path is too long: ${text.length} characters.`, `at most ${LONGEST} characters`);
  }
  if (text.trim() === '') throw new Refusal('The path is empty. Give the d attribute of an SVG path.', allowed);
  const stray = text.search(/[^MLHVCSQTAZmlhvcsqtaz\d\s,.+\-eE]/);
  const loose = stray >= 0 ? stray : text.search(/^\s*[^Mm\s]|[Zz][\s,]*[-+.\d]/);
  if (loose >= 0) {
    const message =
      stray >= 0 ? `"${text[stray]}" has no place in path data.` : 'A move (M) or another command is missing here.';
    throw new Refusal(`${message} Give the d attribute of an SVG path.`, allowed, placeOf(text, loose));
  }
  const commands: SVGCommand[] = [];
  try {
    const parser = new SVGPathDataParser();
    parser.parse(text, commands);
    parser.finish(commands);
  } catch (error) {
    const words = error instanceof Error ? error.message : String(error);
    const index = PLACE_IN_TEXT.exec(words)?.[1];
    const place = placeOf(text, index === undefined ? text.length : Number(index));
    throw new Refusal('This is not SVG path data: a number or a command is missing or malformed here.', allowed, place);
  }
  return commands;
}

function mirrored(at: XY, control: XY | undefined): XY {
  return control === undefined ? at : { x: 2 * at.x - control.x, y: 2 * at.y - control.y };
}

/** Adds pieces to the open subpath, or starts one where the pen is. @throws Refusal for too many of them */
function draw(pen: Pen, pieces: readonly DrawnPiece[] | undefined): void {
  if (pieces !== undefined) pen.count += pieces.length;
  if (pieces === undefined || pen.count > PATH_LIMITS.segments) {
    const allowed = `at most ${PATH_LIMITS.segments} pieces, chords of curves included`;
    throw new Refusal('The outline has too many pieces. Simplify it, or flatten its curves less finely.', allowed);
  }
  if (pen.open === undefined) {
    pen.open = { start: pen.at, pieces: [] };
    pen.subpaths.push(pen.open);
  }
  for (const piece of pieces) pen.open.pieces.push(piece);
  pen.at = pieces[pieces.length - 1] ?? pen.at;
}

function close(pen: Pen): void {
  if (pen.open === undefined) return;
  const { start } = pen.open;
  if (pen.at.x !== start.x || pen.at.y !== start.y) draw(pen, [start]);
  pen.at = start;
  pen.open = undefined;
}

/** Moves the pen along one command. `tolerance` and `farthest` in user units. @throws Refusal */
function follow(pen: Pen, command: SVGCommand, limits: { tolerance: number; farthest: number }): void {
  if (command.type === SVGPathData.CLOSE_PATH) {
    close(pen);
    pen.cubic = undefined;
    pen.quadratic = undefined;
    return;
  }
  const base = command.relative ? pen.at : { x: 0, y: 0 };
  const from = pen.at;
  const x = command.type === SVGPathData.VERT_LINE_TO ? from.x : base.x + command.x;
  const y = command.type === SVGPathData.HORIZ_LINE_TO ? from.y : base.y + command.y;
  const point = (px: number, py: number) => ({ x: base.x + px, y: base.y + py });
  const controls = controlsOf(pen, command, point);
  const numbers = [x, y, ...controls.flatMap((c) => [c.x, c.y])];
  if (command.type === SVGPathData.ARC) numbers.push(command.rX, command.rY, command.xRot % 360);
  if (!numbers.every((v) => Math.abs(v) <= limits.farthest)) {
    throw new Refusal(
      `A coordinate is out of all measure: ${numbers.find((v) => !(Math.abs(v) <= limits.farthest))}. Check the unit of the drawing.`,
      `at most ${FARTHEST} m from the origin`,
    );
  }
  pen.cubic = controls.length === 2 ? controls[1] : undefined;
  pen.quadratic = controls.length === 1 ? controls[0] : undefined;
  if (command.type === SVGPathData.MOVE_TO) {
    pen.at = { x, y };
    pen.open = undefined;
    return;
  }
  const room = PATH_LIMITS.segments - pen.count;
  if (command.type !== SVGPathData.ARC) {
    draw(pen, flattenBezier([from, ...controls, { x, y }], limits.tolerance, room));
    return;
  }
  const { rX: rx, rY: ry, xRot: rotation, lArcFlag, sweepFlag } = command;
  const arc = { x, y, rx, ry, rotation, large: lArcFlag === 1, positive: sweepFlag === 1 };
  draw(pen, flattenArc(from, arc, limits.tolerance, room));
}

/** Control points of a command: two of a cubic curve, one of a quadratic, none otherwise. */
function controlsOf(pen: Pen, command: SVGCommand, point: (x: number, y: number) => XY): XY[] {
  switch (command.type) {
    case SVGPathData.CURVE_TO:
      return [point(command.x1, command.y1), point(command.x2, command.y2)];
    case SVGPathData.SMOOTH_CURVE_TO:
      return [mirrored(pen.at, pen.cubic), point(command.x2, command.y2)];
    case SVGPathData.QUAD_TO:
      return [point(command.x1, command.y1)];
    case SVGPathData.SMOOTH_QUAD_TO:
      return [mirrored(pen.at, pen.quadratic)];
    default:
      return [];
  }
}

/** A subpath in metres, turned over when y grew downward. */
function loopOf({ start, pieces }: Subpath, scale: number, yDown: boolean): PathLoop {
  const flip = yDown ? -1 : 1;
  const turned = pieces.map(({ x, y, bulge }): PathPiece => {
    // + 0: no negative zeros
    const end = { x: x * scale + 0, y: y * scale * flip + 0 };
    return bulge === undefined ? { kind: 'line', ...end } : { kind: 'arc', ...end, bulge: bulge * flip };
  });
  return { x: start.x * scale + 0, y: start.y * scale * flip + 0, pieces: turned };
}

/**
 * The outline that SVG path data (the d attribute) describe. All commands, absolute and relative. Circular arcs stay arcs; other
 * curves become chords within the chord tolerance. Subpaths must be closed: by Z, or by ending within 1 um of their start. Which
 * are holes follows from how they lie in each other, not from their direction. Never throws on any text.
 * @throws RangeError when the scale or the chord tolerance is not positive
 */
export function readSvgPath(text: string, options: SvgPathOptions): ReadOutline {
  const { scale, chordTolerance = CHORD_TOLERANCE, yDown = true, origin = 'middle' } = options;
  if (!(scale > 0 && scale < Infinity)) throw new RangeError(`the length of a user unit is not positive: ${scale}`);
  if (!(chordTolerance > 0)) throw new RangeError(`the chord tolerance is not positive: ${chordTolerance}`);
  try {
    const pen: Pen = {
      at: { x: 0, y: 0 },
      subpaths: [],
      open: undefined,
      cubic: undefined,
      quadratic: undefined,
      count: 0,
    };
    const limits = { tolerance: chordTolerance / scale, farthest: FARTHEST / scale };
    for (const command of commandsOf(text)) follow(pen, command, limits);
    const drawn = pen.subpaths.filter(({ pieces }) => pieces.length > 0);
    const loops = drawn.map((subpath) => loopOf(subpath, scale, yDown));
    return finishLoops(loops, { origin, tolerance: JOIN_TOLERANCE });
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    return { loops: [], problems: [refusalProblem(error)] };
  }
}
