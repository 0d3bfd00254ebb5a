import { requireLength, requireShares } from './preconditions.js';

/**
 * Cohen's w: sqrt(sum (q - p)^2 / p), the size of a difference against reference shares p.
 *
 * In: shares now and of the reference (each sum 1), equal length. Out: >= 0; Infinity when a
 * category without a share in the reference has one now. At least twice the share moved.
 * Refuses other input with RangeError. Source: Cohen (1988, from memory).
 */
export function cohensW(now: readonly number[], reference: readonly number[]): number {
  requireLength('reference', reference, now.length);
  requireShares('now', now);
  requireShares('reference', reference);
  let total = 0;
  now.forEach((q, k) => {
    const p = reference[k] ?? 0;
    if (q !== p) total += (q - p) ** 2 / p;
  });
  return Math.sqrt(total);
}
