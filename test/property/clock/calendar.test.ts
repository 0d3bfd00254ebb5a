import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { calendarOf } from '../../../src/clock/calendar.js';
import { zoneOf } from '../../../src/clock/zone.js';
import type { WindowLength } from '../../../src/terms/window.js';

const zones = [
  ...['UTC', 'Europe/Berlin', 'America/St_Johns', 'Australia/Lord_Howe'],
  ...['Asia/Kathmandu', 'Pacific/Apia'],
];
const subDay = (seconds: number): WindowLength => ({ kind: 'sub-day', ms: seconds * 1_000 });
const lengths: WindowLength[] = [
  ...[10, 60, 300, 1_800, 3_600, 7_200, 10_800, 14_400, 28_800, 43_200].map(subDay),
  { kind: 'day' },
  { kind: 'week', weekStarts: 'monday' },
  { kind: 'week', weekStarts: 'sunday' },
  { kind: 'month' },
];
const DAY_MS = 86_400_000;

/** Instants near a change of clocks, where windows are odd, and anywhere from 1950 to 2100. */
const moments = fc.oneof(
  fc.integer({ min: Date.UTC(1950, 0), max: Date.UTC(2100, 0) }),
  fc.integer({ min: Date.UTC(2011, 11, 28), max: Date.UTC(2012, 0, 2) }),
  ...[
    ...[Date.UTC(2026, 2, 29, 1), Date.UTC(2026, 9, 25, 1)],
    ...[Date.UTC(2009, 2, 8, 3, 31), Date.UTC(2009, 10, 1, 2, 31)],
    ...[Date.UTC(2026, 3, 4, 15), Date.UTC(2026, 9, 3, 15, 30)],
    Date.UTC(1985, 11, 31, 18, 30),
  ].map((change) => fc.integer({ min: change - DAY_MS, max: change + DAY_MS })),
);
const runs = { seed: 20_261_103, numRuns: 400 };

describe.each(zones)('windows in %s', (zone) => {
  it('hold the instant asked for, meet their neighbours, and number upwards', () => {
    fc.assert(
      fc.property(fc.constantFrom(...lengths), moments, (length, ms) => {
        const calendar = calendarOf(length, zone);
        const window = calendar.windowAt(ms);
        const next = calendar.next(window);
        const previous = calendar.previous(window);
        expect(window.startMs <= ms && ms < window.endMs).toBe(true);
        expect(next.startMs).toBe(window.endMs);
        expect(previous.endMs).toBe(window.startMs);
        expect(calendar.previous(next)).toEqual(window);
        expect(calendar.next(previous)).toEqual(window);
        expect(calendar.windowAt(window.startMs)).toEqual(window);
        expect(calendar.windowAt(window.endMs - 1)).toEqual(window);
        expect(calendar.ordinal(next.startMs)).toBeGreaterThan(calendar.ordinal(window.startMs));
      }),
      runs,
    );
  });

  it('are the same whatever was asked before', () => {
    const shared = lengths.map((length) => calendarOf(length, zone));
    fc.assert(
      fc.property(fc.nat({ max: lengths.length - 1 }), moments, (at, ms) => {
        const length = lengths[at] ?? { kind: 'day' };
        expect(shared[at]?.windowAt(ms)).toEqual(calendarOf(length, zone).windowAt(ms));
      }),
      runs,
    );
  });

  it('have the offsets that the platform’s own formatting shows', () => {
    const format = new Intl.DateTimeFormat('en-GB', {
      ...{ timeZone: zone, calendar: 'iso8601', hourCycle: 'h23', year: 'numeric' },
      ...{ month: 'numeric', day: 'numeric', hour: 'numeric', minute: 'numeric' },
      second: 'numeric',
    });
    fc.assert(
      fc.property(moments, (ms) => {
        const parts = new Map(format.formatToParts(ms).map(({ type, value }) => [type, value]));
        const number = (type: Intl.DateTimeFormatPartTypes): number => Number(parts.get(type));
        const local = Date.UTC(
          ...([number('year'), number('month') - 1, number('day')] as const),
          ...([number('hour'), number('minute'), number('second')] as const),
        );
        expect(Math.floor(zoneOf(zone).localMs(ms) / 1_000)).toBe(local / 1_000);
      }),
      runs,
    );
  });

  it('give an instant back from its local time, or the earlier of two', () => {
    const own = zoneOf(zone);
    fc.assert(
      fc.property(moments, (ms) => {
        const back = own.instantMs(own.localMs(ms));
        expect(own.localMs(back)).toBe(own.localMs(ms));
        expect(back).toBeLessThanOrEqual(ms);
      }),
      runs,
    );
  });
});
