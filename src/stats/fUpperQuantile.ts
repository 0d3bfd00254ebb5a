import jstat from 'jstat';

import { chiSquaredUpperQuantile } from './chiSquaredUpperQuantile.js';
import { fLogSf } from './fLogSf.js';
import { guessOr } from './guessOr.js';
import {
  requireOpenFraction,
  requirePositive,
  requirePositiveOrInfinite,
} from './preconditions.js';
import { solveUpperQuantile } from './solveUpperQuantile.js';

/**
 * Critical value of F: the f with P(F > f) = alpha.
 *
 * In: alpha strictly between 0 and 1, df1 real > 0 and finite, df2 real > 0 or Infinity (then
 * chi-squared over df1). Out: f > 0. Refuses anything else with RangeError. jstat's inverse is
 * the first guess where it holds 7 digits, chi-squared over df1 elsewhere; the root is found on
 * `fLogSf`.
 * Measured by the tail at the answer: log P is log(alpha) within 1e-13 x max(1, |log alpha|).
 */
export function fUpperQuantile(alpha: number, df1: number, df2: number): number {
  requireOpenFraction('alpha', alpha);
  requirePositive('df1', df1);
  requirePositiveOrInfinite('df2', df2);
  const limit = chiSquaredUpperQuantile(alpha, df1) / df1;
  if (df2 === Infinity) return limit;
  const trusted = alpha <= 0.5 && alpha >= 1e-6 && df1 >= 1 && df2 >= 4 && df1 + df2 <= 2000;
  const start = guessOr(() => jstat.centralF.inv(1 - alpha, df1, df2), trusted, limit);
  const logAlpha = Math.log(alpha);
  return solveUpperQuantile((f) => fLogSf(f, df1, df2), { logAlpha, start });
}
