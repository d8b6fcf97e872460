import {
  METRES_PER_MICROMETRE,
  METRES_PER_MILLIMETRE,
  METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
  SECONDS_PER_MINUTE,
} from '#src/base/units.ts';
import type { ResolvedJob, ResolvedPass } from '#src/formats/job/resolve.ts';
import { formatNumber } from '#src/formats/numbers.ts';
import type { Rasteriser } from '#src/formats/raster.ts';
import type { ResultWarning } from '#src/formats/result.ts';
import { type CutMeasures, measureCut } from '#src/planning/measure.ts';
import type { BrickField } from '#src/voxel/bricks.ts';
import { type Cut, cutHash, makeCut, progressOf, runCut } from '#src/voxel/cut.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { buildBricks } from '#src/voxel/solid.ts';
import { SCALAR } from '#src/voxel/state.ts';
import type { ValuedPass } from './combine.ts';
import { allocateShared, startCrew } from './crew.ts';
import { settingPath, shortWarnings } from './estimate-job.ts';
import type { Estimator } from './estimates.ts';
import { cutValues } from './figures.ts';
import { cutSpecOf } from './jobs.ts';
import type { Port } from './port.ts';
import type { Progress } from './protocol.ts';
import type { CallContext } from './serve.ts';
import { type FloorTexture, floorRa, floorTexture } from './trace.ts';

/** What a cut is run with. */
export interface CutTools {
  /** Threads that share the tiles; none for one thread. */
  readonly helpers: readonly Port[];
  readonly rasteriser: () => Promise<Rasteriser>;
}

/** A pass carried through, with the cavity as it left it. */
export interface DonePass extends ValuedPass {
  /** Place in the job, from 0. */
  readonly index: number;
  readonly cut: Cut;
  /** Ra of the floor at every record (m). */
  readonly roughness: readonly number[];
  readonly bricks: BrickField;
  readonly measures: CutMeasures;
  readonly texture: FloorTexture | null;
  readonly hash: string;
  readonly warnings: readonly ResultWarning[];
}

/** Shares of a run's time: until the first step, and until the last. */
const PREPARED = 0.02;
const CUT = 0.9;

/** Tells how far a job is over all its replicates and passes. */
export interface RunProgress {
  /** The share of a pass of a replicate that is cut. */
  tell(replicate: number, index: number, cut: Cut, phase: Progress['phase']): void;
  /** What is told when all is cut. */
  end(): Progress;
}

/** Progress of a job: passes weigh by their way over their grain, which is the number of floors they take off. */
export function progressOver(job: ResolvedJob, context: CallContext): RunProgress {
  const start = context.now();
  const ways = job.passes.map(({ depth, conditions }, index) => {
    const before = job.passes[index - 1]?.depth ?? 0;
    return (depth - (index > 0 ? 0.5 * before : 0)) / conditions.grit.massMedian;
  });
  const whole = ways.reduce((sum, way) => sum + way, 0);
  let last: Progress = {
    phase: 'drawing',
    fraction: CUT,
    depthMm: 0,
    timeMin: 0,
    rateMmPerMin: 0,
    secondsLeft: null,
  };
  return {
    tell(replicate, index, cut, phase) {
      const before = ways.slice(0, index).reduce((sum, way) => sum + way, 0) / whole;
      const done = before + ((ways[index] as number) / whole) * progressOf(cut);
      const share = (replicate + done) / job.cut.replicates;
      const s = cut.state.scalars;
      const ahead = (1 - share) / share + (1 - CUT) / (CUT - PREPARED) / share;
      const elapsed = (context.now() - start) / 1000;
      context.report('progress', () => {
        last = {
          phase,
          fraction: PREPARED + (CUT - PREPARED) * share,
          depthMm: -(s[SCALAR.floorMean] as number) / METRES_PER_MILLIMETRE,
          timeMin: (s[SCALAR.time] as number) / SECONDS_PER_MINUTE,
          rateMmPerMin: (cut.records.at(-1)?.rate ?? 0) / METRES_PER_SECOND_PER_MILLIMETRE_PER_MINUTE,
          secondsLeft: share > 0.01 ? elapsed * ahead : null,
        };
        return last;
      });
    },
    end: () => ({ ...last, phase: 'drawing', fraction: CUT, secondsLeft: null }),
  };
}

/** What the passes of one replicate are cut with. */
export interface PassRun {
  readonly replicate: number;
  readonly context: CallContext;
  readonly tools: CutTools;
  readonly progress: RunProgress;
  readonly estimator: Estimator;
}

/** Cuts the passes of a job in order, each in the cavity the one before it left. */
export async function cutPasses(job: ResolvedJob, run: PassRun): Promise<DonePass[]> {
  const done: DonePass[] = [];
  for (const index of job.passes.keys()) done.push(await cutPass(job, index, done.at(-1), run));
  return done;
}

async function cutPass(
  job: ResolvedJob,
  index: number,
  earlier: DonePass | undefined,
  run: PassRun,
): Promise<DonePass> {
  const { context, tools, replicate } = run;
  const pass = job.passes[index] as ResolvedPass;
  const slurry = run.estimator.slurryFace(pass);
  const spec = cutSpecOf(job, { pass: index, replicate, earlier: earlier ?? null, slurry });
  const cut = makeCut(spec, tools.helpers.length > 0 ? allocateShared : undefined);
  await context.breathe();
  const roughness = await grow(cut, index, run);
  const hash = cutHash(cut);
  run.progress.tell(replicate, index, cut, 'measuring');
  const bricks = buildBricks(cut.model, cut.state);
  await context.breathe();
  const measures = measureCut(cut, bricks, job.cavity);
  await context.breathe();
  const texture = floorTexture(cut);
  return {
    pass,
    index,
    cut,
    roughness,
    bricks,
    measures,
    texture,
    hash,
    values: cutValues(pass, measures, texture),
    taken: takenBy(measures, earlier?.measures),
    warnings: warningsOf(job, index, measures),
  };
}

/** What a pass took off around and under the cavity it found (m). */
function takenBy(measures: CutMeasures, before: CutMeasures | undefined) {
  if (!before) return { side: 0, floor: 0 };
  const wider = ((measures.entrySize[0] ?? Number.NaN) - (before.entrySize[0] ?? Number.NaN)) / 2;
  return {
    side: Number.isFinite(wider) ? Math.max(0, wider) : 0,
    floor: Math.max(0, measures.depth - before.depth),
  };
}

const mm = (metres: number) => `${formatNumber(metres / METRES_PER_MILLIMETRE, 3)} mm`;

const um = (metres: number) => `${formatNumber(metres / METRES_PER_MICROMETRE, 3)} um`;

/** Share of the floor or wall under which cracks of an earlier pass are worth a word. */
const TOLD_SHARE = 0.01;

/** Cracks of earlier passes that a pass did not take away, and where. */
function leftWarnings(job: ResolvedJob, index: number, { earlierDamage }: CutMeasures): ResultWarning[] {
  if (!earlierDamage) return [];
  const places = [['floor', earlierDamage.floor] as const, ['wall', earlierDamage.wall] as const];
  return places.flatMap(([place, { share, deepest }]): ResultWarning[] => {
    if (share < TOLD_SHARE) return [];
    const percent = `${formatNumber(100 * share, 2)} %`;
    const message = `Cracks of the passes before are left under ${percent} of the ${place}, ${um(deepest)} deep at most. Leave more stock.`;
    return [{ path: settingPath(job, index - 1, 'stockUm'), message }];
  });
}

/** What the cut of a pass has to say of it. */
function warningsOf(job: ResolvedJob, index: number, measures: CutMeasures): ResultWarning[] {
  const { stalledAt, ranOut, depth } = measures;
  return [
    ...leftWarnings(job, index, measures),
    ...(ranOut || stalledAt !== null ? [] : shortWarnings(job, index, depth)),
    ...(stalledAt === null
      ? []
      : [
          {
            path: settingPath(job, index, 'machine.staticLoadN'),
            message: `The cut stalled at a depth of ${mm(stalledAt)}: the slurry no longer renews under this load. Enter less.`,
          },
        ]),
    ...(ranOut
      ? [
          {
            path: settingPath(job, index, 'tool.wearLengthMm'),
            message: `The tool was used up at a depth of ${mm(depth)}. Take a longer or harder one, or dress it on the way.`,
          },
        ]
      : []),
  ];
}

/** Runs the cut to its end; returns the floor's Ra at every record (m). */
async function grow(cut: Cut, index: number, run: PassRun): Promise<number[]> {
  const { context, tools, replicate, progress } = run;
  const crew = tools.helpers.length > 0 ? startCrew(cut, tools.helpers) : null;
  const runner = crew ?? serialRunner(createFastKernel(), cut.model, cut.state);
  const roughness: number[] = [];
  try {
    for (let done = false; !done; ) {
      done = runCut(cut, runner, 1);
      if (cut.records.length > roughness.length) roughness.push(floorRa(cut));
      progress.tell(replicate, index, cut, 'cutting');
      await context.breathe();
    }
  } finally {
    crew?.close();
  }
  return roughness;
}
