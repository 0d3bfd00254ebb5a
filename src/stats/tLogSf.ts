import { fLogSf } from './fLogSf.js';
import { log1mexp } from './log1mexp.js';
import { requirePositiveOrInfinite } from './preconditions.js';

/**
 * Natural log of the upper tail of Student's t distribution.
 *
 * In: t (any number), df real > 0 or Infinity (then the normal). Out: log P(T > t) in
 * [-Infinity, 0]. Refuses other df, and NaN, with RangeError.
 * For t > 0 half the upper tail of F(1, df) at t^2 (Abramowitz & Stegun 26.7.1, from memory).
 * Measured against 40 digits at 115 points, df .3 to 1e6, logP to -9,848
 * (test/published/tails.py): error at most 2e-14 x max(1, |logP|).
 * Cost: that of fLogSf.
 */
export function tLogSf(t: number, df: number): number {
  requirePositiveOrInfinite('df', df);
  if (Number.isNaN(t)) throw new RangeError(`t: must be a number, got ${t}`);
  const upper = fLogSf(t * t, 1, df) - Math.LN2;
  return t >= 0 ? upper : log1mexp(upper);
}
