import { setImmediate } from 'node:timers/promises';
import { createClient, type Engine } from '#src/run/client.ts';
import { engineHandlers } from '#src/run/handlers.ts';
import { portPair } from '#src/run/port.ts';
import { serve } from '#src/run/serve.ts';
import { readAssets } from './assets.ts';
import { after } from './engine.ts';

/** The engine in this thread, for what takes milliseconds. */
export function quickEngine(): Engine {
  return createClient(() => {
    const { near, far } = portPair();
    const turns = { now: () => performance.now(), pause: () => setImmediate() };
    serve(far, turns, engineHandlers({ assets: readAssets, helpers: [] }));
    return near;
  }, after);
}
