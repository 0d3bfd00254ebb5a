import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { exactMultinomial } from '../../src/stats/exactMultinomial.js';
import { exactTableRxC } from '../../src/stats/exactTableRxC.js';
import { minimumEffectTest } from '../../src/stats/minimumEffectTest.js';
import { simultaneousIntervals } from '../../src/stats/simultaneousIntervals.js';

// exact.json is made by exact.py in this folder: every outcome listed in exact fractions, closed
// forms with mpmath 1.3.0 at 40 digits.
interface Cases {
  readonly multinomial: readonly {
    readonly counts: number[];
    readonly shares: number[];
    readonly p: Readonly<Record<'probability' | 'pearson' | 'likelihood-ratio', string>>;
  }[];
  readonly freemanHalton: readonly {
    readonly table: number[][];
    readonly tables: number;
    readonly p: string;
    readonly logP: string;
  }[];
  readonly goodman: readonly {
    readonly counts: number[];
    readonly level: number;
    readonly limits: readonly (readonly [number, number])[];
  }[];
  readonly minimumEffect: readonly {
    readonly statistic: number;
    readonly df: number;
    readonly events: number;
    readonly w: number;
    readonly p: string;
    readonly logP: string;
  }[];
}

const cases = JSON.parse(
  readFileSync(new URL('./exact.json', import.meta.url), 'utf8'),
) as unknown as Cases;

const maxWork = 1_000_000;
const logOf = (result: object): number => ('logP' in result ? Number(result.logP) : NaN);

describe('exact tests against lists of all outcomes', () => {
  it.each(cases.multinomial)('multinomial $counts: all three orders', ({ counts, shares, p }) => {
    for (const order of ['probability', 'pearson', 'likelihood-ratio'] as const) {
      const logP = logOf(exactMultinomial({ counts, shares, maxWork, order }));
      expect(Math.abs(logP - Math.log(Number(p[order])))).toBeLessThan(1e-12);
    }
  });

  it.each(cases.freemanHalton)('table $table of $tables', ({ table, logP }) => {
    const found = logOf(exactTableRxC({ table, maxWork }));
    expect(Math.abs(found - Number(logP))).toBeLessThan(1e-11);
  });
});

describe('closed forms at high precision', () => {
  it.each(cases.goodman)('intervals of $counts', ({ counts, level, limits }) => {
    const found = simultaneousIntervals(counts, { level });
    limits.forEach(([lower, upper], k) => {
      expect(found[k]?.lower).toBeCloseTo(lower, 13);
      expect(found[k]?.upper).toBeCloseTo(upper, 13);
    });
  });

  it.each(cases.minimumEffect)('statistic $statistic against w $w', ({ p, logP, ...input }) => {
    const result = minimumEffectTest(input);
    const error = 1e-12 * Math.max(1, Math.abs(Number(logP)));
    expect(Math.abs(result.logP - Number(logP))).toBeLessThan(error);
    expect(result.p / Number(p)).toBeCloseTo(1, 11);
  });
});
