import { devianceTerm } from './devianceTerm.js';
import { logPoissonMass } from './logPoissonMass.js';

/** How far a multinomial outcome lies from its shares: what "at least as extreme" means. */
export type MultinomialOrder = 'probability' | 'pearson' | 'likelihood-ratio';

/** One bin still to be filled, and what it and the later ones can do; indexed by events. */
export interface MultinomialStage {
  /** Distance added by x events in this bin: convex in x and never negative. */
  readonly cost: Float64Array;
  /** log Poisson probability of x events in this bin. */
  readonly log: Float64Array;
  /** Least and greatest distance of any way to fill this and the later bins with r events. */
  readonly least: Float64Array;
  readonly most: Float64Array;
  /** log of the summed probability of all those ways. */
  readonly whole: Float64Array;
}

const distances: Readonly<Record<MultinomialOrder, (x: number, mean: number) => number>> = {
  probability: (x, mean) => -logPoissonMass(x, mean),
  pearson: (x, mean) => (x - mean) ** 2 / mean,
  'likelihood-ratio': (x, mean) => 2 * devianceTerm(x, mean),
};

/**
 * The bins of an exact multinomial test, first to last, each with the bounds of the rest.
 *
 * In: shares > 0 with sum 1, events n >= 1. Since every cost is convex, the least total comes
 * from merging the increments of two convex functions, and the greatest has all events in one
 * bin. Cost: n + 1 steps and cells a bin.
 */
export function multinomialStages(
  shares: readonly number[],
  events: number,
  order: MultinomialOrder,
): MultinomialStage[] {
  const distance = distances[order];
  const table = (value: (x: number) => number): Float64Array =>
    Float64Array.from({ length: events + 1 }, (_, x) => value(x));
  const stages: MultinomialStage[] = [];
  let tail = 0;
  let atZero = 0;
  for (const share of [...shares].reverse()) {
    tail += share;
    const mean = events * share;
    const later = stages.at(-1);
    const cost = table((x) => distance(x, mean));
    const before = atZero;
    atZero += cost[0] ?? 0;
    // With all r events in this bin the later ones stay at zero, and the other way round.
    const most = table((r) => {
      const here = before + (cost[r] ?? 0);
      return later === undefined ? here : Math.max(here, (cost[0] ?? 0) + (later.most[r] ?? 0));
    });
    const least = later === undefined ? cost : mergeIncrements(cost, later.least);
    const rest = events * tail;
    const whole = table((r) => logPoissonMass(r, rest));
    stages.push({ cost, log: table((x) => logPoissonMass(x, mean)), least, most, whole });
  }
  return stages.reverse();
}

/** min over a + b = r of one(a) + two(b), both convex: always take the cheaper next event. */
function mergeIncrements(one: Float64Array, two: Float64Array): Float64Array {
  const least = new Float64Array(one.length);
  let [a, b] = [0, 0];
  for (let r = 0; r < least.length; r += 1) {
    least[r] = (one[a] ?? 0) + (two[b] ?? 0);
    const stepOne = (one[a + 1] ?? Infinity) - (one[a] ?? 0);
    const stepTwo = (two[b + 1] ?? Infinity) - (two[b] ?? 0);
    if (stepOne <= stepTwo) a += 1;
    else b += 1;
  }
  return least;
}
