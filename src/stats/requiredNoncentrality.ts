import { fUpperQuantile } from './fUpperQuantile.js';
import { noncentralFLogCdf } from './noncentralFLogCdf.js';
import { normalUpperQuantile } from './normalUpperQuantile.js';
import { requireOpenFraction } from './preconditions.js';
import { solveUpperQuantile } from './solveUpperQuantile.js';

/**
 * The noncentrality that an F test needs to reach a given power.
 *
 * lambda with P(F'(df1, df2, lambda) > f) = power, f the critical value of F(df1, df2) at alpha.
 *
 * In: df1 real > 0 and finite, df2 real > 0 or Infinity (a chi-squared test), alpha and power
 * strictly between 0 and 1 with power > alpha. Out: lambda > 0.
 * Refuses anything else with RangeError. Solved on the chance to miss, `noncentralFLogCdf`, so
 * that powers close to 1 lose no digits.
 * Source: Patnaik (1949), from memory, for the use of noncentral F as power.
 * Measured against 40 digits at 8 points, df1 1 to 29, power .06 to .999
 * (test/published/noncentral.py): relative error at most 2e-14.
 * Cost: 10 to 20 noncentral tails.
 */
export function requiredNoncentrality(input: {
  readonly df1: number;
  readonly df2: number;
  readonly alpha: number;
  readonly power: number;
}): number {
  const { df1, df2, alpha, power } = input;
  requireOpenFraction('alpha', alpha);
  requireOpenFraction('power', power);
  if (!(power > alpha)) {
    throw new RangeError(`power: must exceed alpha, which is ${alpha}, got ${power}`);
  }
  return noncentralityBeyond(fUpperQuantile(alpha, df1, df2), { df1, df2, power });
}

/** The same for a critical value of any origin, whose central tail must be below `power`. */
export function noncentralityBeyond(
  critical: number,
  test: { readonly df1: number; readonly df2: number; readonly power: number },
): number {
  const { df1, df2, power } = test;
  return solveUpperQuantile((lambda) => noncentralFLogCdf(critical, df1, df2, lambda), {
    logAlpha: Math.log1p(-power),
    start: roughly(df1 * critical, df1, 1 - power),
  });
}

/** Moves the mean past the critical value by as many standard deviations as a normal would. */
function roughly(critical: number, df1: number, miss: number): number {
  const excess = Math.max(0, critical - df1);
  const sd = Math.sqrt(2 * df1 + 4 * excess);
  return Math.max(0.1, excess + normalUpperQuantile(miss) * sd);
}
