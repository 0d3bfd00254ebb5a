import { groupDispersion } from './groupDispersion.js';
import { requireTable } from './preconditions.js';
import { sum } from './sum.js';

export interface Dispersion {
  /** Intra-window correlation, 0..0.999. */
  readonly rho: number;
  /** Weighted pooled shares; sum 1 (all 0 when no window has events). */
  readonly shares: readonly number[];
  /** W, the sum of `weights`: effective events of the windows together. */
  readonly weight: number;
  /** One for each window given, in order; 0 for a window without events. */
  readonly weights: readonly number[];
  /** (B - 1)(K - 1), B counting windows with events. */
  readonly df2: number;
}

/**
 * Intra-window correlation of past windows, from the deviance equation.
 *
 * Model: Var(share) = p(1-p) phi_b / N_b with phi_b = 1 + (N_b - 1) rho, as under a
 * Dirichlet-multinomial. With G_b the deviance of window b from the weighted pooled shares, rho
 * solves sum_b G_b / phi_b = (B-1)(K-1); 0 when that sum is small enough at rho = 0. Deviance
 * and not Pearson's X2, which single small bins dominate. (Own combination; the moment idea is
 * Williams 1982, from memory.)
 *
 * In: B windows of K counts each, in a fixed order of bins. Out: see `Dispersion`. Refuses an
 * empty list, ragged windows and negative cells with RangeError. With fewer than 2 windows with
 * events, or fewer than 2 bins, rho is 0 and df2 is 0: the caller decides what that is worth.
 * Agrees with the check values of the design to all their digits. Cost: 2BK logarithms at most.
 */
export function estimateDispersion(windows: readonly (readonly number[])[]): Dispersion {
  requireTable('windows', windows);
  const { rho, groups, df2 } = groupDispersion([windows]);
  const weights = groups[0]?.weights ?? [];
  return { rho, shares: groups[0]?.shares ?? [], weight: sum(weights), weights, df2 };
}
