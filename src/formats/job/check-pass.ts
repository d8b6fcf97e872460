import { formatNumber } from '../numbers.ts';
import type { Problem } from '../problems.ts';
import { checkMachine } from './check-machine.ts';
import { checkToolForm } from './check-tool.ts';
import type { JobFrame } from './draft.ts';
import { featureOf, overallWidth } from './fit.ts';
import { outlineText } from './outline-file.ts';
import type { PassDraft } from './pass-draft.ts';
import { mm, mpa, problem, um } from './words.ts';

/** Face pressure above which tools under 3 mm have never been measured. */
const PRESSURE_KNOWN = 0.6e6;
const SMALL_TOOL = 3e-3;

function toolFits({ cavity }: JobFrame, { view, toolGiven, gap, grit, overcut }: PassDraft): Problem[] {
  const value = view.job.tool?.outline;
  if (!cavity || !toolGiven || gap === undefined) return [];
  const best = overcut === undefined ? undefined : cavity.inside(overcut);
  const allowed = best ? `about ${outlineText(best)} with this grit` : 'inside the cavity';
  const say = (severity: Problem['severity'], message: string) => [
    problem(severity, view.at('tool.outline'), value, allowed, message),
  ];
  if (gap < 0) {
    const drawn = value?.kind === 'polygon' || value?.kind === 'path' || value?.kind === 'drawing';
    const hint = drawn ? " Its points and drawings use the cavity's coordinates." : '';
    const message = `The tool is larger than the cavity: it reaches over the wall by ${mm(-gap)}. Make it smaller.${hint}`;
    return say('refuse', message);
  }
  if (!grit) return [];
  if (gap < grit.massMedian) {
    return say(
      'refuse',
      `The grit is too coarse for the gap: half of it is larger than ${um(grit.massMedian)}, the gap is ${um(gap)} a side. Take a finer grit or a smaller tool.`,
    );
  }
  if (overcut === undefined) return [];
  if (gap < Math.min(grit.largest, 0.8 * overcut)) {
    return say(
      'warn',
      `The gap is ${um(gap)} a side and grains reach ${um(grit.largest)}: the cavity will come out larger than drawn.`,
    );
  }
  if (view.last && gap > 2 * overcut + 1e-9) {
    return say(
      'warn',
      `The gap is ${um(gap)} a side and this grit opens about ${um(overcut)}: the cavity will come out smaller than drawn.`,
    );
  }
  return [];
}

/** Islands and holes a drawn tool keeps when it is made of the cavity. */
function toolWhole({ cavity }: JobFrame, { view, toolGiven, tool }: PassDraft): Problem[] {
  if (!cavity || !tool || toolGiven) return [];
  const before = cavity.outline.loops.length;
  const after = tool.loops.length;
  if (before === after) return [];
  const message = `The cavity less overcut and stock falls into ${after} loops where the drawing has ${before}: parts of it are too narrow for this grit. Take a finer grit, or give tool.outline.`;
  return [problem('warn', view.at('tool.outline'), undefined, 'a tool of the same parts as the cavity', message)];
}

function grainsPass({ cavity }: JobFrame, { view, tool, grit }: PassDraft): Problem[] {
  if (!cavity || !tool || !grit) return [];
  const feature = Math.min(featureOf(cavity.outline.spec), featureOf(tool.spec));
  const { slurry } = view.job;
  const path = view.at(slurry?.grit !== undefined ? 'slurry.grit' : 'slurry.d50Um');
  const value = slurry?.grit ?? slurry?.d50Um;
  const allowed = `largest grain at most ${um(feature / 3)}`;
  const what = `The largest grain is ${um(grit.largest)} and the smallest feature ${mm(feature)}`;
  if (grit.largest >= feature) {
    return [problem('refuse', path, value, allowed, `${what}: it cannot cut that. Take a finer grit.`)];
  }
  if (grit.largest <= feature / 3) return [];
  return [problem('warn', path, value, allowed, `${what}, less than three grains. Take a finer grit.`)];
}

function edgeFits(_frame: JobFrame, { view, tool, edgeRadius }: PassDraft): Problem[] {
  if (!tool) return [];
  const half = featureOf(tool.spec) / 2;
  if (edgeRadius < half) return [];
  const message = 'The edge radius leaves no flat face on the tool. Make it smaller.';
  const value = view.job.tool?.edgeRadiusMm;
  return [problem('refuse', view.at('tool.edgeRadiusMm'), value, `less than ${mm(half)}`, message)];
}

function pressureKnown(_frame: JobFrame, pass: PassDraft): Problem[] {
  const { view, tool, faceArea, toolMaterial, staticLoad } = pass;
  if (!tool || faceArea === undefined || !toolMaterial || staticLoad === undefined || !(faceArea > 0)) return [];
  const pressure = staticLoad / faceArea;
  const value = view.job.machine?.staticLoadN;
  const path = view.at('machine.staticLoadN');
  const newtons = `up to ${formatNumber(PRESSURE_KNOWN * faceArea, 3)} N`;
  // yield stress from hardness, H / 3: Tabor 1951, from memory
  const yieldStress = toolMaterial.hardness / 3;
  if (pressure > yieldStress) {
    const message = `${mpa(pressure)} on the face squashes the tool, which yields near ${mpa(yieldStress)}. Enter less.`;
    return [problem('refuse', path, value, newtons, message)];
  }
  if (pressure <= PRESSURE_KNOWN || overallWidth(tool.spec) >= SMALL_TOOL) return [];
  const message = `${mpa(pressure)} on the face of a tool under 3 mm is outside any data. Expect less than is predicted.`;
  return [problem('warn', path, value, newtons, message)];
}

/** Slurry goes through bores, or through the hole of a hollow tool. */
function flowPasses(_frame: JobFrame, { view, supply, bores, tool }: PassDraft): Problem[] {
  if (!supply || supply.delivery.kind === 'flooded' || bores === undefined || bores.length > 0) return [];
  if (!tool || tool.loops.some(({ hole }) => hole)) return [];
  const way = supply.delivery.kind === 'suction' ? 'drawn off' : 'pumped in';
  const message = `Slurry that is ${way} through the tool needs a way through, and it has neither bores nor a hole. Give tool.bores, or enter flooded.`;
  const value = view.job.slurry?.delivery;
  return [problem('refuse', view.at('slurry.delivery'), value, 'flooded for a solid tool', message)];
}

function exitFits({ through, stock }: JobFrame, { view, exit }: PassDraft): Problem[] {
  const { exitFromMm } = view.job.machine ?? {};
  if (!through || !stock || exitFromMm === undefined || exit === undefined) return [];
  if (exitFromMm * 1e-3 <= stock.thickness) return [];
  const message = 'This is more than the workpiece is thick: the load is taken back from the start. Enter less.';
  return [problem('warn', view.at('machine.exitFromMm'), exitFromMm, `up to ${mm(stock.thickness)}`, message)];
}

const CHECKS = [
  toolFits,
  toolWhole,
  grainsPass,
  edgeFits,
  checkToolForm,
  checkMachine,
  pressureKnown,
  flowPasses,
  exitFits,
] as const;

/** Everything wrong or doubtful about one pass's settings together. */
export function checkPass(frame: JobFrame, pass: PassDraft): Problem[] {
  return CHECKS.flatMap((check) => check(frame, pass));
}
