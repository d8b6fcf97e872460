import { PI } from '#src/base/math.ts';
import type { ConstantNote, ProcessConstants } from './constants.ts';
import { edgeChip, edgeChipDistance } from './edge-chip.ts';
import type { Exit } from './pass.ts';
import type { WorkMaterial } from './records.ts';

/** Where work is thin: the last ligament of a through-cut, and a wall between a cavity and what is beside it. */

export interface ExitConstants {
  /** Y of K = Y sigma sqrt(pi c) for the cracks under the floor. */
  readonly crackShape: number;
  /** Width of the ring that breaks out at the exit over the thickness of the last ligament. */
  readonly ringWidth: number;
}

export const exitConstants: ExitConstants = { crackShape: 1.12, ringWidth: 2 };

export const exitNotes: Record<keyof ExitConstants, ConstantNote> = {
  crackShape: {
    min: 0.71,
    max: 1.12,
    source:
      'handbook: 0.71 for a lone half-penny, 1.12 for an edge crack, which the run of cracks under a floor is near',
  },
  ringWidth: { min: 1, max: 3, source: 'common practice, from memory' },
};

/**
 * Strength of a surface with a crack of depth c (Pa): K = Y sigma sqrt(pi c), with the toughness a crack of a grain's
 * size meets. Griffith and Irwin.
 */
export function crackedStrength(work: WorkMaterial, crack: number, exit: ExitConstants = exitConstants): number {
  return crack > 0 ? work.smallCrackToughness / (exit.crackShape * Math.sqrt(PI * crack)) : Infinity;
}

/** What comes out at the exit face. All metres. */
export interface ExitBreakout {
  /** Thickness of the last ligament when it breaks; 0 where it is cut through. */
  readonly ligament: number;
  /** On the exit face, away from the wall. */
  readonly chipWidth: number;
  /** Up the wall. */
  readonly chipDepth: number;
}

export interface ExitSetting {
  /** Static load near the exit (N), from `exitLoad`. */
  readonly load: number;
  readonly work: WorkMaterial;
  /** Depth of the largest crack under the floor (m). */
  readonly crack: number;
  /** Bonded to the exit face, so that the ligament cannot bend. */
  readonly backing: boolean;
  /** Largest load of a grit at the edge (N). */
  readonly edgeLoad: number;
  readonly constants: ProcessConstants;
  /** Narrow over long width of the opening, 0 to 1; round if left out. */
  readonly aspect?: number;
  readonly exit?: ExitConstants;
}

/**
 * Thickness at which a clamped plate under a load spread over it breaks (m): elliptic, of given aspect alpha, largest
 * stress at the ends of its narrow width on the side of the load, where the cracks under the floor are,
 * sigma t^2 = 6 alpha F / (pi (3 + 2 alpha^2 + 3 alpha^4)). Round: t = sqrt(3 F / (4 pi sigma)), whatever the diameter;
 * narrow: that of a clamped strip. Plate theory (Timoshenko and Woinowsky-Krieger; Roark), from memory.
 */
export function breakingThickness(load: number, strength: number, aspect = 1): number {
  const square = aspect * aspect;
  return Math.sqrt((6 * aspect * load) / (PI * strength * (3 + 2 * square + 3 * square * square)));
}

/**
 * The exit of a through-cut. Without a backing the last ligament breaks as a plate, and takes a ring one to three of its
 * thicknesses wide with it; it is never thinner than the deepest crack, which by then is through. With a backing only the
 * grits at the edge chip it, as at the entry. The load is the mean one: a small stiff ligament that follows each blow
 * breaks thicker.
 */
export function exitBreakout(setting: ExitSetting): ExitBreakout {
  const { load, work, crack, backing, edgeLoad, constants, aspect, exit = exitConstants } = setting;
  const chip = edgeChip(edgeChipDistance(work.toughness, edgeLoad, constants), constants);
  if (backing) return { ligament: 0, chipWidth: chip.width, chipDepth: chip.depth };
  const plate = load > 0 ? breakingThickness(load, crackedStrength(work, crack, exit), aspect) : 0;
  const ligament = Math.max(plate, crack);
  return {
    ligament,
    chipWidth: Math.max(exit.ringWidth * ligament, chip.width),
    chipDepth: Math.max(ligament, chip.depth),
  };
}

/**
 * Load under which the last ligament breaks (N): the reduced one, unless the ligament at full load is thicker than what
 * is left when the load is taken back.
 * @param ligamentAt thickness at which the ligament breaks under a load (m)
 */
export function exitLoad(load: number, exit: Exit, ligamentAt: (load: number) => number): number {
  if (exit.backing) return load * exit.loadShare;
  return ligamentAt(load) > exit.from ? load : load * exit.loadShare;
}

/** Whether a thin wall stands, and what it would take. */
export interface ThinWall {
  readonly breaks: boolean;
  /** By a chip that reaches through at the rim, or by bending at its foot; null where it stands. */
  readonly by: 'chip' | 'bending' | null;
  /** Least thickness that stands (m), for each and for both. */
  readonly leastForChips: number;
  readonly leastForBending: number;
  readonly least: number;
}

export interface ThinWallSetting {
  readonly work: WorkMaterial;
  readonly thickness: number;
  /** Largest load of a grit on the wall (N). */
  readonly load: number;
  /** Lateral load that bends the wall (N): the grits that bear on one place at a time; one grit if left out. */
  readonly lateralLoad?: number;
  /** Depth of the cracks its hits leave in the wall (m). */
  readonly crack: number;
  readonly exit?: ExitConstants;
}

/**
 * Moment per length at the foot of a long cantilever plate over a point load at its free edge, whatever its height:
 * 0.509 P (Jaramillo, J. Appl. Mech. 17 (1950) 67; Roark), from memory.
 */
const CANTILEVER_MOMENT = 0.509;

/**
 * A wall between the cavity and the side of the work or a neighbouring cavity. It breaks where the widest chip at its rim,
 * from a hit at h = (P / beta K)^(2/3) below it, reaches through; or where the lateral load on its rim bends it to the
 * strength its cracks leave: sigma = 6 (0.509 P) / t^2. Derived; a wall held at its ends is stronger than this.
 */
export function thinWallBreaks(setting: ThinWallSetting, constants: ProcessConstants): ThinWall {
  const { work, thickness, load, crack, lateralLoad = load, exit = exitConstants } = setting;
  const leastForChips = edgeChip(edgeChipDistance(work.toughness, load, constants), constants).width;
  const leastForBending = Math.sqrt((6 * CANTILEVER_MOMENT * lateralLoad) / crackedStrength(work, crack, exit));
  const bends = thickness <= leastForBending;
  const chips = thickness <= leastForChips;
  let by: ThinWall['by'] = null;
  if (bends || chips) by = leastForBending > leastForChips ? 'bending' : 'chip';
  return {
    breaks: by !== null,
    by,
    leastForChips,
    leastForBending,
    least: Math.max(leastForChips, leastForBending),
  };
}
