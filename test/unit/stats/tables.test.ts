import { describe, expect, it } from 'vitest';

import { cohensW } from '../../../src/stats/cohensW.js';
import { cramersV } from '../../../src/stats/cramersV.js';
import { exactTable } from '../../../src/stats/exactTable.js';
import { goodnessOfFit } from '../../../src/stats/goodnessOfFit.js';
import { likelihoodRatio } from '../../../src/stats/likelihoodRatio.js';
import { monteCarloTable } from '../../../src/stats/monteCarloTable.js';
import { pearsonChiSquared } from '../../../src/stats/pearsonChiSquared.js';

// Specification, section 2.2, from R 4.2.2 (chisq.test).
const TABLE = [
  [48, 22, 11, 9, 6, 4],
  [520, 180, 120, 90, 60, 30],
];
// Hair by eye colour (Snee 1974, The American Statistician 28:9-12). X2 138.29 as printed in
// the vcdExtra vignette; G2 and V recomputed in R 4.2.2 (vcd::assocstats).
const HAIR_EYE = [
  [68, 20, 15, 5],
  [119, 84, 54, 29],
  [26, 17, 14, 14],
  [7, 94, 10, 16],
];

describe('pearsonChiSquared and likelihoodRatio', () => {
  it('a 2 x 6 table gives the values of R', () => {
    const pearson = pearsonChiSquared(TABLE);
    expect(pearson.statistic).toBeCloseTo(1.4442229, 7);
    expect(pearson.df).toBe(5);
    expect(pearson.p).toBeCloseTo(0.91941533, 8);
    expect(likelihoodRatio(TABLE).statistic).toBeCloseTo(1.3867137, 7);
  });

  it('a 4 x 4 table gives the values of R', () => {
    const pearson = pearsonChiSquared(HAIR_EYE);
    expect(pearson.statistic).toBeCloseTo(138.289841626008, 10);
    expect(pearson.df).toBe(9);
    expect(likelihoodRatio(HAIR_EYE).statistic).toBeCloseTo(146.443578464516, 10);
    expect(cramersV(pearson.statistic, HAIR_EYE)).toBeCloseTo(0.279044623342658, 13);
  });

  it('proportional rows fit perfectly: statistic 0, p 1', () => {
    const table = [
      [10, 20, 30],
      [1, 2, 3],
    ];
    for (const result of [pearsonChiSquared(table), likelihoodRatio(table)]) {
      expect(result.statistic).toBeCloseTo(0, 12);
      expect(result.df).toBe(2);
      expect(result.p).toBeCloseTo(1, 12);
    }
  });

  it('a table with disjoint rows has no zero tail: p underflows, logP does not', () => {
    const result = likelihoodRatio([
      [5000, 0],
      [0, 5000],
    ]);
    // Closed form: 2 n log 2 for n = 10,000.
    expect(result.statistic).toBeCloseTo(20_000 * Math.LN2, 8);
    expect(result.p).toBe(0);
    expect(result.logP).toBeLessThan(-6900);
    expect(result.logP).toBeGreaterThan(-7000);
  });

  it('empty rows and columns count for nothing', () => {
    const wide = TABLE.map((row) => [...row.slice(0, 3), 0, ...row.slice(3)]);
    const result = pearsonChiSquared([...wide, [0, 0, 0, 0, 0, 0, 0]]);
    expect(result.df).toBe(5);
    expect(result.statistic).toBeCloseTo(1.4442229, 7);
    expect(result.expected[2]).toEqual([0, 0, 0, 0, 0, 0, 0]);
  });

  it('without two rows and columns to compare, p is 1', () => {
    const nothing = { statistic: 0, df: 0, p: 1, logP: 0 };
    expect(pearsonChiSquared([[1, 2, 3]])).toMatchObject(nothing);
    expect(pearsonChiSquared([[0], [0]])).toMatchObject(nothing);
    expect(likelihoodRatio([[4], [9]])).toMatchObject(nothing);
  });

  it('ragged, negative and missing tables are refused', () => {
    expect(() => pearsonChiSquared([])).toThrow('table: must have a row, got none');
    expect(() => pearsonChiSquared([[1], [1, 2]])).toThrow('table[1]: must have 1 cells, got 2');
    expect(() => likelihoodRatio([[1, NaN]])).toThrow(
      'table[0][1]: must be a finite number >= 0, got NaN',
    );
  });
});

describe('goodnessOfFit', () => {
  it('gives the value of R', () => {
    // Specification, section 2.2: chisq.test(counts, p =).
    const fit = goodnessOfFit(TABLE[0] ?? [], [0.5, 0.2, 0.12, 0.09, 0.06, 0.03]);
    expect(fit.pearson.statistic).toBeCloseTo(0.69666667, 8);
    expect(fit.pearson.p).toBeCloseTo(0.98315112, 8);
    expect(fit.expected).toEqual([50, 20, 12, 9, 6, 3]);
  });

  it('an event on a share of 0 is impossible, none there is left out', () => {
    const impossible = goodnessOfFit([9, 1], [1, 0]);
    expect(impossible.pearson).toEqual({ statistic: Infinity, df: 0, p: 0, logP: -Infinity });
    expect(impossible.g2.logP).toBe(-Infinity);
    expect(goodnessOfFit([6, 4, 0], [0.5, 0.5, 0]).pearson.df).toBe(1);
  });

  it('shares that do not sum to one are refused', () => {
    expect(() => goodnessOfFit([1, 2], [0.5, 0.6])).toThrow('shares: must sum to 1, got 1.1');
  });
});

describe('cramersV and cohensW', () => {
  it('V of two rows is the root of X2 over all events', () => {
    const { statistic } = pearsonChiSquared(TABLE);
    expect(cramersV(statistic, TABLE)).toBeCloseTo(Math.sqrt(statistic / 1100), 14);
    expect(cramersV(0, [[1, 2]])).toBe(0);
  });

  it('w of one category up by delta is delta over the root of p (1 - p)', () => {
    // Closed form, specification section 3.
    const [p, delta] = [0.2, 0.05];
    const shrink = (1 - p - delta) / (1 - p);
    const now = [p + delta, 0.5 * shrink, 0.3 * shrink];
    expect(cohensW(now, [p, 0.5, 0.3])).toBeCloseTo(delta / Math.sqrt(p * (1 - p)), 12);
    expect(cohensW([0.5, 0.5], [1, 0])).toBe(Infinity);
    expect(cohensW([1, 0], [1, 0])).toBe(0);
  });
});

describe('exactTable', () => {
  it('a 2 x 4 table gives the p of R', () => {
    // Specification, section 2.2: fisher.test.
    const table = [
      [3, 1, 0, 5],
      [10, 2, 4, 1],
    ];
    const result = exactTable({ table, maxWork: 10_000 });
    expect('p' in result && result.p).toBeCloseTo(0.029249012, 9);
  });

  it('an extreme table has a tiny p with the right logarithm', () => {
    // Only this table and its mirror image are as improbable: p = 2 / choose(200, 100).
    const table = [
      [100, 0],
      [0, 100],
    ];
    const result = exactTable({ table, maxWork: 100_000 });
    // log choose(200, 100) = log(9.0548514656103e58), known value (from memory).
    expect('p' in result && result.logP).toBeCloseTo(Math.log(2) - Math.log(9.0548514656103e58), 9);
  });

  it('equals the sum over all tables, listed one by one', () => {
    const table = [
      [2, 5, 1],
      [6, 1, 4],
    ];
    expect(exactTable({ table, maxWork: 10_000 })).toMatchObject({
      p: expect.closeTo(listAll(table), 12) as number,
    });
  });

  it('a 2 x 5 table gives the p that whole-number enumeration gives', () => {
    const table = [
      [15, 12, 10, 5, 4],
      [12, 14, 7, 8, 2],
    ];
    // All tables listed with Python's math.comb and fractions.Fraction: 0.7157449240626784.
    const result = exactTable({ table, maxWork: 1_000_000 });
    expect('p' in result && result.p).toBeCloseTo(0.7157449240626784, 12);
  });

  it('a table too large for the work allowed says so and how much it took', () => {
    const table = [
      [300, 200, 100],
      [250, 260, 90],
    ];
    const result = exactTable({ table, maxWork: 1000 });
    expect('tooLarge' in result && result.work).toBeGreaterThan(1000);
  });

  it('without events p is 1, and fractions are refused', () => {
    const empty = exactTable({ table: [[0], [0]], maxWork: 10 });
    expect(empty).toEqual({ p: 1, logP: 0 });
    expect(() => exactTable({ table: [[0.5], [1]], maxWork: 10 })).toThrow(
      'table[0][0]: must be an integer from 0 to 9007199254740991, got 0.5',
    );
    expect(() => exactTable({ table: [[1]], maxWork: 10 })).toThrow(
      'table: must have 2 cells, got 1',
    );
  });
});

describe('monteCarloTable', () => {
  it('with none of 2,000 samples as extreme, p is 1/2001', () => {
    // As vcdExtra's vignette prints for this table: 0.0004998.
    const result = monteCarloTable({ table: HAIR_EYE, samples: 2000, seed: 3 });
    expect(result.p).toBe(1 / 2001);
    expect(result.logP).toBe(Math.log(1 / 2001));
  });

  it('the same seed gives the same p, another seed another', () => {
    const run = (seed: number): number => {
      return monteCarloTable({ table: TABLE, samples: 5000, seed }).p;
    };
    expect(run(1)).toBe(run(1));
    expect(run(1)).not.toBe(run(2));
    // The chi-squared p is .919; least expected count 3.1.
    expect(Math.abs(run(1) - 0.919)).toBeLessThan(0.02);
  });

  it('a table that cannot vary has p 1', () => {
    expect(monteCarloTable({ table: [[3], [4]], samples: 99, seed: 1 }).p).toBe(1);
  });

  it('a seed or number of samples out of range is refused', () => {
    expect(() => monteCarloTable({ table: TABLE, samples: 0, seed: 1 })).toThrow(
      'samples: must be an integer from 1 to 10000000, got 0',
    );
    expect(() => monteCarloTable({ table: TABLE, samples: 9, seed: -1 })).toThrow(
      'seed: must be an integer from 0 to 4294967295, got -1',
    );
  });
});

/** Freeman-Halton p of a small 2 x 3 table by listing every table with its margins. */
function listAll(table: readonly (readonly number[])[]): number {
  const [first = [], second = []] = table;
  const [c1 = 0, c2 = 0, c3 = 0] = first.map((x, k) => x + (second[k] ?? 0));
  const n = first.reduce((a, b) => a + b, 0);
  const choose = (m: number, k: number): number => (k === 0 ? 1 : (choose(m - 1, k - 1) * m) / k);
  const ways = (a: number, b: number, c: number): number =>
    choose(c1, a) * choose(c2, b) * choose(c3, c);
  const [x1 = 0, x2 = 0, x3 = 0] = first;
  let [extreme, all] = [0, 0];
  for (let a = 0; a <= Math.min(n, c1); a += 1) {
    for (let b = 0; b <= Math.min(n - a, c2); b += 1) {
      if (n - a - b > c3) continue;
      all += ways(a, b, n - a - b);
      if (ways(a, b, n - a - b) <= ways(x1, x2, x3)) extreme += ways(a, b, n - a - b);
    }
  }
  return extreme / all;
}
