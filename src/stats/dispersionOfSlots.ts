import { groupDispersion } from './groupDispersion.js';

/**
 * Intra-window correlation pooled over the slots of a cycle, each slot around its own shares:
 * sum_s sum_b G_sb / (1 + (N_sb - 1) rho) = sum_s (B_s - 1)(K - 1).
 *
 * In: for each slot its windows, each of K counts. Out: rho in 0..0.999, df2 the right side.
 * A slot with fewer than 2 windows with events contributes nothing; none at all gives rho 0 and
 * df2 0. Refuses windows of unequal length within a slot, and negative cells, with RangeError.
 * (Own; the estimator is that of `estimateDispersion`.)
 */
export function dispersionOfSlots(slots: readonly (readonly (readonly number[])[])[]): {
  readonly rho: number;
  readonly df2: number;
} {
  const { rho, df2 } = groupDispersion(slots);
  return { rho, df2 };
}
