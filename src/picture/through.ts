/** Cuts that come out at the other face, and what a cut line measures at one depth. Points x0, z0, x1, z1, ... (m). */
import type { Chord } from './plane.ts';

/** Figures of the far side of a cut that goes through. */
export interface ExitFigures {
  /** Size on the exit face, chips left out (m); NaN where it could not be measured. */
  readonly size: number;
  /** Largest chip of the exit: width on the exit face, depth into the work (m), and the side on which it is drawn. */
  readonly chip?: { readonly width: number; readonly depth: number; readonly side: 'left' | 'right' };
  /** A backing is bonded to the exit face; without it there is air. */
  readonly backing: boolean;
  /** How deep the backing has been cut into (m). */
  readonly into?: number;
}

/** Whether both ends of a step lie on different sides of a depth. */
const passes = (z0: number, z1: number, level: number): boolean => z0 < level !== z1 < level;

/** The places along a line where it passes a depth, in order along the line. */
function levelCrossings(line: ArrayLike<number>, level: number): number[] {
  const at: number[] = [];
  for (let n = 0; n + 3 < line.length; n += 2) {
    const [x0, z0, x1, z1] = [line[n], line[n + 1], line[n + 2], line[n + 3]] as [number, number, number, number];
    if (passes(z0, z1, level)) at.push(x0 + ((level - z0) / (z1 - z0)) * (x1 - x0));
  }
  return at;
}

/**
 * The stretches at a depth that cut lines leave open, left to right: one line from left to right, and closed ones; those nearer to each other than
 * `join` (m) are taken as one, and those narrower than it left out: floors and walls are rough.
 */
export function openAt(lines: readonly ArrayLike<number>[], level: number, join: number): Chord[] {
  const at = lines.flatMap((line) => levelCrossings(line, level)).sort((a, b) => a - b);
  const chords: { from: number; to: number }[] = [];
  for (let n = 0; n + 1 < at.length; n += 2) {
    const [from, to] = [at[n], at[n + 1]] as [number, number];
    const last = chords.at(-1);
    if (last !== undefined && from - last.to < join) last.to = to;
    else chords.push({ from, to });
  }
  return chords.filter(({ from, to }) => to - from >= join);
}

/** The parts of a cut line above the far face, and the stretches of that face where work is left. */
export interface ThroughStrokes {
  readonly lines: readonly (readonly number[])[];
  /** Stretches of work on the far face between `from` and `to`. */
  readonly face: readonly Chord[];
}

/** Cuts a line from left to right, work beneath it, at the far face z = `thickness` (m). `ends` are those of the drawing. */
export function strokesAbove(line: ArrayLike<number>, thickness: number, ends: Chord): ThroughStrokes {
  const lines: number[][] = [];
  let run: number[] = [];
  const close = (): void => {
    if (run.length > 2) lines.push(run);
    run = [];
  };
  for (let n = 0; n + 1 < line.length; n += 2) {
    const [x, z] = [line[n], line[n + 1]] as [number, number];
    const [x0, z0] = n === 0 ? [x, z] : ([line[n - 2], line[n - 1]] as [number, number]);
    const crossed = passes(z0, z, thickness) ? x0 + ((thickness - z0) / (z - z0)) * (x - x0) : undefined;
    if (crossed !== undefined) run.push(crossed, thickness);
    if (z < thickness) run.push(x, z);
    else close();
  }
  close();
  const at = [ends.from, ...levelCrossings(line, thickness).sort((a, b) => a - b), ends.to];
  const face: Chord[] = [];
  for (let n = 0; n + 1 < at.length; n += 2) face.push({ from: at[n] as number, to: at[n + 1] as number });
  return { lines, face: face.filter(({ from, to }) => to > from) };
}
