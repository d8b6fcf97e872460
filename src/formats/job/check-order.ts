import { radialCrack } from '#src/physics/crater.ts';
import { estimateTables } from '#src/physics/estimate.ts';
import { loadQuantiles, steadyFloor } from '#src/physics/floor.ts';
import type { Problem } from '../problems.ts';
import type { Draft } from './draft.ts';
import { sideGap } from './fit.ts';
import type { PassDraft } from './pass-draft.ts';
import { passName } from './passes.ts';
import { mm, problem, um } from './words.ts';

/** Depths nearer than this share are one. */
const SAME = 1e-9;

/** Path and value of what sets a pass's depth. */
function depthField({ view }: PassDraft): { readonly path: string; readonly value: unknown } {
  const { depthMm, stockUm } = view.own;
  return depthMm !== undefined || stockUm === undefined
    ? { path: view.at('depthMm'), value: depthMm }
    : { path: view.at('stockUm'), value: stockUm };
}

function goesDown(before: PassDraft, after: PassDraft): Problem[] {
  if (before.depth === undefined || after.depth === undefined) return [];
  if (after.depth >= before.depth * (1 - SAME)) return [];
  const { path, value } = depthField(after.view.last ? before : after);
  const message = `${passName(after.view)} ends at ${mm(after.depth)}, above ${passName(before.view)} at ${mm(before.depth)}, and would cut nothing. Put the passes in order of depth.`;
  return [problem('refuse', path, value, `passes that go down`, message)];
}

function nestsInside(before: PassDraft, after: PassDraft): Problem[] {
  if (!before.tool || !after.tool || (!before.toolGiven && !after.toolGiven)) return [];
  const reach = -sideGap(after.tool, before.tool);
  if (reach <= 1e-6) return [];
  const message = `The tool of ${passName(before.view)} reaches over that of ${passName(after.view)} by ${mm(reach)}: the later pass cannot clean the wall the earlier one leaves. Make it smaller.`;
  const value = before.view.job.tool?.outline;
  return [problem('warn', before.view.at('tool.outline'), value, 'inside the tool of the next pass', message)];
}

/** Depth that 99 % of the cracks under a pass's floor stay above with fresh grit (m); undefined where no load is known. */
function damageOf({ conditions, staticLoad, faceArea }: PassDraft): number | undefined {
  if (!conditions || staticLoad === undefined || !faceArea) return undefined;
  const { sums } = estimateTables(conditions);
  const [load = 0] = loadQuantiles(sums, steadyFloor(sums, staticLoad / faceArea), [0.99]);
  const depth = radialCrack(sums.rows.crater, load);
  return Number.isFinite(depth) ? depth : undefined;
}

/** Work the later pass takes off where the earlier one has been (m): the lesser of per side and on the floor. */
function takenOff(before: PassDraft, after: PassDraft, through: boolean): number | undefined {
  const opened = ({ gap, overcut }: PassDraft) =>
    gap === undefined || overcut === undefined ? undefined : gap - overcut;
  const [a, b] = [opened(before), opened(after)];
  if (a === undefined || b === undefined || before.depth === undefined || after.depth === undefined) return undefined;
  const sameDepth = after.depth - before.depth <= SAME * after.depth;
  const floor = through && sameDepth ? Number.POSITIVE_INFINITY : after.depth - before.depth;
  return Math.max(0, Math.min(a - b, floor));
}

function stockEnough({ through }: Draft, before: PassDraft, after: PassDraft): Problem[] {
  const taken = takenOff(before, after, through);
  const damage = damageOf(before);
  if (taken === undefined || damage === undefined || taken >= damage) return [];
  const { stockUm, depthMm } = before.view.own;
  const path = before.view.at(stockUm !== undefined || depthMm === undefined ? 'stockUm' : 'depthMm');
  const message = `${passName(after.view)} takes off ${um(taken)}, and the cracks of ${passName(before.view)} reach ${um(damage)}: some of them stay. Leave more.`;
  return [problem('warn', path, stockUm ?? depthMm, `${um(damage)} or more`, message)];
}

/** Passes against each other: they go down, each leaves the next enough, and no tool is larger than a later one. */
export function checkOrder(draft: Draft): Problem[] {
  return draft.passes.slice(1).flatMap((after, k) => {
    const before = draft.passes[k] as PassDraft;
    const up = goesDown(before, after);
    return [...up, ...nestsInside(before, after), ...(up.length > 0 ? [] : stockEnough(draft, before, after))];
  });
}
