import { METRES_PER_MILLIMETRE } from '#src/base/units.ts';
import { breakingThickness, crackedStrength } from '#src/physics/exit.ts';
import type { Exit } from '#src/physics/pass.ts';
import type { GritSizes } from '../library.ts';
import { type Desk, orDefault, warn } from './desk.ts';
import type { JobFrame } from './draft.ts';
import type { PassView } from './passes.ts';

/** How much more is left than the ligament the full load breaks when the load is taken back. Assumed: strength scatters by about this. */
const EXIT_MARGIN = 2;
/** Share of the thickness at most. */
const MOST_OF_THICKNESS = 0.5;

/** What the exit of a pass follows from. */
export interface ExitGround {
  readonly view: PassView;
  readonly depth: number | undefined;
  readonly staticLoad: number | undefined;
  readonly grit: GritSizes | undefined;
}

/**
 * Work left when the load is taken back where the job does not say (m): twice the ligament the full load breaks through without
 * backing, with cracks under the floor as deep as the largest grain, which they stay below; never less than twice that grain, and
 * at most half the thickness.
 */
function defaultFrom({ work }: JobFrame, { staticLoad, grit }: ExitGround, thickness: number): number {
  const crack = grit?.largest ?? 0;
  const ligament = work && staticLoad !== undefined ? breakingThickness(staticLoad, crackedStrength(work, crack)) : 0;
  return Math.min(MOST_OF_THICKNESS * thickness, EXIT_MARGIN * Math.max(ligament, crack));
}

/** How a pass comes out at the other side; undefined where it does not. */
export function exitOf(
  desk: Desk,
  frame: JobFrame,
  ground: ExitGround,
): (Exit & { readonly thickness: number }) | undefined {
  const { machine } = ground.view.job;
  if (!frame.through) {
    for (const name of ['exitLoadShare', 'exitFromMm'] as const) {
      if (machine?.[name] === undefined) continue;
      const message =
        'A blind cavity has no exit, so this counts for nothing. Take it out, or say cavity.through: true.';
      warn(desk, `machine.${name}`, machine[name], 'nothing in a blind cavity', message);
    }
    return undefined;
  }
  const loadShare = orDefault(desk, 'machine.exitLoadShare', machine?.exitLoadShare);
  const { depth: thickness, backing } = frame;
  if (machine?.exitFromMm === undefined) desk.defaultsUsed.push('machine.exitFromMm');
  if (thickness === undefined || ground.depth === undefined || ground.depth < thickness) return undefined;
  const given = machine?.exitFromMm;
  const from = given === undefined ? defaultFrom(frame, ground, thickness) : given * METRES_PER_MILLIMETRE;
  return { backing, loadShare, from: Math.min(from, thickness), thickness };
}
