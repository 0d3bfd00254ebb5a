import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { chiSquaredLogSf } from '../../../src/stats/chiSquaredLogSf.js';
import { fLogSf } from '../../../src/stats/fLogSf.js';
import { tLogSf } from '../../../src/stats/tLogSf.js';

const RUNS = { seed: 7, numRuns: 500 };
const df = fc.double({ min: 0.5, max: 5000, noNaN: true });
const positive = fc.double({ min: 1e-3, max: 1e4, noNaN: true });

describe('tails at any point', () => {
  it('a larger statistic never has a larger tail', () => {
    fc.assert(
      fc.property(
        positive,
        fc.double({ min: 1.001, max: 3, noNaN: true }),
        df,
        df,
        (x, up, a, b) => {
          expect(chiSquaredLogSf(x * up, a)).toBeLessThanOrEqual(chiSquaredLogSf(x, a) + 1e-12);
          expect(fLogSf(x * up, a, b)).toBeLessThanOrEqual(fLogSf(x, a, b) + 1e-12);
        },
      ),
      RUNS,
    );
  });

  it('F and its reciprocal share the whole', () => {
    // P(F(a,b) > f) + P(F(b,a) > 1/f) = 1.
    fc.assert(
      fc.property(fc.double({ min: 0.05, max: 20, noNaN: true }), df, df, (f, a, b) => {
        const whole = Math.exp(fLogSf(f, a, b)) + Math.exp(fLogSf(1 / f, b, a));
        expect(whole).toBeCloseTo(1, 11);
      }),
      RUNS,
    );
  });

  it('the two sides of t share the whole', () => {
    fc.assert(
      fc.property(fc.double({ min: -8, max: 8, noNaN: true }), df, (t, a) => {
        expect(Math.exp(tLogSf(t, a)) + Math.exp(tLogSf(-t, a))).toBeCloseTo(1, 12);
      }),
      RUNS,
    );
  });

  it('chi-squared with two degrees of freedom is exponential', () => {
    fc.assert(
      fc.property(positive, (x) => {
        expect(Math.abs(chiSquaredLogSf(x, 2) + x / 2)).toBeLessThanOrEqual(1e-14 * Math.max(1, x));
      }),
      RUNS,
    );
  });
});
