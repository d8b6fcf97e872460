import type { Cut } from '#src/voxel/cut.ts';
import { type Allocate, fieldFrom, rimFrom } from '#src/voxel/field.ts';
import { type KernelTables, STEPS } from '#src/voxel/kernels/contract.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import { piecesOf, runTask, type TileRunner, type TileWork, tileWork, type Workpiece } from '#src/voxel/runner.ts';
import type { Port } from './port.ts';

/**
 * Tiles of one step shared between threads. One word of shared memory holds the step and the next task to be taken; who
 * raises it has the task. Tasks are numbered through the four colours, and a colour is open once all tasks before it are
 * done, so there is no barrier to be late for: a thread that sleeps is simply not waited for.
 */
const WORD = { ticket: 0, done: 1, stop: 2 } as const;
const WORDS = 3;
/** Bits of the ticket that number the task; the rest number the step, so that a late thread takes nothing of an old one. */
const TASK_BITS = 16;
const TASK_MASK = (1 << TASK_BITS) - 1;
/** Looks at the shared word before a thread goes to sleep over it. */
const SPINS = 4000;

/** What a helper gets once per cut: memory that is shared, and tables that are copied. */
export interface CrewSetup {
  readonly kind: 'crew';
  readonly words: SharedArrayBuffer;
  readonly pieces: readonly {
    readonly field: SharedArrayBuffer;
    readonly step: SharedArrayBuffer;
    readonly rim: SharedArrayBuffer | null;
    /** Copied, but for the parts the slurry renews, which lie in shared memory. */
    readonly tables: readonly KernelTables[];
    readonly tileZones: Uint8Array | null;
  }[];
}

/** Memory that a crew's threads share. */
export const allocateShared: Allocate = (bytes) => new SharedArrayBuffer(bytes);

/** The tasks of a step in one row, and where each colour starts. */
interface Schedule {
  readonly work: TileWork;
  readonly tasks: Int32Array;
  /** For each task, how many must be done before it. */
  readonly after: Int32Array;
}

function scheduleOf(pieces: readonly Workpiece[]): Schedule {
  const work = tileWork(pieces);
  const total = work.colours.reduce((sum, colour) => sum + colour.length, 0);
  const tasks = new Int32Array(total);
  const after = new Int32Array(total);
  let start = 0;
  for (const colour of work.colours) {
    tasks.set(colour, start);
    after.fill(start, start, start + colour.length);
    start += colour.length;
  }
  return { work, tasks, after };
}

/** Waits until a shared word is no longer what it was. */
function waitChange(words: Int32Array, index: number, was: number): void {
  for (let k = 0; k < SPINS; k++) if (Atomics.load(words, index) !== was) return;
  Atomics.wait(words, index, was);
}

/** One thread's part in a step: takes tasks until none is left. Returns the ticket word it last saw. */
function takeTasks(words: Int32Array, schedule: Schedule, hit: (task: number) => void): number {
  const { tasks, after } = schedule;
  for (;;) {
    const ticket = Atomics.load(words, WORD.ticket);
    const k = ticket & TASK_MASK;
    if (k >= tasks.length) return ticket;
    const done = Atomics.load(words, WORD.done);
    if (done < (after[k] as number)) {
      waitChange(words, WORD.done, done);
      continue;
    }
    if (Atomics.compareExchange(words, WORD.ticket, ticket, ticket + 1) !== ticket) continue;
    hit(tasks[k] as number);
    const now = Atomics.add(words, WORD.done, 1) + 1;
    // the last of a colour wakes those who wait for the next, and the last of all the engine
    if (now === tasks.length || after[now] === now) Atomics.notify(words, WORD.done);
  }
}

/** A helper's life during one cut; returns when the cut is over. Blocks its thread. */
export function helpCut(setup: CrewSetup): void {
  const words = new Int32Array(setup.words);
  const kernel = createFastKernel();
  const pieces = setup.pieces.map(({ field, step, rim, tables, tileZones }) => ({
    tables,
    tileZones,
    field: fieldFrom(field),
    step: new Float64Array(step, 0, STEPS),
    rim: rim && rimFrom(rim),
  }));
  const schedule = scheduleOf(pieces);
  while (Atomics.load(words, WORD.stop) === 0) {
    const seen = takeTasks(words, schedule, (task) => runTask(kernel, schedule.work, task));
    if (Atomics.load(words, WORD.stop) === 0) waitChange(words, WORD.ticket, seen);
  }
}

/** Serves one helper's port: cuts come one after another. */
export function serveTiles(port: Port): void {
  port.onMessage((message) => helpCut(message as CrewSetup));
}

/** A runner that helpers work for until it is closed. */
export interface Crew extends TileRunner {
  close(): void;
}

/**
 * Sets helpers to work on a cut whose memory is shared. The same bits as on one thread, for any number of helpers. A helper
 * that dies takes the engine with it (whoever started the threads sees to that), so nothing here waits for the dead.
 * @throws RangeError when a step has more tiles than can be numbered
 */
export function startCrew({ model, state }: Cut, helpers: readonly Port[]): Crew {
  const pieces = piecesOf(model, state);
  const schedule = scheduleOf(pieces);
  const total = schedule.tasks.length;
  if (total >= TASK_MASK) throw new RangeError(`${total} tiles are more than a crew can number`);
  const words = new Int32Array(allocateShared(WORDS * 4));
  // nothing to take until the first step
  Atomics.store(words, WORD.ticket, total);
  const setup: CrewSetup = {
    kind: 'crew',
    words: words.buffer as SharedArrayBuffer,
    pieces: pieces.map(({ field, step, rim, tables, tileZones }) => ({
      tables,
      tileZones,
      field: field.heights.buffer as SharedArrayBuffer,
      step: step.buffer as SharedArrayBuffer,
      rim: rim && (rim.chips.buffer as SharedArrayBuffer),
    })),
  };
  for (const helper of helpers) helper.post(setup);
  const kernel = createFastKernel();
  let step = 0;
  return {
    run() {
      step = (step + 1) & (2 ** (31 - TASK_BITS) - 1);
      Atomics.store(words, WORD.done, 0);
      Atomics.store(words, WORD.ticket, step << TASK_BITS);
      Atomics.notify(words, WORD.ticket);
      takeTasks(words, schedule, (task) => runTask(kernel, schedule.work, task));
      for (let done = Atomics.load(words, WORD.done); done < total; done = Atomics.load(words, WORD.done)) {
        waitChange(words, WORD.done, done);
      }
    },
    close() {
      Atomics.store(words, WORD.stop, 1);
      Atomics.store(words, WORD.ticket, -1);
      Atomics.notify(words, WORD.ticket);
      Atomics.notify(words, WORD.done);
    },
  };
}
