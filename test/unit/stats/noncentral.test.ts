import { describe, expect, it } from 'vitest';

import { chiSquaredLogSf } from '../../../src/stats/chiSquaredLogSf.js';
import { fLogSf } from '../../../src/stats/fLogSf.js';
import { noncentralChiSquaredLogCdf } from '../../../src/stats/noncentralChiSquaredLogCdf.js';
import { noncentralChiSquaredLogSf } from '../../../src/stats/noncentralChiSquaredLogSf.js';
import { noncentralFLogCdf } from '../../../src/stats/noncentralFLogCdf.js';
import { noncentralFLogSf } from '../../../src/stats/noncentralFLogSf.js';
import { normalLogSf } from '../../../src/stats/normalLogSf.js';
import { requiredNoncentrality } from '../../../src/stats/requiredNoncentrality.js';

describe('noncentral tails', () => {
  it('one degree of freedom is the square of a shifted normal', () => {
    // Closed form: P((Z + m)^2 > x) = P(Z > r - m) + P(Z > r + m), r = sqrt(x), lambda = m^2.
    for (const [m, r] of [
      [0.5, 1],
      [3, 2],
      [3, 9],
      [1, 40],
    ] as const) {
      const exact = Math.log(Math.exp(normalLogSf(r - m)) + Math.exp(normalLogSf(r + m)));
      const ours = noncentralChiSquaredLogSf(r * r, 1, m * m);
      if (r < 38) expect(Math.abs(ours - exact)).toBeLessThan(1e-13 * Math.max(1, -exact));
      // Beyond a double's range the second part is nothing and the first is a logarithm.
      else expect(ours / normalLogSf(r - m)).toBeCloseTo(1, 13);
    }
  });

  it('a single Poisson part with an exponential tail sums in closed form', () => {
    // df = 2: as x falls to 0, P(X <= x) tends to (x/2) exp(-lambda/2).
    const exact = Math.log(1e-12 / 2) - 7;
    expect(noncentralChiSquaredLogCdf(1e-12, 2, 14)).toBeCloseTo(exact, 10);
  });

  it('powers agree with scipy 1.17.1 (ncx2.sf, ncf.sf)', () => {
    expect(Math.exp(noncentralChiSquaredLogSf(7.814727903251179, 3, 8))).toBeCloseTo(
      0.6541111034017888,
      10,
    );
    expect(Math.exp(noncentralFLogSf(2.969914, 11, 253, 32.514188))).toBeCloseTo(
      0.8000001232873987,
      10,
    );
  });

  it('without noncentrality it is the central law', () => {
    expect(noncentralChiSquaredLogSf(20, 4, 0)).toBe(chiSquaredLogSf(20, 4));
    expect(noncentralFLogSf(3, 4, 30, 0)).toBe(fLogSf(3, 4, 30));
    expect(noncentralFLogCdf(3, 4, 30, 0)).toBe(fLogSf(1 / 3, 30, 4));
    expect(noncentralChiSquaredLogCdf(4, 2, 0)).toBeCloseTo(Math.log(-Math.expm1(-2)), 14);
    expect(noncentralFLogSf(3, 4, 30, 1e-300)).toBeCloseTo(fLogSf(3, 4, 30), 13);
  });

  it('an infinite df2 is noncentral chi-squared over df1', () => {
    expect(noncentralFLogSf(3, 4, Infinity, 5)).toBe(noncentralChiSquaredLogSf(12, 4, 5));
    expect(noncentralFLogCdf(3, 4, Infinity, 5)).toBe(noncentralChiSquaredLogCdf(12, 4, 5));
    expect(noncentralFLogSf(3, 4, 1e9, 5)).toBeCloseTo(noncentralFLogSf(3, 4, Infinity, 5), 6);
  });

  it('tails end at 0 and -Infinity', () => {
    expect([noncentralChiSquaredLogSf(0, 3, 1), noncentralFLogSf(-1, 2, 3, 1)]).toEqual([0, 0]);
    expect(noncentralChiSquaredLogSf(Infinity, 3, 1)).toBe(-Infinity);
    expect(noncentralFLogSf(Infinity, 2, 3, 1)).toBe(-Infinity);
    expect(noncentralChiSquaredLogCdf(0, 3, 1)).toBe(-Infinity);
    expect(noncentralFLogCdf(0, 2, 3, 1)).toBe(-Infinity);
    expect(noncentralChiSquaredLogCdf(Infinity, 3, 1)).toBe(0);
    expect(noncentralFLogCdf(Infinity, 2, 3, 1)).toBe(0);
  });

  it('far beyond a double the logarithm follows the normal one', () => {
    // (sqrt(x) - sqrt(lambda))^2/2 and the next terms of the Bessel form at df 3, by hand.
    const [x, lambda] = [1e8, 10];
    const gap = Math.sqrt(x) - Math.sqrt(lambda);
    const rest = 0.5 * Math.log(x / lambda) - 0.5 * Math.log(2 * Math.PI) - Math.log(gap);
    const ours = noncentralChiSquaredLogSf(x, 3, lambda);
    expect(Math.abs(ours - (rest - (gap * gap) / 2))).toBeLessThan(1e-3);
  });

  it('arguments without a meaning are refused by name and value', () => {
    expect(() => noncentralChiSquaredLogSf(1, 0, 1)).toThrow(
      new RangeError('df: must be a positive finite number, got 0'),
    );
    expect(() => noncentralChiSquaredLogCdf(NaN, 1, 1)).toThrow(
      new RangeError('x: must be a number, got NaN'),
    );
    expect(() => noncentralChiSquaredLogSf(1, 1, -1)).toThrow(
      new RangeError('lambda: must be a finite number >= 0, got -1'),
    );
    expect(() => noncentralFLogSf(1, Infinity, 1, 1)).toThrow(
      new RangeError('df1: must be a positive finite number, got Infinity'),
    );
    expect(() => noncentralFLogSf(1, 1, 0, 1)).toThrow(
      new RangeError('df2: must be a positive number or Infinity, got 0'),
    );
    expect(() => noncentralFLogCdf(NaN, 1, 1, 1)).toThrow(
      new RangeError('f: must be a number, got NaN'),
    );
    expect(() => noncentralFLogCdf(1, 1, 1, Infinity)).toThrow(
      new RangeError('lambda: must be a finite number >= 0, got Infinity'),
    );
  });

  it('a tail of too many terms is refused instead of being cut', () => {
    for (const x of [1e18, 1e300]) {
      expect(() => noncentralChiSquaredLogSf(x, 3, 10)).toThrow(
        new RangeError('lambda: at 10, this far in the tail, more than 10000000 terms count'),
      );
    }
  });
});

describe('requiredNoncentrality', () => {
  const test = { df1: 11, df2: 253, alpha: 1e-3, power: 0.8 };

  it('gives the values of the specification, section 8', () => {
    // R uniroot on pf: 32.514188; B = 8: 37.274325.
    expect(requiredNoncentrality(test)).toBeCloseTo(32.514188, 6);
    expect(requiredNoncentrality({ ...test, df2: 77 })).toBeCloseTo(37.274325, 6);
  });

  it('the power at the answer is the one asked for, from close to alpha to close to 1', () => {
    for (const power of [0.0011, 0.5, 0.999, 1 - 1e-12]) {
      const lambda = requiredNoncentrality({ ...test, power });
      // F_.001(11, 253) from scipy 1.17.1 (f.isf).
      const logMiss = noncentralFLogCdf(2.9699144592401665, 11, 253, lambda);
      expect(Math.abs(logMiss - Math.log1p(-power))).toBeLessThan(1e-11);
    }
  });

  it('a power not above alpha and levels out of range are refused', () => {
    expect(() => requiredNoncentrality({ ...test, power: 1e-3 })).toThrow(
      new RangeError('power: must exceed alpha, which is 0.001, got 0.001'),
    );
    expect(() => requiredNoncentrality({ ...test, power: 1 })).toThrow(
      new RangeError('power: must lie strictly between 0 and 1, got 1'),
    );
    expect(() => requiredNoncentrality({ ...test, alpha: 0 })).toThrow(
      new RangeError('alpha: must lie strictly between 0 and 1, got 0'),
    );
    expect(() => requiredNoncentrality({ ...test, df1: 0 })).toThrow(
      new RangeError('df1: must be a positive finite number, got 0'),
    );
  });
});
