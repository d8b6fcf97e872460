import { setImmediate } from 'node:timers/promises';
import { type MessagePort, parentPort, workerData } from 'node:worker_threads';
import { engineHandlers } from '#src/run/handlers.ts';
import { serve } from '#src/run/serve.ts';
import { readAssets } from './assets.ts';
import { portOf } from './threads.ts';

// the engine in a thread of Node: see run/serve.ts
const { helpers } = workerData as { helpers: MessagePort[] };
const turns = { now: () => performance.now(), pause: () => setImmediate() };
serve(portOf(parentPort as MessagePort), turns, engineHandlers({ assets: readAssets, helpers: helpers.map(portOf) }));
