import { betaBinomialLogCdf } from './betaBinomialLogCdf.js';
import { betaBinomialLogSf } from './betaBinomialLogSf.js';
import { binomialLogCdf } from './binomialLogCdf.js';
import { binomialLogSf } from './binomialLogSf.js';
import { requireFraction, requireInteger, requirePositiveOrInfinite } from './preconditions.js';

/**
 * Correlation under which the binomial stands in, because A no longer fits a double's digits. It
 * must be this small: at 1e-7 and a million events the binomial's p is over 1e5 times too small.
 */
const BINOMIAL_BELOW = 1e-17;

export interface RareCategoryTail {
  /** Natural log of the p-value: of the smaller side doubled, or of the upper side alone. */
  readonly logP: number;
  /** mu, the share that the past leads to expect. */
  readonly share: number;
  /** rho_t: scatter of windows, and of the past that mu was taken from. */
  readonly correlation: number;
  /** log P(Y >= count) and log P(Y <= count). */
  readonly logUpper: number;
  readonly logLower: number;
}

/**
 * Predictive tail of one rare or new category.
 *
 * Null: the category keeps its share. With p its pooled share and W the effective events behind
 * it, mu = (W p + 1/2)/(W + 1), rho_t = rho + (1 - rho)/(W + 1) and A = (1 - rho_t)/rho_t, the
 * next count is beta-binomial(N, A mu, A (1 - mu)); p-value 2 min(P(Y >= y), P(Y <= y)), at most
 * 1. A category never seen has p = 0, hence mu = (1/2)/(W + 1). One that was pooled away has only
 * its upper tail looked at (`sides: 'upper'`), undoubled: pooling would hide a new category.
 *
 * In: events N >= 1, count 0..N, share 0..1, weight > 0, rho in 0..1 (1 excluded). W may be
 * Infinity for a declared share, then mu = p and rho_t = rho, and any count of a share 0 has
 * logP -Infinity; with rho_t under 1e-17 the binomial is used. Out: see `RareCategoryTail`.
 * Refuses other input with RangeError.
 * Own; the choice of mu and rho_t rests on simulation. Measured against 50 digits at 10 points
 * (test/published/lenses.py): log tails within 2e-11 x max(1, |logP|).
 * Cost: at most N steps.
 */
export function rareCategoryTail(input: {
  readonly count: number;
  readonly events: number;
  readonly share: number;
  readonly weight: number;
  readonly rho: number;
  readonly sides: 'both' | 'upper';
}): RareCategoryTail {
  check(input);
  const { count, events, weight, rho } = input;
  const share = weight === Infinity ? input.share : (weight * input.share + 0.5) / (weight + 1);
  const correlation = rho + (1 - rho) / (weight + 1);
  const { logUpper, logLower } = tails({ count, events, share, correlation });
  const both = Math.min(0, Math.LN2 + Math.min(logUpper, logLower));
  const logP = input.sides === 'upper' ? logUpper : both;
  return { logP, share, correlation, logUpper, logLower };
}

function check(input: Parameters<typeof rareCategoryTail>[0]): void {
  requireInteger('events', input.events, 1, Number.MAX_SAFE_INTEGER);
  requireInteger('count', input.count, 0, input.events);
  requireFraction('share', input.share);
  requirePositiveOrInfinite('weight', input.weight);
  if (!(input.rho >= 0 && input.rho < 1)) {
    throw new RangeError(`rho: must be >= 0 and under 1, got ${input.rho}`);
  }
}

function tails(input: { count: number; events: number; share: number; correlation: number }): {
  logUpper: number;
  logLower: number;
} {
  const { count: k, events: n, share, correlation } = input;
  // A declared share of 0 or 1 leaves the beta distribution no room.
  if (correlation < BINOMIAL_BELOW || share === 0 || share === 1) {
    const point = { n, p: share, k };
    return { logUpper: binomialLogSf(point), logLower: binomialLogCdf(point) };
  }
  const a = (1 - correlation) / correlation;
  const point = { n, alpha: a * share, beta: a * (1 - share), k };
  return { logUpper: betaBinomialLogSf(point), logLower: betaBinomialLogCdf(point) };
}
