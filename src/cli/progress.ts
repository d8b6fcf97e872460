import { Presets, SingleBar } from 'cli-progress';
import type { Progress } from '#src/run/protocol.ts';

/** Shows how far a cut is. */
export interface Meter {
  show(progress: Progress): void;
  end(): void;
}

/** Between two lines where there is no terminal (ms). */
const LINE_EVERY = 1000;

/** A time left as people say it. */
export function timeLeft(seconds: number | null): string {
  if (seconds === null) return '';
  if (seconds < 1) return 'under 1 s left';
  if (seconds < 90) return `${Math.round(seconds)} s left`;
  if (seconds < 5400) return `${Math.round(seconds / 60)} min left`;
  return `${(seconds / 3600).toFixed(1)} h left`;
}

function words({ phase, depthMm, timeMin, rateMmPerMin, secondsLeft }: Progress): string {
  if (phase !== 'cutting') return phase;
  const rate = rateMmPerMin > 0 ? `, ${rateMmPerMin.toFixed(2)} mm/min` : '';
  const left = timeLeft(secondsLeft);
  return `${depthMm.toFixed(3)} mm deep after ${(timeMin * 60).toFixed(1)} s${rate}${left === '' ? '' : `; ${left}`}`;
}

/** A live bar on a terminal, a line a second otherwise. */
export function meterOn(stream: NodeJS.WriteStream): Meter {
  return stream.isTTY ? barOn(stream) : linesOn(stream);
}

function barOn(stream: NodeJS.WriteStream): Meter {
  const bar = new SingleBar(
    { stream, format: '{bar} {percentage} %  {words}', clearOnComplete: true, hideCursor: true, gracefulExit: false },
    Presets.shades_classic,
  );
  let started = false;
  return {
    show(progress) {
      if (!started) bar.start(100, 0, { words: '' });
      started = true;
      bar.update(Math.round(100 * progress.fraction), { words: words(progress) });
    },
    end() {
      if (started) bar.stop();
    },
  };
}

function linesOn(stream: NodeJS.WriteStream): Meter {
  let due = 0;
  return {
    show(progress) {
      const now = performance.now();
      if (now < due) return;
      due = now + LINE_EVERY;
      stream.write(`${String(Math.round(100 * progress.fraction)).padStart(3)} %  ${words(progress)}\n`);
    },
    end() {},
  };
}

/** Says nothing. */
export const silent: Meter = { show() {}, end() {} };
