import { describe, expect, it } from 'vitest';
import { calendarOf } from '../../../src/clock/calendar.js';
import { formatInstant } from '../../../src/clock/format.js';
import type { WindowLength } from '../../../src/terms/window.js';

const HOUR_MS = 3_600_000;
const hours = (count: number): WindowLength => ({ kind: 'sub-day', ms: count * HOUR_MS });
const minutes = (count: number): WindowLength => ({ kind: 'sub-day', ms: count * 60_000 });
const day: WindowLength = { kind: 'day' };
const month: WindowLength = { kind: 'month' };
const week = (weekStarts: 'monday' | 'sunday'): WindowLength => ({ kind: 'week', weekStarts });

/** Edges of the windows from the one that holds `from` on, as many windows as asked for. */
function edges(length: WindowLength, zone: string, from: string, count: number): string[] {
  const calendar = calendarOf(length, zone);
  let window = calendar.windowAt(Date.parse(from));
  const found = [formatInstant(window.startMs)];
  for (let at = 0; at < count; at += 1) {
    found.push(formatInstant(window.endMs));
    window = calendar.next(window);
  }
  return found;
}

// Rules of the zones named here: IANA time zone database, from memory.
describe('windows in ordinary times', () => {
  it('are multiples of their length from midnight UTC', () => {
    expect(edges(minutes(5), 'UTC', '2026-11-03T10:07:31.250Z', 2)).toEqual([
      ...['2026-11-03T10:05:00Z', '2026-11-03T10:10:00Z', '2026-11-03T10:15:00Z'],
    ]);
  });

  it('begin with the instant on their edge', () => {
    expect(edges(minutes(5), 'UTC', '2026-11-03T10:05:00Z', 1)[0]).toBe('2026-11-03T10:05:00Z');
  });

  it('hold times before 1970 too', () => {
    expect(edges(minutes(5), 'UTC', '1969-12-31T23:59:59.999Z', 1)).toEqual([
      ...['1969-12-31T23:55:00Z', '1970-01-01T00:00:00Z'],
    ]);
  });

  it('of an hour follow a zone that is 5:45 from UTC', () => {
    expect(edges(hours(1), 'Asia/Kathmandu', '2026-11-03T10:05:00Z', 1)).toEqual([
      ...['2026-11-03T09:15:00Z', '2026-11-03T10:15:00Z'],
    ]);
  });

  it('of a week begin on the day asked for', () => {
    // 3 November 2026 is a Tuesday.
    const at = '2026-11-03T10:05:00Z';
    expect(edges(week('monday'), 'UTC', at, 1)).toEqual([
      ...['2026-11-02T00:00:00Z', '2026-11-09T00:00:00Z'],
    ]);
    expect(edges(week('sunday'), 'UTC', at, 1)).toEqual([
      ...['2026-11-01T00:00:00Z', '2026-11-08T00:00:00Z'],
    ]);
  });

  it('of a month follow the local date', () => {
    expect(edges(month, 'Asia/Kathmandu', '2028-01-31T20:00:00Z', 2)).toEqual([
      ...['2028-01-31T18:15:00Z', '2028-02-29T18:15:00Z', '2028-03-31T18:15:00Z'],
    ]);
  });
});

describe('windows when Berlin’s clocks go from 3:00 back to 2:00 on 25 October 2026', () => {
  it('of an hour come twice for the repeated hour', () => {
    expect(edges(hours(1), 'Europe/Berlin', '2026-10-25T00:00:00Z', 3)).toEqual([
      ...['2026-10-25T00:00:00Z', '2026-10-25T01:00:00Z'],
      ...['2026-10-25T02:00:00Z', '2026-10-25T03:00:00Z'],
    ]);
  });

  it('have the same slot in both runs of the repeated hour', () => {
    const calendar = calendarOf(minutes(5), 'Europe/Berlin');
    const first = Date.parse('2026-10-25T00:05:00Z');
    expect(calendar.slot(first, 'day', 'monday')).toBe('T02:05');
    expect(calendar.slot(first + HOUR_MS, 'day', 'monday')).toBe('T02:05');
    expect(calendar.slot(first + HOUR_MS, 'week', 'monday')).toBe('7T02:05');
    expect(calendar.slot(first + HOUR_MS, 'week', 'sunday')).toBe('1T02:05');
  });

  it('of two hours have one longer by an hour', () => {
    expect(edges(hours(2), 'Europe/Berlin', '2026-10-24T22:00:00Z', 3)).toEqual([
      ...['2026-10-24T22:00:00Z', '2026-10-25T00:00:00Z'],
      ...['2026-10-25T03:00:00Z', '2026-10-25T05:00:00Z'],
    ]);
  });

  it('of a day have one of 25 hours', () => {
    expect(edges(day, 'Europe/Berlin', '2026-10-25T12:00:00Z', 1)).toEqual([
      ...['2026-10-24T22:00:00Z', '2026-10-25T23:00:00Z'],
    ]);
  });
});

describe('windows when Berlin’s clocks go from 2:00 to 3:00 on 29 March 2026', () => {
  it('of an hour have none for the skipped hour', () => {
    const calendar = calendarOf(hours(1), 'Europe/Berlin');
    const window = calendar.windowAt(Date.parse('2026-03-29T00:30:00Z'));
    expect(calendar.slot(window.startMs, 'day', 'monday')).toBe('T01:00');
    expect(calendar.slot(calendar.next(window).startMs, 'day', 'monday')).toBe('T03:00');
  });

  it('of two hours have one shorter by an hour, in its ordinary slot', () => {
    expect(edges(hours(2), 'Europe/Berlin', '2026-03-28T23:00:00Z', 3)).toEqual([
      ...['2026-03-28T23:00:00Z', '2026-03-29T01:00:00Z'],
      ...['2026-03-29T02:00:00Z', '2026-03-29T04:00:00Z'],
    ]);
    const calendar = calendarOf(hours(2), 'Europe/Berlin');
    const shorter = Date.parse('2026-03-29T01:00:00Z');
    expect(calendar.slot(shorter, 'day', 'monday')).toBe('T02:00');
  });
});

describe('windows where clocks behave oddly', () => {
  it('of an hour have one of 90 minutes when Lord Howe goes back by half an hour', () => {
    // 5 April 2026, 2:00 at +11 becomes 1:30 at +10:30.
    expect(edges(hours(1), 'Australia/Lord_Howe', '2026-04-04T14:00:00Z', 2)).toEqual([
      ...['2026-04-04T14:00:00Z', '2026-04-04T15:30:00Z', '2026-04-04T16:30:00Z'],
    ]);
  });

  it('of a day do not come back to a date when St John’s goes back from 0:01 to 23:01', () => {
    // 1 November 2009, 0:01 at -2:30 becomes 23:01 at -3:30.
    expect(edges(day, 'America/St_Johns', '2009-10-31T12:00:00Z', 2)).toEqual([
      ...['2009-10-31T02:30:00Z', '2009-11-01T02:30:00Z', '2009-11-02T03:30:00Z'],
    ]);
  });

  it('of a day have none for 30 December 2011, which Apia skipped', () => {
    const calendar = calendarOf(day, 'Pacific/Apia');
    const before = calendar.windowAt(Date.parse('2011-12-29T12:00:00Z'));
    const after = calendar.next(before);
    expect(calendar.localDate(before.startMs)).toBe('2011-12-29');
    expect(calendar.localDate(after.startMs)).toBe('2011-12-31');
    expect(formatInstant(after.startMs)).toBe('2011-12-30T10:00:00Z');
    expect(calendar.ordinal(after.startMs)).toBe(calendar.ordinal(before.startMs) + 2);
  });

  it('of a day begin at 1:00 when midnight was skipped in São Paulo', () => {
    // 4 November 2018, 0:00 at -3 becomes 1:00 at -2.
    expect(edges(day, 'America/Sao_Paulo', '2018-11-04T12:00:00Z', 1)).toEqual([
      ...['2018-11-04T03:00:00Z', '2018-11-05T02:00:00Z'],
    ]);
  });
});

describe('what a calendar says about itself', () => {
  const cases: [string, WindowLength, number][] = [
    ['five minutes', minutes(5), 2016],
    ['a day', day, 7],
    ['a week', week('monday'), 1],
    ['a month', month, 7 / 30.436875],
  ];
  it.each(cases)('counts the windows a week for %s', (_, length, perWeek) => {
    const calendar = calendarOf(length, 'UTC');
    expect(calendar.perWeek).toBeCloseTo(perWeek, 12);
    expect(calendar.nominalMs * calendar.perWeek).toBeCloseTo(604_800_000, 3);
  });

  it('shows seconds of a slot where there are any', () => {
    const calendar = calendarOf({ kind: 'sub-day', ms: 10_000 }, 'UTC');
    expect(calendar.slot(Date.parse('2026-11-03T10:05:10Z'), 'week', 'monday')).toBe('2T10:05:10');
  });

  it('refuses a length that does not divide a day', () => {
    expect(() => calendarOf(minutes(7), 'UTC')).toThrow(
      'length: 420000 ms is not a whole number of seconds dividing a day',
    );
  });

  it('refuses a zone that is none, and a bare offset', () => {
    expect(() => calendarOf(day, 'Mars/Base')).toThrow(
      'zone: "Mars/Base" is not an IANA time zone',
    );
    expect(() => calendarOf(day, '+01:00')).toThrow('zone: "+01:00" is not an IANA time zone');
  });

  it('refuses a time that is no time', () => {
    expect(() => calendarOf(day, 'UTC').windowAt(NaN)).toThrow('ms: NaN is outside the calendar');
  });
});
