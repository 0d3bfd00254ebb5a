import type { WindowLength } from '../terms/window.js';
import { DAY_MS, HOUR_MS, MINUTE_MS, SECOND_MS, WEEK_MS } from './civil.js';

const UNITS: ReadonlyMap<string, number> = new Map([
  ['ms', 1],
  ['s', SECOND_MS],
  ['m', MINUTE_MS],
  ['h', HOUR_MS],
  ['d', DAY_MS],
  ['w', WEEK_MS],
]);

/**
 * Milliseconds of `250ms`, `30s`, `5m`, `2h`, `14d` or `1w`: one whole number and one unit, without
 * a space. null for anything else, and for what no longer counts exactly in milliseconds.
 */
export function parseDuration(text: string): number | null {
  const parts = /^(\d{1,12})(ms|[smhdw])$/.exec(text);
  const unitMs = UNITS.get(parts?.[2] ?? '');
  if (unitMs === undefined) return null;
  const ms = Number(parts?.[1]) * unitMs;
  return Number.isSafeInteger(ms) ? ms : null;
}

/** The shortest text that `parseDuration` reads back: days at most, as people count `14d`. */
export function formatDuration(ms: number): string {
  if (!Number.isSafeInteger(ms) || ms < 0) throw new RangeError(`ms: ${ms} is not a duration`);
  if (ms === 0) return '0s';
  if (ms % DAY_MS === 0) return `${ms / DAY_MS}d`;
  if (ms % HOUR_MS === 0) return `${ms / HOUR_MS}h`;
  if (ms % MINUTE_MS === 0) return `${ms / MINUTE_MS}m`;
  return ms % SECOND_MS === 0 ? `${ms / SECOND_MS}s` : `${ms}ms`;
}

/** A window length as the configuration writes it: `5m`, `1d`, `1w`, `1mo`. */
export function formatWindowLength(length: WindowLength): string {
  switch (length.kind) {
    case 'sub-day':
      return formatDuration(length.ms);
    case 'day':
      return '1d';
    case 'week':
      return '1w';
    case 'month':
      return '1mo';
  }
}
