import type { Window, WindowLength } from '../terms/window.js';
import { bucketsOf } from './buckets.js';
import {
  DAY_MS,
  HOUR_MS,
  MAX_INSTANT_MS,
  MEAN_MONTH_MS,
  MINUTE_MS,
  SECOND_MS,
  WEEK_MS,
  dateText,
  modulo,
  weekday,
} from './civil.js';
import { edgesOf } from './edges.js';
import type { Edges } from './edges.js';
import { zoneOf } from './zone.js';

/** The windows of one length in one zone. They tile time: no gap, no overlap, half-open. */
export interface Calendar {
  /** The window that holds the instant. Throws RangeError outside the years +-270,000. */
  readonly windowAt: (ms: number) => Window;
  readonly next: (window: Window) => Window;
  readonly previous: (window: Window) => Window;
  /**
   * Number of the window that begins at `startMs`. Rises with time, by one a window except where
   * clocks change by less than a window or a whole window is skipped.
   */
  readonly ordinal: (startMs: number) => number;
  /** Length in ordinary times; the mean one for months. */
  readonly nominalMs: number;
  /** Windows a week in ordinary times. */
  readonly perWeek: number;
  /**
   * Local time of the cycle at which the window begins: `T09:05` for a day, `1T09:05` for a week,
   * whose first day is 1; seconds only where there are any. A repeated hour has each slot twice.
   */
  readonly slot: (
    startMs: number,
    cycle: 'day' | 'week',
    weekStarts: 'monday' | 'sunday',
  ) => string;
  /** Local date of the instant, `YYYY-MM-DD`. */
  readonly localDate: (ms: number) => string;
}

/** Keeps one month and one day clear of the last instant that a Date can hold. */
const LIMIT_MS = MAX_INSTANT_MS - 40 * DAY_MS;

/**
 * The calendar of a window length (sub-day lengths: whole seconds that divide a day) in an IANA
 * zone. Throws RangeError naming the argument that is wrong.
 */
export function calendarOf(length: WindowLength, zoneName: string): Calendar {
  checkLength(length);
  const zone = zoneOf(zoneName);
  const edges = edgesOf(length, bucketsOf(length), zone);
  const windowAt = rememberingWindows(edges);
  const nominalMs = nominalMsOf(length);
  return {
    windowAt,
    next: (window) => windowAt(window.endMs),
    previous: (window) => windowAt(window.startMs - 1),
    ordinal: edges.ordinal,
    nominalMs,
    perWeek: WEEK_MS / nominalMs,
    slot: (startMs, cycle, weekStarts) =>
      slotText(edges.nominalLocalMs(startMs), cycle, weekStarts),
    localDate: (ms) => dateText(zone.localMs(ms)),
  };
}

/** Length of a window in ordinary times, ms; the mean one for months. */
function nominalMsOf(length: WindowLength): number {
  switch (length.kind) {
    case 'sub-day':
      return length.ms;
    case 'day':
      return DAY_MS;
    case 'week':
      return WEEK_MS;
    case 'month':
      return MEAN_MONTH_MS;
  }
}

function checkLength(length: WindowLength): void {
  if (length.kind !== 'sub-day') return;
  const fits = length.ms >= SECOND_MS && length.ms < DAY_MS && length.ms % SECOND_MS === 0;
  if (fits && DAY_MS % length.ms === 0) return;
  throw new RangeError(`length: ${length.ms} ms is not a whole number of seconds dividing a day`);
}

/** Asked once an event, and events come mostly in order: the last window answers most calls. */
function rememberingWindows(edges: Edges): (ms: number) => Window {
  let last: Window = { startMs: Infinity, endMs: Infinity };
  return (ms) => {
    if (ms >= last.startMs && ms < last.endMs) return last;
    if (!(Math.abs(ms) <= LIMIT_MS)) throw new RangeError(`ms: ${ms} is outside the calendar`);
    last = { startMs: edges.floor(ms), endMs: edges.ceil(ms) };
    return last;
  };
}

function slotText(localMs: number, cycle: 'day' | 'week', weekStarts: 'monday' | 'sunday'): string {
  const ofDay = modulo(localMs, DAY_MS);
  const hours = two(Math.floor(ofDay / HOUR_MS));
  const minutes = two(Math.floor(ofDay / MINUTE_MS) % 60);
  const seconds = Math.floor(ofDay / SECOND_MS) % 60;
  const time = `T${hours}:${minutes}${seconds === 0 ? '' : `:${two(seconds)}`}`;
  if (cycle === 'day') return time;
  const day = weekday(localMs) + (weekStarts === 'monday' ? 0 : 1);
  return `${(day % 7) + 1}${time}`;
}

function two(value: number): string {
  return String(value).padStart(2, '0');
}
