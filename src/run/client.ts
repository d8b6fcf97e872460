import type { Port } from './port.ts';
import type { Events, FromEngine, RequestName, RequestOf, ResponseOf, ToEngine } from './protocol.ts';

/** The engine said no: a handler threw. `name` is the name of what it threw. */
export class EngineError extends Error {
  constructor(name: string, message: string) {
    super(message);
    this.name = name;
  }
}

/** The engine's thread died; every call in flight is rejected with this. */
export class EngineDiedError extends Error {
  override readonly name = 'EngineDiedError';
}

/** The caller aborted the call. */
export class AbortedError extends Error {
  override readonly name = 'AbortedError';
  constructor() {
    super('stopped');
  }
}

/** What a call may be given. */
export interface CallOptions {
  readonly signal?: AbortSignal;
  readonly onProgress?: (progress: Events['progress']) => void;
}

/** The engine as its callers see it. */
export interface Engine {
  call<N extends RequestName>(name: N, request: RequestOf<N>, options?: CallOptions): Promise<ResponseOf<N>>;
  /** Ends the engine; calls in flight are rejected. */
  close(): void;
}

/** Runs a function after some milliseconds; the answer takes it back. */
export type After = (milliseconds: number, run: () => void) => () => void;

/** An engine that has not stopped this long after it was told to is ended and a fresh one started (ms). */
export const STOP_WITHIN = 2000;

interface Pending {
  readonly resolve: (value: unknown) => void;
  readonly reject: (error: Error) => void;
  readonly options: CallOptions;
  readonly onAbort: () => void;
}

/**
 * A client over engines that `connect` starts: the first at the first call, another at the next call after one has died.
 * A dead engine is never used again.
 */
export function createClient(connect: () => Port, after: After): Engine {
  const pending = new Map<number, Pending>();
  const stopping = new Map<number, () => void>();
  let port: Port | null = null;
  let lastId = 0;

  function end(error: Error): void {
    port?.close();
    port = null;
    for (const takeBack of stopping.values()) takeBack();
    stopping.clear();
    const calls = [...pending.values()];
    pending.clear();
    for (const call of calls) {
      call.options.signal?.removeEventListener('abort', call.onAbort);
      call.reject(error);
    }
  }

  function settle(id: number): Pending | undefined {
    stopping.get(id)?.();
    stopping.delete(id);
    const call = pending.get(id);
    pending.delete(id);
    call?.options.signal?.removeEventListener('abort', call.onAbort);
    return call;
  }

  function hear(message: FromEngine): void {
    if (message.kind === 'event') {
      if (message.name === 'progress')
        pending.get(message.id)?.options.onProgress?.(message.payload as Events['progress']);
      return;
    }
    const call = settle(message.id);
    if (message.kind === 'value') call?.resolve(message.value);
    else call?.reject(new EngineError(message.failure.name, message.failure.message));
  }

  function open(): Port {
    if (port) return port;
    const fresh = connect();
    port = fresh;
    fresh.onMessage((message) => {
      if (port === fresh) hear(message as FromEngine);
    });
    fresh.onError((error) => {
      if (port === fresh) end(new EngineDiedError(error.message, { cause: error }));
    });
    return fresh;
  }

  /** The call is rejected at once; the engine gets a while to notice before it is ended. */
  function abort(id: number): void {
    const call = settle(id);
    if (!call || !port) return;
    port.post({ kind: 'cancel', id } satisfies ToEngine);
    stopping.set(
      id,
      after(STOP_WITHIN, () => end(new EngineDiedError('the engine did not stop when told to and was ended'))),
    );
    call.reject(new AbortedError());
  }

  return {
    call(name, request, options = {}) {
      if (options.signal?.aborted) return Promise.reject(new AbortedError());
      return new Promise((resolve, reject) => {
        const id = ++lastId;
        const onAbort = () => abort(id);
        pending.set(id, { resolve: resolve as (value: unknown) => void, reject, options, onAbort });
        options.signal?.addEventListener('abort', onAbort, { once: true });
        try {
          open().post({ kind: 'call', id, name, request } satisfies ToEngine);
        } catch (error) {
          settle(id);
          reject(error as Error);
        }
      });
    },
    close() {
      end(new EngineDiedError('the engine was closed'));
    },
  };
}
