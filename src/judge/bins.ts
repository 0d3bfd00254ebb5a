import { POOLED, REST } from '../config/strand.js';
import { poolByMargins } from '../stats/poolByMargins.js';
import { poolDeclared } from '../stats/poolDeclared.js';
import type { Counts } from '../terms/tally.js';

/** How categories are gathered into the columns of a table. */
export interface Bins {
  /** One name a bin: the category, `(pooled)`, or the joined neighbours of an ordered mix. */
  readonly names: readonly string[];
  readonly members: readonly (readonly string[])[];
  /** Categories that share a bin with others. */
  readonly pooled: readonly string[];
  /** Index of the bin `(pooled)`; null without one. */
  readonly pooledIndex: number | null;
}

export interface BinOptions {
  /** Ordinal categories, low to high; null for nominal ones. */
  readonly ordered: readonly string[] | null;
  /** Most categories that are looked at; the smallest beyond it are summed in `(rest)`. */
  readonly categoriesJudged: number;
  readonly pooling: boolean;
}

/**
 * Gathers categories by the margins of the table alone, so that the table stays a random one
 * given its margins (Cochran 1954 for the threshold of 5).
 */
export function binsByMargins(now: Counts, reference: Counts, options: BinOptions): Bins {
  const categories = judgedCategories(now, reference, options);
  const folded = { now: fold(now, categories), reference: fold(reference, categories) };
  if (!options.pooling) return separateBins(categories.filter((c) => isSeen(c, folded)));
  const pooled = poolByMargins({
    now: categories.map((c) => folded.now.get(c) ?? 0),
    reference: categories.map((c) => folded.reference.get(c) ?? 0),
    ordered: options.ordered !== null,
  });
  return named(categories, pooled, options);
}

/** As above for declared shares: a bin needs five events expected by them. */
export function binsByShares(
  now: Counts,
  shares: ReadonlyMap<string, number>,
  options: BinOptions,
): Bins {
  const categories = inOrder([...shares.keys()], options.ordered);
  if (!options.pooling) return separateBins(categories);
  const folded = fold(now, categories);
  const pooled = poolDeclared({
    counts: categories.map((c) => folded.get(c) ?? 0),
    shares: categories.map((c) => shares.get(c) ?? 0),
    ordered: options.ordered !== null,
  });
  return named(categories, pooled, options);
}

/**
 * Counts by bin. A category that belongs to no bin (seen only in a window outside the table) goes
 * to `(rest)`, else to `(pooled)`, else nowhere: it is no part of this comparison.
 */
export function binCounts(counts: Counts, bins: Bins): number[] {
  const index = binIndex(bins);
  const elsewhere = index.get(REST) ?? bins.pooledIndex;
  const sums = bins.names.map(() => 0);
  for (const [category, n] of counts) {
    const at = index.get(category) ?? elsewhere;
    if (at !== null) sums[at] = (sums[at] ?? 0) + n;
  }
  return sums;
}

/** Identity of a way of gathering, for remembering what was worked out with it. */
export function binsKey(bins: Bins): string {
  return JSON.stringify(bins.members);
}

const indexes = new WeakMap<Bins, ReadonlyMap<string, number>>();

function binIndex(bins: Bins): ReadonlyMap<string, number> {
  const known = indexes.get(bins);
  if (known !== undefined) return known;
  const index = new Map<string, number>();
  bins.members.forEach((members, at) => {
    for (const category of members) index.set(category, at);
  });
  indexes.set(bins, index);
  return index;
}

function judgedCategories(now: Counts, reference: Counts, options: BinOptions): string[] {
  const total = new Map(reference);
  for (const [category, n] of now) total.set(category, (total.get(category) ?? 0) + n);
  const all = [...total.keys()];
  if (all.length <= options.categoriesJudged) return inOrder(all, options.ordered);
  const size = (category: string): number => total.get(category) ?? 0;
  const largest = all
    .filter((category) => category !== REST)
    .sort((a, b) => size(b) - size(a) || byCodePoint(a, b))
    .slice(0, options.categoriesJudged - 1);
  return inOrder([...largest, REST], options.ordered);
}

/** Declared order first; what the declaration does not name follows, by code point. */
function inOrder(categories: readonly string[], ordered: readonly string[] | null): string[] {
  const rank = new Map((ordered ?? []).map((category, at) => [category, at]));
  const place = (category: string): number => rank.get(category) ?? rank.size;
  return [...categories].sort((a, b) => place(a) - place(b) || byCodePoint(a, b));
}

function fold(counts: Counts, categories: readonly string[]): Map<string, number> {
  const judged = new Set(categories);
  const folded = new Map<string, number>();
  for (const [category, n] of counts) {
    const name = judged.has(category) ? category : REST;
    folded.set(name, (folded.get(name) ?? 0) + n);
  }
  return folded;
}

function isSeen(category: string, sides: { now: Counts; reference: Counts }): boolean {
  return (sides.now.get(category) ?? 0) + (sides.reference.get(category) ?? 0) > 0;
}

function separateBins(categories: readonly string[]): Bins {
  return { names: categories, members: categories.map((c) => [c]), pooled: [], pooledIndex: null };
}

/** Nominal categories share one bin, `(pooled)`; ordered ones only join their neighbours. */
function named(
  categories: readonly string[],
  pooling: { bins: readonly (readonly number[])[]; pooled: readonly number[] },
  options: BinOptions,
): Bins {
  const name = (at: number): string => categories[at] ?? '';
  const members = pooling.bins.map((bin) => bin.map(name));
  const first = pooling.pooled[0];
  const nominalPool = options.ordered === null && first !== undefined;
  const at = nominalPool ? pooling.bins.findIndex((bin) => bin.includes(first)) : -1;
  return {
    names: members.map((bin, index) => (index === at ? POOLED : bin.join(' + '))),
    members,
    pooled: pooling.pooled.map(name),
    pooledIndex: at < 0 ? null : at,
  };
}

function byCodePoint(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}
