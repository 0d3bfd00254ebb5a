import type { WindowLength } from '../terms/window.js';
import type { WindowText } from './specialLeaves.js';

const DAY_MS = 86_400_000;

/** The window length that a text stands for, with the day on which weeks start. */
export function toWindowLength(text: WindowText, weekStarts: 'monday' | 'sunday'): WindowLength {
  if (typeof text === 'number') return { kind: 'sub-day', ms: text };
  return text === 'week' ? { kind: 'week', weekStarts } : { kind: text };
}

/** Length in ordinary times, ms; for months the mean of the Gregorian calendar. */
export function nominalMs(window: WindowLength): number {
  switch (window.kind) {
    case 'sub-day':
      return window.ms;
    case 'day':
      return DAY_MS;
    case 'week':
      return 7 * DAY_MS;
    case 'month':
      return 30.436875 * DAY_MS;
  }
}
