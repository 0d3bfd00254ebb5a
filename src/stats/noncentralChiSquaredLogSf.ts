import { chiSquaredLogCdf } from './chiSquaredLogCdf.js';
import { chiSquaredLogSf } from './chiSquaredLogSf.js';
import { fromSmallerSide } from './fromSmallerSide.js';
import { logPoissonMass } from './logPoissonMass.js';
import type { CentralFamily } from './poissonMixture.js';
import { poissonMixtureLogLower, poissonMixtureLogUpper } from './poissonMixture.js';
import { requirePositive } from './preconditions.js';

/**
 * Natural log of the upper tail of the noncentral chi-squared distribution: the power of a
 * chi-squared test with critical value x.
 *
 * The law of sum (Z_i + m_i)^2 over df standard normals, lambda = sum m_i^2 (so the mean is
 * df + lambda): sum_j Poisson(j; lambda/2) P(chi-squared with df + 2j > x).
 *
 * In: x (any number; x <= 0 gives 0, Infinity gives -Infinity), df real > 0 and finite, lambda
 * >= 0 and finite (0 is the central law). Out: log P(X > x) in [-Infinity, 0].
 * Refuses other df and lambda, and NaN, with RangeError; so too what lies beyond its reach: lambda
 * over about 2e8, where central tails no longer settle, or an x for which ten million terms count.
 * Source: Abramowitz & Stegun 26.4.25 (from memory); summation see `poissonMixture`.
 * Measured with its lower tail against 40 digits at 329 points, df .3 to 1,000, lambda 1e-6 to
 * 4,000, logP to -10,009 (test/published/noncentral.py): error at most 6e-14 x max(1, |logP|).
 * Cost: about 10 sqrt(lambda) steps, and some 50 central tails.
 */
export function noncentralChiSquaredLogSf(x: number, df: number, lambda: number): number {
  requireNoncentralChiSquared(x, df, lambda);
  if (x <= 0) return 0;
  if (x === Infinity) return -Infinity;
  if (lambda / 2 === 0) return chiSquaredLogSf(x, df);
  const { tail, rest } = noncentralChiSquaredSides(x, df, lambda);
  return fromSmallerSide({ tail, rest }, x >= df + lambda);
}

/** Refuses arguments that no noncentral chi-squared has. */
export function requireNoncentralChiSquared(x: number, df: number, lambda: number): void {
  requirePositive('df', df);
  requireNoncentrality(lambda);
  if (Number.isNaN(x)) throw new RangeError(`x: must be a number, got ${x}`);
}

/** Refuses anything but a finite number >= 0. */
export function requireNoncentrality(lambda: number): void {
  if (!(lambda >= 0 && lambda < Infinity)) {
    throw new RangeError(`lambda: must be a finite number >= 0, got ${lambda}`);
  }
}

/** How to sum either tail, for 0 < x < Infinity and lambda > 0. */
export function noncentralChiSquaredSides(
  x: number,
  df: number,
  lambda: number,
): { tail: () => number; rest: () => number } {
  const [a, h] = [df / 2, x / 2];
  const family: CentralFamily = {
    logUpper: (j) => chiSquaredLogSf(x, df + 2 * j),
    logLower: (j) => chiSquaredLogCdf(x, df + 2 * j),
    logStep: (j) => logPoissonMass(a + j, h),
    stepRatio: (j) => h / (a + j + 1),
  };
  return {
    tail: () => poissonMixtureLogUpper(lambda / 2, family),
    rest: () => poissonMixtureLogLower(lambda / 2, family),
  };
}
