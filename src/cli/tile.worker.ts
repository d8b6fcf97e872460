import { type MessagePort, workerData } from 'node:worker_threads';
import { serveTiles } from '#src/run/crew.ts';
import { portOf } from './threads.ts';

// a helper that hits tiles for the engine's thread: see run/crew.ts
serveTiles(portOf((workerData as { port: MessagePort }).port));
