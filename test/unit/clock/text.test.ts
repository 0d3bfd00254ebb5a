import { describe, expect, it } from 'vitest';
import { formatDuration, formatWindowLength, parseDuration } from '../../../src/clock/duration.js';
import { formatInstant, formatLocal } from '../../../src/clock/format.js';
import { virtualClock } from '../../../src/clock/virtualClock.js';

describe('a duration', () => {
  const cases: [string, number][] = [
    ...([
      ['250ms', 250],
      ['0s', 0],
      ['30s', 30_000],
      ['5m', 300_000],
    ] as [string, number][]),
    ...([
      ['2h', 7_200_000],
      ['14d', 1_209_600_000],
    ] as [string, number][]),
  ];
  it.each(cases)('%s is %d ms, and back', (text, ms) => {
    expect(parseDuration(text)).toBe(ms);
    expect(formatDuration(ms)).toBe(text);
  });

  it('in weeks is written back in days', () => {
    expect(formatDuration(parseDuration('1w') ?? NaN)).toBe('7d');
  });

  it.each(['', '5', 'm', '5 m', '-5m', '1.5h', '5min', '1mo', '5M', '999999999999w'])(
    '%j is refused',
    (text) => {
      expect(parseDuration(text)).toBeNull();
    },
  );

  it('that is no whole number of milliseconds is not written', () => {
    expect(() => formatDuration(0.5)).toThrow('ms: 0.5 is not a duration');
    expect(() => formatDuration(-1)).toThrow('ms: -1 is not a duration');
  });

  it('of a window is written as the configuration has it', () => {
    expect(formatWindowLength({ kind: 'sub-day', ms: 300_000 })).toBe('5m');
    expect(formatWindowLength({ kind: 'day' })).toBe('1d');
    expect(formatWindowLength({ kind: 'week', weekStarts: 'monday' })).toBe('1w');
    expect(formatWindowLength({ kind: 'month' })).toBe('1mo');
  });
});

describe('an instant', () => {
  const ms = Date.parse('2026-11-03T10:05:00Z');

  it('is written as RFC 3339, with milliseconds only where there are any', () => {
    expect(formatInstant(ms)).toBe('2026-11-03T10:05:00Z');
    expect(formatInstant(ms + 7)).toBe('2026-11-03T10:05:00.007Z');
  });

  it('is shown to people with its zone', () => {
    expect(formatLocal(ms, 'UTC')).toBe('3 Nov 2026 10:05 UTC');
    expect(formatLocal(ms + 9_000, 'UTC')).toBe('3 Nov 2026 10:05:09 UTC');
    // Offsets: IANA time zone database, from memory.
    expect(formatLocal(ms, 'Europe/Berlin')).toBe('3 Nov 2026 11:05 +01:00 Europe/Berlin');
    expect(formatLocal(ms, 'America/St_Johns')).toBe('3 Nov 2026 06:35 -03:30 America/St_Johns');
  });
});

describe('a virtual clock', () => {
  it('stands still until it is set or advanced', () => {
    const clock = virtualClock(1_000);
    expect(clock.nowMs()).toBe(1_000);
    clock.advance(500);
    expect(clock.nowMs()).toBe(1_500);
    clock.set(200);
    expect(clock.nowMs()).toBe(200);
  });

  it('refuses a time that is no time', () => {
    expect(() => virtualClock(NaN)).toThrow('ms: NaN is not a time');
  });
});
