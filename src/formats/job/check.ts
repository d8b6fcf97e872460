import { smallestFeature } from '#src/base/outline.ts';
import { MICROMETRES_PER_METRE, MILLIMETRES_PER_METRE, PASCALS_PER_MEGAPASCAL } from '#src/base/units.ts';
import { judgeAmplitude } from '#src/physics/fatigue.ts';
import { toolMaterialOf } from '../library.ts';
import { formatNumber } from '../numbers.ts';
import type { Problem } from '../problems.ts';
import { checkCut } from './check-cut.ts';
import { DEFAULTS } from './defaults.ts';
import { type Draft, insideBy } from './draft.ts';
import { overallWidth, sideGap } from './fit.ts';
import { ownProperty, WORK_PROPERTIES } from './matter.ts';
import { outlineText } from './outline-file.ts';

const mm = (metres: number) => `${formatNumber(metres * MILLIMETRES_PER_METRE, 4)} mm`;
const um = (metres: number) => `${formatNumber(metres * MICROMETRES_PER_METRE, 3)} um`;
const mpa = (pascals: number) => `${formatNumber(pascals / PASCALS_PER_MEGAPASCAL, 3)} MPa`;

/** One rule about settings together. It says nothing when what it needs is missing. */
type Check = (draft: Draft) => (Problem | undefined)[];

function problem(
  severity: Problem['severity'],
  path: string,
  value: unknown,
  allowed: string,
  message: string,
): Problem {
  return { path, value, allowed, message, severity };
}

/** Library material whose strain limit stands for the horn's: horns are of titanium. Common practice. */
const HORN = 'ti_6al_4v';
/** Face pressure above which tools under 3 mm have never been measured. */
const PRESSURE_KNOWN = 0.6e6;
const SMALL_TOOL = 3e-3;
/** Depth over diameter above which slurry no longer comes and goes (Thoe, Aspinwall and Wise 1998). */
const DEPTH_RATIO = 3;
/** Wall or floor left beside the cavity, in largest grains, below which chips and cracks reach through. Common practice. */
const GRAINS_LEFT = 10;

const limitsAgree: Check = ({ job }) => {
  const { entrySizeLowerMm: lower, entrySizeUpperMm: upper } = job.cavity?.limits ?? {};
  if (lower === undefined || upper === undefined || lower < upper) return [];
  const message = 'The lower deviation is not below the upper one, so no size meets both. Swap or mend them.';
  return [
    problem('refuse', 'cavity.limits.entrySizeLowerMm', lower, `less than entrySizeUpperMm, ${upper} mm`, message),
  ];
};

const propertiesKnown: Check = ({ job, library, workRecord }) => {
  const workpiece = job.workpiece ?? {};
  return WORK_PROPERTIES.flatMap(([name]) => {
    const value = ownProperty(workpiece, name);
    if (value === undefined) return [];
    const path = `workpiece.${name}`;
    const given = workpiece[name];
    const { min, max } = typeof given === 'object' ? given : {};
    if ((min !== undefined && min > value) || (max !== undefined && max < value)) {
      return [
        problem(
          'refuse',
          path,
          given,
          'min <= nominal <= max',
          'The nominal value is outside its own range. Mend one.',
        ),
      ];
    }
    const known = (workRecord ? [workRecord] : library.materials).map((record) => record.properties[name]);
    const least = Math.min(...known.map((property) => property.min));
    const most = Math.max(...known.map((property) => property.max));
    if (value >= least && value <= most) return [];
    const whose = workRecord ? `what the library knows of ${workRecord.id}` : 'every material of the library';
    return [
      problem(
        'warn',
        path,
        given,
        `${least} to ${most}`,
        `This is outside ${whose}. Make sure of the value and its unit.`,
      ),
    ];
  });
};

const cavityInStock: Check = ({ job, cavity, depth, stock, grit }) => {
  if (!cavity || depth === undefined || !stock) return [];
  const found: Problem[] = [];
  const { lengthMm, widthMm, thicknessMm, cavityXMm, cavityYMm } = job.workpiece ?? {};
  const left = stock.thickness - depth;
  const enough = grit ? GRAINS_LEFT * grit.largest : 0;
  if (left <= 0) {
    const message = `The cavity is deeper than the workpiece: ${mm(depth)} into ${mm(stock.thickness)}. Take thicker stock or less depth.`;
    found.push(problem('refuse', 'workpiece.thicknessMm', thicknessMm, `more than ${mm(depth)}`, message));
  } else if (left < enough) {
    const message = `Only ${mm(left)} is left under the floor, where cracks of these grains may reach through.`;
    found.push(problem('warn', 'workpiece.thicknessMm', thicknessMm, `${mm(depth + enough)} or more`, message));
  }
  const { xMin, xMax, yMin, yMax } = cavity.bounds;
  const sides = [
    ['lengthMm', lengthMm, stock.length, xMin, xMax, 'cavityXMm', cavityXMm, stock.cavityX],
    ['widthMm', widthMm, stock.width, yMin, yMax, 'cavityYMm', cavityYMm, stock.cavityY],
  ] as const;
  for (const [name, value, size, from, to, atName, at, offset] of sides) {
    const width = to - from;
    const wall = size / 2 - Math.max(to + offset, -(from + offset));
    if (width >= size) {
      const message = `The cavity is larger than the workpiece: ${mm(width)} in ${mm(size)}. Take larger stock.`;
      found.push(problem('refuse', `workpiece.${name}`, value, `more than ${mm(width)}`, message));
    } else if (wall <= 0) {
      const room = mm(size / 2 - Math.max(to, -from));
      const message = `The cavity runs over the side of the workpiece by ${mm(-wall)}. Move it inward.`;
      found.push(problem('refuse', `workpiece.${atName}`, at, `from minus to plus ${room}`, message));
    } else if (wall < Math.max(enough, depth / 2)) {
      const message = `Only ${mm(wall)} is left between the cavity and the side of the workpiece, and it may break out.`;
      const path = at === undefined ? `workpiece.${name}` : `workpiece.${atName}`;
      found.push(problem('warn', path, at ?? value, `${mm(Math.max(enough, depth / 2))} of wall or more`, message));
    }
  }
  return found;
};

const toolFits: Check = ({ job, cavity, tool, grit, overcut }) => {
  if (!cavity || !tool || job.tool?.outline === undefined) return [];
  const gap = sideGap(cavity, tool);
  const value = job.tool.outline;
  const best = overcut === undefined ? undefined : insideBy(cavity.spec, overcut);
  const allowed = best ? `about ${outlineText(best)} with this grit` : 'inside the cavity';
  const say = (severity: Problem['severity'], message: string) => [
    problem(severity, 'tool.outline', value, allowed, message),
  ];
  if (gap < 0)
    return say(
      'refuse',
      `The tool is larger than the cavity: it reaches over the wall by ${mm(-gap)}. Make it smaller.`,
    );
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
  if (gap > 2 * overcut + 1e-9) {
    return say(
      'warn',
      `The gap is ${um(gap)} a side and this grit opens about ${um(overcut)}: the cavity will come out smaller than drawn.`,
    );
  }
  return [];
};

const grainsPass: Check = ({ job, cavity, tool, grit }) => {
  if (!cavity || !tool || !grit) return [];
  const feature = Math.min(smallestFeature(cavity.spec), smallestFeature(tool.spec));
  const { slurry } = job;
  const path = slurry?.grit !== undefined ? 'slurry.grit' : 'slurry.d50Um';
  const value = slurry?.grit ?? slurry?.d50Um;
  const allowed = `largest grain at most ${um(feature / 3)}`;
  const what = `The largest grain is ${um(grit.largest)} and the smallest feature ${mm(feature)}`;
  if (grit.largest >= feature)
    return [problem('refuse', path, value, allowed, `${what}: it cannot cut that. Take a finer grit.`)];
  if (grit.largest > feature / 3)
    return [problem('warn', path, value, allowed, `${what}, less than three grains. Take a finer grit.`)];
  return [];
};

const edgeFits: Check = ({ job, tool, edgeRadius }) => {
  if (!tool) return [];
  const half = smallestFeature(tool.spec) / 2;
  if (edgeRadius < half) return [];
  const message = 'The edge radius leaves no flat face on the tool. Make it smaller.';
  return [problem('refuse', 'tool.edgeRadiusMm', job.tool?.edgeRadiusMm, `less than ${mm(half)}`, message)];
};

const amplitudeBearable: Check = ({ job, library, toolMaterial, amplitude, frequency }) => {
  if (!toolMaterial) return [];
  const horn = library.tools.find((record) => record.id === HORN);
  const parts = [
    { name: 'tool', verdict: judgeAmplitude(toolMaterial, amplitude, frequency) },
    ...(horn ? [{ name: 'titanium horn', verdict: judgeAmplitude(toolMaterialOf(horn), amplitude, frequency) }] : []),
  ].sort((a, b) => b.verdict.share - a.verdict.share);
  const { name, verdict } = parts[0] as (typeof parts)[number];
  if (verdict.answer === 'fine') return [];
  const share = formatNumber(100 * verdict.share, 3);
  const refused = verdict.answer === 'refuse';
  const message = refused
    ? `${um(amplitude)} would crack the ${name}: that is ${share} % of what it bears smooth. Enter less${name === 'tool' ? ", or change the tool's material" : ''}.`
    : `${um(amplitude)} is ${share} % of what the ${name} bears smooth; fillets, brazing and wet corrosion halve that.`;
  const path = 'machine.amplitudeUm';
  return [
    problem(
      refused ? 'refuse' : 'warn',
      path,
      job.machine?.amplitudeUm ?? DEFAULTS['machine.amplitudeUm'],
      `up to ${um(verdict.limit / (refused ? 1 : 2))}`,
      message,
    ),
  ];
};

const pressureKnown: Check = ({ job, tool, toolMaterial, staticLoad }) => {
  if (!tool || !toolMaterial || staticLoad === undefined) return [];
  const pressure = staticLoad / tool.area;
  const value = job.machine?.staticLoadN;
  const newtons = (pascals: number) => `up to ${formatNumber(pascals * tool.area, 3)} N`;
  // yield stress from hardness, H / 3: Tabor 1951, from memory
  const yieldStress = toolMaterial.hardness / 3;
  if (pressure > yieldStress) {
    const message = `${mpa(pressure)} on the face squashes the tool, which yields near ${mpa(yieldStress)}. Enter less.`;
    return [problem('refuse', 'machine.staticLoadN', value, newtons(PRESSURE_KNOWN), message)];
  }
  if (pressure <= PRESSURE_KNOWN || overallWidth(tool.spec) >= SMALL_TOOL) return [];
  const message = `${mpa(pressure)} on the face of a tool under 3 mm is outside any data. Expect less than is predicted.`;
  return [problem('warn', 'machine.staticLoadN', value, newtons(PRESSURE_KNOWN), message)];
};

const depthReachable: Check = ({ job, cavity, depth }) => {
  if (!cavity || depth === undefined) return [];
  const most = DEPTH_RATIO * overallWidth(cavity.spec);
  if (depth <= most) return [];
  const message = 'Deeper than three diameters slurry hardly comes and goes. Expect it slower than predicted.';
  return [problem('warn', 'cavity.depthMm', job.cavity?.depthMm, `up to ${mm(most)}`, message)];
};

const CHECKS: readonly Check[] = [
  limitsAgree,
  propertiesKnown,
  cavityInStock,
  toolFits,
  grainsPass,
  edgeFits,
  amplitudeBearable,
  pressureKnown,
  depthReachable,
  checkCut,
];

/** Everything wrong or doubtful about settings that are each fine alone. Never throws. */
export function checkDraft(draft: Draft): Problem[] {
  return CHECKS.flatMap((check) => check(draft)).filter((found) => found !== undefined);
}
