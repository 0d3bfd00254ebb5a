import { DAY_MS, HOUR_MS, MINUTE_MS, SECOND_MS, modulo, validDayStart } from './civil.js';
import type { Zone } from './zone.js';

/** Longest text that is looked at; nine fraction digits and an offset need 36 characters. */
const MAX_TEXT = 64;

/** Date, then optionally hours, minutes, seconds, fraction and zone; extended or basic form. */
const ISO = new RegExp(
  String.raw`^(\d{4})(-?)(\d{2})\2(\d{2})` +
    String.raw`(?:[Tt ](\d{2})(?:(:?)(\d{2})(?:\6(\d{2})(?:[.,](\d+))?)?)?` +
    String.raw`(?: ?([Zz]|[+-]\d{2}(?::?\d{2})?))?)?$`,
);

/** A time of day; fraction in whole milliseconds. */
export interface TimeOfDay {
  readonly hour: number;
  readonly minute: number;
  readonly second: number;
  readonly fractionMs: number;
}

/**
 * Reads RFC 3339 and the calendar dates of ISO 8601 (extended or basic; `T`, `t` or a space; `.` or
 * `,` before any number of digits, those past the millisecond cut off; a date alone is its
 * midnight). Without an offset the time is local in `zone`. `24:00:00` is the next midnight; second
 * 60 is taken as :59.999, and only at the end of a UTC day, where leap seconds are put.
 * Returns null for anything else.
 */
export function isoParser(zone: Zone): (text: string) => number | null {
  const dayStartOf = rememberingDays();
  return (text) => {
    const ms = canonical(text, dayStartOf);
    return Number.isNaN(ms) ? general(text, zone) : ms;
  };
}

/** `YYYY-MM-DDThh:mm:ss[.f]Z` or with `+hh:mm`, by character codes; NaN for any other form. */
function canonical(text: string, dayStartOf: (date: string) => number): number {
  if (text.length < 20 || text.length > MAX_TEXT) return NaN;
  const separator = text.charCodeAt(10);
  if ((separator !== 84 && separator !== 32) || text[13] !== ':' || text[16] !== ':') return NaN;
  const hour = pair(text, 11);
  const minute = pair(text, 14);
  const second = pair(text, 17);
  // Comparisons with NaN are false, so a pair that is no number fails here.
  if (!(hour < 24 && minute < 60 && second < 60)) return NaN;
  let at = 19;
  let fractionMs = 0;
  if (text[at] === '.') {
    const end = digitsEnd(text, at + 1);
    if (end === at + 1) return NaN;
    fractionMs = milliseconds(text.slice(at + 1, Math.min(end, at + 4)));
    at = end;
  }
  const offsetMs = suffixOffset(text, at);
  const clockMs = hour * HOUR_MS + minute * MINUTE_MS + second * SECOND_MS + fractionMs;
  return dayStartOf(text.slice(0, 10)) + clockMs - offsetMs;
}

function suffixOffset(text: string, at: number): number {
  if (text[at] === 'Z' && text.length === at + 1) return 0;
  const sign = text[at];
  if ((sign !== '+' && sign !== '-') || text.length !== at + 6 || text[at + 3] !== ':') return NaN;
  const hours = pair(text, at + 1);
  const minutes = pair(text, at + 4);
  if (!(hours < 24 && minutes < 60)) return NaN;
  return (sign === '-' ? -1 : 1) * (hours * HOUR_MS + minutes * MINUTE_MS);
}

function general(text: string, zone: Zone): number | null {
  if (text.length > MAX_TEXT) return null;
  const parts = ISO.exec(text);
  if (parts === null) return null;
  const dayMs = validDayStart(Number(parts[1]), Number(parts[3]), Number(parts[4]));
  const time = {
    hour: Number(parts[5] ?? 0),
    minute: Number(parts[7] ?? 0),
    second: Number(parts[8] ?? 0),
    fractionMs: milliseconds(parts[9] ?? ''),
  };
  const suffix = parts[10];
  const offsetMs = suffix === undefined ? null : readOffset(suffix);
  return dayMs === null || Number.isNaN(offsetMs) ? null : instant(dayMs, time, offsetMs, zone);
}

/**
 * The instant of a local day and time of day; `offsetMs` null takes the zone's offset.
 * null for a time of day that does not exist.
 */
export function instant(
  dayMs: number,
  time: TimeOfDay,
  offsetMs: number | null,
  zone: Zone,
): number | null {
  const leap = time.second === 60;
  const fractionMs = leap ? SECOND_MS - 1 : time.fractionMs;
  const second = leap ? 59 : time.second;
  if (time.hour > 24 || time.minute > 59 || second > 59) return null;
  const clockMs = time.hour * HOUR_MS + time.minute * MINUTE_MS + second * SECOND_MS + fractionMs;
  if (clockMs > DAY_MS) return null;
  const localMs = dayMs + clockMs;
  const ms = offsetMs === null ? zone.instantMs(localMs) : localMs - offsetMs;
  return leap && modulo(ms, DAY_MS) !== DAY_MS - 1 ? null : ms;
}

/** `Z`, `+01`, `+0100` or `+01:00` in ms; NaN for hours over 23 or minutes over 59. */
export function readOffset(suffix: string): number {
  if (suffix === 'Z' || suffix === 'z') return 0;
  const hours = Number(suffix.slice(1, 3));
  const minutes = Number(suffix.slice(3).replace(':', '') || '0');
  if (!(hours < 24 && minutes < 60)) return NaN;
  return (suffix.startsWith('-') ? -1 : 1) * (hours * HOUR_MS + minutes * MINUTE_MS);
}

/** Digits after the point as whole milliseconds; what is finer is cut off, never rounded up. */
export function milliseconds(digits: string): number {
  return Number(digits.slice(0, 3).padEnd(3, '0'));
}

/** Two digits as a number; NaN when they are none. */
function pair(text: string, at: number): number {
  const tens = text.charCodeAt(at) - 48;
  const ones = text.charCodeAt(at + 1) - 48;
  return tens >= 0 && tens <= 9 && ones >= 0 && ones <= 9 ? tens * 10 + ones : NaN;
}

function digitsEnd(text: string, from: number): number {
  let at = from;
  while (at < text.length && text.charCodeAt(at) >= 48 && text.charCodeAt(at) <= 57) at += 1;
  return at;
}

/** Events come mostly in order, so the day is nearly always the one before. NaN: no such day. */
function rememberingDays(): (date: string) => number {
  let lastDate = '';
  let lastMs = NaN;
  return (date) => {
    if (date === lastDate) return lastMs;
    const parts = /^(\d{4})-(\d{2})-(\d{2})$/.exec(date);
    lastDate = date;
    lastMs = validDayStart(Number(parts?.[1]), Number(parts?.[2]), Number(parts?.[3])) ?? NaN;
    return lastMs;
  };
}
