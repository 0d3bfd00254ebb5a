import { requireFraction, requirePositiveOrInfinite } from './preconditions.js';

/**
 * Wilson's score interval of a share.
 *
 * In: share 0..1, n > 0 (effective events, real; Infinity gives the share itself), z >= 0 (the
 * normal critical value, two-sided 95 %: 1.96). Out: limits with
 * 0 <= lower <= share <= upper <= 1. Refuses other input with RangeError.
 * Source: Wilson (1927, from memory).
 */
export function wilson(share: number, n: number, z: number): { lower: number; upper: number } {
  requireFraction('share', share);
  requirePositiveOrInfinite('n', n);
  if (!(z >= 0 && z < Infinity)) {
    throw new RangeError(`z: must be a finite number >= 0, got ${z}`);
  }
  const a = (z * z) / n;
  const centre = (share + a / 2) / (1 + a);
  const half = (z / (1 + a)) * Math.sqrt((share * (1 - share)) / n + a / (4 * n));
  return {
    lower: Math.max(0, Math.min(share, centre - half)),
    upper: Math.min(1, Math.max(share, centre + half)),
  };
}
