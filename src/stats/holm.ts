import { requireFraction } from './preconditions.js';
import { requireLogPs } from './requireLogPs.js';

/**
 * Which tests the step-down procedure of Holm (1979) rejects, on the log scale.
 *
 * With p sorted ascending, rejects from the smallest up as long as p_(i) <= level/(m - i + 1).
 * The probability of any false rejection is at most `level`, whatever the dependence.
 * In: natural logarithms of p-values (<= 0, -Infinity allowed), level in [0, 1]. Out: one boolean
 * a test, in the order given; equal p-values always share one decision.
 * Refuses other input with RangeError. Source: from memory. Cost: m log m.
 */
export function holm(logPs: readonly number[], level: number): boolean[] {
  requireFraction('level', level);
  requireLogPs(logPs);
  const sorted = [...logPs].sort((a, b) => (a === b ? 0 : a < b ? -1 : 1));
  const stop = sorted.findIndex((logP, i) => !(logP <= Math.log(level / (sorted.length - i))));
  const firstKept = stop === -1 ? undefined : sorted[stop];
  return logPs.map((logP) => firstKept === undefined || logP < firstKept);
}
