import type { Counts } from '../terms/tally.js';

/** Sum over windows, categories in code-point order. */
export function merge(windows: readonly { readonly counts: Counts }[]): Counts {
  const sums = new Map<string, number>();
  for (const { counts } of windows) {
    for (const [category, n] of counts) sums.set(category, (sums.get(category) ?? 0) + n);
  }
  return new Map([...sums].sort(([a], [b]) => (a < b ? -1 : 1)));
}

export function total(counts: Counts): number {
  let n = 0;
  for (const count of counts.values()) n += count;
  return n;
}
