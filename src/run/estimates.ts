import { makeOutline, type OutlineSpec, offsetSpec } from '#src/base/outline.ts';
import type { ResolvedJob, ResolvedPass } from '#src/formats/job/resolve.ts';
import {
  type Estimate,
  type EstimateTables,
  estimate,
  estimateTables,
  makeSlurryFace,
  memberTables,
  type SlurryFace,
  type Stage,
} from '#src/physics/estimate.ts';
import { gritLaw } from '#src/physics/grit-law.ts';
import type { Conditions } from '#src/physics/records.ts';
import type { FigureValues } from '#src/planning/figures.ts';
import { type Contact, contactsOf, type Opened } from '#src/planning/stages.ts';
import { combineValues, type Taken, type ValuedPass, widest } from './combine.ts';
import { estimateValues } from './figures.ts';

/** One pass as estimated. */
export interface PassEstimate extends ValuedPass {
  readonly estimate: Estimate;
}

/** A job as estimated, pass by pass and as a whole. */
export interface JobEstimate {
  readonly passes: readonly PassEstimate[];
  readonly values: FigureValues;
}

/** How exactly an estimate is worked out: for itself, or as one of many. */
export type Care = 'whole' | 'member';

/** Estimates jobs, and keeps what several estimates share: slurry faces, stages, and what each pass found. */
export interface Estimator {
  /** The slurry under the face of a pass, or under a part of it. */
  slurryFace(pass: ResolvedPass, outline?: OutlineSpec): SlurryFace;
  /**
   * Estimates every pass of a job on what the one before it left.
   * @param conditions those of the last pass where they are not the nominal ones; earlier passes are moved alike
   */
  estimate(job: ResolvedJob, conditions?: Conditions, care?: Care): JobEstimate;
}

/** Slurry faces kept; a sentence of help tries a few dozen settings. */
const FACES_KEPT = 64;

/** An estimator with nothing kept yet: one for each job that is worked on. */
export function makeEstimator(): Estimator {
  const faces = new Map<string, SlurryFace>();
  const contactsBy = new Map<string, readonly Contact[]>();
  const found = new WeakMap<ResolvedJob, readonly (Opened | undefined)[]>();

  function slurryFace(pass: ResolvedPass, outline: OutlineSpec = pass.tool): SlurryFace {
    const { amplitude, frequency, concentration, grit } = pass.conditions;
    const whole = outline === pass.tool;
    const bores = whole ? pass.bores : [];
    const supply = whole ? pass.supply : { ...pass.supply, delivery: { kind: 'flooded' } as const };
    const key = JSON.stringify([outline, bores, supply, amplitude, frequency, concentration, grit]);
    const known = faces.get(key);
    if (known) return known;
    if (faces.size >= FACES_KEPT) faces.clear();
    const face = makeSlurryFace(pass.conditions, outline, bores, supply);
    faces.set(key, face);
    return face;
  }

  function stagesOf(pass: ResolvedPass, earlier: Opened | undefined): readonly Stage[] {
    const { tool, face, depth, title } = pass;
    const key = JSON.stringify([tool, face, depth, earlier ?? null]);
    const contacts = contactsBy.get(key) ?? contactsOf({ tool, face, depth, ...(earlier && { earlier }) });
    contactsBy.set(key, contacts);
    if (contacts.length === 0) throw new RangeError(`the pass "${title}" finds nothing left to cut`);
    const bored = pass.toolArea / makeOutline(tool).area;
    return contacts.map((contact, n) => stageOf({ pass, slurryFace, bored }, contact, n === 0 && !earlier));
  }

  return {
    slurryFace,
    estimate(job, conditions = lastOf(job).conditions, care = 'whole') {
      const before = care === 'member' ? found.get(job) : undefined;
      const { passes, opened } = passesOf({ job, conditions, care, before, stagesOf });
      if (care === 'whole') found.set(job, opened);
      return { passes, values: combineValues(passes, wholeSizes(job, passes)) };
    },
  };
}

const lastOf = (job: ResolvedJob) => job.passes.at(-1) as ResolvedPass;

interface Staging {
  readonly pass: ResolvedPass;
  readonly slurryFace: Estimator['slurryFace'];
  /** Area of the face over that of its outline: bores take some off. */
  readonly bored: number;
}

/** A stretch of the way as a stage: a whole face has its slurry balanced, a pilot its own, a shelf or tip fresh grit. */
function stageOf({ pass, slurryFace, bored }: Staging, { from, to, area, whole }: Contact, first: boolean): Stage {
  if (whole) return { from, to, area: area * bored, slurry: slurryFace(pass) };
  if (pass.face.kind === 'stepped' && first) return { from, to, area, slurry: slurryFace(pass, pass.face.pilot) };
  return { from, to, area };
}

/** The conditions of another pass when those of the last are moved from nominal: the same work, tool and grit lot moved alike. */
function movedAlike(own: Conditions, nominal: Conditions, moved: Conditions): Conditions {
  if (own === nominal) return moved;
  const { grit } = own;
  const ratio = (of: (conditions: Conditions) => number) => of(moved) / of(nominal);
  return {
    ...own,
    work: moved.work,
    constants: moved.constants,
    tool: { ...own.tool, hardness: own.tool.hardness * ratio((c) => c.tool.hardness) },
    abrasive: { ...own.abrasive, crushStrength: own.abrasive.crushStrength * ratio((c) => c.abrasive.crushStrength) },
    grit: gritLaw({
      massMedian: grit.massMedian * ratio((c) => c.grit.massMedian),
      spread: grit.spread * ratio((c) => c.grit.spread),
      largest: grit.largest * ratio((c) => c.grit.largest),
    }),
  };
}

/** The outline a pass has opened: its tool moved out by the mean overcut, where outlines of its kind can be moved. */
function openedBy(pass: ResolvedPass, { overcutEntry, overcutFloor, depthReached }: Estimate): Opened {
  const overcut = (overcutEntry + overcutFloor) / 2;
  try {
    return { outline: offsetSpec(pass.tool, overcut), depth: depthReached };
  } catch {
    return { outline: pass.tool, depth: depthReached };
  }
}

interface One {
  readonly job: ResolvedJob;
  readonly pass: ResolvedPass;
  readonly conditions: Conditions;
  readonly stages: readonly Stage[];
  readonly care: Care;
}

function estimatePass({ job, pass, conditions, stages, care }: One): Estimate {
  const cavity = makeOutline(job.cavity);
  const tables: EstimateTables = care === 'member' ? memberTables(conditions) : estimateTables(conditions);
  return estimate(
    {
      conditions,
      load: pass.staticLoad,
      faceArea: pass.toolArea,
      outlineArea: cavity.area,
      perimeter: cavity.perimeter,
      depth: pass.depth,
      runout: pass.runout,
      edgeRadius: pass.edgeRadius,
      stages,
      toolLife: pass.toolLife,
      ...(pass.exit && { exit: pass.exit }),
    },
    tables,
  );
}

const NOTHING_TAKEN: Taken = { side: 0, floor: 0 };

/** What a pass takes off beyond what an earlier one opened (m). */
function takenBy(estimated: Estimate, pass: ResolvedPass, before: PassEstimate | undefined): Taken {
  if (!before) return NOTHING_TAKEN;
  const half = (of: ResolvedPass) => {
    const { xMin, xMax } = makeOutline(of.tool).bounds;
    return (xMax - xMin) / 2;
  };
  const opened = half(pass) + estimated.overcutEntry - (half(before.pass) + before.estimate.overcutEntry);
  return {
    side: Math.max(0, opened),
    floor: Math.max(0, estimated.depthReached - before.estimate.depthReached),
  };
}

interface All {
  readonly job: ResolvedJob;
  readonly conditions: Conditions;
  readonly care: Care;
  /** What each pass found with nominal properties: it varies little over a band, so members start from the same. */
  readonly before: readonly (Opened | undefined)[] | undefined;
  readonly stagesOf: (pass: ResolvedPass, earlier: Opened | undefined) => readonly Stage[];
}

function passesOf({ job, conditions, care, before, stagesOf }: All) {
  const passes: PassEstimate[] = [];
  const opened: (Opened | undefined)[] = [];
  for (const [index, pass] of job.passes.entries()) {
    const last = passes.at(-1);
    const earlier = before ? before[index] : last && openedBy(last.pass, last.estimate);
    opened.push(earlier);
    const own = movedAlike(pass.conditions, lastOf(job).conditions, conditions);
    const estimated = estimatePass({ job, pass, conditions: own, stages: stagesOf(pass, earlier), care });
    passes.push({
      pass,
      estimate: estimated,
      values: estimateValues(pass, job.cavity, estimated),
      taken: takenBy(estimated, pass, last),
    });
  }
  return { passes, opened };
}

/** Entry size over all passes: as wide as the widest opened it. */
function wholeSizes(job: ResolvedJob, passes: readonly PassEstimate[]): Partial<FigureValues> {
  if (passes.length === 1) return {};
  const core = job.sizes.map((_, n) => job.cavity.kind === 'ring' && n === 1);
  const entrySizeMm = passes.reduce<FigureValues['entrySizeMm']>(
    (size, { values }) => (size === null ? values.entrySizeMm : widest(size, values.entrySizeMm, core)),
    null,
  );
  return { entrySizeMm };
}
