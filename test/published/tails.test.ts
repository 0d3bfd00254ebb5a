import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { chiSquaredLogSf } from '../../src/stats/chiSquaredLogSf.js';
import { fLogSf } from '../../src/stats/fLogSf.js';
import { logGamma } from '../../src/stats/logGamma.js';
import { normalLogSf } from '../../src/stats/normalLogSf.js';
import { tLogSf } from '../../src/stats/tLogSf.js';

// tails.json holds 40-digit values made by tails.py in this folder (mpmath 1.3.0).
interface Tails {
  readonly logGamma: readonly { readonly x: number; readonly value: string }[];
  readonly chiSquared: readonly { readonly x: number; df: number; logSf: string }[];
  readonly f: readonly { readonly f: number; df1: number; df2: number; logSf: string }[];
  readonly t: readonly { readonly t: number; df: number; logSf: string }[];
  readonly normal: readonly { readonly z: number; logSf: string }[];
}

const tails = JSON.parse(
  readFileSync(new URL('./tails.json', import.meta.url), 'utf8'),
) as unknown as Tails;

/** Largest error over the rows, relative to max(1, |truth|); NaN counts as infinite. */
function worstError<Row>(
  rows: readonly Row[],
  truth: (row: Row) => string,
  ours: (row: Row) => number,
): number {
  return rows.reduce((worst, row) => {
    const exact = Number(truth(row));
    const error = Math.abs(ours(row) - exact) / Math.max(1, Math.abs(exact));
    return Math.max(worst, Number.isNaN(error) ? Infinity : error);
  }, 0);
}

describe('tails against 40-digit values', () => {
  it('log-gamma stays within the bound its docstring states', () => {
    expect(tails.logGamma.length).toBe(14);
    const worst = worstError(
      tails.logGamma,
      (r) => r.value,
      (r) => logGamma(r.x),
    );
    expect(worst).toBeLessThan(1e-14);
  });

  it('chi-squared stays within the bound its docstring states', () => {
    expect(tails.chiSquared.length).toBe(337);
    const ours = (r: { x: number; df: number }): number => chiSquaredLogSf(r.x, r.df);
    expect(worstError(tails.chiSquared, (r) => r.logSf, ours)).toBeLessThan(2e-14);
  });

  it('F stays within the bound its docstring states', () => {
    expect(tails.f.length).toBe(550);
    const ours = (r: { f: number; df1: number; df2: number }): number => fLogSf(r.f, r.df1, r.df2);
    expect(worstError(tails.f, (r) => r.logSf, ours)).toBeLessThan(5e-14);
  });

  it('t stays within the bound its docstring states', () => {
    expect(tails.t.length).toBe(115);
    const ours = (r: { t: number; df: number }): number => tLogSf(r.t, r.df);
    expect(worstError(tails.t, (r) => r.logSf, ours)).toBeLessThan(2e-14);
  });

  it('the normal stays within the bound its docstring states', () => {
    expect(tails.normal.length).toBe(16);
    const worst = worstError(
      tails.normal,
      (r) => r.logSf,
      (r) => normalLogSf(r.z),
    );
    expect(worst).toBeLessThan(1e-14);
  });

  it('a tail taken as one minus the body would have been caught', () => {
    const deep = tails.normal.filter((r) => r.z > 0);
    const naive = (r: { z: number }): number => Math.log(1 - (1 - Math.exp(normalLogSf(r.z))));
    expect(worstError(deep, (r) => r.logSf, naive)).toBe(Infinity);
  });

  it('the file reaches down to tails of e^-10,000', () => {
    for (const rows of [tails.chiSquared, tails.f]) {
      expect(Math.min(...rows.map((r) => Number(r.logSf)))).toBeLessThan(-10_000);
    }
  });
});
