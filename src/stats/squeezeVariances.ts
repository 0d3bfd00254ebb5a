import { digamma } from './digamma.js';
import { inverseTrigamma } from './inverseTrigamma.js';
import { requireCounts, requirePositive } from './preconditions.js';
import { sum } from './sum.js';
import { trigamma } from './trigamma.js';

/** With fewer variances than this nothing can be learned from the others. */
const LEAST = 3;
/** Excess variance of the logs up to which the variances are taken as one and the same. */
const SAME = 1e-6;

export interface SqueezedVariances {
  /** d0: what the others are worth; 0 when nothing was borrowed, Infinity when all are one. */
  readonly priorDf: number;
  /** s0^2, the common variance; null when nothing was borrowed. */
  readonly priorVariance: number | null;
  /** One for each variance given, in order. */
  readonly squeezed: readonly number[];
}

/**
 * Variances drawn towards their common value, by as much as they look alike.
 *
 * Model: u_k is s_k^2 chi^2_d / d and 1/s_k^2 is chi^2_d0 / (d0 s0^2). With
 * e_k = log u_k - digamma(d/2) + log(d/2) and V = var(e) - trigamma(d/2):
 * d0 = 2 trigamma^-1(V), Infinity where V <= 1e-6, s0^2 = exp(mean e + digamma(d0/2) - log(d0/2)),
 * and each becomes (d0 s0^2 + d u_k)/(d0 + d).
 *
 * In: variances >= 0 in any one unit, df d > 0 of each. Out: see `SqueezedVariances`, same unit.
 * A variance of 0 has no logarithm: it does not enter d0 and s0^2, and is squeezed like the rest
 * (own). With fewer than 3 above 0, d0 = 0 and all stay as they are. Refuses negative or infinite
 * variances and another df with RangeError.
 * Source: Smyth (2004), from memory. Agrees with the check values of the design to all their
 * digits. Cost: linear.
 */
export function squeezeVariances(input: {
  readonly variances: readonly number[];
  readonly df: number;
}): SqueezedVariances {
  const { variances, df } = input;
  requireCounts('variances', variances);
  requirePositive('df', df);
  const shift = Math.log(df / 2) - digamma(df / 2);
  const logs = variances.filter((u) => u > 0).map((u) => Math.log(u) + shift);
  if (logs.length < LEAST) return { priorDf: 0, priorVariance: null, squeezed: [...variances] };
  const mean = sum(logs) / logs.length;
  const spread = sum(logs.map((e) => (e - mean) ** 2)) / (logs.length - 1);
  const excess = spread - trigamma(df / 2);
  if (!(excess > SAME)) {
    const priorVariance = Math.exp(mean);
    return { priorDf: Infinity, priorVariance, squeezed: variances.map(() => priorVariance) };
  }
  const half = inverseTrigamma(excess);
  const priorDf = 2 * half;
  const priorVariance = Math.exp(mean + digamma(half) - Math.log(half));
  const squeezed = variances.map((u) => (priorDf * priorVariance + df * u) / (priorDf + df));
  return { priorDf, priorVariance, squeezed };
}
