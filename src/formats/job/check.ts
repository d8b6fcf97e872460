import type { Problem } from '../problems.ts';
import { checkCut } from './check-cut.ts';
import { checkOrder } from './check-order.ts';
import { checkPass } from './check-pass.ts';
import { checkSurroundings } from './check-stock.ts';
import type { Draft } from './draft.ts';
import { overallWidth } from './fit.ts';
import { ownProperty, WORK_PROPERTIES } from './matter.ts';
import { passName } from './passes.ts';
import { mm, problem } from './words.ts';

/** Depth over diameter above which slurry no longer comes and goes (Thoe, Aspinwall and Wise 1998). */
const DEPTH_RATIO = 3;

function limitsAgree({ job }: Draft): Problem[] {
  const { entrySizeLowerMm: lower, entrySizeUpperMm: upper } = job.cavity?.limits ?? {};
  if (lower === undefined || upper === undefined || lower < upper) return [];
  const message = 'The lower deviation is not below the upper one, so no size meets both. Swap or mend them.';
  return [
    problem('refuse', 'cavity.limits.entrySizeLowerMm', lower, `less than entrySizeUpperMm, ${upper} mm`, message),
  ];
}

function propertiesKnown({ job, library, workRecord }: Draft): Problem[] {
  const workpiece = job.workpiece ?? {};
  return WORK_PROPERTIES.flatMap(([name]) => {
    const value = ownProperty(workpiece, name);
    if (value === undefined) return [];
    const path = `workpiece.${name}`;
    const given = workpiece[name];
    const { min, max } = typeof given === 'object' ? given : {};
    if ((min !== undefined && min > value) || (max !== undefined && max < value)) {
      const message = 'The nominal value is outside its own range. Mend one.';
      return [problem('refuse', path, given, 'min <= nominal <= max', message)];
    }
    const known = (workRecord ? [workRecord] : library.materials).map((record) => record.properties[name]);
    const least = Math.min(...known.map((property) => property.min));
    const most = Math.max(...known.map((property) => property.max));
    if (value >= least && value <= most) return [];
    const whose = workRecord ? `what the library knows of ${workRecord.id}` : 'every material of the library';
    const message = `This is outside ${whose}. Make sure of the value and its unit.`;
    return [problem('warn', path, given, `${least} to ${most}`, message)];
  });
}

function depthReachable({ job, cavity, depth, through }: Draft): Problem[] {
  if (!cavity || depth === undefined) return [];
  const most = DEPTH_RATIO * overallWidth(cavity.outline.spec);
  if (depth <= most) return [];
  const message = 'Deeper than three diameters slurry hardly comes and goes. Expect it slower than predicted.';
  const [path, value] = through
    ? ['workpiece.thicknessMm', job.workpiece?.thicknessMm]
    : ['cavity.depthMm', job.cavity?.depthMm];
  return [problem('warn', path, value, `up to ${mm(most)}`, message)];
}

/** Problems of the passes: one that all passes share is told once, one of some passes names them. */
function passProblems(draft: Draft): Problem[] {
  const { passes } = draft;
  const gathered = new Map<string, { found: Problem; passes: number[] }>();
  passes.forEach((pass, index) => {
    for (const found of [...pass.problems, ...checkPass(draft, pass)]) {
      const key = JSON.stringify([found.path, found.severity, found.message, found.allowed]);
      const known = gathered.get(key) ?? { found, passes: [] };
      if (!known.passes.includes(index)) known.passes.push(index);
      gathered.set(key, known);
    }
  });
  return [...gathered.values()].map(({ found, passes: own }) => {
    if (own.length === passes.length || found.path.startsWith('passes[')) return found;
    const names = own.map((index) => passName((passes[index] as (typeof passes)[number]).view)).join(', ');
    return { ...found, message: `${names}: ${found.message}` };
  });
}

/** Everything wrong or doubtful about a job's settings that are each fine alone. Never throws. */
export function checkDraft(draft: Draft): Problem[] {
  return [
    ...limitsAgree(draft),
    ...propertiesKnown(draft),
    ...checkSurroundings(draft),
    ...passProblems(draft),
    ...checkOrder(draft),
    ...depthReachable(draft),
    ...checkCut(draft),
  ];
}
