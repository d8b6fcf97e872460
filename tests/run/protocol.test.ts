import { setImmediate, setTimeout as sleep } from 'node:timers/promises';
import { describe, expect, test } from 'vitest';
import { AbortedError, type After, createClient, EngineDiedError, STOP_WITHIN } from '#src/run/client.ts';
import { type PortPair, portPair } from '#src/run/port.ts';
import type { Estimated, JobRequest, Progress } from '#src/run/protocol.ts';
import { type CallContext, type Handlers, REPORT_INTERVAL, serve, TURN } from '#src/run/serve.ts';

const request: JobRequest = { text: '{}', source: 'test' };
const answer = { state: 'done' } as Estimated;
const moment: Progress = {
  phase: 'cutting',
  fraction: 0.5,
  depthMm: 0,
  timeMin: 0,
  rateMmPerMin: 0,
  secondsLeft: null,
};

/** A clock that only moves when it is told to, and a timer that only fires by hand. */
function clockwork() {
  let time = 0;
  const timers = new Set<() => void>();
  const after: After = (_milliseconds, run) => {
    timers.add(run);
    return () => timers.delete(run);
  };
  return {
    now: () => time,
    pause: () => setImmediate(),
    pass: (milliseconds: number) => {
      time += milliseconds;
    },
    after,
    fire: () => {
      for (const run of [...timers]) run();
    },
    timers,
  };
}

type Clockwork = ReturnType<typeof clockwork>;

/** Handlers as tests write them: what they answer is told by the test. */
type TestHandlers = {
  readonly [N in keyof Handlers]: (
    request: JobRequest,
    context: CallContext,
  ) => ReturnType<Handlers[N]> | Promise<never>;
};

/** An engine behind in-process ports, one pair for every time it is started. */
function engineOf(handlers: Partial<TestHandlers>, clock: Clockwork) {
  const started: PortPair[] = [];
  const engine = createClient(() => {
    const pair = portPair();
    started.push(pair);
    serve(pair.far, clock, handlers as Handlers);
    return pair.near;
  }, clock.after);
  return { engine, started };
}

describe('a call', () => {
  // The response is what the handler returned, copied: the client never sees the engine's own objects.
  test('resolves with a copy of the handler value', async () => {
    const { engine } = engineOf({ estimate: () => ({ value: answer }) }, clockwork());
    const got = await engine.call('estimate', request);
    expect(got).toEqual(answer);
    expect(got).not.toBe(answer);
  });

  // A buffer named in `transfer` has length 0 on the side that gave it away.
  test('moves the buffers the handler names', async () => {
    const bytes = Uint8Array.of(1, 2, 3);
    const value = { state: 'done', artefacts: [{ name: 'trace.csv', bytes }] } as never;
    const { engine } = engineOf({ cut: () => ({ value, transfer: [bytes.buffer] }) }, clockwork());
    const got = await engine.call('cut', request);
    expect(got.state === 'done' && [...(got.artefacts[0]?.bytes ?? [])]).toEqual([1, 2, 3]);
    expect(bytes.length).toBe(0);
  });

  // What a handler throws rejects its own call with the same name and words, and the engine serves on.
  test('rejects with what the handler threw, and the next call is served', async () => {
    let bad = true;
    const { engine, started } = engineOf(
      {
        estimate: () => {
          if (bad) throw new RangeError('the floor rose to 1 m');
          return { value: answer };
        },
      },
      clockwork(),
    );
    await expect(engine.call('estimate', request)).rejects.toMatchObject({
      name: 'RangeError',
      message: 'the floor rose to 1 m',
    });
    bad = false;
    await expect(engine.call('estimate', request)).resolves.toEqual(answer);
    expect(started.length).toBe(1);
  });

  // A name that is no request is refused, inherited names of objects included.
  test('with an unknown name is refused', async () => {
    const { engine } = engineOf({}, clockwork());
    await expect(engine.call('toString' as never, request as never)).rejects.toThrow('knows no request "toString"');
  });

  // Answers find their own calls whatever the order they come in.
  test('gets its own answer when answers come out of order', async () => {
    const { engine } = engineOf(
      {
        estimate: async ({ source }) => {
          if (source === 'slow') await sleep(20);
          return { value: { ...answer, headline: source } };
        },
      },
      clockwork(),
    );
    const slow = engine.call('estimate', { ...request, source: 'slow' });
    const fast = engine.call('estimate', { ...request, source: 'fast' });
    expect(await fast).toMatchObject({ headline: 'fast' });
    expect(await slow).toMatchObject({ headline: 'slow' });
  });
});

describe('progress', () => {
  // Reports that come every 10 ms for 1000 ms are let through once per interval: at 0, 100, ... 900 ms.
  test('is told at a fixed interval, and payloads are made only when they are sent', async () => {
    const clock = clockwork();
    let made = 0;
    const { engine } = engineOf(
      {
        estimate: async (_request, context) => {
          for (let k = 0; k < 100; k++) {
            context.report('progress', () => {
              made++;
              return moment;
            });
            clock.pass(10);
            await context.breathe();
          }
          return { value: answer };
        },
      },
      clock,
    );
    const heard: Progress[] = [];
    await engine.call('estimate', request, { onProgress: (progress) => heard.push(progress) });
    const expected = (100 * 10) / REPORT_INTERVAL;
    expect(made).toBe(expected);
    expect(heard.length).toBe(expected);
  });
});

/** A handler that works in units of 10 ms until it is stopped, and counts them. */
function endless(clock: Clockwork, units: { count: number }) {
  return async (_request: JobRequest, context: CallContext) => {
    for (;;) {
      units.count++;
      clock.pass(10);
      await context.breathe();
    }
  };
}

describe('an abort', () => {
  // Cancel is looked for once a turn, so the handler does no more than one turn's units after it, and the call rejects.
  test('rejects the call and stops the handler within a turn', async () => {
    const clock = clockwork();
    const units = { count: 0 };
    const { engine, started } = engineOf({ estimate: endless(clock, units) }, clock);
    const stop = new AbortController();
    const call = engine.call('estimate', request, { signal: stop.signal });
    await sleep(20);
    stop.abort();
    await expect(call).rejects.toBeInstanceOf(AbortedError);
    const atAbort = units.count;
    await sleep(20);
    const later = units.count;
    await sleep(20);
    expect(units.count).toBe(later);
    expect(later - atAbort).toBeLessThanOrEqual((2 * TURN) / 10);
    expect(clock.timers.size).toBe(0);
    expect(started.length).toBe(1);
  });

  // A call whose signal is aborted already never reaches the engine.
  test('before the call keeps it from being made', async () => {
    const { engine, started } = engineOf({ estimate: () => ({ value: answer }) }, clockwork());
    await expect(engine.call('estimate', request, { signal: AbortSignal.abort() })).rejects.toBeInstanceOf(
      AbortedError,
    );
    expect(started.length).toBe(0);
  });

  // An engine that never comes up for air is ended when its time is over, and a fresh one serves the next call.
  test('of a handler that does not listen ends the engine', async () => {
    const clock = clockwork();
    let deaf = true;
    const { engine, started } = engineOf({ estimate: () => (deaf ? new Promise(() => {}) : { value: answer }) }, clock);
    const stop = new AbortController();
    const call = engine.call('estimate', request, { signal: stop.signal });
    const other = engine.call('estimate', request);
    stop.abort();
    await expect(call).rejects.toBeInstanceOf(AbortedError);
    expect(STOP_WITHIN).toBeGreaterThan(TURN);
    clock.fire();
    await expect(other).rejects.toBeInstanceOf(EngineDiedError);
    deaf = false;
    await expect(engine.call('estimate', request)).resolves.toEqual(answer);
    expect(started.length).toBe(2);
  });
});

describe('the death of an engine', () => {
  // Every call in flight is rejected with the reason, and the next call starts a fresh engine that works.
  test('rejects every call in flight, and a fresh engine serves the next', async () => {
    let deaf = true;
    const { engine, started } = engineOf(
      { estimate: () => (deaf ? new Promise(() => {}) : { value: answer }) },
      clockwork(),
    );
    const calls = [1, 2, 3].map(() => engine.call('estimate', request));
    await setImmediate();
    started[0]?.kill(new Error('out of memory'));
    for (const call of calls) await expect(call).rejects.toThrow('out of memory');
    for (const call of calls) await expect(call).rejects.toBeInstanceOf(EngineDiedError);
    deaf = false;
    await expect(engine.call('estimate', request)).resolves.toEqual(answer);
    expect(started.length).toBe(2);
  });

  // Closing is no death: calls in flight are told, and the engine may be asked again.
  test('by closing rejects the calls in flight too', async () => {
    const { engine } = engineOf({ estimate: () => new Promise(() => {}) }, clockwork());
    const call = engine.call('estimate', request);
    engine.close();
    await expect(call).rejects.toThrow('closed');
  });
});
