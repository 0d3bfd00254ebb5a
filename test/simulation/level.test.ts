import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { describe, expect, it } from 'vitest';

import { quasiLikelihoodF } from '../../src/stats/quasiLikelihoodF.js';
import { simulateLevels } from '../../src/stats/simulateLevels.js';

const SHARES = [0.3, 0.2, 0.14, 0.1, 0.08, 0.06, 0.05, 0.04, 0.02, 0.01];

describe('two samples from one distribution', () => {
  const rows = simulateLevels({
    seed: 11,
    repetitions: 6000,
    sizes: [30, 100, 300, 1000, 3000],
    shares: SHARES,
  });

  it('tested as a table, the level at 5 % is near 5 %', () => {
    for (const { n, tableLevel } of rows) {
      // Standard error .0028; with 30 events most cells are too thin for chi-squared, which
      // errs to the safe side.
      expect(tableLevel).toBeLessThan(0.05 + 4 * 0.0028);
      if (n >= 300) expect(tableLevel).toBeGreaterThan(0.05 - 4 * 0.0028);
    }
  });

  it('tested against the first as fixed shares, it is several times that', () => {
    for (const { n, fixedLevel } of rows) {
      expect(fixedLevel).toBeGreaterThan(5 * 0.05);
      // In the limit the statistic is twice chi-squared: P(chi2_9 > 16.919/2) = .488
      // (scipy 1.17.1 chi2.sf); standard error .0065.
      if (n >= 1000) expect(Math.abs(fixedLevel - 0.488)).toBeLessThan(0.03);
    }
  });

  it('the same seed gives the same levels', () => {
    const small = { seed: 4, repetitions: 50, sizes: [40], shares: SHARES };
    expect(simulateLevels(small)).toEqual(simulateLevels(small));
    expect(simulateLevels({ ...small, seed: 5 })).not.toEqual(simulateLevels(small));
  });

  it('input without a meaning is refused', () => {
    const fine = { seed: 4, repetitions: 50, sizes: [40], shares: SHARES };
    expect(() => simulateLevels({ ...fine, sizes: [40, 0] })).toThrow(
      'sizes[1]: must be an integer from 1 to 10000000, got 0',
    );
    expect(() => simulateLevels({ ...fine, repetitions: 0.5 })).toThrow(
      'repetitions: must be an integer from 1 to 1000000, got 0.5',
    );
  });
});

describe('quasiLikelihoodF under its null', () => {
  it('with a reference of equal size the p-values are near uniform', () => {
    const random = xoroshiro128plus(99);
    const draw = (): number[] => {
      const counts = [0, 0, 0, 0];
      for (let event = 0; event < 400; event += 1) {
        const u = uniformFloat64(random);
        const k = u < 0.4 ? 0 : u < 0.7 ? 1 : u < 0.9 ? 2 : 3;
        counts[k] = (counts[k] ?? 0) + 1;
      }
      return counts;
    };
    const repetitions = 4000;
    const ps = Array.from({ length: repetitions }, () => {
      const shares = draw().map((x) => x / 400);
      const input = { now: draw(), shares, weight: 400, rho: 0, df2: Infinity };
      return Math.exp(quasiLikelihoodF(input).logP);
    }).sort((a, b) => a - b);
    const gap = ps.reduce(
      (worst, p, i) => Math.max(worst, Math.abs(p - (i + 0.5) / repetitions)),
      0,
    );
    // Kolmogorov's bound at 1e-4: sqrt(log(2/1e-4)/2) = 2.225 over sqrt(n) (Massart 1990,
    // from memory).
    expect(gap).toBeLessThan(2.225 / Math.sqrt(repetitions));
  });
});
