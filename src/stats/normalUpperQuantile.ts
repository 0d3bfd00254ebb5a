import { tUpperQuantile } from './tUpperQuantile.js';

/**
 * Critical value of the standard normal: the z with P(Z > z) = alpha.
 *
 * In: alpha strictly between 0 and 1. Out: a real number; 0 at alpha = 1/2. Refuses anything else
 * with RangeError. Error as `tUpperQuantile`.
 */
export function normalUpperQuantile(alpha: number): number {
  return tUpperQuantile(alpha, Infinity);
}
