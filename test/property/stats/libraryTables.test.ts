import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { adjustedResiduals } from '../../../src/stats/adjustedResiduals.js';
import { adjustLogPs } from '../../../src/stats/adjustLogPs.js';
import { cochranMantelHaenszel } from '../../../src/stats/cochranMantelHaenszel.js';
import { exactMultinomial } from '../../../src/stats/exactMultinomial.js';
import { exactTableRxC } from '../../../src/stats/exactTableRxC.js';
import { g2Partition } from '../../../src/stats/g2Partition.js';
import { kitagawa } from '../../../src/stats/kitagawa.js';
import { linearByLinear } from '../../../src/stats/linearByLinear.js';
import { monteCarloTable } from '../../../src/stats/monteCarloTable.js';

const RUNS = { seed: 71_201, numRuns: 120 };

const cells = (most: number, width: number): fc.Arbitrary<number[]> =>
  fc.array(fc.integer({ min: 0, max: most }), { minLength: width, maxLength: width });
const tableOf = (most: number, rows: number, columns: number): fc.Arbitrary<number[][]> =>
  fc.array(cells(most, columns), { minLength: rows, maxLength: rows });
const splitsOf = fc
  .tuple(fc.integer({ min: 1, max: 4 }), fc.integer({ min: 2, max: 5 }))
  .chain(([s, c]) => fc.array(tableOf(60, 2, c), { minLength: s, maxLength: s }));

const flip = (table: readonly (readonly number[])[]): number[][] =>
  (table[0] ?? []).map((_, k) => table.map((row) => row[k] ?? 0));
const turn = (table: readonly (readonly number[])[]): number[][] =>
  [...table].reverse().map((row) => [...row].reverse());
const logOf = (result: object): number => ('logP' in result ? Number(result.logP) : NaN);
const total = (values: readonly number[]): number => values.reduce((a, b) => a + b, 0);

describe('exact tests of any counts', () => {
  it('multinomial: the p of all outcomes that are as far as one another is in (0, 1]', () => {
    const orders = ['probability', 'pearson', 'likelihood-ratio'] as const;
    fc.assert(
      fc.property(cells(12, 4), fc.constantFrom(...orders), (counts, order) => {
        const shares = [0.1, 0.4, 0.2, 0.3];
        const input = { maxWork: 1_000_000, order };
        const logP = logOf(exactMultinomial({ counts, shares, ...input }));
        expect(logP).toBeLessThanOrEqual(0);
        expect(logP).toBeGreaterThan(-Infinity);
        const mirrored = { counts: [...counts].reverse(), shares: [...shares].reverse() };
        expect(logOf(exactMultinomial({ ...mirrored, ...input }))).toBe(logP);
      }),
      RUNS,
    );
  });

  it('r x c: transposing and reversing change nothing', () => {
    fc.assert(
      fc.property(tableOf(4, 3, 4), (table) => {
        const maxWork = 1_000_000;
        const logP = logOf(exactTableRxC({ table, maxWork }));
        expect(logP).toBeLessThanOrEqual(0);
        for (const other of [flip(table), turn(table)]) {
          expect(logOf(exactTableRxC({ table: other, maxWork }))).toBeCloseTo(logP, 10);
        }
      }),
      { ...RUNS, numRuns: 40 },
    );
  });

  it('sequential: p is never 0 and no sample is wasted', () => {
    fc.assert(
      fc.property(tableOf(6, 3, 3), fc.integer({ min: 1, max: 30 }), (table, exceedances) => {
        const result = monteCarloTable({ table, samples: 60, exceedances, seed: 4 });
        expect(result.p).toBeGreaterThanOrEqual(1 / 61);
        expect(result.p).toBeLessThanOrEqual(1);
        expect(result.exceeding).toBeLessThanOrEqual(exceedances);
        expect(result.stoppedEarly || result.samples === 60).toBe(true);
      }),
      RUNS,
    );
  });
});

describe('association of any table', () => {
  it('linear by linear: turning a table keeps z, transposing too, reversing rows flips it', () => {
    fc.assert(
      fc.property(tableOf(50, 3, 4), (table) => {
        const { z } = linearByLinear({ table });
        expect(linearByLinear({ table: turn(table) }).z).toBeCloseTo(z, 9);
        expect(linearByLinear({ table: flip(table) }).z).toBeCloseTo(z, 9);
        expect(linearByLinear({ table: [...table].reverse() }).z).toBeCloseTo(-z, 9);
      }),
      RUNS,
    );
  });

  it('residuals: rows weighted by the root of what is expected sum to 0', () => {
    fc.assert(
      fc.property(tableOf(50, 3, 4), (table) => {
        const residuals = adjustedResiduals(table);
        const columns = flip(table).map(total);
        const n = total(columns);
        residuals.forEach((row) => {
          const weighted = row.map((value, k) => {
            const share = (columns[k] ?? 0) / Math.max(n, 1);
            return value * Math.sqrt(share * (1 - share));
          });
          expect(total(weighted)).toBeCloseTo(0, 9);
        });
      }),
      RUNS,
    );
  });

  it('CMH: the order of splits, rows and categories changes nothing', () => {
    fc.assert(
      fc.property(splitsOf, (splits) => {
        const { statistic, df } = cochranMantelHaenszel(splits);
        const other = cochranMantelHaenszel([...splits].reverse().map(turn));
        expect(other.df).toBe(df);
        expect(other.statistic).toBeCloseTo(statistic, 7);
      }),
      RUNS,
    );
  });

  it('G2: traffic and within add up to joint; the change of shares to between and within', () => {
    fc.assert(
      fc.property(splitsOf, (splits) => {
        const { joint, traffic, within } = g2Partition(splits);
        expect(traffic.statistic + within.statistic).toBeCloseTo(joint.statistic, 8);
        expect(traffic.df + within.df).toBeLessThanOrEqual(joint.df);
        const [before, after] = [0, 1].map((row) => splits.map((table) => table[row] ?? []));
        fc.pre(total((before ?? []).flat()) > 0 && total((after ?? []).flat()) > 0);
        const {
          between,
          within: inside,
          delta,
        } = kitagawa({
          before: before ?? [],
          after: after ?? [],
        });
        for (const part of [between, inside, delta]) expect(total(part)).toBeCloseTo(0, 12);
      }),
      RUNS,
    );
  });
});

describe('adjusted p-values of any family', () => {
  it('keep the order of the p-values, never fall below them, and rank by severity', () => {
    const family = fc.array(fc.double({ min: -60, max: 0, noNaN: true }), { maxLength: 20 });
    fc.assert(
      fc.property(family, (logPs) => {
        const bh = adjustLogPs(logPs, 'benjamini-hochberg');
        const by = adjustLogPs(logPs, 'benjamini-yekutieli');
        const stepDown = adjustLogPs(logPs, 'holm');
        logPs.forEach((logP, i) => {
          const least = bh[i] ?? NaN;
          expect(least).toBeGreaterThanOrEqual(logP);
          expect(by[i]).toBeGreaterThanOrEqual(least - 1e-12);
          expect(stepDown[i]).toBeGreaterThanOrEqual(least - 1e-12);
          logPs.forEach((other, j) => {
            if (other > logP) expect(bh[j]).toBeGreaterThanOrEqual(least);
          });
        });
      }),
      RUNS,
    );
  });
});
