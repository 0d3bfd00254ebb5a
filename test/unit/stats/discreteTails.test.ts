import { describe, expect, it } from 'vitest';

import { betaBinomialLogCdf } from '../../../src/stats/betaBinomialLogCdf.js';
import { betaBinomialLogSf } from '../../../src/stats/betaBinomialLogSf.js';
import { binomialLogCdf } from '../../../src/stats/binomialLogCdf.js';
import { binomialLogSf } from '../../../src/stats/binomialLogSf.js';
import { chiSquaredLogCdf } from '../../../src/stats/chiSquaredLogCdf.js';
import { hypergeometricLogCdf } from '../../../src/stats/hypergeometricLogCdf.js';
import { hypergeometricLogSf } from '../../../src/stats/hypergeometricLogSf.js';

describe('beta-binomial tails', () => {
  it('a uniform share makes every count equally likely', () => {
    // Closed form: alpha = beta = 1 gives 1/(n+1) each.
    for (const k of [1, 3, 9]) {
      const point = { n: 9, alpha: 1, beta: 1, k };
      expect(betaBinomialLogSf(point)).toBeCloseTo(Math.log((10 - k) / 10), 14);
      expect(betaBinomialLogCdf(point)).toBeCloseTo(k === 9 ? 0 : Math.log((k + 1) / 10), 14);
    }
  });

  it('one event is of the category with the mean share', () => {
    const point = { n: 1, alpha: 0.3, beta: 2.7, k: 1 };
    expect(betaBinomialLogSf(point)).toBeCloseTo(Math.log(0.1), 14);
  });

  it('the rare lens gives the tail of the specification, section 1.8', () => {
    // N = 100, rho = .002, 24 windows of 100, x = 2; made with scipy.
    const [mu, a] = [0.0010823764, 399.3331];
    const point = { n: 100, alpha: a * mu, beta: a * (1 - mu), k: 4 };
    expect(Math.exp(betaBinomialLogSf(point))).toBeCloseTo(3.6620949e-4, 10);
  });

  it('without correlation it tends to the binomial', () => {
    const a = 1e13;
    const point = { n: 500, alpha: 0.1 * a, beta: 0.9 * a, k: 80 };
    const binomial = binomialLogSf({ n: 500, p: 0.1, k: 80 });
    expect(betaBinomialLogSf(point)).toBeCloseTo(binomial, 8);
  });

  it('counts outside 0..n are certain or impossible', () => {
    const at = (k: number): { n: number; alpha: number; beta: number; k: number } => ({
      n: 5,
      alpha: 2,
      beta: 3,
      k,
    });
    expect([betaBinomialLogSf(at(0)), betaBinomialLogSf(at(-3))]).toEqual([0, 0]);
    expect(betaBinomialLogSf(at(6))).toBe(-Infinity);
    expect([betaBinomialLogCdf(at(5)), betaBinomialLogCdf(at(7))]).toEqual([0, 0]);
    expect(betaBinomialLogCdf(at(-1))).toBe(-Infinity);
    const none = { n: 0, alpha: 2, beta: 3, k: 0 };
    expect([betaBinomialLogSf(none), betaBinomialLogCdf(none)]).toEqual([0, 0]);
  });

  it('arguments without a meaning are refused by name and value', () => {
    const point = { n: 5, alpha: 2, beta: 3, k: 1 };
    expect(() => betaBinomialLogSf({ ...point, n: 1.5 })).toThrow(
      new RangeError('n: must be an integer from 0 to 9007199254740991, got 1.5'),
    );
    expect(() => betaBinomialLogSf({ ...point, alpha: 0 })).toThrow(
      new RangeError('alpha: must be a positive finite number, got 0'),
    );
    expect(() => betaBinomialLogCdf({ ...point, beta: Infinity })).toThrow(
      new RangeError('beta: must be a positive finite number, got Infinity'),
    );
    expect(() => betaBinomialLogCdf({ ...point, k: NaN })).toThrow(
      new RangeError('k: must be an integer from -9007199254740991 to 9007199254740991, got NaN'),
    );
  });

  it('a tail of too many terms is refused instead of being cut', () => {
    const point = { n: 1e9, alpha: 0.5, beta: 0.5, k: 5e8 };
    expect(() => betaBinomialLogSf(point)).toThrow(
      new RangeError('k: its tail has more than 10000000 terms that count'),
    );
  });
});

describe('hypergeometric tails', () => {
  it('the tea table gives 17/70 and 1/70', () => {
    // Closed form: 1, 16, 36, 16, 1 of 70.
    const urn = { total: 8, marked: 4, drawn: 4 };
    expect(hypergeometricLogSf({ ...urn, k: 3 })).toBeCloseTo(Math.log(17 / 70), 14);
    expect(hypergeometricLogSf({ ...urn, k: 4 })).toBeCloseTo(Math.log(1 / 70), 14);
    expect(hypergeometricLogCdf({ ...urn, k: 2 })).toBeCloseTo(Math.log(53 / 70), 14);
  });

  it('counts outside the possible ones are certain or impossible', () => {
    // Of 10, 7 marked and 6 drawn: at least 3 and at most 6 marked ones come out.
    const urn = { total: 10, marked: 7, drawn: 6 };
    expect(hypergeometricLogSf({ ...urn, k: 3 })).toBe(0);
    expect(hypergeometricLogSf({ ...urn, k: 7 })).toBe(-Infinity);
    expect(hypergeometricLogCdf({ ...urn, k: 6 })).toBe(0);
    expect(hypergeometricLogCdf({ ...urn, k: 2 })).toBe(-Infinity);
  });

  it('urns that leave no choice are certain', () => {
    for (const urn of [
      { total: 0, marked: 0, drawn: 0, k: 0 },
      { total: 9, marked: 4, drawn: 9, k: 4 },
      { total: 9, marked: 9, drawn: 2, k: 2 },
    ]) {
      expect([hypergeometricLogSf(urn), hypergeometricLogCdf(urn)]).toEqual([0, 0]);
      expect(hypergeometricLogSf({ ...urn, k: urn.k + 1 })).toBe(-Infinity);
    }
  });

  it('arguments without a meaning are refused by name and value', () => {
    const urn = { total: 8, marked: 4, drawn: 4, k: 3 };
    expect(() => hypergeometricLogSf({ ...urn, total: 1e13 })).toThrow(
      new RangeError('total: must be an integer from 0 to 1000000000000, got 10000000000000'),
    );
    expect(() => hypergeometricLogSf({ ...urn, marked: 9 })).toThrow(
      new RangeError('marked: must be an integer from 0 to 8, got 9'),
    );
    expect(() => hypergeometricLogCdf({ ...urn, drawn: -1 })).toThrow(
      new RangeError('drawn: must be an integer from 0 to 8, got -1'),
    );
    expect(() => hypergeometricLogCdf({ ...urn, k: 0.5 })).toThrow(
      new RangeError('k: must be an integer from -9007199254740991 to 9007199254740991, got 0.5'),
    );
  });
});

describe('binomial tails', () => {
  it('three fair tosses give eighths', () => {
    const at = (k: number): { n: number; p: number; k: number } => ({ n: 3, p: 0.5, k });
    expect(binomialLogSf(at(2))).toBeCloseTo(Math.log(4 / 8), 14);
    expect(binomialLogSf(at(3))).toBeCloseTo(Math.log(1 / 8), 14);
    expect(binomialLogCdf(at(0))).toBeCloseTo(Math.log(1 / 8), 14);
    expect(binomialLogCdf(at(2))).toBeCloseTo(Math.log(7 / 8), 14);
  });

  it('all of n events happen with p to the n, however small', () => {
    expect(binomialLogSf({ n: 50, p: 1e-10, k: 50 })).toBeCloseTo(50 * Math.log(1e-10), 10);
  });

  it('shares of 0 and 1 leave nothing to chance', () => {
    expect(binomialLogSf({ n: 4, p: 0, k: 1 })).toBe(-Infinity);
    expect(binomialLogSf({ n: 4, p: 1, k: 4 })).toBe(0);
    expect(binomialLogCdf({ n: 4, p: 0, k: 0 })).toBe(0);
    expect(binomialLogCdf({ n: 4, p: 1, k: 3 })).toBe(-Infinity);
    expect(binomialLogSf({ n: 4, p: 0.5, k: 5 })).toBe(-Infinity);
    expect(binomialLogSf({ n: 4, p: 0.5, k: 0 })).toBe(0);
    expect(binomialLogCdf({ n: 4, p: 0.5, k: 4 })).toBe(0);
    expect(binomialLogCdf({ n: 4, p: 0.5, k: -1 })).toBe(-Infinity);
  });

  it('arguments without a meaning are refused by name and value', () => {
    expect(() => binomialLogSf({ n: -1, p: 0.5, k: 0 })).toThrow(
      new RangeError('n: must be an integer from 0 to 9007199254740991, got -1'),
    );
    expect(() => binomialLogCdf({ n: 1, p: 1.5, k: 0 })).toThrow(
      new RangeError('p: must lie between 0 and 1, got 1.5'),
    );
  });
});

describe('the lower tail of chi-squared', () => {
  it('two degrees of freedom give 1 - exp(-x/2), however close to zero', () => {
    for (const x of [1e-300, 1e-9, 0.5, 2, 30]) {
      const exact = Math.log(-Math.expm1(-x / 2));
      expect(chiSquaredLogCdf(x, 2)).toBeCloseTo(exact, 12);
    }
  });

  it('far below what a double holds it keeps its logarithm', () => {
    // Leading term (h^a / Gamma(a+1)) with a = 500 at h = 1e-5, by hand: the next is 1e-5/501.
    const logGamma501 = 2611.330458460156; // log(500!), mpmath 1.3.0
    const exact = 500 * Math.log(1e-5) - logGamma501 - 1e-5 + 1e-5 / 501;
    expect(chiSquaredLogCdf(2e-5, 1000)).toBeCloseTo(exact, 9);
  });

  it('it ends at -Infinity and 0, and refuses what has no meaning', () => {
    expect([chiSquaredLogCdf(0, 3), chiSquaredLogCdf(-1, 3)]).toEqual([-Infinity, -Infinity]);
    expect(chiSquaredLogCdf(Infinity, 3)).toBeCloseTo(0, 15);
    expect(() => chiSquaredLogCdf(NaN, 3)).toThrow(new RangeError('x: must be a number, got NaN'));
    expect(() => chiSquaredLogCdf(1, 0)).toThrow(
      new RangeError('df: must be a positive finite number, got 0'),
    );
  });
});
