import { designWeight } from './designWeight.js';
import { requireFraction, requireTable } from './preconditions.js';
import { sum } from './sum.js';

/** Past windows with their effective events; those without events are left out. */
export interface WeightedWindows {
  readonly windows: readonly (readonly number[])[];
  readonly events: readonly number[];
  readonly weights: readonly number[];
  /** W, the sum of `weights`. */
  readonly weight: number;
  /** p_k = sum_b w_b r_bk / W; empty when no window has events. */
  readonly shares: readonly number[];
}

/** Weights and pooled shares of windows at a known rho. Refuses ragged windows and rho off 0..1. */
export function weighWindows(
  windows: readonly (readonly number[])[],
  rho: number,
): WeightedWindows {
  requireTable('windows', windows);
  requireFraction('rho', rho);
  const filled = windows.filter((window) => sum(window) > 0);
  const events = filled.map(sum);
  const weights = events.map((n) => designWeight(n, rho));
  const weight = sum(weights);
  const shareOf = (k: number): number =>
    weightedMean(
      filled.map((window, b) => (window[k] ?? 0) / (events[b] ?? 1)),
      weights,
    );
  const shares = (filled[0] ?? []).map((_, k) => shareOf(k));
  return { windows: filled, events, weights, weight, shares };
}

/** sum w x / sum w, for weights that are not all 0. */
export function weightedMean(values: readonly number[], weights: readonly number[]): number {
  let total = 0;
  values.forEach((value, b) => {
    total += (weights[b] ?? 0) * value;
  });
  return total / sum(weights);
}
