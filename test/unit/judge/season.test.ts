import { describe, expect, it } from 'vitest';

import { calendarOf } from '../../../src/clock/calendar.js';
import type { MixConfig } from '../../../src/config/types.js';
import { materialFor, usable } from '../../../src/judge/material.js';
import type { WindowCounts } from '../../../src/judge/reference.js';
import { lacksCycles, slotAt, slotsOf } from '../../../src/judge/season.js';
import { mixOf } from '../schedule/scene.js';
import { countsOf } from './samples.js';

const HOUR = 3_600_000;
const zone = 'Europe/Berlin';
const calendar = calendarOf({ kind: 'sub-day', ms: HOUR }, zone);
/** Berlin sets its clocks back at 2031-10-26T01:00Z: the hour from 02:00 is there twice. */
const BACK = Date.UTC(2031, 9, 26, 1);

function seasonMix(changed: { readonly except?: readonly string[]; readonly keep?: number }) {
  return mixOf({
    zone,
    window: { kind: 'sub-day', ms: HOUR },
    yardstick: { kind: 'season', cycle: 'day', keep: 4, except: [], ...changed },
  });
}

function hours(fromMs: number, n: number): WindowCounts[] {
  return Array.from({ length: n }, (_, at) => ({
    window: calendar.windowAt(fromMs + at * HOUR),
    counts: countsOf({ ok: 90 + at, bad: 10 }),
  }));
}

const slot = (mix: MixConfig, past: readonly WindowCounts[], name: string) =>
  slotsOf(mix, calendar, past).get(name) ?? [];

describe('the slots of a season', () => {
  it('follow the local clock of the zone over a change of clocks', () => {
    const mix = seasonMix({});
    const before = calendar.windowAt(BACK - 24 * HOUR);
    const after = calendar.windowAt(BACK + 25 * HOUR);
    expect(slotAt(mix, calendar, before)).toBe('T03:00');
    expect(slotAt(mix, calendar, after)).toBe('T03:00');
  });

  it('a repeated hour is one window of its slot, its events pooled', () => {
    const past = hours(BACK - 25 * HOUR, 26);
    const two = slot(seasonMix({}), past, 'T02:00');
    expect(two.map(({ window }) => window.endMs - window.startMs)).toEqual([HOUR, 2 * HOUR]);
    // Hours 24 and 25 of the sample.
    expect(two[1]?.counts.get('ok')).toBe(114 + 115);
  });

  it('a skipped hour has none', () => {
    // Berlin sets its clocks forward at 2031-03-30T01:00Z: there is no hour from 02:00.
    const past = hours(Date.UTC(2031, 2, 29, 23), 24);
    expect(slot(seasonMix({}), past, 'T02:00')).toEqual([]);
    expect(slot(seasonMix({}), past, 'T03:00')).toHaveLength(1);
  });

  it('excepted local dates have no part in it', () => {
    const past = hours(Date.UTC(2031, 5, 1, 22), 72);
    expect(slot(seasonMix({}), past, 'T12:00')).toHaveLength(3);
    expect(slot(seasonMix({ except: ['2031-06-03'] }), past, 'T12:00')).toHaveLength(2);
  });

  it('keep the newest cycles only', () => {
    const past = hours(Date.UTC(2031, 5, 1, 22), 24 * 6);
    const kept = slot(seasonMix({ keep: 2 }), past, 'T12:00');
    expect(kept.map(({ window }) => calendar.localDate(window.startMs))).toEqual([
      '2031-06-06',
      '2031-06-07',
    ]);
  });
});

describe('a slot with fewer than two cycles', () => {
  const mix = seasonMix({});
  const past = hours(Date.UTC(2031, 5, 1, 22), 40);
  const window = calendar.windowAt(Date.UTC(2031, 5, 1, 22) + 40 * HOUR);

  it('is told, and only of a season', () => {
    expect(lacksCycles(mix, calendar, window, past)).toBe(true);
    const two = hours(Date.UTC(2031, 5, 1, 22), 60);
    const third = calendar.windowAt(Date.UTC(2031, 5, 1, 22) + 60 * HOUR);
    expect(lacksCycles(mix, calendar, third, two)).toBe(false);
    expect(lacksCycles(mixOf(), calendar, window, past)).toBe(false);
  });

  it('is held against the last of the recent windows, provisionally', () => {
    const recent = hours(Date.UTC(2031, 5, 3, 0), 20);
    const material = materialFor(mix, calendar, window, past, recent);
    expect(material.before).toEqual(recent.at(-1)?.counts);
    const reference = material.reference(material.bins(countsOf({ ok: 90, bad: 10 })));
    if ('learning' in reference) {
      expect(reference.learning).toMatch(/degrees of freedom/);
    } else {
      expect(reference.note.provisional).not.toBeNull();
    }
  });
});

describe('windows that may serve', () => {
  it('lie wholly inside the recipe, outside alarms, and are not thin', () => {
    const all = hours(0, 10);
    const recipe = {
      step: 0,
      fromMs: HOUR,
      toMs: 9 * HOUR,
      excluded: [{ fromMs: 3.5 * HOUR, toMs: 5 * HOUR }],
    };
    const starts = usable(all, recipe, 103).map(({ window }) => window.startMs / HOUR);
    // Hours 1 and 2 have 101 and 102 events, 3 and 4 touch the alarm, 9 ends outside.
    expect(starts).toEqual([5, 6, 7, 8]);
  });
});
