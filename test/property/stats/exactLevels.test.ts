import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { describe, expect, it } from 'vitest';

import { compose } from '../../../src/stats/compose.js';
import { drawTable } from '../../../src/stats/drawTable.js';
import { exactMultinomial } from '../../../src/stats/exactMultinomial.js';
import { logGamma } from '../../../src/stats/logGamma.js';
import { monteCarloTable } from '../../../src/stats/monteCarloTable.js';

const LEVELS = [0.001, 0.01, 0.05, 0.1, 0.3, 0.5];

describe('under the null', () => {
  it.each(['probability', 'pearson', 'likelihood-ratio'] as const)(
    'exact multinomial by %s: P(p <= a) is at most a, and reached by some a',
    (order) => {
      const shares = [0.2, 0.3, 0.5];
      const events = 14;
      const outcomes: { p: number; probability: number }[] = [];
      const logOf = (k: number, x: number): number =>
        x * Math.log(shares[k] ?? NaN) - logGamma(x + 1);
      const caps = shares.map(() => events);
      compose(caps, events, logOf, (cells, log) => {
        const counts = [...cells];
        const result = exactMultinomial({ counts, shares, maxWork: 100_000, order });
        const p = 'p' in result ? result.p : NaN;
        outcomes.push({ p, probability: Math.exp(logGamma(events + 1) + log) });
        return true;
      });
      const mass = (a: number): number =>
        outcomes.reduce((sum, o) => sum + (o.p <= a ? o.probability : 0), 0);
      expect(mass(1)).toBeCloseTo(1, 12);
      for (const a of LEVELS) expect(mass(a)).toBeLessThanOrEqual(a);
      // What an exact p means: the probability of a p as small as this is this p.
      for (const { p } of outcomes) expect(mass(p * (1 + 1e-12))).toBeCloseTo(p, 11);
    },
  );

  it('sequential Monte Carlo: P(p <= a) is at most a, within five standard errors', () => {
    const random = xoroshiro128plus(2_026);
    const margins = { rows: [12, 15, 9], columns: [10, 8, 11, 7] };
    const logFactorial = (n: number): number => logGamma(n + 1);
    const samples = 1000;
    const ps = Array.from({ length: samples }, (_, seed) => {
      const table = drawTable(random, margins, logFactorial);
      return monteCarloTable({ table, samples: 199, exceedances: 10, seed }).p;
    });
    for (const a of LEVELS.slice(1)) {
      const share = ps.filter((p) => p <= a).length / samples;
      const error = Math.sqrt((a * (1 - a)) / samples);
      expect(share).toBeLessThan(a + 5 * error);
      expect(share).toBeGreaterThan(a - 0.1 * a - 5 * error);
    }
  });
});
