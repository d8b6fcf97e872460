import type { PartialJob, Whittled } from './desk.ts';
import type { PassFile } from './schema.ts';

type PartialPass = Whittled<PassFile>;
type Section = Record<string, unknown>;
type SectionName = 'tool' | 'slurry' | 'machine';

/** One pass as the job sees it: its own settings laid over the job's. */
export interface PassView {
  /** Place in the job's list; 0 in a job without one. */
  readonly index: number;
  /** Whether the job lists its passes. */
  readonly listed: boolean;
  readonly last: boolean;
  /** What the pass says itself. */
  readonly own: PartialPass;
  /** The job with the pass's settings in place of its own. */
  readonly job: PartialJob;
  /** Where a field stands: in the pass, or in the job. */
  readonly at: (path: string) => string;
}

/** Fields of the job that a field of the pass takes the meaning from, by section and field. */
const SUPERSEDED: Readonly<Record<SectionName, Readonly<Record<string, readonly string[]>>>> = {
  tool: {},
  slurry: {
    grit: ['gritMethod', 'd50Um', 'spread', 'largestUm'],
    d50Um: ['grit', 'gritMethod', 'largestUm'],
    carrier: ['carrierViscosityMPaS'],
    delivery: ['deliveryPressureKPa'],
    renewal: ['sumpLitres', 'usedMin'],
  },
  machine: {
    amplitudeUm: ['transducerAmplitudeUm'],
    transducerAmplitudeUm: ['amplitudeUm'],
    staticLoadN: ['feedMmPerMin'],
    feedMmPerMin: ['staticLoadN'],
  },
};

function laidOver(name: SectionName, base: Section, own: Section): Section {
  const given = Object.entries(own).filter(([, value]) => value !== undefined);
  const left = { ...base };
  for (const [field] of given) {
    const superseded = SUPERSEDED[name];
    for (const gone of Object.hasOwn(superseded, field) ? (superseded[field] ?? []) : []) delete left[gone];
  }
  return { ...left, ...Object.fromEntries(given) };
}

/** What a pass's own fields make of a section of the job; the tool's outline is the last pass's alone. */
function section(job: PartialJob, own: PartialPass, name: SectionName, last: boolean): Section {
  const base = { ...((job[name] ?? {}) as Section) };
  if (name === 'tool' && !last) delete base.outline;
  return laidOver(name, base, (own[name] ?? {}) as Section);
}

const SECTIONS = ['tool', 'slurry', 'machine'] as const satisfies readonly SectionName[];

/** First field of a path within a section: `outline` of `tool.outline.diameterMm`. */
function fieldOf(path: string): readonly [section: string, field: string] {
  const [name = '', field = ''] = path.split(/[.[]/);
  return [name, field];
}

function placing(own: PartialPass, index: number): (path: string) => string {
  return (path) => {
    if (path === 'depthMm' || path === 'stockUm') return `passes[${index}].${path}`;
    const [name, field] = fieldOf(path);
    if (!(SECTIONS as readonly string[]).includes(name)) return path;
    const stands = (own[name as SectionName] as Section | undefined)?.[field] !== undefined;
    return stands ? `passes[${index}].${path}` : path;
  };
}

/**
 * The passes of a job, in order: its list, or the one that its own sections make. A pass that was taken out for being wrong is
 * passed over.
 */
export function passViews(job: PartialJob): PassView[] {
  const listed = (job.passes ?? []) as readonly (PartialPass | undefined)[];
  if (listed.length === 0) return [{ index: 0, listed: false, last: true, own: {}, job, at: (path) => path }];
  return listed.flatMap((own, index): PassView[] => {
    if (typeof own !== 'object' || own === null) return [];
    const last = index === listed.length - 1;
    const sections = Object.fromEntries(SECTIONS.map((name) => [name, section(job, own, name, last)]));
    return [{ index, listed: true, last, own, job: { ...job, ...sections }, at: placing(own, index) }];
  });
}

/** What a message calls a pass: "Pass 2 (Finishing)". */
export function passName({ index, own }: PassView): string {
  return own.title === undefined || own.title === '' ? `Pass ${index + 1}` : `Pass ${index + 1} (${own.title})`;
}
