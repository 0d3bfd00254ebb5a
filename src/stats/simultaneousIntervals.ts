import { requireCounts, requireOpenFraction } from './preconditions.js';
import { normalUpperQuantile } from './normalUpperQuantile.js';
import { sum } from './sum.js';
import { wilson } from './wilson.js';

/**
 * Confidence intervals of all shares of a multinomial at once.
 *
 * Wilson's score interval of each share with the normal critical value at (1 - level)/(2 K): by
 * Bonferroni all K hold together with probability `level` at least, as far as Wilson's do. These
 * are the intervals of Goodman (1965), whose chi-squared value on 1 degree of freedom at
 * (1 - level)/K is that critical value squared.
 * In: K counts >= 0 (effective events are welcome), at least one event; level strictly between 0
 * and 1 (0.95 for 95 %). Out: the share and its limits, one of each a category, in order;
 * lower 0 for a category without events. A lone category has share 1.
 * Refuses other input with RangeError. Source: Goodman (1965, "On simultaneous confidence
 * intervals for multinomial proportions", Technometrics 7), from memory. Cost: linear.
 */
export function simultaneousIntervals(
  counts: readonly number[],
  options: { readonly level: number },
): { readonly share: number; readonly lower: number; readonly upper: number }[] {
  requireCounts('counts', counts);
  requireOpenFraction('level', options.level);
  const events = sum(counts);
  if (events === 0) throw new RangeError('counts: must hold an event, got none');
  const z = normalUpperQuantile((1 - options.level) / (2 * counts.length));
  return counts.map((count) => {
    const share = count / events;
    return { share, ...wilson(share, events, z) };
  });
}
