import { EXIT } from './exit.ts';

/** A second Ctrl-C within this is the first one arriving twice, by the terminal and by npm (ms). */
const SAME = 1000;

/**
 * Calls `stop` at the first Ctrl-C (or termination); a later one ends the process at once.
 * @returns takes the handler away again
 */
export function onInterrupt(stop: () => void): () => void {
  let first: number | null = null;
  const handle = () => {
    const now = performance.now();
    if (first !== null && now - first > SAME) process.exit(EXIT.interrupted);
    if (first !== null) return;
    first = now;
    stop();
  };
  process.on('SIGINT', handle);
  process.on('SIGTERM', handle);
  return () => {
    process.off('SIGINT', handle);
    process.off('SIGTERM', handle);
  };
}
