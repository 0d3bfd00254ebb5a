import type { WindowLength } from '../terms/window.js';
import { DAY_MS, WEEK_MS, dayStart, floorTo, yearMonth } from './civil.js';

/** Equal or calendar stretches of the plain local time line, numbered without a gap. */
export interface Buckets {
  /** Start of the bucket that holds the local time. */
  floor(localMs: number): number;
  /** Start of the bucket after the one that begins at `startMs`. */
  after(startMs: number): number;
  /** Number of the bucket that begins at `startMs`; one more than that of the bucket before. */
  ordinal(startMs: number): number;
}

/** Days from Monday 29 December 1969 (Sunday the 28th) to the epoch, a Thursday. */
const MONDAY_SHIFT_MS = 3 * DAY_MS;
const SUNDAY_SHIFT_MS = 4 * DAY_MS;

/** The local buckets of a window length. */
export function bucketsOf(length: WindowLength): Buckets {
  switch (length.kind) {
    case 'sub-day':
      return equalBuckets(length.ms, 0);
    case 'day':
      return equalBuckets(DAY_MS, 0);
    case 'week':
      return equalBuckets(
        WEEK_MS,
        length.weekStarts === 'monday' ? MONDAY_SHIFT_MS : SUNDAY_SHIFT_MS,
      );
    case 'month':
      return monthBuckets;
  }
}

function equalBuckets(stepMs: number, shiftMs: number): Buckets {
  return {
    floor: (localMs) => floorTo(localMs + shiftMs, stepMs) - shiftMs,
    after: (startMs) => startMs + stepMs,
    ordinal: (startMs) => Math.floor((startMs + shiftMs) / stepMs),
  };
}

const monthBuckets: Buckets = {
  floor: (localMs) => {
    const { year, month } = yearMonth(localMs);
    return dayStart(year, month, 1);
  },
  after: (startMs) => {
    const { year, month } = yearMonth(startMs);
    return dayStart(year, month + 1, 1);
  },
  ordinal: (startMs) => {
    const { year, month } = yearMonth(startMs);
    return (year - 1970) * 12 + month - 1;
  },
};
