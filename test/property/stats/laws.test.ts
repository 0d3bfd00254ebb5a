import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { adjustedResiduals } from '../../../src/stats/adjustedResiduals.js';
import { cochranMantelHaenszel } from '../../../src/stats/cochranMantelHaenszel.js';
import { cramersV } from '../../../src/stats/cramersV.js';
import { exactMultinomial } from '../../../src/stats/exactMultinomial.js';
import { exactTable } from '../../../src/stats/exactTable.js';
import { exactTableRxC } from '../../../src/stats/exactTableRxC.js';
import { g2Partition } from '../../../src/stats/g2Partition.js';
import { goodnessOfFit } from '../../../src/stats/goodnessOfFit.js';
import { kitagawa } from '../../../src/stats/kitagawa.js';
import { likelihoodRatio } from '../../../src/stats/likelihoodRatio.js';
import { linearByLinear } from '../../../src/stats/linearByLinear.js';
import { pearsonChiSquared } from '../../../src/stats/pearsonChiSquared.js';
import { simultaneousIntervals } from '../../../src/stats/simultaneousIntervals.js';
import type { ChiSquaredResult } from '../../../src/terms/evidence.js';
import {
  arrange,
  countsOf,
  expectAtMost,
  expectLogP,
  expectSame,
  halve,
  merge,
  orderOf,
  pairOf,
  pick,
  RUNS,
  sharesOf,
  tableOf,
  transpose,
} from './arbitraries.js';

type TableLaw = (table: readonly (readonly number[])[]) => ChiSquaredResult;
const OMNIBUS: [string, TableLaw][] = [
  ['pearsonChiSquared', pearsonChiSquared],
  ['likelihoodRatio', likelihoodRatio],
  ['cochranMantelHaenszel of one split', (table) => cochranMantelHaenszel([table])],
];

function expectSameTest(one: ChiSquaredResult, other: ChiSquaredResult): void {
  expect(one.df).toBe(other.df);
  expectSame(one.statistic, other.statistic, 1e-8);
  expectSame(one.logP, other.logP, 1e-8);
}

describe('tests of a table', () => {
  it.each(OMNIBUS)('%s: neither order, nor transposing, nor empty lines matter', (_, test) => {
    fc.assert(
      fc.property(tableOf, pick, (table, seed) => {
        const result = test(table);
        expectLogP(result.logP);
        const columns = orderOf(table[0]?.length ?? 0, seed);
        const mixed = arrange(table, orderOf(table.length, seed)).map((row) =>
          arrange(row, columns),
        );
        expectSameTest(test(mixed), result);
        expectSameTest(test(transpose(table)), result);
        const empty = columns.map(() => 0);
        expectSameTest(test([...table, empty].map((row) => [0, ...row])), result);
      }),
      RUNS,
    );
  });

  it.each(OMNIBUS.slice(0, 2))('%s: doubling, halving a category, merging two', (_, test) => {
    fc.assert(
      fc.property(tableOf, pick, (table, seed) => {
        const { statistic, df, logP } = test(table);
        const twice = test(table.map((row) => row.map((x) => 2 * x)));
        expectSame(twice.statistic, 2 * statistic, 1e-8);
        expectAtMost(twice.logP, logP);
        const halved = test(table.map((row) => halve(row, seed)));
        expectSame(halved.statistic, statistic, 1e-8);
        expect(halved.df).toBeGreaterThanOrEqual(df);
        expectAtMost(logP, halved.logP);
        expectAtMost(test(table.map((row) => merge(row, seed))).statistic, statistic);
      }),
      RUNS,
    );
  });

  it('adjustedResiduals: move with their cells, and with the root of the events', () => {
    fc.assert(
      fc.property(tableOf, pick, (table, seed) => {
        const residuals = adjustedResiduals(table);
        const columns = orderOf(table[0]?.length ?? 0, seed);
        const mixed = adjustedResiduals(table.map((row) => arrange(row, columns)));
        const flipped = transpose(adjustedResiduals(transpose(table)));
        const fourfold = adjustedResiduals(table.map((row) => row.map((x) => 4 * x)));
        residuals.forEach((row, i) => {
          arrange(row, columns).forEach((r, k) => expectSame(mixed[i]?.[k] ?? NaN, r, 1e-8));
          row.forEach((r, k) => expectSame(flipped[i]?.[k] ?? NaN, r, 1e-8));
          row.forEach((r, k) => expectSame(fourfold[i]?.[k] ?? NaN, 2 * r, 1e-8));
        });
      }),
      RUNS,
    );
  });

  it('cramersV: between 0 and 1, and deaf to the number of events', () => {
    fc.assert(
      fc.property(tableOf, (table) => {
        const v = cramersV(pearsonChiSquared(table).statistic, table);
        expect(v).toBeGreaterThanOrEqual(0);
        expect(v).toBeLessThanOrEqual(1);
        const larger = table.map((row) => row.map((x) => 3 * x));
        expectSame(cramersV(pearsonChiSquared(larger).statistic, larger), v, 1e-9);
      }),
      RUNS,
    );
  });

  it('exact tests: neither order nor transposing matter, p is never 0, both programs agree', () => {
    const small = fc
      .tuple(fc.integer({ min: 2, max: 3 }), fc.integer({ min: 2, max: 4 }))
      .chain(([r, k]) => fc.array(countsOf(k, 6), { minLength: r, maxLength: r }));
    fc.assert(
      fc.property(small, pick, (table, seed) => {
        const p = (rows: readonly (readonly number[])[]): number => {
          const result = exactTableRxC({ table: rows, maxWork: 1e6 });
          return 'p' in result ? result.p : NaN;
        };
        const whole = p(table);
        expect(whole).toBeGreaterThan(0);
        expect(whole).toBeLessThanOrEqual(1);
        const columns = orderOf(table[0]?.length ?? 0, seed);
        expectSame(p(arrange(table, orderOf(table.length, seed))), whole, 1e-9);
        expectSame(p(table.map((row) => arrange(row, columns))), whole, 1e-9);
        expectSame(p(transpose(table)), whole, 1e-9);
        if (table.length !== 2) return;
        const two = exactTable({ table, maxWork: 1e6 });
        expectSame('p' in two ? two.p : NaN, whole, 1e-9);
      }),
      { ...RUNS, numRuns: 60 },
    );
  });

  it('linearByLinear: a reversed order changes the sign alone, a linear scale nothing', () => {
    fc.assert(
      fc.property(tableOf, (table) => {
        const result = linearByLinear({ table });
        expectLogP(result.logP);
        const reversed = linearByLinear({ table: table.map((row) => [...row].reverse()) });
        expectSameTest(reversed, result);
        expectSame(reversed.z, -result.z, 1e-8);
        expectSameTest(linearByLinear({ table: transpose(table) }), result);
        const columnScores = (table[0] ?? []).map((_, k) => 7 + 3 * k);
        expectSameTest(linearByLinear({ table, columnScores }), result);
        expectAtMost(Math.abs(result.correlation), 1);
      }),
      RUNS,
    );
  });
});

describe('splits', () => {
  const splitsOf = fc.integer({ min: 2, max: 4 }).chain((k) =>
    fc.array(fc.array(countsOf(k, 80), { minLength: 2, maxLength: 2 }), {
      minLength: 1,
      maxLength: 5,
    }),
  );

  it('g2Partition: the parts add up, and the order of the splits does not matter', () => {
    fc.assert(
      fc.property(splitsOf, pick, (splits, seed) => {
        const { joint, traffic, within, overall } = g2Partition(splits);
        expectSame(traffic.statistic + within.statistic, joint.statistic, 1e-9);
        // Adding up the splits merges categories of the joint table.
        expectAtMost(overall.statistic, joint.statistic);
        const mixed = g2Partition(arrange(splits, orderOf(splits.length, seed)));
        expectSameTest(mixed.joint, joint);
        expectSameTest(mixed.within, within);
      }),
      RUNS,
    );
  });

  it('cochranMantelHaenszel: the order of splits, rows and categories does not matter', () => {
    fc.assert(
      fc.property(splitsOf, pick, (splits, seed) => {
        const result = cochranMantelHaenszel(splits);
        expectLogP(result.logP);
        const columns = orderOf(splits[0]?.[0]?.length ?? 0, seed);
        const mixed = arrange(splits, orderOf(splits.length, seed)).map((table) =>
          [...table].reverse().map((row) => arrange(row, columns)),
        );
        expectSameTest(cochranMantelHaenszel(mixed), result);
      }),
      RUNS,
    );
  });

  it('kitagawa: the parts add up to the change, and turn over with the sides', () => {
    const filled = splitsOf.filter((splits) =>
      [0, 1].every((side) => splits.some((table) => table[side]?.some((x) => x > 0))),
    );
    fc.assert(
      fc.property(filled, (splits) => {
        const before = splits.map((table) => table[0] ?? []);
        const after = splits.map((table) => table[1] ?? []);
        const forth = kitagawa({ before, after });
        const back = kitagawa({ before: after, after: before });
        forth.delta.forEach((delta, k) => {
          expectSame((forth.between[k] ?? NaN) + (forth.within[k] ?? NaN), delta);
          expectSame(back.between[k] ?? NaN, -(forth.between[k] ?? NaN));
          expectSame(back.within[k] ?? NaN, -(forth.within[k] ?? NaN));
        });
      }),
      RUNS,
    );
  });
});

describe('counts against fixed shares', () => {
  it('goodnessOfFit and exactMultinomial: order, doubling, halving, merging', () => {
    fc.assert(
      fc.property(pairOf, pick, ([counts, weights], seed) => {
        const shares = sharesOf(weights);
        const result = goodnessOfFit(counts, shares);
        const order = orderOf(counts.length, seed);
        const mixed = goodnessOfFit(arrange(counts, order), arrange(shares, order));
        const twice = goodnessOfFit(
          counts.map((x) => 2 * x),
          shares,
        );
        const halved = goodnessOfFit(halve(counts, seed), halve(shares, seed));
        const merged = goodnessOfFit(merge(counts, seed), merge(shares, seed));
        for (const name of ['pearson', 'g2'] as const) {
          expectLogP(result[name].logP);
          expectSameTest(mixed[name], result[name]);
          expectSame(twice[name].statistic, 2 * result[name].statistic, 1e-8);
          expectSame(halved[name].statistic, result[name].statistic, 1e-8);
          expectAtMost(merged[name].statistic, result[name].statistic);
        }
      }),
      RUNS,
    );
  });

  it('exactMultinomial: the order of the categories does not matter, p is at most 1', () => {
    const small = fc
      .integer({ min: 2, max: 4 })
      .chain((k) => fc.tuple(countsOf(k, 5), countsOf(k, 9)))
      .filter(([, weights]) => weights.some((x) => x > 0));
    fc.assert(
      fc.property(small, pick, ([counts, weights], seed) => {
        const shares = sharesOf(weights);
        const order = orderOf(counts.length, seed);
        for (const kind of ['probability', 'pearson', 'likelihood-ratio'] as const) {
          const input = { maxWork: 1e6, order: kind };
          const one = exactMultinomial({ ...input, counts, shares });
          const other = exactMultinomial({
            ...input,
            counts: arrange(counts, order),
            shares: arrange(shares, order),
          });
          const p = 'p' in one ? one.p : NaN;
          expectSame('p' in other ? other.p : NaN, p, 1e-9);
          expect(p).toBeGreaterThanOrEqual(0);
          expect(p).toBeLessThanOrEqual(1);
        }
      }),
      { ...RUNS, numRuns: 60 },
    );
  });

  it('simultaneousIntervals: hold the share, move with the category, narrow with events', () => {
    fc.assert(
      fc.property(pairOf, pick, ([counts], seed) => {
        const found = simultaneousIntervals(counts, { level: 0.95 });
        const order = orderOf(counts.length, seed);
        const mixed = simultaneousIntervals(arrange(counts, order), { level: 0.95 });
        const more = simultaneousIntervals(
          counts.map((x) => 9 * x),
          { level: 0.95 },
        );
        arrange(found, order).forEach((interval, k) => {
          expectSame(mixed[k]?.lower ?? NaN, interval.lower);
          expectSame(mixed[k]?.upper ?? NaN, interval.upper);
        });
        found.forEach(({ share, lower, upper }, k) => {
          expectAtMost(lower, share);
          expectAtMost(share, upper);
          expectAtMost((more[k]?.upper ?? NaN) - (more[k]?.lower ?? NaN), upper - lower);
        });
      }),
      RUNS,
    );
  });
});
