import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { betaBinomialLogCdf } from '../../../src/stats/betaBinomialLogCdf.js';
import { betaBinomialLogSf } from '../../../src/stats/betaBinomialLogSf.js';
import { binomialLogCdf } from '../../../src/stats/binomialLogCdf.js';
import { binomialLogSf } from '../../../src/stats/binomialLogSf.js';
import { hypergeometricLogCdf } from '../../../src/stats/hypergeometricLogCdf.js';
import { hypergeometricLogSf } from '../../../src/stats/hypergeometricLogSf.js';

const RUNS = { seed: 11, numRuns: 300 };
const positive = fc.double({ min: 1e-3, max: 1e4, noNaN: true });

const expectWhole = (logSf: number, logCdfBelow: number): void => {
  expect(Math.exp(logSf) + Math.exp(logCdfBelow)).toBeCloseTo(1, 12);
};

describe('discrete tails at any point', () => {
  it('the beta-binomial tails from k up and below k share the whole', () => {
    const point = fc.record({
      n: fc.integer({ min: 0, max: 400 }),
      alpha: positive,
      beta: positive,
      k: fc.integer({ min: -2, max: 402 }),
    });
    fc.assert(
      fc.property(point, (at) => {
        expectWhole(betaBinomialLogSf(at), betaBinomialLogCdf({ ...at, k: at.k - 1 }));
      }),
      RUNS,
    );
  });

  it('the binomial tails from k up and below k share the whole', () => {
    const point = fc.record({
      n: fc.integer({ min: 0, max: 5000 }),
      p: fc.double({ min: 0, max: 1, noNaN: true }),
      k: fc.integer({ min: -2, max: 5002 }),
    });
    fc.assert(
      fc.property(point, (at) => {
        expectWhole(binomialLogSf(at), binomialLogCdf({ ...at, k: at.k - 1 }));
      }),
      RUNS,
    );
  });

  const urn = fc.integer({ min: 0, max: 500 }).chain((total) =>
    fc.record({
      total: fc.constant(total),
      marked: fc.integer({ min: 0, max: total }),
      drawn: fc.integer({ min: 0, max: total }),
      k: fc.integer({ min: -2, max: total + 2 }),
    }),
  );

  it('the hypergeometric tails from k up and below k share the whole', () => {
    fc.assert(
      fc.property(urn, (at) => {
        expectWhole(hypergeometricLogSf(at), hypergeometricLogCdf({ ...at, k: at.k - 1 }));
      }),
      RUNS,
    );
  });

  it('marked and drawn change places without a trace', () => {
    fc.assert(
      fc.property(urn, (at) => {
        const swapped = { ...at, marked: at.drawn, drawn: at.marked };
        const [one, other] = [hypergeometricLogSf(at), hypergeometricLogSf(swapped)];
        if (one === -Infinity) expect(other).toBe(-Infinity);
        else expect(Math.abs(one - other)).toBeLessThan(1e-12 * Math.max(1, -one));
      }),
      RUNS,
    );
  });
});
