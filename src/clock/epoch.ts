/** The end of the year 9999, where ISO 8601 ends too: past it is another unit, read wrongly. */
const END_MS = Date.UTC(10_000, 0);

export type EpochUnit = 's' | 'ms' | 'us' | 'ns';

/** Places by which the decimal point moves to give milliseconds. */
const SHIFT: Readonly<Record<EpochUnit, number>> = { s: 3, ms: 0, us: -3, ns: -6 };

const NUMBER = /^([+-]?)(\d{1,40})(?:\.(\d{0,40}))?(?:[eE]([+-]?\d{1,3}))?$/;

/**
 * Reads a count since 1970-01-01T00:00:00Z, with or without fraction or exponent, rounded down to a
 * millisecond. The point is moved in the text, so no digit is lost to floating point: nanoseconds
 * have 19 digits. null for anything else, and for times further from
 * 1970 than the end of the year 9999.
 */
export function epochParser(unit: EpochUnit): (text: string) => number | null {
  const shift = SHIFT[unit];
  return (text) => {
    const parts = NUMBER.exec(text);
    if (parts === null) return null;
    const whole = parts[2] ?? '';
    const digits = whole + (parts[3] ?? '');
    const point = whole.length + shift + Number(parts[4] ?? 0);
    const size = wholeMs(digits, point);
    if (size === null) return null;
    if (parts[1] !== '-') return size.ms;
    // `+ 0` turns -0 into 0; a negative time is rounded down, away from zero.
    return -(size.ms + (size.rest ? 1 : 0)) + 0;
  };
}

/** The digits before the point as a number, and whether anything but zeros comes after it. */
function wholeMs(digits: string, point: number): { ms: number; rest: boolean } | null {
  const significant = digits.replace(/^0+/, '');
  if (significant === '') return { ms: 0, rest: false };
  const places = point - (digits.length - significant.length);
  if (places <= 0) return { ms: 0, rest: true };
  if (places > 16) return null;
  const ms = Number(significant.slice(0, places).padEnd(places, '0'));
  if (ms >= END_MS) return null;
  return { ms, rest: /[1-9]/.test(significant.slice(places)) };
}
