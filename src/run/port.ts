/**
 * One end of a two-way line of messages: a worker seen from the page, the page seen from its worker, or one half of an
 * in-process pair. Messages are plain records of primitives and typed arrays.
 */
export interface Port {
  /** Sends a message. Buffers in `transfer` move and are empty on this side afterwards. */
  post(message: unknown, transfer?: readonly ArrayBuffer[]): void;
  onMessage(listener: (message: unknown) => void): void;
  /** Called once when the other side has died; nothing arrives after that. */
  onError(listener: (error: Error) => void): void;
  close(): void;
}

interface HalfPort extends Port {
  deliver(message: unknown): void;
  fail(error: Error): void;
}

function half(other: () => HalfPort): HalfPort {
  const listeners: ((message: unknown) => void)[] = [];
  const failures: ((error: Error) => void)[] = [];
  let open = true;
  return {
    post(message, transfer = []) {
      const copy: unknown = structuredClone(message, { transfer: [...transfer] });
      queueMicrotask(() => other().deliver(copy));
    },
    onMessage(listener) {
      listeners.push(listener);
    },
    onError(listener) {
      failures.push(listener);
    },
    close() {
      open = false;
    },
    deliver(message) {
      if (open) for (const listener of listeners) listener(message);
    },
    fail(error) {
      if (!open) return;
      open = false;
      for (const listener of failures) listener(error);
    },
  };
}

/** A pair of ports in one thread. Messages are copied as between threads, so nothing is shared by accident. */
export interface PortPair {
  readonly near: Port;
  readonly far: Port;
  /** Lets the far side die, as a worker does: the near side hears of it. */
  kill(error: Error): void;
}

/** Makes an in-process pair: the whole engine runs behind it without a thread. */
export function portPair(): PortPair {
  const near: HalfPort = half(() => far);
  const far: HalfPort = half(() => near);
  return {
    near,
    far,
    kill(error) {
      far.close();
      near.fail(error);
    },
  };
}
