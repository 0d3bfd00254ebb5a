import { normalUpperQuantile } from './normalUpperQuantile.js';
import { wilson } from './wilson.js';

/**
 * Confidence interval of the difference of two independent shares, after - before.
 *
 * Square-and-add of the two Wilson intervals: method 10 of Newcombe (1998, from memory).
 * In: shares 0..1, effective events > 0 (nBefore Infinity for a declared share), level strictly
 * between 0 and 1 (two-sided, 0.95 for 95 %). Out: [lower, upper] in -1..1, holding the
 * difference. Refuses other input with RangeError.
 */
export function newcombe(input: {
  readonly after: number;
  readonly nAfter: number;
  readonly before: number;
  readonly nBefore: number;
  readonly level: number;
}): [number, number] {
  const { after, before, level } = input;
  if (!(level > 0 && level < 1)) {
    throw new RangeError(`level: must lie strictly between 0 and 1, got ${level}`);
  }
  const z = normalUpperQuantile((1 - level) / 2);
  const one = wilson(after, input.nAfter, z);
  const two = wilson(before, input.nBefore, z);
  const d = after - before;
  return [
    d - Math.hypot(after - one.lower, two.upper - before),
    d + Math.hypot(one.upper - after, before - two.lower),
  ];
}
