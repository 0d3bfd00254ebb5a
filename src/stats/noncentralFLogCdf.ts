import { fLogSf } from './fLogSf.js';
import { fromSmallerSide } from './fromSmallerSide.js';
import { noncentralChiSquaredLogCdf } from './noncentralChiSquaredLogCdf.js';
import { noncentralFSides, requireNoncentralF } from './noncentralFLogSf.js';

/**
 * Natural log of the lower tail of the noncentral F distribution: the chance that an F test with
 * critical value f misses.
 *
 * In and refusals as `noncentralFLogSf` (f <= 0 gives -Infinity, Infinity gives 0). Out:
 * log P(F <= f) in [-Infinity, 0]. Error and cost as there.
 */
export function noncentralFLogCdf(f: number, df1: number, df2: number, lambda: number): number {
  requireNoncentralF(f, df1, df2, lambda);
  if (df2 === Infinity) return noncentralChiSquaredLogCdf(f * df1, df1, lambda);
  if (f <= 0) return -Infinity;
  if (df2 + df1 * f === Infinity) return 0;
  if (lambda / 2 === 0) return fLogSf(1 / f, df2, df1);
  const { tail, rest } = noncentralFSides(f, df1, df2, lambda);
  return fromSmallerSide({ tail: rest, rest: tail }, df1 * f < df1 + lambda);
}
