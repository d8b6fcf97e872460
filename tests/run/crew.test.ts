import { existsSync } from 'node:fs';
import { pathToFileURL } from 'node:url';
import { MessageChannel, Worker } from 'node:worker_threads';
import { afterAll, describe, expect, test } from 'vitest';
import { portOf, startThreads } from '#src/cli/threads.ts';
import type { ResolvedPass } from '#src/formats/job/resolve.ts';
import { createClient, EngineDiedError } from '#src/run/client.ts';
import { allocateShared, startCrew } from '#src/run/crew.ts';
import { makeEstimator } from '#src/run/estimates.ts';
import { cutSpecOf, openJob } from '#src/run/jobs.ts';
import { cutHash, makeCut, runCut } from '#src/voxel/cut.ts';
import { createFastKernel } from '#src/voxel/kernels/fast/kernel.ts';
import type { CutSpec } from '#src/voxel/model.ts';
import { serialRunner } from '#src/voxel/runner.ts';
import { shallowJobText, smallJobText } from '../support/jobs.ts';

// Threads run built files: `npm test` builds first, and without a build this fails rather than passing over.
const built = (name: string) => pathToFileURL(`dist/${name}`);
if (!existsSync(built('tile.worker.js'))) throw new Error('dist is missing: run "npm run build" first');

const opened = openJob({ text: shallowJobText(0.03), source: 'test' });
if (opened.state === 'refused') throw new Error(JSON.stringify(opened.problems));
const spec: CutSpec = cutSpecOf(opened.job, {
  pass: 0,
  replicate: 0,
  earlier: null,
  slurry: makeEstimator().slurryFace(opened.job.passes[0] as ResolvedPass),
});

const workers: Worker[] = [];
afterAll(() => Promise.all(workers.map((worker) => worker.terminate())));

function helper() {
  const { port1, port2 } = new MessageChannel();
  workers.push(new Worker(built('tile.worker.js'), { workerData: { port: port2 }, transferList: [port2] }));
  port1.unref();
  return portOf(port1);
}

/** Hash of the whole cut, run in pieces of some steps. */
function serialHash(stepsAtOnce: number): string {
  const cut = makeCut(spec);
  const runner = serialRunner(createFastKernel(), cut.model, cut.state);
  while (!runCut(cut, runner, stepsAtOnce));
  return cutHash(cut);
}

describe('a crew', () => {
  const alone = serialHash(1_000_000);

  // Tiles of one colour never touch, so who hits which tile when is of no matter: equal to the bit.
  test.each([0, 1, 2])('of %i helpers cuts the same bits as one thread', (helpers) => {
    const cut = makeCut(spec, allocateShared);
    const crew = startCrew(cut, Array.from({ length: helpers }, helper));
    try {
      while (!runCut(cut, crew, 7));
    } finally {
      crew.close();
    }
    expect(cutHash(cut)).toBe(alone);
  });

  // A helper goes from one cut to the next: the second cut is not disturbed by the first.
  test('serves one cut after another', () => {
    const helpers = [helper()];
    const hashes = [1, 2].map(() => {
      const cut = makeCut(spec, allocateShared);
      const crew = startCrew(cut, helpers);
      while (!runCut(cut, crew, 1000));
      crew.close();
      return cutHash(cut);
    });
    expect(hashes).toEqual([alone, alone]);
  });

  // Pieces of one step give the same bits as the whole cut.
  test('is no different from a cut in pieces', () => {
    expect(serialHash(1)).toBe(alone);
  });
});

describe('threads', () => {
  // A helper that is gone is waited for by nobody: the call is rejected, and fresh threads serve the next one.
  test('die together, and fresh ones serve the next call', async () => {
    const started: ReturnType<typeof startThreads>[] = [];
    const files = { engine: built('engine.worker.js'), tile: built('tile.worker.js') };
    const engine = createClient(
      () => {
        const threads = startThreads(1, files);
        started.push(threads);
        return threads;
      },
      () => () => {},
    );
    try {
      let helperEnded = false;
      const cut = engine.call(
        'cut',
        { text: smallJobText(), source: 'test' },
        {
          onProgress: ({ phase }) => {
            if (phase !== 'cutting' || helperEnded) return;
            helperEnded = true;
            void started[0]?.workers[1]?.terminate();
          },
        },
      );
      await expect(cut).rejects.toBeInstanceOf(EngineDiedError);
      await expect(cut).rejects.toThrow('helper thread 1');
      const sound = await engine.call('check', { text: smallJobText(), source: 'test' });
      expect(sound.state).toBe('sound');
      expect(started.length).toBe(2);
    } finally {
      engine.close();
    }
  });
});
