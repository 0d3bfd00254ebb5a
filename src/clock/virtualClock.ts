import type { Clock } from './clock.js';

/** A clock that stands still until it is set: for rehearsal and for tests. */
export interface VirtualClock extends Clock {
  /** Sets the time, epoch milliseconds; it may also be set back, as a real clock may. */
  set(ms: number): void;
  advance(byMs: number): void;
}

/** A virtual clock that shows `startMs`. Throws RangeError for a time that is not finite. */
export function virtualClock(startMs: number): VirtualClock {
  let nowMs = finite(startMs);
  return {
    nowMs: () => nowMs,
    set: (ms) => {
      nowMs = finite(ms);
    },
    advance: (byMs) => {
      nowMs = finite(nowMs + byMs);
    },
  };
}

function finite(ms: number): number {
  if (!Number.isFinite(ms)) throw new RangeError(`ms: ${ms} is not a time`);
  return ms;
}
