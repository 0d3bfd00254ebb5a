import jstat from 'jstat';
import { describe, expect, it } from 'vitest';

import { chiSquaredLogSf } from '../../../src/stats/chiSquaredLogSf.js';
import { chiSquaredUpperQuantile } from '../../../src/stats/chiSquaredUpperQuantile.js';
import { fLogSf } from '../../../src/stats/fLogSf.js';
import { fUpperQuantile } from '../../../src/stats/fUpperQuantile.js';
import { normalUpperQuantile } from '../../../src/stats/normalUpperQuantile.js';
import { tLogSf } from '../../../src/stats/tLogSf.js';
import { tUpperQuantile } from '../../../src/stats/tUpperQuantile.js';

const ALPHAS = [0.999, 0.5, 0.05, 1e-3, 1e-5, 1e-9, 1e-100, 1e-300];
const DFS = [0.7, 1, 5, 35, 253.5, 4000, 258_237];

const expectTail = (logSf: number, alpha: number): void => {
  const bound = 1e-13 * Math.max(1, -Math.log(alpha));
  expect(Math.abs(logSf - Math.log(alpha))).toBeLessThanOrEqual(bound);
};

describe('critical values', () => {
  it('F agrees with the values R prints (specification, section 1.8)', () => {
    expect(Math.exp(fLogSf(4.5, 11, 253))).toBeCloseTo(3.2362772e-6, 13);
    expect(fUpperQuantile(1e-5, 11, 253)).toBeCloseTo(4.2032841, 7);
    expect(fUpperQuantile(1e-5, 11, 77)).toBeCloseTo(4.91422, 5);
    // Section 8, from R: 2.969914.
    expect(fUpperQuantile(1e-3, 11, 253)).toBeCloseTo(2.969914, 6);
  });

  it('t and normal agree with scipy 1.17.1 (stats.t.isf, norm.isf) to 14 digits', () => {
    expect(tUpperQuantile(0.001, 253)).toBeCloseTo(3.122756151759847, 13);
    expect(tUpperQuantile(0.05, 35)).toBeCloseTo(1.689572457780266, 14);
    expect(normalUpperQuantile(0.05)).toBeCloseTo(1.6448536269514722, 14);
    expect(normalUpperQuantile(0.025)).toBeCloseTo(1.959963984540054, 14);
  });

  it('jstat agrees where it may be trusted', () => {
    for (const alpha of [0.05, 1e-3, 1e-6]) {
      for (const df of [1, 7, 60]) {
        const ours = chiSquaredUpperQuantile(alpha, df);
        expect(Math.abs(jstat.chisquare.inv(1 - alpha, df) / ours - 1)).toBeLessThan(1e-8);
      }
      const z = normalUpperQuantile(alpha);
      expect(Math.abs(jstat.normal.inv(1 - alpha, 0, 1) / z - 1)).toBeLessThan(1e-8);
      expect(
        Math.abs(jstat.centralF.inv(1 - alpha, 5, 40) / fUpperQuantile(alpha, 5, 40) - 1),
      ).toBeLessThan(1e-5);
    }
  });

  it('the tail at the critical value is alpha again, from .999 to 1e-300', () => {
    for (const alpha of ALPHAS) {
      for (const df of DFS) {
        expectTail(chiSquaredLogSf(chiSquaredUpperQuantile(alpha, df), df), alpha);
        const heavy = df < 5 && alpha < 1e-9; // t and f beyond 1e100
        if (alpha < 0.5 && !heavy) expectTail(tLogSf(tUpperQuantile(alpha, df), df), alpha);
        for (const df1 of [1, 11, 63]) {
          if (!heavy) expectTail(fLogSf(fUpperQuantile(alpha, df1, df), df1, df), alpha);
        }
      }
    }
  });

  it('an infinite df2 is chi-squared over df1, an infinite df the normal', () => {
    expect(fUpperQuantile(0.01, 4, Infinity)).toBe(chiSquaredUpperQuantile(0.01, 4) / 4);
    expect(fLogSf(3, 4, Infinity)).toBe(chiSquaredLogSf(12, 4));
    expect(tUpperQuantile(0.01, Infinity)).toBe(normalUpperQuantile(0.01));
  });

  it('the t and normal are symmetric', () => {
    expect(tUpperQuantile(0.5, 3)).toBe(0);
    expect(tUpperQuantile(0.75, 3)).toBe(-tUpperQuantile(0.25, 3));
  });

  it('tails end at 0 and -Infinity', () => {
    expect([chiSquaredLogSf(0, 3), chiSquaredLogSf(-1, 3), fLogSf(0, 2, 3)]).toEqual([0, 0, 0]);
    expect(chiSquaredLogSf(Infinity, 3)).toBe(-Infinity);
    expect(fLogSf(Infinity, 2, 3)).toBe(-Infinity);
    // Two degrees of freedom: exactly -x/2.
    expect(chiSquaredLogSf(20_000, 2)).toBe(-10_000);
  });

  it('arguments without a meaning are refused by name and value', () => {
    expect(() => chiSquaredLogSf(1, 0)).toThrow('df: must be a positive finite number, got 0');
    expect(() => chiSquaredLogSf(NaN, 1)).toThrow('x: must be a number, got NaN');
    expect(() => fLogSf(1, 2, -1)).toThrow('df2: must be a positive number or Infinity, got -1');
    expect(() => fUpperQuantile(0, 1, 1)).toThrow(
      'alpha: must lie strictly between 0 and 1, got 0',
    );
    expect(() => tUpperQuantile(1e-300, 1)).toThrow(
      'alpha: its critical value is too large for a double; use a larger alpha',
    );
    expect(() => tLogSf(NaN, 4)).toThrow('t: must be a number, got NaN');
  });
});
