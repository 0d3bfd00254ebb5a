import { log1mexp } from './log1mexp.js';

/**
 * log of one tail, never as one minus a body: directly, or as the complement of the other tail
 * when that one is at most a half.
 *
 * In: how to sum `tail` and `rest` (two logs of probabilities with sum 1), and whether the tail
 * is expected to be the smaller one. Out: in [-Infinity, 0].
 */
export function fromSmallerSide(
  sides: { readonly tail: () => number; readonly rest: () => number },
  tailIsSmaller: boolean,
): number {
  if (!tailIsSmaller) {
    const rest = sides.rest();
    if (rest <= -Math.LN2) return log1mexp(rest);
  }
  return Math.min(0, sides.tail());
}
