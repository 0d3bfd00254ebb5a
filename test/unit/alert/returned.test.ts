import { describe, expect, it } from 'vitest';

import { hasReturned, isBack } from '../../../src/alert/returned.js';
import type { Alarm } from '../../../src/terms/recipe.js';
import { countsOf, times } from '../judge/samples.js';

/** The case of the check values of methods 10. */
function alarmOf(changed: Partial<Alarm> = {}): Alarm {
  return {
    alertId: 'a',
    startMs: 0,
    endMs: 60_000,
    sinceEarliestMs: 0,
    recipe: { step: 0, fromMs: 0, toMs: 0, excluded: [] },
    carriers: {
      categories: ['bad'],
      named: ['ok', 'bad'],
      unnamed: false,
      before: 0.107,
      now: 0.207,
    },
    weightNow: 2000,
    weightReference: 48_000,
    rho: 0,
    df2: 253,
    tolerance: 0.01,
    ...changed,
  };
}

describe('the rule of a return', () => {
  // The bounds themselves are held to the design's check values in test/unit/stats.
  it('tells the check case that is back from the one that is not', () => {
    expect(isBack(alarmOf(), { weight: 6000, share: 0.11 })).toBe(true);
    expect(isBack(alarmOf(), { weight: 6000, share: 0.13 })).toBe(false);
  });

  it('the second form lets what lies within the tolerance of the gate return', () => {
    const small = { ...alarmOf().carriers, now: 0.117 };
    const pool = { weight: 60_000, share: 0.109 };
    expect(isBack(alarmOf({ carriers: small }), pool)).toBe(true);
    expect(isBack(alarmOf({ carriers: small, tolerance: 0.005 }), pool)).toBe(false);
  });

  it('declared shares have no error of their own, which makes a return easier to show', () => {
    const young = alarmOf({ weightReference: 800 });
    const pool = { weight: 6000, share: 0.125 };
    expect(isBack(young, pool)).toBe(false);
    expect(isBack({ ...young, weightReference: null }, { weight: 6000, share: 0.115 })).toBe(true);
    expect(isBack(young, { weight: 6000, share: 0.115 })).toBe(false);
  });

  it('a fall is measured with its sign turned', () => {
    const fall = { ...alarmOf().carriers, before: 0.207, now: 0.107 };
    expect(isBack(alarmOf({ carriers: fall }), { weight: 6000, share: 0.204 })).toBe(true);
    expect(isBack(alarmOf({ carriers: fall }), { weight: 6000, share: 0.107 })).toBe(false);
  });

  it('an overshoot to the other side of the reference is a return', () => {
    expect(isBack(alarmOf(), { weight: 6000, share: 0.05 })).toBe(true);
  });

  it('without events nothing has returned', () => {
    expect(isBack(alarmOf(), { weight: 0, share: 0 })).toBe(false);
  });
});

describe('a return in a run of windows', () => {
  const back = countsOf({ ok: 893, bad: 107 });
  const away = countsOf({ ok: 793, bad: 207 });

  it('needs three windows', () => {
    expect(hasReturned(alarmOf(), times(2, back))).toBe(false);
    expect(hasReturned(alarmOf(), times(3, back))).toBe(true);
  });

  it('is not seen while the shift lasts, however long', () => {
    expect(hasReturned(alarmOf(), times(24, away))).toBe(false);
  });

  it('looks at the newest windows of each length', () => {
    expect(hasReturned(alarmOf(), [...times(21, away), ...times(3, back)])).toBe(true);
    expect(hasReturned(alarmOf(), [...times(3, back), ...times(21, away)])).toBe(false);
  });

  it('with a tenth of the events waits for a longer length', () => {
    const thin = countsOf({ ok: 179, bad: 21 });
    const found = [3, 6, 12, 24].map((n) => hasReturned(alarmOf(), times(n, thin)));
    // By hand: -.002 + 3.12 sqrt(.0945/600 + .097/18000) = .038 with three, over a third of .10;
    // -.002 + 3.12 sqrt(.0945/1200 + .097/18000) = .027 with six.
    expect(found).toEqual([false, true, true, true]);
  });

  it('empty windows count as windows and add no events', () => {
    const empty = new Map<string, number>();
    expect(hasReturned(alarmOf(), [empty, empty, back])).toBe(
      hasReturned(alarmOf(), [empty, back, empty]),
    );
    expect(hasReturned(alarmOf(), times(24, empty))).toBe(false);
  });

  it('discounts events of a window that go together', () => {
    expect(hasReturned(alarmOf({ rho: 0.01 }), times(3, back))).toBe(false);
    expect(hasReturned(alarmOf({ rho: 0.01 }), times(24, back))).toBe(true);
  });

  it('counts categories without a place among the carriers only where those are pooled', () => {
    const strange = countsOf({ ok: 793, new: 207 });
    const pooled = { ...alarmOf().carriers, unnamed: true };
    expect(hasReturned(alarmOf({ carriers: pooled }), times(3, strange))).toBe(false);
    expect(hasReturned(alarmOf(), times(3, strange))).toBe(true);
  });
});
