import { requireCounts } from './preconditions.js';
import { sum } from './sum.js';

/**
 * What a run of empty windows says against a strand being alive: -log of its probability.
 *
 * L = sum over the run of k log(1 + m/k), m the mean count that the baseline has at each window's
 * hour: under a gamma-Poisson of shape k such a window is empty with (1 + m/k)^-k. k = Infinity
 * gives sum m. m = 0 adds nothing, and so does any window at k = 0.
 *
 * In: the means >= 0 of the windows of the run, in any order, and k in [0, Infinity] of
 * `absenceShape`. Out: L >= 0, a natural logarithm. Refuses other input with RangeError.
 * Source: own, on the negative binomial. Windows are taken as independent, which spells of silence
 * are not: see `absence`.
 */
export function absenceEvidence(means: readonly number[], shape: number): number {
  requireCounts('means', means);
  if (!(shape >= 0)) throw new RangeError(`shape: must be a number >= 0, got ${shape}`);
  if (shape === 0) return 0;
  if (shape === Infinity) return sum(means);
  // With k so small that m/k overflows, k log is 0 in the limit.
  return sum(means.map((mean) => (mean > 0 ? shape * logPlus(mean, shape) : 0)));
}

/** log(1 + m/k), also where m/k would overflow. */
function logPlus(mean: number, shape: number): number {
  const ratio = mean / shape;
  return ratio === Infinity ? Math.log(mean) - Math.log(shape) : Math.log1p(ratio);
}
