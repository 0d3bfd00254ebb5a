import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { benjaminiHochberg } from '../../../src/stats/benjaminiHochberg.js';
import { likelihoodRatio } from '../../../src/stats/likelihoodRatio.js';
import { moved } from '../../../src/stats/moved.js';
import { newcombe } from '../../../src/stats/newcombe.js';
import { pearsonChiSquared } from '../../../src/stats/pearsonChiSquared.js';
import { poolByMargins } from '../../../src/stats/poolByMargins.js';

const RUNS = { seed: 20_260, numRuns: 300 };

const counts = (width: number): fc.Arbitrary<number[]> =>
  fc.array(fc.integer({ min: 0, max: 400 }), { minLength: width, maxLength: width });
const tableOf = fc
  .tuple(fc.integer({ min: 1, max: 5 }), fc.integer({ min: 1, max: 8 }))
  .chain(([r, c]) => fc.array(counts(c), { minLength: r, maxLength: r }));
const pairOf = fc.integer({ min: 2, max: 9 }).chain((c) => fc.tuple(counts(c), counts(c)));
const filled = pairOf.filter((rows) => rows.every((row) => row.some((x) => x > 0)));

const share = (row: readonly number[]): number[] => {
  const total = row.reduce((a, b) => a + b, 0);
  return row.map((x) => x / total);
};

describe('tables of any shape', () => {
  it.each([
    ['Pearson', pearsonChiSquared],
    ['likelihood ratio', likelihoodRatio],
  ])('%s: transposing or reversing rows and columns changes nothing', (_, test) => {
    fc.assert(
      fc.property(tableOf, (table) => {
        const { statistic, df, logP } = test(table);
        const flipped = (table[0] ?? []).map((__, k) => table.map((row) => row[k] ?? 0));
        const turned = [...table].reverse().map((row) => [...row].reverse());
        for (const other of [test(flipped), test(turned)]) {
          expect(other.df).toBe(df);
          expect(other.statistic).toBeCloseTo(statistic, 8);
          expect(Math.abs(other.logP - logP)).toBeLessThan(1e-8);
        }
        expect(logP).toBeLessThanOrEqual(0);
        expect(statistic).toBeGreaterThanOrEqual(0);
      }),
      RUNS,
    );
  });

  it.each([
    ['Pearson', pearsonChiSquared],
    ['likelihood ratio', likelihoodRatio],
  ])('%s: three times the events give three times the statistic', (_, test) => {
    fc.assert(
      fc.property(tableOf, (table) => {
        const larger = table.map((row) => row.map((x) => 3 * x));
        expect(test(larger).statistic).toBeCloseTo(3 * test(table).statistic, 7);
      }),
      RUNS,
    );
  });
});

describe('poolByMargins on any two samples', () => {
  it('each category with events is in one bin, and each of several bins expects five', () => {
    fc.assert(
      fc.property(pairOf, fc.boolean(), ([now, reference], ordered) => {
        const { bins, pooled } = poolByMargins({ now, reference, ordered });
        const inside = bins.flat();
        expect(new Set(inside).size).toBe(inside.length);
        const sumOf = (row: readonly number[], ks: readonly number[]): number =>
          ks.reduce((total, k) => total + (row[k] ?? 0), 0);
        const all = now.map((_, k) => k);
        const both = now.map((x, k) => x + (reference[k] ?? 0));
        expect(sumOf(both, inside)).toBe(sumOf(both, all));
        expect(pooled.every((k) => inside.includes(k))).toBe(true);
        if (bins.length < 2) return;
        const [n, m] = [sumOf(now, all), sumOf(reference, all)];
        for (const bin of bins) {
          const expected = (Math.min(n, m) * sumOf(both, bin)) / (n + m);
          expect(expected).toBeGreaterThanOrEqual(5 - 1e-9);
        }
      }),
      RUNS,
    );
  });
});

describe('effect sizes of any two samples', () => {
  it('moved: at least <= estimate <= at most, whatever the order of the bins', () => {
    fc.assert(
      fc.property(filled, fc.integer({ min: 10, max: 100_000 }), ([a, b], weight) => {
        const input = { weightNow: weight, weightReference: 5 * weight, df2: 60, pooledIndex: 0 };
        const found = moved({ now: share(a), reference: share(b), ...input });
        expect(found.atLeast).toBeGreaterThanOrEqual(0);
        expect(found.estimate).toBeGreaterThanOrEqual(found.atLeast);
        expect(found.atMost).toBeGreaterThanOrEqual(found.estimate);
        expect(found.atMost).toBeLessThanOrEqual(1);
        const turned = { now: share([...a].reverse()), reference: share([...b].reverse()) };
        const other = moved({ ...turned, ...input, pooledIndex: a.length - 1 });
        expect(other.atLeast).toBeCloseTo(found.atLeast, 10);
        expect(other.estimate).toBeCloseTo(found.estimate, 10);
      }),
      RUNS,
    );
  });

  it('newcombe: the interval holds the difference and turns over with the sides', () => {
    const size = fc.integer({ min: 1, max: 10_000 });
    const fraction = fc.double({ min: 0, max: 1, noNaN: true });
    fc.assert(
      fc.property(fraction, size, fraction, size, (after, nAfter, before, nBefore) => {
        const [lo, hi] = newcombe({ after, nAfter, before, nBefore, level: 0.95 });
        expect(lo).toBeLessThanOrEqual(after - before + 1e-12);
        expect(hi).toBeGreaterThanOrEqual(after - before - 1e-12);
        expect(lo).toBeGreaterThanOrEqual(-1 - 1e-12);
        expect(hi).toBeLessThanOrEqual(1 + 1e-12);
        const swapped = { after: before, nAfter: nBefore, before: after, nBefore: nAfter };
        const [low, high] = newcombe({ ...swapped, level: 0.95 });
        expect(low).toBeCloseTo(-hi, 10);
        expect(high).toBeCloseTo(-lo, 10);
      }),
      RUNS,
    );
  });
});

describe('benjaminiHochberg on any family', () => {
  it('rejects a set of smallest p, at least what Bonferroni rejects', () => {
    const family = fc.array(fc.double({ min: -30, max: 0, noNaN: true }), { maxLength: 30 });
    fc.assert(
      fc.property(family, (logPs) => {
        const rejected = benjaminiHochberg(logPs, 0.05);
        const kept = logPs.filter((_, i) => !rejected[i]);
        const passed = logPs.filter((_, i) => rejected[i]);
        expect(Math.max(-Infinity, ...passed)).toBeLessThanOrEqual(Math.min(0, ...kept));
        const bonferroni = Math.log(0.05 / logPs.length);
        expect(logPs.every((logP, i) => logP > bonferroni || rejected[i])).toBe(true);
      }),
      RUNS,
    );
  });
});
