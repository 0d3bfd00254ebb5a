import { gatherSparse } from './gatherSparse.js';
import type { Pooling } from './gatherSparse.js';
import { requireCounts, requireLength } from './preconditions.js';
import { sum } from './sum.js';

/**
 * Which categories of a 2 x K table are pooled, decided by the margins alone.
 *
 * t_k = now_k + reference_k, E_k = min(N, M) t_k / (N + M): the smaller expected count of each
 * column. Nominal: every category with E_k >= minExpected keeps a bin, all others share one; if
 * that one stays under minExpected it takes in the smallest kept category. Ordered: the smallest
 * bin joins its smaller neighbour until all reach minExpected. Ties go by category order.
 * Because no cell is looked at, only totals, the table is still a random one given its margins
 * (threshold: Cochran 1954, from memory).
 *
 * In: two count arrays of equal length. Out: see `Pooling`; possibly fewer than 2 bins, when no
 * table can be tested. Refuses unequal lengths and negative cells with RangeError. Cost:
 * linear for nominal categories, K^2 for ordered ones.
 */
export function poolByMargins(input: {
  readonly now: readonly number[];
  readonly reference: readonly number[];
  readonly minExpected?: number;
  readonly ordered?: boolean;
}): Pooling {
  const { now, reference } = input;
  requireCounts('now', now);
  requireCounts('reference', reference);
  requireLength('reference', reference, now.length);
  const n = sum(now);
  const m = sum(reference);
  const scale = n + m > 0 ? Math.min(n, m) / (n + m) : 0;
  const totals = now.map((count, k) => count + (reference[k] ?? 0));
  return gatherSparse({
    expected: totals.map((total) => scale * total),
    isEmpty: totals.map((total) => total === 0),
    minExpected: input.minExpected ?? 5,
    ordered: input.ordered ?? false,
  });
}
