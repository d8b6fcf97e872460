import type { ToolLife } from '../pass.ts';
import { type Leg, legsTo } from './stages.ts';
import type { EstimateTables } from './tables.ts';
import { throughDepth, type WayDown } from './through-depth.ts';

/** Depth is solved for to this share. */
const DEPTH_TOLERANCE = 1e-5;
const ROUNDS = 6;

/**
 * The way down as far as the tool goes. Where the length lost is not made up for, the tip stops short by it: depth + lost =
 * the depth set. A tool that has lost the length it has ends the cut there. Found by secants, each a way down of its own.
 */
export function toolsWay(
  legs: readonly Leg[],
  tables: EstimateTables,
  life: ToolLife = { compensated: true },
): { readonly way: WayDown; readonly ranOut: boolean } {
  const { compensated, length = Number.POSITIVE_INFINITY } = life;
  if (!(length > 0)) throw new RangeError(`a tool needs a length to lose above zero, got ${length} m`);
  const first = (legs[0] as Leg).from;
  const set = (legs.at(-1) as Leg).to;
  const whole = throughDepth(legs, tables);
  if (compensated && whole.lost <= length) return { way: whole, ranOut: false };
  // what is left over at a depth: way to go, or length to lose
  const left = (depth: number, { lost }: WayDown) => ({
    way: compensated ? set - depth : set - depth - lost,
    length: length - lost,
  });
  let [depth, way] = [set, whole];
  for (let round = 0; round < ROUNDS; round++) {
    const here = left(depth, way);
    const perDepth = way.lost / (depth - first);
    const byWay = compensated ? here.way : here.way / (1 + perDepth);
    const byLength = perDepth > 0 ? here.length / perDepth : Number.POSITIVE_INFINITY;
    const step = Math.min(byWay, byLength);
    if (Math.abs(step) <= DEPTH_TOLERANCE * set) break;
    depth = Math.max(first + 0.01 * (depth - first), Math.min(set, depth + step));
    way = throughDepth(legsTo(legs, depth), tables);
  }
  const ends = left(depth, way);
  return { way, ranOut: ends.length < ends.way };
}
