import { requireCounts, requireFraction, requireLength } from './preconditions.js';
import { requireLogPs } from './requireLogPs.js';
import { sum } from './sum.js';

/**
 * Which tests Bonferroni rejects when some may spend more of the level than others.
 *
 * Rejects where p_i <= level w_i / (sum of w). The expected number of false rejections is at most
 * `level`, whatever the dependence. With equal weights it is plain Bonferroni; with weights
 * 1/T_i, T_i tests of this strand in a week, each strand spends the same in the long run.
 * In: natural logarithms of p-values (<= 0, -Infinity allowed); weights >= 0, as many, not all 0
 * when there is a test; level in [0, 1]. Out: one boolean a test, in the order given; a weight
 * of 0 rejects only p = 0. Refuses other input with RangeError.
 * Source: Genovese, Roeder & Wasserman (2006), from memory. Cost: linear.
 */
export function weightedBonferroni(
  logPs: readonly number[],
  options: { readonly weights: readonly number[]; readonly level: number },
): boolean[] {
  const { weights, level } = options;
  requireFraction('level', level);
  requireLogPs(logPs);
  requireLength('weights', weights, logPs.length);
  requireCounts('weights', weights);
  const whole = sum(weights);
  if (logPs.length > 0 && whole === 0) throw new RangeError('weights: must not all be 0');
  return logPs.map((logP, i) => logP <= Math.log(level * ((weights[i] ?? 0) / whole)));
}
