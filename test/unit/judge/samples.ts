import type { Bins } from '../../../src/judge/bins.js';
import type { WindowCounts } from '../../../src/judge/reference.js';
import type { Counts } from '../../../src/terms/tally.js';

export const MINUTE = 60_000;
export const T0 = Date.UTC(2031, 2, 5);

export function countsOf(numbers: Readonly<Record<string, number>>): Counts {
  return new Map(Object.entries(numbers));
}

/** Counts of categories a, b, c, ... */
export function lettered(numbers: readonly number[]): Counts {
  return new Map(numbers.map((n, at) => [String.fromCharCode(97 + at), n]));
}

/** One-minute windows one after the other from T0. */
export function windowsOf(counts: readonly Counts[], fromMinute = 0): WindowCounts[] {
  return counts.map((one, at) => {
    const startMs = T0 + (fromMinute + at) * MINUTE;
    return { window: { startMs, endMs: startMs + MINUTE }, counts: one };
  });
}

export function times<T>(n: number, value: T): T[] {
  return Array.from({ length: n }, () => value);
}

/** A bin for each name. */
export function bins(...names: readonly string[]): Bins {
  return { names, members: names.map((name) => [name]), pooled: [], pooledIndex: null };
}

/** Check values of the design (made with scipy): eight windows of six categories. */
export const CHECK_BASELINE: readonly (readonly number[])[] = [
  [52, 18, 12, 9, 6, 3],
  [47, 22, 13, 8, 7, 3],
  [55, 17, 10, 10, 5, 3],
  [44, 21, 15, 9, 6, 5],
  [50, 20, 11, 8, 8, 3],
  [61, 14, 9, 8, 5, 3],
  [46, 23, 12, 11, 5, 3],
  [49, 19, 14, 9, 6, 3],
];
