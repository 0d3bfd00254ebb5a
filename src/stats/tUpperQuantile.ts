import jstat from 'jstat';

import { guessOr } from './guessOr.js';
import { requireOpenFraction, requirePositiveOrInfinite } from './preconditions.js';
import { solveUpperQuantile } from './solveUpperQuantile.js';
import { tLogSf } from './tLogSf.js';

/**
 * Critical value of Student's t: the t with P(T > t) = alpha.
 *
 * In: alpha strictly between 0 and 1, df real > 0 or Infinity (then the normal). Out: a
 * number; 0 at alpha = 1/2. Refuses anything else with RangeError. jstat's inverse is the first
 * guess where it is good; the root is found on `tLogSf`.
 * Measured by the tail at the answer: log P is log(alpha) within 1e-13 x max(1, |log alpha|).
 */
export function tUpperQuantile(alpha: number, df: number): number {
  requireOpenFraction('alpha', alpha);
  requirePositiveOrInfinite('df', df);
  if (alpha === 0.5) return 0;
  if (alpha > 0.5) return -tUpperQuantile(1 - alpha, df);
  const trusted = alpha >= 1e-6;
  const guess = (): number =>
    df >= 4 && df <= 500 ? jstat.studentt.inv(1 - alpha, df) : jstat.normal.inv(1 - alpha, 0, 1);
  // Under the normal tail this rises as the true quantile does; the bracket grows from it.
  const start = guessOr(guess, trusted, Math.sqrt(-2 * Math.log(2 * alpha)) + 1e-9);
  return solveUpperQuantile((t) => tLogSf(t, df), { logAlpha: Math.log(alpha), start });
}
