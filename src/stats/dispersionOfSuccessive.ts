import { chiSquaredUpperQuantile } from './chiSquaredUpperQuantile.js';
import { designWeight } from './designWeight.js';
import { fUpperQuantile } from './fUpperQuantile.js';
import { requireCounts, requireLength } from './preconditions.js';
import { solveRho } from './solveRho.js';
import { sum } from './sum.js';

const TRIMS = 3;
const TRIM_LEVEL = 0.05;

/** A window (or windows summed) and the one after it, counts by bin. */
export interface SuccessivePair {
  readonly before: readonly number[];
  /** Events of each window summed in `before`; one window when absent. */
  readonly sizes?: readonly number[];
  readonly after: readonly number[];
}

interface Sampled {
  readonly before: readonly number[];
  readonly eventsBefore: number;
  /** Their effective events are summed: windows vary independently of each other. */
  readonly sizes: readonly number[];
  readonly after: readonly number[];
  readonly eventsAfter: number;
}

/**
 * Intra-window correlation from the differences of successive windows, which slow wander passes.
 *
 * G_i(rho) is the deviance of pair i with weights N/(1 + (N-1) rho), summed over the windows of
 * its earlier side. rho solves
 * sum_i G_i(rho) = H (K-1) over H pairs, robustly: start where the median of G_i(rho) is the
 * median of chi-squared on K-1; then three times leave out the pairs with
 * G_i(rho)/(K-1) > F_{.05/H}(K-1, .6 H (K-1)) and solve again. With equal N this is the trimmed
 * mean of G_i(0)/(K-1), floored at 1. df2 = (K-1) 2H^2/(3H-1): the mean square successive
 * difference of von Neumann (1941, from memory). Trimming is own.
 *
 * In: pairs of K counts each. A pair with a side without events is ignored. Out: rho in
 * 0..0.999, df2, and H as `pairs`; no usable pair, or fewer than 2 bins, gives rho 0 and df2 0.
 * Refuses unequal lengths and negative cells with RangeError.
 * Cost: about 40 H K logarithms with unequal N, H K with equal N.
 */
export function dispersionOfSuccessive(pairs: readonly SuccessivePair[]): {
  readonly rho: number;
  readonly df2: number;
  readonly pairs: number;
} {
  const usable = sample(pairs);
  const h = usable.length;
  const df1 = (pairs[0]?.before.length ?? 0) - 1;
  if (h === 0 || df1 < 1) return { rho: 0, df2: 0, pairs: h };
  const deviances = usable.map(devianceOfRho);
  const bound = fUpperQuantile(TRIM_LEVEL / h, df1, 0.6 * h * df1) * df1;
  const middle = (at: number): number => median(deviances.map((g) => g(at)));
  let rho = solveRho(middle, chiSquaredUpperQuantile(0.5, df1));
  for (let trim = 0; trim < TRIMS; trim += 1) {
    const atRho = rho;
    const kept = deviances.filter((g) => g(atRho) <= bound);
    rho = solveRho((at) => kept.reduce((total, g) => total + g(at), 0), kept.length * df1);
  }
  return { rho, df2: (df1 * 2 * h * h) / (3 * h - 1), pairs: h };
}

function sample(pairs: readonly SuccessivePair[]): Sampled[] {
  const width = pairs[0]?.before.length ?? 0;
  const sampled = pairs.map(({ before, sizes, after }, i) => {
    for (const [name, counts] of [
      ['before', before],
      ['after', after],
    ] as const) {
      requireLength(`pairs[${i}].${name}`, counts, width);
      requireCounts(`pairs[${i}].${name}`, counts);
    }
    const eventsBefore = sum(before);
    if (sizes !== undefined && sum(sizes) !== eventsBefore) {
      throw new RangeError(`pairs[${i}].sizes: sum to ${sum(sizes)}, not to ${eventsBefore}`);
    }
    return {
      before,
      eventsBefore,
      sizes: sizes ?? [eventsBefore],
      after,
      eventsAfter: sum(after),
    };
  });
  return sampled.filter((pair) => pair.eventsBefore > 0 && pair.eventsAfter > 0);
}

/**
 * G_i as a function of rho. The logs of the shares themselves do not depend on rho and are taken
 * once; with equal N neither do the joint shares, and one deviance serves for every rho.
 */
function devianceOfRho(pair: Sampled): (rho: number) => number {
  const { eventsBefore, eventsAfter } = pair;
  const q = pair.after.map((count) => count / eventsAfter);
  const p = pair.before.map((count) => count / eventsBefore);
  const [ownNow, ownBefore] = [negativeEntropy(q), negativeEntropy(p)];
  const at = (rho: number): number => {
    const a = designWeight(eventsAfter, rho);
    const b = pair.sizes.reduce((total, size) => total + designWeight(size, rho), 0);
    let cross = 0;
    for (let k = 0; k < q.length; k += 1) {
      const joint = a * (q[k] ?? 0) + b * (p[k] ?? 0);
      if (joint > 0) cross += joint * Math.log(joint / (a + b));
    }
    return Math.max(0, 2 * (a * ownNow + b * ownBefore - cross));
  };
  if (pair.sizes.length > 1 || eventsBefore !== eventsAfter) return at;
  const plain = at(0);
  return (rho) => plain / (1 + (eventsAfter - 1) * rho);
}

/** sum p log p. */
function negativeEntropy(shares: readonly number[]): number {
  return shares.reduce((total, p) => (p > 0 ? total + p * Math.log(p) : total), 0);
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const half = sorted.length / 2;
  const upper = sorted[Math.floor(half)] ?? 0;
  return Number.isInteger(half) ? (upper + (sorted[half - 1] ?? 0)) / 2 : upper;
}
