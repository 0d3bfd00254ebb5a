import { hypergeometricLogSf, requireUrn, unmarked } from './hypergeometricLogSf.js';
import type { HypergeometricPoint } from './hypergeometricLogSf.js';

/**
 * Natural log of the lower tail of the hypergeometric distribution, P(Y <= k).
 *
 * In, refusals, error and cost as `hypergeometricLogSf`, told of the unmarked events (k below
 * the least possible value gives -Infinity, at or above the greatest 0).
 * Out: log P(Y <= k) in [-Infinity, 0]; k itself is included, so the two tails share it.
 */
export function hypergeometricLogCdf(point: HypergeometricPoint): number {
  requireUrn(point);
  return hypergeometricLogSf(unmarked(point));
}
