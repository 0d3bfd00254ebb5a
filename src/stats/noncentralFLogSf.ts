import { fLogSf } from './fLogSf.js';
import { fromSmallerSide } from './fromSmallerSide.js';
import { logBinomialMass } from './logBinomialMass.js';
import { noncentralChiSquaredLogSf, requireNoncentrality } from './noncentralChiSquaredLogSf.js';
import type { CentralFamily } from './poissonMixture.js';
import { poissonMixtureLogLower, poissonMixtureLogUpper } from './poissonMixture.js';
import { requirePositive, requirePositiveOrInfinite } from './preconditions.js';

/**
 * Natural log of the upper tail of the noncentral F distribution: the power of an F test with
 * critical value f.
 *
 * The law of (X/df1)/(Y/df2), X noncentral chi-squared with df1 and lambda (mean df1 + lambda),
 * Y chi-squared with df2: sum_j Poisson(j; lambda/2) I_y(df2/2, df1/2 + j) at
 * y = df2/(df2 + df1 f).
 *
 * In: f (any number; f <= 0 gives 0, Infinity gives -Infinity), df1 real > 0 and finite, df2 real
 * > 0 or Infinity (then noncentral chi-squared over df1), lambda >= 0 and finite (0 is the
 * central law). Out: log P(F > f) in [-Infinity, 0].
 * Refuses anything else with RangeError, and a lambda for which over ten million terms count.
 * Source: Abramowitz & Stegun 26.6.18 (from memory); summation see `poissonMixture`.
 * Measured with its lower tail against 40 digits at 676 points, df1 .7 to 63, df2 2.5 to 20,000,
 * lambda 1e-6 to 2,000, logP to -10,206 (test/published/noncentral.py): error at most 6e-14 x
 * max(1, |logP|).
 * Cost: about 10 sqrt(lambda) steps, and some 50 central tails.
 */
export function noncentralFLogSf(f: number, df1: number, df2: number, lambda: number): number {
  requireNoncentralF(f, df1, df2, lambda);
  if (df2 === Infinity) return noncentralChiSquaredLogSf(f * df1, df1, lambda);
  if (f <= 0) return 0;
  if (df2 + df1 * f === Infinity) return -Infinity;
  if (lambda / 2 === 0) return fLogSf(f, df1, df2);
  const { tail, rest } = noncentralFSides(f, df1, df2, lambda);
  return fromSmallerSide({ tail, rest }, df1 * f >= df1 + lambda);
}

/** Refuses arguments that no noncentral F has. */
export function requireNoncentralF(f: number, df1: number, df2: number, lambda: number): void {
  requirePositive('df1', df1);
  requirePositiveOrInfinite('df2', df2);
  requireNoncentrality(lambda);
  if (Number.isNaN(f)) throw new RangeError(`f: must be a number, got ${f}`);
}

/** How to sum either tail, for f > 0, df2 finite and lambda > 0. */
export function noncentralFSides(
  f: number,
  df1: number,
  df2: number,
  lambda: number,
): { tail: () => number; rest: () => number } {
  const [a, b] = [df1 / 2, df2 / 2];
  const whole = df2 + df1 * f;
  const [y, z] = [df2 / whole, (df1 * f) / whole];
  // The j-th central law in the form fLogSf takes: df1 + 2j, at f times df1/(df1 + 2j).
  const family: CentralFamily = {
    logUpper: (j) => fLogSf((f * df1) / (df1 + 2 * j), df1 + 2 * j, df2),
    logLower: (j) => fLogSf((df1 + 2 * j) / (f * df1), df2, df1 + 2 * j),
    logStep: (j) => Math.log(b / (a + j + b)) + logBinomialMass(a + j, b, z, y),
    stepRatio: (j) => (z * (a + j + b)) / (a + j + 1),
  };
  return {
    tail: () => poissonMixtureLogUpper(lambda / 2, family),
    rest: () => poissonMixtureLogLower(lambda / 2, family),
  };
}
