import { MessageChannel, type MessagePort, type Transferable, Worker } from 'node:worker_threads';
import type { Port } from '#src/run/port.ts';

/** A Node message port as the engine's kind of port. */
export function portOf(port: MessagePort): Port {
  return {
    post: (message, transfer = []) => port.postMessage(message, transfer as Transferable[]),
    onMessage: (listener) => void port.on('message', listener),
    onError: (listener) => void port.on('messageerror', listener),
    close: () => port.close(),
  };
}

/** Where the engine's built files are. */
export interface ThreadFiles {
  readonly engine: URL;
  readonly tile: URL;
}

/** Threads that live and die together, and the port of the first. */
export interface Threads extends Port {
  readonly workers: readonly Worker[];
}

/**
 * Starts the engine's thread and its helpers. Whichever dies, all are ended and the port reports it: a helper that is gone
 * would leave the engine waiting, and a field half hit is of no use.
 * @param helpers threads beside the engine's own that share its tiles
 */
export function startThreads(helpers: number, files: ThreadFiles): Threads {
  const failures: ((error: Error) => void)[] = [];
  const channels = Array.from({ length: helpers }, () => new MessageChannel());
  const engineEnds = channels.map(({ port1 }) => port1);
  const engine = new Worker(files.engine, { workerData: { helpers: engineEnds }, transferList: engineEnds });
  const workers = [
    engine,
    ...channels.map(({ port2 }) => new Worker(files.tile, { workerData: { port: port2 }, transferList: [port2] })),
  ];
  let open = true;
  const close = () => {
    open = false;
    for (const worker of workers) void worker.terminate();
  };
  const fail = (error: Error) => {
    if (!open) return;
    close();
    for (const listener of failures) listener(error);
  };
  workers.forEach((worker, index) => {
    const who = index === 0 ? 'the engine' : `helper thread ${index}`;
    worker.on('error', (error) => fail(error as Error));
    worker.on('exit', (code) => fail(new Error(`${who} ended unasked with exit code ${code}`)));
  });
  return {
    workers,
    post: (message, transfer = []) => engine.postMessage(message, transfer as Transferable[]),
    onMessage: (listener) => void engine.on('message', listener),
    onError: (listener) => void failures.push(listener),
    close,
  };
}
