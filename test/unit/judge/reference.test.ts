import { describe, expect, it } from 'vitest';

import {
  baselineReference,
  declaredReference,
  fileReference,
  type Learning,
  previousReference,
  type Reference,
  seasonReference,
} from '../../../src/judge/reference.js';
import { bins, CHECK_BASELINE, lettered, T0, MINUTE, times, windowsOf } from './samples.js';

const abc = bins('a', 'b', 'c');
const calm = lettered([60, 30, 10]);
const plain = { yardstick: 'previous', provisional: null } as const;

function judged(found: Reference | Learning): Reference {
  if ('learning' in found) throw new Error(`still learning: ${found.learning}`);
  return found;
}

function reason(found: Reference | Learning): string {
  return 'learning' in found ? found.learning : 'judged';
}

describe('a baseline of past windows', () => {
  const six = bins('a', 'b', 'c', 'd', 'e', 'f');

  it('has the check values of the design', () => {
    const equal = judged(baselineReference(windowsOf(CHECK_BASELINE.map(lettered)), six));
    expect(equal).toMatchObject({ rho: 0, weight: 800, df2: 35 });
    const rows = CHECK_BASELINE.map((row) => [...row]);
    rows[1] = [70, 10, 5, 6, 6, 3];
    rows[4] = [30, 35, 16, 10, 6, 3];
    const spread = judged(baselineReference(windowsOf(rows.map(lettered)), six));
    expect(spread.rho).toBeCloseTo(0.00445617, 8);
    expect(spread.weight).toBeCloseTo(555.10821, 5);
  });

  it('notes its windows, events and span', () => {
    const { note } = judged(baselineReference(windowsOf(times(11, calm)), abc));
    expect(note).toEqual({
      yardstick: 'baseline',
      windows: 11,
      events: 1100,
      fromMs: T0,
      toMs: T0 + 11 * MINUTE,
      provisional: null,
    });
  });

  it('is learned from eight windows on', () => {
    expect(reason(baselineReference(windowsOf(times(7, calm)), abc))).toBe(
      '7 of 8 windows in the baseline so far',
    );
  });

  it('asks for 20 degrees of freedom: eleven windows of three bins, 21 of two', () => {
    expect(reason(baselineReference(windowsOf(times(10, calm)), abc))).toMatch(
      /varies by itself \(18 of 20 degrees of freedom\)$/,
    );
    expect(reason(baselineReference(windowsOf(times(11, calm)), abc))).toBe('judged');
    expect(reason(baselineReference(windowsOf(times(20, calm)), bins('a', 'b')))).toMatch(
      /\(19 of/,
    );
    expect(reason(baselineReference(windowsOf(times(21, calm)), bins('a', 'b')))).toBe('judged');
  });
});

describe('the windows before', () => {
  it('weigh as one, dispersion coming from past pairs', () => {
    const recent = windowsOf(times(20, calm));
    const found = judged(previousReference(recent.slice(-1), recent, abc, plain));
    expect(found).toMatchObject({ rho: 0, weight: 100, shares: [0.6, 0.3, 0.1] });
    // 19 pairs: (K-1) 2 H^2 / (3 H - 1) = 2 x 722 / 56 (von Neumann 1941, from memory).
    expect(found.df2).toBeCloseTo((2 * 722) / 56, 10);
  });

  it('several of them have their weights summed', () => {
    const recent = windowsOf(times(40, calm));
    expect(judged(previousReference(recent.slice(-3), recent, abc, plain)).weight).toBe(300);
  });

  it('teach nothing across a gap', () => {
    const whole = windowsOf(times(20, calm));
    const gappy = whole.filter((_, at) => at % 2 === 0);
    expect(reason(previousReference(gappy.slice(-1), gappy, abc, plain))).toBe(
      '0 of 8 pairs of neighbouring windows so far',
    );
  });

  it('of two bins ask for thirty pairs', () => {
    const two = bins('a', 'b');
    const enough = windowsOf(times(31, calm));
    expect(reason(previousReference(enough.slice(-1), enough, two, plain))).toBe('judged');
    const few = enough.slice(1);
    expect(reason(previousReference(few.slice(-1), few, two, plain))).toMatch(/\(19\.6 of 20/);
  });

  it('are the newest 96 pairs at most', () => {
    const wild = windowsOf(times(50, 0).map((_, at) => lettered(at % 2 ? [90, 5, 5] : [5, 5, 90])));
    const recent = [...wild, ...windowsOf(times(97, calm), 50)];
    expect(judged(previousReference(recent.slice(-1), recent, abc, plain)).rho).toBe(0);
    const shorter = [...wild, ...windowsOf(times(40, calm), 50)];
    expect(judged(previousReference(shorter.slice(-1), shorter, abc, plain)).rho).toBeGreaterThan(
      0.1,
    );
  });
});

describe('declared shares', () => {
  it('have no error of their own, and a dispersion learned from the strand', () => {
    const shares = new Map(Object.entries({ a: 0.6, b: 0.3, c: 0.1 }));
    const found = judged(declaredReference(shares, windowsOf(times(20, calm)), abc));
    expect(found).toMatchObject({ weight: Infinity, shares: [0.6, 0.3, 0.1], rho: 0 });
    expect(found.note).toMatchObject({ yardstick: 'declared', windows: null, events: null });
    expect(reason(declaredReference(shares, [], abc))).toMatch(/^0 of 8 pairs/);
  });
});

describe('a counts file without windows', () => {
  it('weighs as one window of its events with the dispersion of the strand', () => {
    const rows = times(40, 0).map((_, at) => lettered(at % 2 ? [70, 20, 10] : [50, 40, 10]));
    const found = judged(fileReference(lettered([6000, 3000, 1000]), windowsOf(rows), abc));
    expect(found.rho).toBeGreaterThan(0);
    expect(found.weight).toBeCloseTo(10_000 / (1 + 9_999 * found.rho), 10);
    expect(found.note).toMatchObject({ windows: null, events: 10_000 });
  });
});

describe('a season slot', () => {
  it('has the shares of its own windows and the dispersion of all slots', () => {
    const slot = windowsOf(times(2, calm));
    const other = windowsOf(times(12, lettered([20, 20, 60])));
    const found = judged(seasonReference(slot, [slot, other], abc));
    expect(found).toMatchObject({ shares: [0.6, 0.3, 0.1], weight: 200, rho: 0 });
    // sum over slots of (B - 1)(K - 1): 1 x 2 + 11 x 2.
    expect(found.df2).toBe(24);
    expect(found.note).toMatchObject({ yardstick: 'season', windows: 2, events: 200 });
  });

  it('whose cycle is young is still learning', () => {
    const slot = windowsOf(times(2, calm));
    expect(reason(seasonReference(slot, [slot, slot], abc))).toMatch(/\(4 of 20/);
  });
});
