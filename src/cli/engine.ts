import { availableParallelism } from 'node:os';
import { type After, createClient, type Engine } from '#src/run/client.ts';
import { startThreads } from './threads.ts';

/** Node's timer. */
export const after: After = (milliseconds, run) => {
  const timer = setTimeout(run, milliseconds);
  return () => clearTimeout(timer);
};

/** Threads a cut uses when none are asked for: all there are, up to four. */
export function defaultWorkers(): number {
  return Math.max(1, Math.min(4, availableParallelism()));
}

/** The engine in threads of its own. @param workers threads that hit tiles, the engine's own counted */
export function threadedEngine(workers: number): Engine {
  const files = {
    engine: new URL('./engine.worker.js', import.meta.url),
    tile: new URL('./tile.worker.js', import.meta.url),
  };
  return createClient(() => startThreads(workers - 1, files), after);
}
