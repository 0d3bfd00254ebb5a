import { requireBinomial } from './binomialLogSf.js';
import type { BinomialPoint } from './binomialLogSf.js';
import { fLogSf } from './fLogSf.js';

/**
 * Natural log of the lower tail of the binomial distribution, P(Y <= k).
 *
 * In and refusals as `binomialLogSf` (k < 0 gives -Infinity, k >= n gives 0). Out:
 * log P(Y <= k) in [-Infinity, 0]; k itself is included, so the two tails share it.
 * The upper tail of F on 2 (k + 1) and 2 (n - k) at (n - k) p / ((k + 1)(1-p)), and not the
 * mirror image of the other tail, because 1 - p does not hold a small p.
 * Error and cost as `binomialLogSf`.
 */
export function binomialLogCdf(point: BinomialPoint): number {
  requireBinomial(point);
  const { n, p, k } = point;
  if (k < 0) return -Infinity;
  if (k >= n || p === 0) return 0;
  if (p === 1) return -Infinity;
  return fLogSf(((n - k) / (k + 1)) * (p / (1 - p)), 2 * (k + 1), 2 * (n - k));
}
