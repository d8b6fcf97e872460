import { makeOutline, type Outline } from '#src/base/outline.ts';
import {
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  MICROMETRES_PER_METRE,
  MILLIMETRES_PER_METRE,
  PASCALS_PER_MEGAPASCAL,
} from '#src/base/units.ts';
import { publishedConstants } from '#src/physics/constants.ts';
import { estimateTables, pressureForRate } from '#src/physics/estimate.ts';
import { gritLaw } from '#src/physics/grit-law.ts';
import type { Exit, SlurrySupply, ToolLife } from '#src/physics/pass.ts';
import type { Abrasive, Conditions, ToolMaterial } from '#src/physics/records.ts';
import type { Bore } from '#src/physics/slurry/grid.ts';
import type { ToolFace } from '#src/physics/tool-face.ts';
import type { GritSizes } from '../library.ts';
import { formatNumber } from '../numbers.ts';
import type { Problem } from '../problems.ts';
import { DEFAULT_PRESSURE, DEFAULTS } from './defaults.ts';
import { type Desk, emptyDesk, orDefault, refuse } from './desk.ts';
import type { DraftSettings, JobFrame } from './draft.ts';
import { feedOf, type Vibration, vibrationOf } from './drive.ts';
import { exitOf } from './exit.ts';
import { boresOf, faceOf } from './face.ts';
import { sideGap } from './fit.ts';
import { abrasiveFor, gritFor, toolMaterialFor } from './matter.ts';
import { readOutline } from './outline-input.ts';
import { type PassView, passName } from './passes.ts';
import { supplyOf } from './supply.ts';

/**
 * Predicted overcut per side (m), for the tool's outline where the job gives none.
 * @param depth depth of the cavity (m)
 * @param runout lateral run-out of the tool (m)
 */
export type PredictOvercut = (conditions: Conditions, depth: number, runout: number) => number;

/**
 * Rule of thumb: 1.9 median grains, at most what the largest grain leaves. Found in the cut (1.7 to 2.1 d50 at the entry of
 * glass, walls that close on the largest grain plus the run-out).
 */
export const ruleOfThumbOvercut: PredictOvercut = ({ grit }, _depth, runout) =>
  Math.min(1.9 * grit.massMedian, grit.largest + runout);

/** One pass in SI as far as it could be worked out; what depends on a bad field is undefined. */
export interface PassDraft {
  readonly view: PassView;
  readonly toolMaterial: ToolMaterial | undefined;
  readonly abrasive: Abrasive | undefined;
  readonly grit: GritSizes | undefined;
  readonly vibration: Vibration;
  readonly conditions: Conditions | undefined;
  /** Depth of the tool's tip at the end (m). */
  readonly depth: number | undefined;
  readonly tool: Outline | undefined;
  /** Whether the job gives the tool's outline. */
  readonly toolGiven: boolean;
  /** Smallest gap between the tool and the wall as drawn (m). */
  readonly gap: number | undefined;
  /** Predicted overcut per side (m). */
  readonly overcut: number | undefined;
  /** Work this pass leaves per side and on the floor (m); undefined for the last. */
  readonly stock: number | undefined;
  readonly edgeRadius: number;
  readonly face: ToolFace | undefined;
  readonly bores: readonly Bore[] | undefined;
  /** Area of the tool's face without its bores (m2). */
  readonly faceArea: number | undefined;
  readonly supply: SlurrySupply | undefined;
  readonly toolLife: ToolLife;
  readonly runout: number;
  /** Static load (N): the one given, the default, or what the feed is expected to take. */
  readonly staticLoad: number | undefined;
  /** Feed of a feed-controlled machine (m/s). */
  readonly feed: number | undefined;
  readonly exit: (Exit & { readonly thickness: number }) | undefined;
  readonly defaultsUsed: readonly string[];
  readonly notes: readonly string[];
  readonly problems: readonly Problem[];
}

/** Works one pass out in SI. Never throws. */
export function draftPass(frame: JobFrame, view: PassView, settings: DraftSettings): PassDraft {
  const desk = emptyDesk(settings.attachments, view.at);
  const { job } = view;
  const matter = {
    toolMaterial: toolMaterialFor(desk, job, settings.library),
    abrasive: abrasiveFor(desk, job, settings.library),
    grit: gritFor(desk, job.slurry ?? {}, settings.library),
  };
  const vibration = vibrationOf(desk, job.machine ?? {});
  const concentration = orDefault(desk, 'slurry.concentrationVolPercent', job.slurry?.concentrationVolPercent) / 100;
  const conditions = conditionsOf(frame, matter, vibration, concentration);
  const runout = orDefault(desk, 'machine.lateralRunoutUm', job.machine?.lateralRunoutUm) * METRES_PER_MICROMETRE;
  const supply = supplyOf(desk, job.slurry ?? {});
  const depth = passDepth(desk, frame, view);
  const overcut =
    conditions && frame.depth !== undefined
      ? settings.predictOvercut(conditions, depth ?? frame.depth, runout)
      : undefined;
  const tool = toolFor(desk, frame, view, overcut);
  const bores = boresOf(job.tool ?? {});
  const faceArea = tool && bores && tool.area - bores.reduce((sum, { radius }) => sum + Math.PI * radius * radius, 0);
  const staticLoad = loadFor(desk, view, faceArea, conditions);
  const gap = gapOf(frame, view, tool, overcut);
  return {
    view,
    ...matter,
    vibration,
    conditions,
    depth,
    tool,
    toolGiven: job.tool?.outline !== undefined,
    gap,
    overcut,
    stock: stockLeft(frame, view, { depth, gap, overcut }),
    edgeRadius: orDefault(desk, 'tool.edgeRadiusMm', job.tool?.edgeRadiusMm) * METRES_PER_MILLIMETRE,
    face: faceOf(desk, job.tool ?? {}, frame.cavity?.origin ?? { x: 0, y: 0 }),
    bores,
    faceArea,
    supply,
    toolLife: lifeOf(desk, view),
    runout,
    staticLoad,
    feed: feedOf(job.machine ?? {}),
    exit: exitOf(desk, frame, { view, depth, staticLoad, grit: matter.grit }),
    defaultsUsed: desk.defaultsUsed,
    notes: view.listed ? desk.notes.map((note) => `${passName(view)}: ${note}`) : desk.notes,
    problems: desk.problems,
  };
}

type Matter = Pick<PassDraft, 'toolMaterial' | 'abrasive' | 'grit'>;

function conditionsOf(
  { work }: JobFrame,
  { toolMaterial, abrasive, grit }: Matter,
  { amplitude, frequency }: Vibration,
  concentration: number,
): Conditions | undefined {
  if (!work || !toolMaterial || !abrasive || !grit || amplitude === undefined) return undefined;
  const driven = { amplitude, frequency, concentration };
  return { work, tool: toolMaterial, abrasive, grit: gritLaw(grit), ...driven, constants: publishedConstants };
}

/** Depth a pass goes to; refused where it says neither what it leaves nor how deep it goes. */
function passDepth(desk: Desk, { depth }: JobFrame, { own, last }: PassView): number | undefined {
  const given = own.depthMm === undefined ? undefined : own.depthMm * METRES_PER_MILLIMETRE;
  if (last) {
    if (own.stockUm !== undefined) {
      const message = 'After the last pass nothing takes the stock away. Take stockUm out, or add a pass.';
      refuse(desk, 'stockUm', own.stockUm, 'nothing in the last pass', message);
    }
    if (given === undefined || depth === undefined || Math.abs(given - depth) <= 1e-9 * depth) return depth;
    const mm = formatNumber(depth * MILLIMETRES_PER_METRE, 6);
    const message = `The last pass ends at another depth than the cavity, ${mm} mm. Take it out, or mend one of the two.`;
    return refuse(desk, 'depthMm', own.depthMm, `nothing, or ${mm} mm`, message);
  }
  if (own.stockUm === undefined && (own.tool?.outline === undefined || given === undefined)) {
    const message =
      'Missing: what this pass leaves for the next. Give stockUm, or tool.outline and depthMm of the pass.';
    return refuse(desk, 'stockUm', undefined, '1 to 20000 um', message);
  }
  if (given !== undefined || depth === undefined) return given;
  const stock = (own.stockUm ?? 0) * METRES_PER_MICROMETRE;
  if (stock < depth) return depth - stock;
  const mm = formatNumber(depth * MILLIMETRES_PER_METRE, 6);
  const message = `The stock is as much as the cavity is deep, ${mm} mm, so that this pass cuts nothing. Leave less.`;
  return refuse(
    desk,
    'stockUm',
    own.stockUm,
    `less than ${formatNumber(depth * MICROMETRES_PER_METRE, 6)} um`,
    message,
  );
}

function toolFor(
  desk: Desk,
  { cavity, job }: JobFrame,
  view: PassView,
  overcut: number | undefined,
): Outline | undefined {
  const file = view.job.tool?.outline;
  if (file !== undefined) return readOutline(desk, 'tool.outline', file, cavity?.origin ?? { x: 0, y: 0 })?.outline;
  if (!cavity || overcut === undefined) return undefined;
  const { stockUm } = view.own;
  if (!view.last && stockUm === undefined) return undefined;
  const stock = view.last ? 0 : (stockUm ?? 0) * METRES_PER_MICROMETRE;
  desk.defaultsUsed.push(view.last ? 'tool.outline' : `passes[${view.index}].tool.outline`);
  const spec = cavity.inside(overcut + stock);
  const shown = formatNumber(overcut * MICROMETRES_PER_METRE, 3);
  if (spec) {
    const less = stock > 0 ? ` and a stock of ${formatNumber(stock * MICROMETRES_PER_METRE, 4)} um` : '';
    desk.notes.push(`The tool is the cavity less a predicted overcut of ${shown} um${less} per side.`);
    return makeOutline(spec);
  }
  if (stock > 0) {
    const message = `Nothing is left of the tool: this grit opens the cavity by ${shown} um a side, and the stock comes on top. Leave less, take a finer grit, or give tool.outline.`;
    return refuse(desk, 'stockUm', stockUm, 'what leaves a tool', message);
  }
  const wide = `wider than ${formatNumber(2e3 * overcut, 3)} mm`;
  const help = cavity.outline.spec.kind === 'path' ? ', or give tool.outline' : '';
  const message = `Nothing is left of the tool: this grit opens the cavity by ${shown} um a side. Take a finer grit${help}.`;
  return refuse(desk, 'cavity.outline', job.cavity?.outline, wide, message);
}

function gapOf(
  { cavity }: JobFrame,
  { job, own, last }: PassView,
  tool: Outline | undefined,
  overcut: number | undefined,
) {
  if (!cavity || !tool) return undefined;
  if (job.tool?.outline !== undefined || overcut === undefined) return sideGap(cavity.outline, tool);
  return overcut + (last ? 0 : (own.stockUm ?? 0) * METRES_PER_MICROMETRE);
}

type Left = Pick<PassDraft, 'depth' | 'gap' | 'overcut'>;

/** Work a pass leaves: the lesser of what it leaves per side and on the floor; per side alone where it has gone through. */
function stockLeft({ depth: whole, through }: JobFrame, { own, last }: PassView, left: Left): number | undefined {
  const { depth, gap, overcut } = left;
  if (last || depth === undefined || gap === undefined || overcut === undefined || whole === undefined)
    return undefined;
  if (own.stockUm !== undefined && own.depthMm === undefined && own.tool?.outline === undefined) {
    return own.stockUm * METRES_PER_MICROMETRE;
  }
  const floor = through && depth >= whole ? Infinity : whole - depth;
  return Math.max(0, Math.min(gap - overcut, floor));
}

function lifeOf(desk: Desk, { job }: PassView): ToolLife {
  const compensated = orDefault(desk, 'tool.wearCompensated', job.tool?.wearCompensated);
  const length = job.tool?.wearLengthMm;
  return { compensated, ...(length !== undefined && { length: length * METRES_PER_MILLIMETRE }) };
}

function loadFor(
  desk: Desk,
  { job }: PassView,
  faceArea: number | undefined,
  conditions: Conditions | undefined,
): number | undefined {
  const { feedMmPerMin, staticLoadN: given } = job.machine ?? {};
  const feed = feedOf(job.machine ?? {});
  if (feed !== undefined && given !== undefined) {
    const message = 'A machine is driven by a load or by a feed, not by both. Take one of the two out.';
    return refuse(desk, 'machine.feedMmPerMin', feedMmPerMin, 'staticLoadN or feedMmPerMin', message);
  }
  if (given !== undefined) return given;
  if (feed === undefined) {
    desk.defaultsUsed.push('machine.staticLoadN');
    if (faceArea === undefined || !(faceArea > 0)) return undefined;
    const load = DEFAULT_PRESSURE * faceArea;
    const pressure = formatNumber(DEFAULT_PRESSURE / PASCALS_PER_MEGAPASCAL, 3);
    desk.notes.push(
      `The load is ${formatNumber(load, 3)} N, a face pressure of ${pressure} MPa, since none was given.`,
    );
    return load;
  }
  if (faceArea === undefined || !(faceArea > 0) || !conditions) return undefined;
  // the load fresh grit takes to sink at the feed
  const pressure = pressureForRate(estimateTables(conditions), feed);
  if (pressure === undefined) {
    const message = 'No load the grits bear sinks the tool at this feed. Enter less.';
    return refuse(desk, 'machine.feedMmPerMin', feedMmPerMin, 'what the grits can cut', message);
  }
  desk.notes.push(`The feed is expected to take a load of ${formatNumber(pressure * faceArea, 3)} N.`);
  return pressure * faceArea;
}

/** Amplitude as the job or its default has it (um), for messages. */
export function amplitudeField({ view }: PassDraft): { readonly path: string; readonly value: number } {
  const { amplitudeUm, transducerAmplitudeUm } = view.job.machine ?? {};
  if (transducerAmplitudeUm !== undefined)
    return { path: 'machine.transducerAmplitudeUm', value: transducerAmplitudeUm };
  return { path: 'machine.amplitudeUm', value: amplitudeUm ?? DEFAULTS['machine.amplitudeUm'] };
}
