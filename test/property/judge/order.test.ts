import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { binCounts, binsByMargins, binsByShares } from '../../../src/judge/bins.js';
import { judgeWindow } from '../../../src/judge/judgeWindow.js';
import { materialFor } from '../../../src/judge/material.js';
import { calendarOf } from '../../../src/clock/calendar.js';
import type { Counts } from '../../../src/terms/tally.js';
import { mixOf } from '../../unit/schedule/scene.js';
import { MINUTE, T0, windowsOf } from '../../unit/judge/samples.js';

const seeded = { seed: 7417, numRuns: 200 };
const options = { ordered: null, categoriesJudged: 6, pooling: true };
const name = fc.constantFrom('a', 'b', 'c', 'd', 'e', 'f', 'g', 'h', '(rest)');
const counts: fc.Arbitrary<Counts> = fc
  .array(fc.tuple(name, fc.integer({ min: 1, max: 400 })), { minLength: 1, maxLength: 9 })
  .map((pairs) => new Map(pairs));
const total = (given: Counts) => [...given.values()].reduce((a, b) => a + b, 0);
const reversed = (given: Counts): Counts => new Map([...given].reverse());

describe('bins', () => {
  it('hold every event of both samples once, whatever the counts', () => {
    fc.assert(
      fc.property(counts, counts, (now, before) => {
        const bins = binsByMargins(now, before, options);
        const members = bins.members.flat();
        expect(new Set(members).size).toBe(members.length);
        for (const side of [now, before]) {
          expect(binCounts(side, bins).reduce((a, b) => a + b, 0)).toBe(total(side));
        }
        expect(bins.names.length).toBeLessThanOrEqual(6);
      }),
      seeded,
    );
  });

  it('are the same in whatever order categories are given, and for swapped sides', () => {
    fc.assert(
      fc.property(counts, counts, (now, before) => {
        const bins = binsByMargins(now, before, options);
        expect(binsByMargins(reversed(now), reversed(before), options)).toEqual(bins);
        expect(binsByMargins(before, now, options)).toEqual(bins);
      }),
      seeded,
    );
  });

  it('against shares depend on how many events there are, not on which', () => {
    const shares = new Map(Object.entries({ a: 0.6, b: 0.25, c: 0.1, '(rest)': 0.05 }));
    fc.assert(
      fc.property(counts, (now) => {
        const all = new Map([['a', total(now)]]);
        expect(binsByShares(now, shares, options)).toEqual(binsByShares(all, shares, options));
      }),
      seeded,
    );
  });
});

describe('a judged window', () => {
  const mix = mixOf();
  const calendar = calendarOf(mix.window, 'UTC');
  const window = calendar.windowAt(T0 + 30 * MINUTE);
  const wide = fc.array(counts, { minLength: 24, maxLength: 30 });

  const judge = (past: readonly Counts[], now: Counts) => {
    const material = materialFor(mix, calendar, window, windowsOf(past));
    const bins = material.bins(now);
    if (bins.names.length < 2) return null;
    const reference = material.reference(bins);
    if ('learning' in reference) return null;
    const { before, declared } = material;
    return judgeWindow({
      counts: now,
      before,
      declared,
      bins,
      reference,
      tolerance: mix.tolerance,
    });
  };

  it('is the same to the last bit in whatever order categories arrived', () => {
    fc.assert(
      fc.property(wide, counts, (past, now) => {
        expect(judge(past.map(reversed), reversed(now))).toEqual(judge(past, now));
      }),
      { ...seeded, numRuns: 60 },
    );
  });

  it('has bounds in order, a p in range and movers that cancel out', () => {
    fc.assert(
      fc.property(wide, counts, (past, now) => {
        const found = judge(past, now);
        if (found === null) return;
        const { moved, p, logP, movers } = found.evidence;
        expect(moved.atLeast).toBeLessThanOrEqual(moved.estimate);
        expect(moved.estimate).toBeLessThanOrEqual(moved.atMost);
        expect(p).toBeGreaterThanOrEqual(0);
        expect(logP).toBeLessThanOrEqual(0);
        expect(movers.reduce((sum, m) => sum + m.difference, 0)).toBeCloseTo(0, 9);
      }),
      { ...seeded, numRuns: 60 },
    );
  });
});
