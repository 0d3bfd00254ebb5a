import { devianceTerm } from './devianceTerm.js';
import {
  requireLength,
  requirePositive,
  requirePositiveOrInfinite,
  requireShares,
} from './preconditions.js';

/** Two sets of shares with the effective events behind each. */
export interface WeightedPair {
  readonly now: readonly number[];
  readonly weightNow: number;
  readonly reference: readonly number[];
  /** Infinity for shares that were declared, not sampled. */
  readonly weightReference: number;
}

/** Refuses a pair whose shares or weights cannot be, with RangeError. */
export function requireWeightedPair(pair: WeightedPair): void {
  requireLength('reference', pair.reference, pair.now.length);
  requireShares('now', pair.now);
  requireShares('reference', pair.reference);
  requirePositive('weightNow', pair.weightNow);
  requirePositiveOrInfinite('weightReference', pair.weightReference);
}

/** (w q + W p)/(w + W), bin by bin; p itself when W is infinite. */
export function jointShares(pair: WeightedPair): number[] {
  const { now, weightNow, reference, weightReference } = pair;
  if (weightReference === Infinity) return [...reference];
  const whole = weightNow + weightReference;
  return reference.map((p, k) => (weightNow * (now[k] ?? 0) + weightReference * p) / whole);
}

/**
 * Likelihood ratio of two weighted sets of shares against their joint ones:
 * G = 2 w sum q log(q/pJ) + 2 W sum p log(p/pJ).
 *
 * In: shares of equal length, weights > 0. Out: G >= 0; Infinity when something happened that
 * a declared share calls impossible.
 */
export function pairDeviance(pair: WeightedPair): number {
  const { now, weightNow, reference, weightReference } = pair;
  const joint = jointShares(pair);
  let total = 0;
  joint.forEach((share, k) => {
    total += devianceTerm(weightNow * (now[k] ?? 0), weightNow * share);
    if (weightReference === Infinity) return;
    total += devianceTerm(weightReference * (reference[k] ?? 0), weightReference * share);
  });
  return 2 * total;
}
