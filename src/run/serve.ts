import type { Port } from './port.ts';
import type { Events, FromEngine, RequestName, RequestOf, ResponseOf, ToEngine } from './protocol.ts';

/** Raised inside a handler whose call was cancelled. */
export class CancelledError extends Error {
  override readonly name = 'CancelledError';
  constructor() {
    super('cancelled');
  }
}

/** What an environment lends the engine: a clock and a way to let messages in. */
export interface Turns {
  /** Milliseconds since whenever. */
  now(): number;
  /** Resolves after waiting messages have been delivered. */
  pause(): Promise<void>;
}

/** Between two events of one name (ms). */
export const REPORT_INTERVAL = 100;
/** How long a handler works before it lets messages in (ms). */
export const TURN = 50;

/** What a handler gets beside its request. */
export interface CallContext {
  readonly now: () => number;
  /** Sends an event, at most one in each interval; the payload is made only when it is sent. */
  report<N extends keyof Events>(name: N, payload: () => Events[N]): void;
  /**
   * To be awaited between bounded units of work: lets messages in when the turn is over.
   * @throws CancelledError when the call was cancelled
   */
  breathe(): Promise<void>;
}

/** A handler's answer, with the buffers that move instead of being copied. */
export interface Answer<T> {
  readonly value: T;
  readonly transfer?: readonly ArrayBuffer[];
}

/** One function per request. */
export type Handlers = {
  readonly [N in RequestName]: (
    request: RequestOf<N>,
    context: CallContext,
  ) => Answer<ResponseOf<N>> | Promise<Answer<ResponseOf<N>>>;
};

type AnyHandler = (request: unknown, context: CallContext) => Answer<unknown> | Promise<Answer<unknown>>;

/** Answers the calls that come through a port until it closes. Hosts are a few lines round this. */
export function serve(port: Port, turns: Turns, handlers: Handlers): void {
  const cancelled = new Set<number>();
  const running = new Set<number>();
  const send = (message: FromEngine, transfer?: readonly ArrayBuffer[]) => port.post(message, transfer);

  async function answer({ id, name, request }: Extract<ToEngine, { kind: 'call' }>): Promise<void> {
    running.add(id);
    try {
      if (!Object.hasOwn(handlers, name)) throw new RangeError(`the engine knows no request "${name}"`);
      const handler = handlers[name] as AnyHandler;
      const { value, transfer } = await handler(request, contextOf(id));
      if (cancelled.has(id)) throw new CancelledError();
      send({ kind: 'value', id, value }, transfer);
    } catch (error) {
      send({ kind: 'failure', id, failure: failureOf(error) });
    } finally {
      running.delete(id);
      cancelled.delete(id);
    }
  }

  function contextOf(id: number): CallContext {
    let turnEnd = turns.now() + TURN;
    const due = new Map<keyof Events, number>();
    return {
      now: turns.now,
      report(name, payload) {
        const now = turns.now();
        if (now < (due.get(name) ?? Number.NEGATIVE_INFINITY)) return;
        due.set(name, now + REPORT_INTERVAL);
        send({ kind: 'event', id, name, payload: payload() });
      },
      async breathe() {
        if (turns.now() >= turnEnd) {
          await turns.pause();
          turnEnd = turns.now() + TURN;
        }
        if (cancelled.has(id)) throw new CancelledError();
      },
    };
  }

  port.onMessage((message) => {
    const told = message as ToEngine;
    if (told.kind === 'call') void answer(told);
    else if (running.has(told.id)) cancelled.add(told.id);
  });
}

function failureOf(error: unknown) {
  if (error instanceof Error) return { name: error.name, message: error.message };
  return { name: 'Error', message: String(error) };
}
