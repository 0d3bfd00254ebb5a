import { wilson } from './wilson.js';

/** Upper 5 % point of the standard normal distribution. */
const Z95 = 1.6448536269514722;

/**
 * One-sided 95 % lower bound of the size of a change between two independent shares, rise or fall
 * (hybrid of Wilson limits: Newcombe 1998, method 10, one-sided).
 *
 * For a rise `q - p - sqrt((q - l(q))^2 + (u(p) - p)^2)`, l and u being the Wilson limits at
 * z = 1.6449; for a fall the two sides change places.
 *
 * @param input shares 0..1 before and after, and the effective events behind each (> 0; Infinity
 *   for a declared share).
 * @returns the bound, -1..1; above 0 when a change of that sign is shown.
 */
export function newcombeLowerBound(input: {
  readonly after: number;
  readonly nAfter: number;
  readonly before: number;
  readonly nBefore: number;
}): number {
  const { after, nAfter, before, nBefore } = input;
  return after >= before
    ? riseBound(after, nAfter, before, nBefore)
    : riseBound(before, nBefore, after, nAfter);
}

function riseBound(high: number, nHigh: number, low: number, nLow: number): number {
  const below = high - wilson(high, nHigh, Z95).lower;
  const above = wilson(low, nLow, Z95).upper - low;
  return high - low - Math.sqrt(below * below + above * above);
}
