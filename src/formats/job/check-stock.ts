import { craterLaw, radialCrack } from '#src/physics/crater.ts';
import { type ThinWall, thinWallBreaks } from '#src/physics/exit.ts';
import { wallLaw } from '#src/physics/wall.ts';
import type { Problem } from '../problems.ts';
import type { Draft } from './draft.ts';
import { wallBetween } from './fit.ts';
import { mm, problem, um } from './words.ts';

/** Wall or floor left beside the cavity, in largest grains, below which chips and cracks reach through. Common practice. */
const GRAINS_LEFT = 10;

/** Largest grain of any pass (m); 0 while none is known. */
function largestGrain({ passes }: Draft): number {
  return passes.reduce((largest, { grit }) => Math.max(largest, grit?.largest ?? 0), 0);
}

/** Wall that cracks and chips do not reach through, between cavities of a depth (m). */
function wallEnough(draft: Draft, depth: number): number {
  return Math.max(GRAINS_LEFT * largestGrain(draft), depth / 2);
}

/** The pass that is hardest on a thin wall, by the load of the hardest squeezed grain; undefined while no pass is whole. */
function thinWall({ passes }: Draft, thickness: number): ThinWall | undefined {
  let worst: ThinWall | undefined;
  for (const { conditions, runout } of passes) {
    if (!conditions || !(runout > 0)) continue;
    const { work, constants } = conditions;
    const load = wallLaw(conditions, runout).loads.reduce((most, one) => Math.max(most, one), 0);
    const crack = radialCrack(craterLaw(work, constants), load);
    const wall = thinWallBreaks({ work, thickness, load, crack }, constants);
    if (!worst || wall.least > worst.least) worst = wall;
  }
  return worst;
}

/** A warning about a wall that is thinner than `enough`: whether it stands by the laws, or is thin by common practice only. */
function thinProblem(draft: Draft, field: Pick<Problem, 'path' | 'value'>, wall: Wall): Problem[] {
  const { thickness, enough, between } = wall;
  if (thickness >= enough) return [];
  const found = thinWall(draft, thickness);
  const left = `Only ${mm(thickness)} is left between ${between}`;
  const how = found?.by === 'bending' ? 'the squeezed grains bend it off' : 'chips at its rim reach through';
  const message = found?.breaks
    ? `${left}, and it will break out: ${how}. It stands from ${um(found.least)} on; leave far more.`
    : `${left}, and it may break out.`;
  return [problem('warn', field.path, field.value, `${mm(enough)} of wall or more`, message)];
}

/** A wall of the work: its thickness, what is enough (m), and what is on its sides. */
interface Wall {
  readonly thickness: number;
  readonly enough: number;
  readonly between: string;
}

function floorLeft(draft: Draft): Problem[] {
  const { job, depth, stock, through } = draft;
  if (depth === undefined || !stock || through) return [];
  const { thicknessMm } = job.workpiece ?? {};
  const left = stock.thickness - depth;
  const enough = GRAINS_LEFT * largestGrain(draft);
  if (left <= 0) {
    const message = `The cavity is deeper than the workpiece: ${mm(depth)} into ${mm(stock.thickness)}. Take thicker stock or less depth, or say cavity.through: true.`;
    return [problem('refuse', 'workpiece.thicknessMm', thicknessMm, `more than ${mm(depth)}`, message)];
  }
  if (left >= enough) return [];
  const message = `Only ${mm(left)} is left under the floor, where cracks of these grains may reach through.`;
  return [problem('warn', 'workpiece.thicknessMm', thicknessMm, `${mm(depth + enough)} or more`, message)];
}

function sidesLeft(draft: Draft): Problem[] {
  const { job, cavity, depth, stock } = draft;
  if (!cavity || depth === undefined || !stock) return [];
  const { lengthMm, widthMm, cavityXMm, cavityYMm } = job.workpiece ?? {};
  const { xMin, xMax, yMin, yMax } = cavity.outline.bounds;
  const enough = wallEnough(draft, depth);
  const sides = [
    ['lengthMm', lengthMm, stock.length, xMin, xMax, 'cavityXMm', cavityXMm, stock.cavityX],
    ['widthMm', widthMm, stock.width, yMin, yMax, 'cavityYMm', cavityYMm, stock.cavityY],
  ] as const;
  return sides.flatMap(([name, value, size, from, to, atName, at, offset]) => {
    const width = to - from;
    const wall = size / 2 - Math.max(to + offset, -(from + offset));
    if (width >= size) {
      const message = `The cavity is larger than the workpiece: ${mm(width)} in ${mm(size)}. Take larger stock.`;
      return [problem('refuse', `workpiece.${name}`, value, `more than ${mm(width)}`, message)];
    }
    if (wall <= 0) {
      const room = mm(size / 2 - Math.max(to, -from));
      const message = `The cavity runs over the side of the workpiece by ${mm(-wall)}. Move it inward.`;
      return [problem('refuse', `workpiece.${atName}`, at, `from minus to plus ${room}`, message)];
    }
    const path = at === undefined ? `workpiece.${name}` : `workpiece.${atName}`;
    const between = 'the cavity and the side of the workpiece';
    return thinProblem(draft, { path, value: at ?? value }, { thickness: wall, enough, between });
  });
}

function neighboursLeft(draft: Draft): Problem[] {
  const { job, cavity, depth, neighbours } = draft;
  if (!cavity || depth === undefined) return [];
  return neighbours.flatMap((neighbour, index) => {
    if (!neighbour) return [];
    const path = `workpiece.neighbours[${index}]`;
    const value = job.workpiece?.neighbours?.[index];
    const wall = wallBetween(cavity.outline, neighbour.outline.outline, neighbour);
    const enough = wallEnough(draft, Math.min(depth, neighbour.depth));
    if (wall <= 0) {
      const message = `The cavity runs into this neighbour by ${mm(-wall)}. Set them farther apart.`;
      return [problem('refuse', path, value, 'cavities apart', message)];
    }
    return thinProblem(draft, { path, value }, { thickness: wall, enough, between: 'the cavity and this neighbour' });
  });
}

function islandsLeft(draft: Draft): Problem[] {
  const { job, cavity, depth } = draft;
  if (cavity?.islandGap === undefined || depth === undefined) return [];
  const wall = { thickness: cavity.islandGap, enough: wallEnough(draft, depth), between: 'the cavities of the gang' };
  return thinProblem(draft, { path: 'cavity.outline', value: job.cavity?.outline }, wall);
}

function backingCounts({ job, through }: Draft): Problem[] {
  if (through || job.workpiece?.backing !== 'bonded') return [];
  const message =
    'A blind cavity has no exit, so the backing counts for nothing. Take it out, or say cavity.through: true.';
  return [problem('warn', 'workpiece.backing', 'bonded', 'none for a blind cavity', message)];
}

/** What the cavity leaves of the workpiece around it. */
export function checkSurroundings(draft: Draft): Problem[] {
  return [
    ...floorLeft(draft),
    ...sidesLeft(draft),
    ...neighboursLeft(draft),
    ...islandsLeft(draft),
    ...backingCounts(draft),
  ];
}
