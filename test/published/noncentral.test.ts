import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { betaBinomialLogCdf } from '../../src/stats/betaBinomialLogCdf.js';
import { betaBinomialLogSf } from '../../src/stats/betaBinomialLogSf.js';
import { binomialLogCdf } from '../../src/stats/binomialLogCdf.js';
import { binomialLogSf } from '../../src/stats/binomialLogSf.js';
import { chiSquaredLogCdf } from '../../src/stats/chiSquaredLogCdf.js';
import { hypergeometricLogCdf } from '../../src/stats/hypergeometricLogCdf.js';
import { hypergeometricLogSf } from '../../src/stats/hypergeometricLogSf.js';
import { noncentralChiSquaredLogCdf } from '../../src/stats/noncentralChiSquaredLogCdf.js';
import { noncentralChiSquaredLogSf } from '../../src/stats/noncentralChiSquaredLogSf.js';
import { noncentralFLogCdf } from '../../src/stats/noncentralFLogCdf.js';
import { noncentralFLogSf } from '../../src/stats/noncentralFLogSf.js';
import { requiredNoncentrality } from '../../src/stats/requiredNoncentrality.js';

// noncentral.json holds 40-digit values made by noncentral.py in this folder (mpmath 1.3.0).
interface Both {
  readonly sf: string;
  readonly cdf: string;
}
interface BetaBinomialRow extends Both {
  readonly n: number;
  readonly alpha: number;
  readonly beta: number;
  readonly k: number;
}
interface UrnRow extends Both {
  readonly total: number;
  readonly marked: number;
  readonly drawn: number;
  readonly k: number;
}
interface BinomialRow extends Both {
  readonly n: number;
  readonly p: number;
  readonly k: number;
}
interface LowerRow {
  readonly x: number;
  readonly df: number;
  readonly cdf: string;
}
interface ChiRow extends Both {
  readonly x: number;
  readonly df: number;
  readonly lambda: number;
}
interface FRow extends Both {
  readonly f: number;
  readonly df1: number;
  readonly df2: number;
  readonly lambda: number;
}
interface RequiredRow {
  readonly df1: number;
  readonly df2: number;
  readonly alpha: number;
  readonly power: number;
  readonly lambda: string;
}
interface Document {
  readonly betaBinomial: readonly BetaBinomialRow[];
  readonly hypergeometric: readonly UrnRow[];
  readonly binomial: readonly BinomialRow[];
  readonly chiSquaredLower: readonly LowerRow[];
  readonly noncentralChiSquared: readonly ChiRow[];
  readonly noncentralF: readonly FRow[];
  readonly required: readonly RequiredRow[];
}

const truth = JSON.parse(
  readFileSync(new URL('./noncentral.json', import.meta.url), 'utf8'),
) as unknown as Document;

/** Largest error over both tails of all rows, relative to max(1, |truth|); NaN is infinite. */
function worstError<Row extends Both>(
  rows: readonly Row[],
  ours: { readonly sf: (row: Row) => number; readonly cdf: (row: Row) => number },
): number {
  const error = (value: number, exact: number): number => {
    const off = Math.abs(value - exact) / Math.max(1, Math.abs(exact));
    return Number.isNaN(off) ? Infinity : off;
  };
  return rows.reduce((worst, row) => {
    const [sf, cdf] = [error(ours.sf(row), Number(row.sf)), error(ours.cdf(row), Number(row.cdf))];
    return Math.max(worst, sf, cdf);
  }, 0);
}

const depth = (rows: readonly Both[]): number =>
  Math.min(...rows.flatMap((row) => [Number(row.sf), Number(row.cdf)]));

describe('discrete and noncentral tails against 40-digit values', () => {
  it('the beta-binomial stays within the bound its docstring states', () => {
    const rows = truth.betaBinomial;
    expect(rows.length).toBe(46);
    const error = worstError(rows, { sf: betaBinomialLogSf, cdf: betaBinomialLogCdf });
    expect(error).toBeLessThan(2e-14);
    expect(depth(rows)).toBeLessThan(-27_000);
  });

  it('the hypergeometric stays within the bound its docstring states', () => {
    const rows = truth.hypergeometric;
    expect(rows.length).toBe(30);
    const error = worstError(rows, { sf: hypergeometricLogSf, cdf: hypergeometricLogCdf });
    expect(error).toBeLessThan(1e-14);
    expect(depth(rows)).toBeLessThan(-30_000);
  });

  it('the binomial stays within the bound its docstring states', () => {
    const rows = truth.binomial;
    expect(rows.length).toBe(22);
    const error = worstError(rows, { sf: binomialLogSf, cdf: binomialLogCdf });
    expect(error).toBeLessThan(2e-14);
    expect(depth(rows)).toBeLessThan(-40_000);
  });

  it('the lower tail of chi-squared stays within the bound its docstring states', () => {
    const rows = truth.chiSquaredLower;
    expect(rows.length).toBe(63);
    for (const row of rows) {
      const exact = Number(row.cdf);
      const off = Math.abs(chiSquaredLogCdf(row.x, row.df) - exact);
      expect(off).toBeLessThan(5e-15 * Math.max(1, -exact));
    }
    expect(Math.min(...rows.map((row) => Number(row.cdf)))).toBeLessThan(-170_000);
  });

  it('noncentral chi-squared stays within the bound its docstring states', () => {
    const rows = truth.noncentralChiSquared;
    const error = worstError(rows, {
      sf: (r) => noncentralChiSquaredLogSf(r.x, r.df, r.lambda),
      cdf: (r) => noncentralChiSquaredLogCdf(r.x, r.df, r.lambda),
    });
    expect(error).toBeLessThan(6e-14);
    expect(depth(rows)).toBeLessThan(-10_000);
    expect(rows.length).toBe(329);
  });

  it('noncentral F stays within the bound its docstring states', () => {
    const rows = truth.noncentralF;
    const error = worstError(rows, {
      sf: (r) => noncentralFLogSf(r.f, r.df1, r.df2, r.lambda),
      cdf: (r) => noncentralFLogCdf(r.f, r.df1, r.df2, r.lambda),
    });
    expect(error).toBeLessThan(6e-14);
    expect(depth(rows)).toBeLessThan(-10_000);
    expect(rows.length).toBe(676);
  });

  it('required noncentralities stay within the bound their docstring states', () => {
    expect(truth.required.length).toBe(8);
    for (const row of truth.required) {
      const exact = Number(row.lambda);
      expect(Math.abs(requiredNoncentrality(row) / exact - 1)).toBeLessThan(2e-14);
    }
  });

  it('a tail taken as one minus the body would have been caught', () => {
    const naive = (r: ChiRow): number =>
      Math.log(1 - Math.exp(noncentralChiSquaredLogCdf(r.x, r.df, r.lambda)));
    const deep = truth.noncentralChiSquared.filter((r) => Number(r.sf) < -50);
    const cdf = (r: ChiRow): number => noncentralChiSquaredLogCdf(r.x, r.df, r.lambda);
    expect(worstError(deep, { sf: naive, cdf })).toBe(Infinity);
  });
});
