import { tLogSf } from './tLogSf.js';

/**
 * Natural log of the upper tail of the standard normal distribution.
 *
 * In: z (any number). Out: log P(Z > z) in [-Infinity, 0]. Refuses NaN with RangeError.
 * Half the upper tail of chi-squared with 1 degree of freedom at z^2 (exact).
 * Measured against 40 digits for z from -38 to 141 (test/published/tails.py): error at most
 * 1e-14 x max(1, |logP|).
 * Cost: tens of steps.
 */
export function normalLogSf(z: number): number {
  return tLogSf(z, Infinity);
}
