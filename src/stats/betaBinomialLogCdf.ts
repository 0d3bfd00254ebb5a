import { betaBinomialLogSf, mirrored, requireBetaBinomial } from './betaBinomialLogSf.js';
import type { BetaBinomialPoint } from './betaBinomialLogSf.js';

/**
 * Natural log of the lower tail of the beta-binomial distribution, P(Y <= k).
 *
 * In, refusals, error and cost as `betaBinomialLogSf`, told of the other categories: n - Y is
 * beta-binomial with alpha and beta exchanged (k < 0 gives -Infinity, k >= n gives 0).
 * Out: log P(Y <= k) in [-Infinity, 0]; k itself is included, so the two tails share it.
 */
export function betaBinomialLogCdf(point: BetaBinomialPoint): number {
  requireBetaBinomial(point);
  return betaBinomialLogSf(mirrored(point));
}
