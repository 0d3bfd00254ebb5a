import { describe, expect, it } from 'vitest';

import { chiSquaredLogSf } from '../../src/stats/chiSquaredLogSf.js';
import { logBinomialMass } from '../../src/stats/logBinomialMass.js';
import { chance } from './chance.js';
import { drawWindow, skewedMix } from './mix.js';

const DRAWS = 40_000;
/** A seeded check errs for no seed but an unlucky one: p this small is no luck. */
const LOG_UNLUCKY = Math.log(1e-4);

/** Pearson's X2 of draws against a known mass; values expected under 5 times are put together. */
function logPOfFit(draws: readonly number[], mass: (k: number) => number): number {
  const most = draws.reduce((a, b) => Math.max(a, b), 0);
  let [x2, df, restExpected, restSeen] = [0, 0, draws.length, draws.length];
  const seen = new Float64Array(most + 1);
  for (const k of draws) seen[k] += 1;
  for (let k = 0; k <= most; k += 1) {
    const expected = draws.length * mass(k);
    if (expected < 5) continue;
    x2 += (seen[k] - expected) ** 2 / expected;
    df += 1;
    restExpected -= expected;
    restSeen -= seen[k];
  }
  if (restExpected < 5) return chiSquaredLogSf(x2, df - 1);
  return chiSquaredLogSf(x2 + (restSeen - restExpected) ** 2 / restExpected, df);
}

describe('chance', () => {
  it.each([
    { n: 40, p: 0.1 },
    { n: 40, p: 0.6 },
    { n: 500, p: 0.03 },
    { n: 500, p: 0.5 },
    { n: 20_000, p: 0.107 },
    { n: 20_000, p: 0.93 },
  ])('binomial draws of n $n and p $p fit the binomial', ({ n, p }) => {
    const random = chance(7, n);
    const draws = Array.from({ length: DRAWS }, () => random.binomial(n, p));
    const fit = (share: number): number =>
      logPOfFit(draws, (k) => Math.exp(logBinomialMass(k, n - k, share, 1 - share)));
    expect(fit(p)).toBeGreaterThan(LOG_UNLUCKY);
    // The twin: a share off by a tenth of a standard deviation is told apart.
    expect(fit(p + 0.1 * Math.sqrt((p * (1 - p)) / n))).toBeLessThan(LOG_UNLUCKY);
  });

  it.each([0.4, 1, 2.7, 160])('gamma draws of shape %d have its mean and variance', (shape) => {
    const random = chance(8, 1);
    const draws = Array.from({ length: DRAWS }, () => random.gamma(shape));
    const mean = draws.reduce((a, b) => a + b, 0) / DRAWS;
    const variance = draws.reduce((total, x) => total + (x - mean) ** 2, 0) / (DRAWS - 1);
    // Var(mean) = shape/n; Var(variance) = (mu4 - sigma^4)/n with mu4 = 3 shape^2 + 6 shape.
    expect(Math.abs(mean - shape)).toBeLessThan(4 * Math.sqrt(shape / DRAWS));
    const spread = Math.sqrt((2 * shape * shape + 6 * shape) / DRAWS);
    expect(Math.abs(variance - shape)).toBeLessThan(4 * spread);
  });

  it('the same seed gives the same draws, the next seed others', () => {
    const first = (seed: number): number[] => Array.from({ length: 5 }, chance(seed, 1).uniform);
    expect(first(3)).toEqual(first(3));
    expect(first(4)).not.toEqual(first(3));
  });
});

describe('drawWindow', () => {
  it.each([0, 0.002, 0.01])('shares scatter as rho %d says', (rho) => {
    const random = chance(9, 2000);
    const shares = skewedMix(12);
    const [events, k] = [2000, 2];
    const seen = Array.from({ length: 10_000 }, () => {
      const window = drawWindow(random, { shares, events, rho });
      expect(window.reduce((a, b) => a + b, 0)).toBe(events);
      return window[k] / events;
    });
    const variance = seen.reduce((total, q) => total + (q - shares[k]) ** 2, 0) / seen.length;
    const expected = (shares[k] * (1 - shares[k]) * (1 + (events - 1) * rho)) / events;
    // Near normal, so the relative error of a variance is sqrt(2/n) = .014.
    expect(Math.abs(variance / expected - 1)).toBeLessThan(4.5 * 0.0142);
  });
});
