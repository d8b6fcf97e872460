import { type OutlineFault, type OutlineProblem, PATH_LIMITS } from '#src/base/outline-check.ts';
import { MICROMETRES_PER_METRE, MILLIMETRES_PER_METRE } from '#src/base/units.ts';
import type { Place } from '../json.ts';
import { roundSignificant } from '../numbers.ts';
import type { Problem } from '../problems.ts';

/** Where in the drawing a problem is, to be marked: millimetres of the file's own frame, loop and piece counted from 1. */
export interface OutlineMark {
  readonly xMm: number;
  readonly yMm: number;
  readonly loop: number;
  readonly piece: number;
}

/** A problem of an outline file, with the place in the drawing where there is one. */
export interface OutlineFileProblem extends Problem {
  readonly mark?: OutlineMark;
}

/** Thrown while a file is read and caught by its reader: what is wrong, and where in the text. */
export class Refusal extends Error {
  readonly allowed: string;
  readonly place: Place | undefined;
  constructor(message: string, allowed: string, place?: Place) {
    super(message);
    this.name = 'Refusal';
    this.allowed = allowed;
    this.place = place;
  }
}

/** A refusal as the problem it is shown as. */
export function refusalProblem({ message, allowed, place }: Refusal): OutlineFileProblem {
  return { path: '', value: undefined, allowed, message, severity: 'refuse', ...(place && { place }) };
}

/** Something about the file as a whole that does not stop it. */
export function fileWarning(message: string, allowed: string): OutlineFileProblem {
  return { path: '', value: undefined, allowed, message, severity: 'warn' };
}

const um = (metres = 0) => `${roundSignificant(metres * MICROMETRES_PER_METRE, 3)} um`;
const mm = (metres = 0) => `${roundSignificant(metres * MILLIMETRES_PER_METRE, 6)} mm`;
const SMALLEST = um(PATH_LIMITS.smallest);

/** What is wrong and what to do, and what is allowed. */
const WORDS: Readonly<Record<OutlineFault, (problem: OutlineProblem) => readonly [message: string, allowed: string]>> =
  {
    tooMany: ({ value }) => [
      `The outline has ${value} parts, more than can be cut. Simplify it, or flatten its curves less finely.`,
      `at most ${PATH_LIMITS.segments} pieces in ${PATH_LIMITS.loops} loops`,
    ],
    tooDense: () => [
      'Too many pieces lie alongside each other to be compared. Simplify the outline, or make it of fewer, longer pieces.',
      'outlines a tool can have',
    ],
    noLoops: () => ['There is no outline in it. Draw at least one closed loop.', 'one closed loop or more'],
    noPieces: () => ['This loop is a single point. Take it out, or draw it.', 'two pieces or more'],
    notFinite: () => ['A coordinate here is not a finite number. Mend it in the drawing.', 'finite numbers'],
    open: ({ value }) => [
      `The loop ends ${mm(value)} from where it starts. Close it there.`,
      'loops that end where they start',
    ],
    zeroLength: () => ['This piece starts and ends at the same point. Take it out.', `pieces of ${SMALLEST} or more`],
    tiny: ({ value }) => [
      `This is only ${um(value)} small. Check the unit of the drawing, or take it out.`,
      `pieces of ${SMALLEST} or more, loops around an area ${SMALLEST} square or more`,
    ],
    huge: ({ value }) => [
      `The loop reaches ${mm(value)}. Check the unit of the drawing, or move it to the origin.`,
      `at most ${mm(PATH_LIMITS.largest)} long and from the origin`,
    ],
    spike: () => [
      'The path turns straight back on itself here. Take out the spike, or round the tip.',
      `tips of more than ${PATH_LIMITS.spike} rad`,
    ],
    duplicatePoint: ({ other }) => [
      `The path comes through this point a second time, at ${pieceName(other)}. Draw the parts apart, or join them properly.`,
      'every point once',
    ],
    selfCrossing: ({ other }) => [
      `The loop meets itself here: this piece and piece ${(other?.segment ?? 0) + 1} cross, touch or overlap. Take out the knot.`,
      'loops that do not meet themselves',
    ],
    loopsCross: ({ other }) => [
      `This loop meets another here, at ${pieceName(other)}. Draw them apart, or join them into one.`,
      'loops that do not meet each other',
    ],
    holeOutside: () => [
      'This hole lies in no solid. Move it inside its outer loop, or turn it round to make it a solid.',
      'holes inside an outer loop',
    ],
    nesting: ({ value }) => [
      `This loop lies in ${value} others and runs the wrong way for that. Turn it round, or take it out.`,
      'solids, holes in them, solids in the holes',
    ],
  };

function pieceName(other: OutlineProblem['other']): string {
  return other === undefined ? 'another piece' : `loop ${other.loop + 1}, piece ${other.segment + 1}`;
}

/** A problem of loops as a file's problem: in words, in millimetres, counted from 1. */
export function outlineFileProblem(problem: OutlineProblem): OutlineFileProblem {
  const [message, allowed] = WORDS[problem.fault](problem);
  const round = (metres: number) => roundSignificant(metres * MILLIMETRES_PER_METRE, 9);
  const mark = {
    xMm: round(problem.x),
    yMm: round(problem.y),
    loop: problem.loop + 1,
    piece: problem.segment + 1,
  };
  const whole = problem.fault === 'tooMany' || problem.fault === 'tooDense' || problem.fault === 'noLoops';
  if (whole) return { path: '', value: undefined, allowed, message, severity: 'refuse' };
  return {
    path: `loop ${mark.loop}, piece ${mark.piece}`,
    value: { xMm: mark.xMm, yMm: mark.yMm },
    allowed,
    message,
    severity: 'refuse',
    mark,
  };
}
