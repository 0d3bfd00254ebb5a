import { fromSmallerSide } from './fromSmallerSide.js';
import { logBinomialMass } from './logBinomialMass.js';
import { requireInteger, requirePositive } from './preconditions.js';
import { sumOfRatios } from './sumOfRatios.js';

/** n events whose share of one category is drawn from Beta(alpha, beta); k of that category. */
export interface BetaBinomialPoint {
  readonly n: number;
  readonly alpha: number;
  readonly beta: number;
  readonly k: number;
}

/**
 * Natural log of the upper tail of the beta-binomial distribution, P(Y >= k).
 *
 * P(Y = y) = C(n, y) B(y + alpha, n - y + beta) / B(alpha, beta). With share mu and intra-window
 * correlation rho: alpha = mu (1 - rho)/rho, beta = (1 - mu)(1 - rho)/rho.
 *
 * In: n whole >= 0, alpha and beta real > 0 and finite, k whole (k <= 0 gives 0, k > n gives
 * -Infinity). Out: log P(Y >= k) in [-Infinity, 0]; note that k itself is included.
 * Refuses anything else with RangeError, and a tail of over ten million terms that count.
 * The masses are added up from k outwards on the side where they are fewer (Skellam 1948, from
 * memory, for the distribution; the mass as three binomial ones is own).
 * Measured with its lower tail against 40 digits at 46 points, n 1 to 30,000, alpha and beta 1e-6
 * to 6e7, logP to -27,481 (test/published/noncentral.py): error at most 2e-14 x max(1, |logP|).
 * Cost: one step a value of Y in the tail that counts, n at most.
 */
export function betaBinomialLogSf(point: BetaBinomialPoint): number {
  requireBetaBinomial(point);
  const { n, alpha, beta, k } = point;
  if (k <= 0) return 0;
  if (k > n) return -Infinity;
  const rest = mirrored({ n, alpha, beta, k: k - 1 });
  const tailIsSmaller = k > n * (alpha / (alpha + beta));
  return fromSmallerSide({ tail: () => logTail(point), rest: () => logTail(rest) }, tailIsSmaller);
}

/** The same event told of the other categories: Y <= k is n - Y >= n - k. */
export function mirrored({ n, alpha, beta, k }: BetaBinomialPoint): BetaBinomialPoint {
  return { n, alpha: beta, beta: alpha, k: n - k };
}

/** Refuses a point that no beta-binomial has. */
export function requireBetaBinomial({ n, alpha, beta, k }: BetaBinomialPoint): void {
  requireInteger('n', n, 0, Number.MAX_SAFE_INTEGER);
  requirePositive('alpha', alpha);
  requirePositive('beta', beta);
  requireInteger('k', k, Number.MIN_SAFE_INTEGER, Number.MAX_SAFE_INTEGER);
}

/** log P(Y >= k) from k upwards, 0 <= k <= n. */
function logTail({ n, alpha, beta, k }: BetaBinomialPoint): number {
  const ratio = (j: number): number => {
    const y = k + j;
    return (((n - y) / (y + 1)) * (y + alpha)) / (n - y - 1 + beta);
  };
  // (y+alpha)/(y+1) falls towards 1 or rises to it; the other factor falls unless beta < 1, when
  // the last masses may grow again and all have to be taken.
  const ceiling = (j: number): number => {
    const y = k + j;
    if (beta < 1) return Infinity;
    return Math.max(1, (y + alpha) / (y + 1)) * ((n - y) / (n - y - 1 + beta));
  };
  const series = { terms: n - k + 1, ratio, ceiling };
  return logMass(n, alpha, beta, k) + Math.log(sumOfRatios(series, 'k'));
}

/**
 * log P(Y = y) as NB(y; alpha) NB(n-y; beta) / NB(n; alpha+beta), negative binomial masses whose
 * common p is free and set so that the last one sits at its mean.
 */
function logMass(n: number, alpha: number, beta: number, y: number): number {
  if (n === 0) return 0;
  const a = alpha + beta;
  const [p, q] = [a / (n + a), n / (n + a)];
  const negative = (x: number, size: number): number =>
    Math.log(size / (size + x)) + logBinomialMass(size, x, p, q);
  return negative(y, alpha) + negative(n - y, beta) - negative(n, a);
}
