import { fUpperQuantile } from './fUpperQuantile.js';
import { jointShares, requireWeightedPair } from './pairDeviance.js';
import type { WeightedPair } from './pairDeviance.js';
import { requirePositiveOrInfinite } from './preconditions.js';
import { requirePooledIndex } from './requirePooledIndex.js';
import { normalLogSf } from './normalLogSf.js';
import { tUpperQuantile } from './tUpperQuantile.js';

const ERROR = 0.05;

export interface MovedShare {
  /** Debiased total variation distance, 0..1, between the two bounds. */
  readonly estimate: number;
  readonly atLeast: number;
  readonly atMost: number;
  /** Bins whose joint rise gives `atLeast`, ascending; none when that is 0. */
  readonly carriers: readonly number[];
}

interface Bin {
  readonly index: number;
  readonly difference: number;
  readonly joint: number;
}

/**
 * The share of events that moved: total variation TV = 1/2 sum |q - p|, with bounds.
 *
 * With v = 1/w + 1/W and joint shares pJ: the estimate is TV less the part that noise alone
 * would show, 1/2 sum se h(|d|/se), se = sqrt(pJ (1-pJ) v), h(t) = 2 phi(t) - 2t(1 - Phi(t)).
 * The lower bound is Scheffe's (1953, from memory), simultaneous over all sets of bins:
 * max over sets of D - sqrt((K-1) F_.05(K-1, df2) v P (1-P)); a positive maximum is attained at
 * a prefix of the order by d/pJ, because D and P add up and -sqrt(P(1-P)) is convex (own). The
 * upper bound is TV + 1/2 t_.05(df2) sqrt(v), plus the smaller share of the pooled bin, where
 * events may have moved unseen. Bounds are 95 % each; the estimate is kept between them.
 *
 * In: shares (sum 1) of K bins, effective events > 0 (W may be Infinity), df2 > 0 or Infinity,
 * the index of the pooled bin or null. Bins empty on both sides do not count towards K.
 * Refuses other input with RangeError. Cost: K log K and two critical values.
 */
export function moved(
  input: WeightedPair & { readonly df2: number; readonly pooledIndex: number | null },
): MovedShare {
  check(input);
  const { now, weightNow, reference, weightReference, df2, pooledIndex } = input;
  const v = 1 / weightNow + 1 / weightReference;
  const joint = jointShares(input);
  const bins = now
    .map((q, index) => ({
      index,
      difference: q - (reference[index] ?? 0),
      joint: joint[index] ?? 0,
    }))
    .filter((bin) => bin.joint > 0 || bin.difference !== 0);
  const distance = bins.reduce((total, bin) => total + Math.abs(bin.difference), 0) / 2;
  const pool = pooledIndex ?? -1;
  const hidden = Math.min(now[pool] ?? 0, reference[pool] ?? 0);
  const reach = 0.5 * tUpperQuantile(ERROR, df2) * Math.sqrt(v);
  const atMost = Math.min(1, distance + reach + hidden);
  const lower = lowerBound(bins, v, df2);
  const debiased = Math.max(0, distance - bias(bins, v));
  const estimate = Math.min(atMost, Math.max(lower.atLeast, debiased));
  return { estimate, atMost, ...lower };
}

function check(
  input: WeightedPair & { readonly df2: number; readonly pooledIndex: number | null },
): void {
  requireWeightedPair(input);
  requirePositiveOrInfinite('df2', input.df2);
  requirePooledIndex(input.pooledIndex, input.now.length);
}

function lowerBound(
  bins: readonly Bin[],
  v: number,
  df2: number,
): { atLeast: number; carriers: readonly number[] } {
  const df1 = bins.length - 1;
  if (df1 < 1) return { atLeast: 0, carriers: [] };
  const scale = df1 * fUpperQuantile(ERROR, df1, df2) * v;
  const ratio = (bin: Bin): number => (bin.joint > 0 ? bin.difference / bin.joint : Infinity);
  // Infinity - Infinity is not a number: equal ratios are told apart by index alone.
  const order = [...bins].sort((a, b) =>
    ratio(a) === ratio(b) ? a.index - b.index : ratio(b) - ratio(a),
  );
  let [atLeast, best, rise, share] = [0, 0, 0, 0];
  order.slice(0, -1).forEach((bin, j) => {
    rise += bin.difference;
    share += bin.joint;
    const bound = rise - Math.sqrt(scale * share * Math.max(0, 1 - share));
    if (bound > atLeast) [atLeast, best] = [bound, j + 1];
  });
  const carriers = order.slice(0, best).map((bin) => bin.index);
  return { atLeast: Math.min(1, atLeast), carriers: carriers.sort((a, b) => a - b) };
}

/** What |d| overstates on average, bin by bin, when the true difference is what was seen. */
function bias(bins: readonly Bin[], v: number): number {
  let total = 0;
  for (const { difference, joint } of bins) {
    const se = Math.sqrt(joint * Math.max(0, 1 - joint) * v);
    if (se === 0) continue;
    const t = Math.abs(difference) / se;
    const density = Math.exp(-0.5 * t * t) / Math.sqrt(2 * Math.PI);
    total += se * (2 * density - 2 * t * Math.exp(normalLogSf(t)));
  }
  return total / 2;
}
