import { chiSquaredLogCdf } from './chiSquaredLogCdf.js';
import { fromSmallerSide } from './fromSmallerSide.js';
import {
  noncentralChiSquaredSides,
  requireNoncentralChiSquared,
} from './noncentralChiSquaredLogSf.js';

/**
 * Natural log of the lower tail of the noncentral chi-squared distribution: the chance that a
 * chi-squared test with critical value x misses.
 *
 * In and refusals as `noncentralChiSquaredLogSf` (x <= 0 gives -Infinity, Infinity gives 0).
 * Out: log P(X <= x) in [-Infinity, 0]. Error and cost as there.
 */
export function noncentralChiSquaredLogCdf(x: number, df: number, lambda: number): number {
  requireNoncentralChiSquared(x, df, lambda);
  if (x <= 0) return -Infinity;
  if (x === Infinity) return 0;
  if (lambda / 2 === 0) return chiSquaredLogCdf(x, df);
  const { tail, rest } = noncentralChiSquaredSides(x, df, lambda);
  return fromSmallerSide({ tail: rest, rest: tail }, x < df + lambda);
}
