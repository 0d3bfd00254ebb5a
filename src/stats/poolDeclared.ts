import { gatherSparse } from './gatherSparse.js';
import type { Pooling } from './gatherSparse.js';
import { requireCounts, requireLength, requireShares } from './preconditions.js';
import { sum } from './sum.js';

/**
 * Which categories are pooled when counts are held against declared shares: E_k = N p_k, and
 * then the rule of `poolByMargins`. The counts enter by their total only.
 *
 * In: counts and shares (sum 1) of equal length. Out: see `Pooling`. Refuses unequal lengths,
 * negative cells and shares that do not sum to 1 with RangeError. A category declared
 * impossible (share 0) that has events is for the caller to take out first.
 */
export function poolDeclared(input: {
  readonly counts: readonly number[];
  readonly shares: readonly number[];
  readonly minExpected?: number;
  readonly ordered?: boolean;
}): Pooling {
  const { counts, shares } = input;
  requireCounts('counts', counts);
  requireLength('shares', shares, counts.length);
  requireShares('shares', shares);
  const n = sum(counts);
  return gatherSparse({
    expected: shares.map((share) => n * share),
    isEmpty: shares.map((share, k) => share === 0 && counts[k] === 0),
    minExpected: input.minExpected ?? 5,
    ordered: input.ordered ?? false,
  });
}
