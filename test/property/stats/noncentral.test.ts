import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { noncentralChiSquaredLogCdf } from '../../../src/stats/noncentralChiSquaredLogCdf.js';
import { noncentralChiSquaredLogSf } from '../../../src/stats/noncentralChiSquaredLogSf.js';
import { noncentralFLogCdf } from '../../../src/stats/noncentralFLogCdf.js';
import { noncentralFLogSf } from '../../../src/stats/noncentralFLogSf.js';

const RUNS = { seed: 13, numRuns: 200 };
const df = fc.double({ min: 0.5, max: 2000, noNaN: true });
const lambda = fc.double({ min: 0, max: 500, noNaN: true });
const scale = fc.double({ min: 0.05, max: 8, noNaN: true });

describe('noncentral tails at any point', () => {
  it('both tails share the whole', () => {
    fc.assert(
      fc.property(scale, df, df, lambda, (at, a, b, l) => {
        const x = at * (a + l);
        const chi = [noncentralChiSquaredLogSf(x, a, l), noncentralChiSquaredLogCdf(x, a, l)];
        const f = [noncentralFLogSf(x / a, a, b, l), noncentralFLogCdf(x / a, a, b, l)];
        for (const [sf = NaN, cdf = NaN] of [chi, f]) {
          expect(Math.exp(sf) + Math.exp(cdf)).toBeCloseTo(1, 12);
        }
      }),
      RUNS,
    );
  });

  it('more noncentrality never lowers a power, a larger critical value never raises it', () => {
    fc.assert(
      fc.property(scale, df, df, lambda, (at, a, b, l) => {
        const f = (at * (a + l)) / a;
        const power = noncentralFLogSf(f, a, b, l);
        const slack = 1e-12 * Math.max(1, -power);
        expect(noncentralFLogSf(f, a, b, l * 1.01)).toBeGreaterThanOrEqual(power - slack);
        expect(noncentralFLogSf(f * 1.01, a, b, l)).toBeLessThanOrEqual(power + slack);
      }),
      RUNS,
    );
  });
});
