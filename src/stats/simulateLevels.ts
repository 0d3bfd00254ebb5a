import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';

import { goodnessOfFit } from './goodnessOfFit.js';
import { pearsonChiSquared } from './pearsonChiSquared.js';
import { requireInteger, requireShares } from './preconditions.js';
import { sum } from './sum.js';

const LOG_LEVEL = Math.log(0.05);
const MAX_REPETITIONS = 1_000_000;
const MAX_SIZE = 10_000_000;
const MAX_SEED = 0xffffffff;

/** How often a test called two samples of one distribution different, at the 5 % level. */
export interface LevelRow {
  /** Events in each of the two samples. */
  readonly n: number;
  /** Both samples as rows of one table. */
  readonly tableLevel: number;
  /** The first sample taken for the truth, as fixed shares. */
  readonly fixedLevel: number;
}

/**
 * Why a reference that was counted must be a row of the table and not fixed shares.
 *
 * Draws pairs of samples of equal size from one distribution and tests each pair twice by
 * Pearson's X2 at the 5 % level: as a 2 x K table, and with the first sample's shares taken as
 * fixed. A right test errs in about 5 % of pairs. The second way forgets that the first sample
 * scatters too: its statistic is about twice chi-squared. Categories that the first sample never
 * saw are left out of the second way (else any event there would be impossible), which makes it
 * look better than it is, not worse. Nothing is pooled.
 *
 * In: seed 0..2^32 - 1, repetitions 1..1e6 pairs a size, sizes of 1..1e7 events, shares (sum 1).
 * The same input gives the same output. Out: one row a size, in the order given; levels 0..1
 * with a standard error of at most 0.5/sqrt(repetitions). Refuses other input with RangeError.
 * Cost: 2 x size draws a repetition.
 */
export function simulateLevels(input: {
  readonly seed: number;
  readonly repetitions: number;
  readonly sizes: readonly number[];
  readonly shares: readonly number[];
}): LevelRow[] {
  const { seed, repetitions, sizes, shares } = input;
  requireInteger('seed', seed, 0, MAX_SEED);
  requireInteger('repetitions', repetitions, 1, MAX_REPETITIONS);
  requireShares('shares', shares);
  sizes.forEach((size, index) => requireInteger(`sizes[${index}]`, size, 1, MAX_SIZE));
  const random = xoroshiro128plus(seed);
  return sizes.map((n) => {
    let [table, fixed] = [0, 0];
    for (let pair = 0; pair < repetitions; pair += 1) {
      const first = drawSample(random, n, shares);
      const second = drawSample(random, n, shares);
      if (pearsonChiSquared([first, second]).logP <= LOG_LEVEL) table += 1;
      if (rejectsFixed(first, second)) fixed += 1;
    }
    return { n, tableLevel: table / repetitions, fixedLevel: fixed / repetitions };
  });
}

function rejectsFixed(first: readonly number[], second: readonly number[]): boolean {
  const seen = first.map((_, k) => k).filter((k) => (first[k] ?? 0) > 0);
  const total = sum(first);
  const shares = seen.map((k) => (first[k] ?? 0) / total);
  const counts = seen.map((k) => second[k] ?? 0);
  return goodnessOfFit(counts, shares).pearson.logP <= LOG_LEVEL;
}

function drawSample(random: RandomGenerator, n: number, shares: readonly number[]): number[] {
  const counts = shares.map(() => 0);
  for (let event = 0; event < n; event += 1) {
    const k = pick(uniformFloat64(random), shares);
    counts[k] = (counts[k] ?? 0) + 1;
  }
  return counts;
}

/** The category whose slice of [0, 1) holds `u`; the last one with a share for what is left. */
function pick(u: number, shares: readonly number[]): number {
  let [left, last] = [u, 0];
  for (const [k, share] of shares.entries()) {
    if (share === 0) continue;
    if (left < share) return k;
    left -= share;
    last = k;
  }
  return last;
}
