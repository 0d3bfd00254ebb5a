import jstat from 'jstat';

import { chiSquaredLogSf } from './chiSquaredLogSf.js';
import { guessOr } from './guessOr.js';
import { requireOpenFraction, requirePositive } from './preconditions.js';
import { solveUpperQuantile } from './solveUpperQuantile.js';

/**
 * Critical value of chi-squared: the x with P(X > x) = alpha.
 *
 * In: alpha strictly between 0 and 1, df real > 0 and finite. Out: x > 0.
 * Refuses anything else with RangeError. jstat's inverse is the first guess where it is good
 * (alpha from .5 to 1e-6), Wilson & Hilferty (1931, from memory) elsewhere; the root is then
 * found on `chiSquaredLogSf`, so that it is as exact as that tail.
 * Measured by the tail at the answer: log P is log(alpha) within 1e-13 x max(1, |log alpha|).
 */
export function chiSquaredUpperQuantile(alpha: number, df: number): number {
  requireOpenFraction('alpha', alpha);
  requirePositive('df', df);
  const trusted = alpha <= 0.5 && alpha >= 1e-6 && df >= 1 && df <= 500;
  const start = guessOr(() => jstat.chisquare.inv(1 - alpha, df), trusted, rough(alpha, df));
  const logAlpha = Math.log(alpha);
  return solveUpperQuantile((x) => chiSquaredLogSf(x, df), { logAlpha, start });
}

/** Wilson and Hilferty's cube with a crude normal quantile; any positive number would do. */
function rough(alpha: number, df: number): number {
  const z =
    alpha < 0.5 ? Math.sqrt(-2 * Math.log(2 * alpha)) : -Math.sqrt(-2 * Math.log(2 - 2 * alpha));
  const s = 2 / (9 * df);
  return df * Math.max(0.01, 1 - s + z * Math.sqrt(s)) ** 3;
}
