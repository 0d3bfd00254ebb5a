/** Arithmetic on dates without a zone: the proleptic Gregorian calendar on a plain time line. */

export const SECOND_MS = 1_000;
export const MINUTE_MS = 60_000;
export const HOUR_MS = 3_600_000;
export const DAY_MS = 86_400_000;
export const WEEK_MS = 604_800_000;
/** Mean month of the Gregorian calendar: 146,097 days over 4,800 months. */
export const MEAN_MONTH_MS = 30.436875 * DAY_MS;

/** Largest instant of an ECMAScript Date (ECMA-262, time values and time range). */
export const MAX_INSTANT_MS = 8.64e15;

/** Remainder in [0, divisor), also for negative values. */
export function modulo(value: number, divisor: number): number {
  const rest = value % divisor;
  // `+ 0` turns -0 into 0.
  return rest < 0 ? rest + divisor : rest + 0;
}

/** Largest multiple of `step` at or below the value. */
export function floorTo(value: number, step: number): number {
  return value - modulo(value, step);
}

/** Start of the day as ms on the plain time line; month 1..12; the day may run over. */
export function dayStart(year: number, month: number, day: number): number {
  // Date.UTC takes the years 0..99 for 1900..1999; setUTCFullYear does not.
  return new Date(0).setUTCFullYear(year, month - 1, day);
}

/** As dayStart, but null for a date that does not exist, such as 30 February. */
export function validDayStart(year: number, month: number, day: number): number | null {
  if (month < 1 || month > 12 || day < 1 || day > 31) return null;
  const ms = dayStart(year, month, day);
  return new Date(ms).getUTCDate() === day ? ms : null;
}

/** Year and month (1..12) of a time on the plain time line. */
export function yearMonth(localMs: number): { readonly year: number; readonly month: number } {
  const date = new Date(localMs);
  return { year: date.getUTCFullYear(), month: date.getUTCMonth() + 1 };
}

/** Day of the week, 0 for Monday .. 6 for Sunday; 1 January 1970 was a Thursday. */
export function weekday(localMs: number): number {
  return modulo(Math.floor(localMs / DAY_MS) + 3, 7);
}

/** `YYYY-MM-DD` of a time on the plain time line (six digits and a sign past the year 9999). */
export function dateText(localMs: number): string {
  const text = new Date(localMs).toISOString();
  return text.slice(0, text.indexOf('T'));
}
