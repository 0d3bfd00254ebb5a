import { MINUTE_MS, SECOND_MS, modulo } from './civil.js';
import { zoneOf } from './zone.js';

const MONTHS = [
  ...['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun'],
  ...['Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'],
];

/** RFC 3339 in UTC, `2026-11-03T10:05:00Z`; milliseconds only when they are not zero. */
export function formatInstant(ms: number): string {
  return new Date(ms).toISOString().replace('.000Z', 'Z');
}

/**
 * For people: `3 Nov 2026 10:05 UTC`, elsewhere `3 Nov 2026 11:05 +01:00 Europe/Berlin`, since in a
 * repeated hour the name alone would not do. Seconds only when they are not zero.
 */
export function formatLocal(ms: number, zone: string): string {
  const offsetMs = zoneOf(zone).spanAt(ms).offsetMs;
  const local = new Date(ms + offsetMs);
  const time = local.toISOString().split('T')[1] ?? '';
  const shown = time.slice(0, modulo(ms, MINUTE_MS) < SECOND_MS ? 5 : 8);
  const month = MONTHS[local.getUTCMonth()] ?? '';
  const date = `${local.getUTCDate()} ${month} ${local.getUTCFullYear()}`;
  return zone === 'UTC' ? `${date} ${shown} UTC` : `${date} ${shown} ${offset(offsetMs)} ${zone}`;
}

function offset(offsetMs: number): string {
  const minutes = Math.floor(Math.abs(offsetMs) / MINUTE_MS);
  const two = (value: number): string => String(value).padStart(2, '0');
  return `${offsetMs < 0 ? '-' : '+'}${two(Math.floor(minutes / 60))}:${two(minutes % 60)}`;
}
