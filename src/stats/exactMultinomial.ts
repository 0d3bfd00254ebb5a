import type { ExactResult } from './exactTable.js';
import { logPoissonMass } from './logPoissonMass.js';
import { addLog, emptyLogSum, logOfSum } from './logSum.js';
import type { LogSum } from './logSum.js';
import { multinomialClosing } from './multinomialClosing.js';
import { multinomialStages } from './multinomialStages.js';
import type { MultinomialOrder, MultinomialStage } from './multinomialStages.js';
import { requireInteger, requireLength, requireShares } from './preconditions.js';
import { sum } from './sum.js';

/** Outcomes whose distances differ by less than this, relatively, count as equally far. */
const TIE = 1e-7;
/** Partial outcomes are followed as one on a grid this much finer than a tie, over all bins. */
const MERGE_PART = 0.01;

export type MultinomialResult =
  | ExactResult
  | {
      /** Categories with events although their share is 0, in the order given. */
      readonly impossible: readonly number[];
      readonly p: number;
      readonly logP: number;
    };

/** Ways to have filled the bins so far, with one distance: their summed probability's log. */
interface PartialOutcome {
  readonly cost: number;
  log: number;
}

interface Walk {
  readonly stages: readonly MultinomialStage[];
  readonly limit: number;
  readonly grid: number;
  readonly maxWork: number;
  readonly counted: LogSum;
  work: number;
}

/**
 * Exact goodness of fit of counts to shares that were fixed beforehand.
 *
 * Null: multinomial with exactly these shares. p is the probability of all outcomes at least as
 * far from the shares as the counts are: no more probable (`probability`), or with Pearson's X2
 * or the likelihood ratio G2 at least as large; differences under 1e-7, relatively, are ties.
 * Bins are filled one after another, the smallest share first; partial outcomes at one distance
 * are followed as one and cut off as soon as all, or none, of their completions count (idea:
 * Mehta & Patel 1983, from memory). The last two bins are done in one stride: the distance is
 * convex, so what does not count is an interval. Outcomes are never listed.
 *
 * In: K whole counts; K shares in [0, 1], sum 1; maxWork, the most steps allowed (ten
 * million take under a second). Out: p in (0, 1] with its natural log; `tooLarge`; or
 * `impossible` with p 0 when a share of 0 has events. A share of 0 without events is left out;
 * without events p is 1. Refuses other input with RangeError. Measured against exact fractions
 * (test/published/exact.py): 1e-12 relatively. Valid only without overdispersion.
 * Memory: 40 (n + 1) bytes a category, and some 40 a partial outcome (fewer than the steps).
 */
export function exactMultinomial(input: {
  readonly counts: readonly number[];
  readonly shares: readonly number[];
  readonly maxWork: number;
  readonly order: MultinomialOrder;
}): MultinomialResult {
  const { counts, shares, maxWork, order } = input;
  requireInput(counts, shares, maxWork);
  const impossible = [...counts.keys()].filter((k) => (counts[k] ?? 0) > 0 && shares[k] === 0);
  if (impossible.length > 0) return { impossible, p: 0, logP: -Infinity };
  const events = sum(counts);
  const bins = arrange(counts, shares);
  const work = bins.length * (events + 1);
  if (work > maxWork) return { tooLarge: true, work };
  if (events === 0 || bins.length < 2) return { p: 1, logP: 0 };
  const stages = multinomialStages(
    bins.map((bin) => bin.share),
    events,
    order,
  );
  const observed = sum(bins.map((bin, k) => stages[k]?.cost[bin.count] ?? 0));
  const tie = order === 'probability' ? Math.log1p(TIE) : TIE * observed;
  if (tie === 0) return { p: 1, logP: 0 };
  const grid = (tie * MERGE_PART) / bins.length;
  const counted = emptyLogSum();
  const walk: Walk = { stages, limit: observed - tie, grid, maxWork, counted, work };
  if (!follow(walk, events)) return { tooLarge: true, work: walk.work };
  const logP = Math.min(0, logOfSum(counted) - logPoissonMass(events, events));
  return { p: Math.exp(logP), logP };
}

function requireInput(counts: readonly number[], shares: readonly number[], maxWork: number): void {
  requireLength('shares', shares, counts.length);
  counts.forEach((count, k) => {
    requireInteger(`counts[${k}]`, count, 0, Number.MAX_SAFE_INTEGER);
  });
  requireShares('shares', shares);
  requireInteger('maxWork', maxWork, 0, Number.MAX_SAFE_INTEGER);
}

/** Bins with a share, scaled to sum 1, in an order that no permutation of the input changes. */
function arrange(
  counts: readonly number[],
  shares: readonly number[],
): { count: number; share: number }[] {
  const bins = counts
    .map((count, k) => ({ count, share: shares[k] ?? 0 }))
    .filter((bin) => bin.share > 0)
    .sort((a, b) => a.share - b.share || a.count - b.count);
  const whole = sum(bins.map((bin) => bin.share));
  return bins.map(({ count, share }) => ({ count, share: share / whole }));
}

/** Adds up what counts; false when the work became too large. */
function follow(walk: Walk, events: number): boolean {
  let layer: PartialOutcome[][] = Array.from({ length: events + 1 }, () => []);
  layer[events] = [{ cost: 0, log: 0 }];
  const last = walk.stages.length - 2;
  const [a, b] = walk.stages.slice(last);
  if (a === undefined || b === undefined) return true;
  for (let k = 0; k < last; k += 1) {
    const next: PartialOutcome[][] = [];
    for (let to = 0; to <= events; to += 1) {
      const partials = gather(walk, layer, k, to);
      if (partials === undefined) return false;
      if (k < last - 1) next.push(partials);
      else close(walk, partials, to, [a, b]);
    }
    layer = next;
  }
  if (last === 0) close(walk, layer[events] ?? [], events, [a, b]);
  return walk.work <= walk.maxWork;
}

/** All ways to fill bin k that leave `to` events for the later bins. */
function gather(
  walk: Walk,
  layer: readonly (readonly PartialOutcome[])[],
  k: number,
  to: number,
): PartialOutcome[] | undefined {
  const stage = walk.stages[k];
  const later = walk.stages[k + 1];
  const merged = new Map<number, PartialOutcome>();
  const [least, most, whole] = [later?.least[to] ?? 0, later?.most[to] ?? 0, later?.whole[to] ?? 0];
  for (let from = to; from < layer.length; from += 1) {
    const partials = layer[from] ?? [];
    walk.work += partials.length;
    if (walk.work > walk.maxWork) return undefined;
    const step = stage?.cost[from - to] ?? 0;
    const logStep = stage?.log[from - to] ?? 0;
    for (const partial of partials) {
      const cost = partial.cost + step;
      const log = partial.log + logStep;
      if (cost + least >= walk.limit) addLog(walk.counted, log + whole);
      else if (cost + most >= walk.limit) merge(merged, walk.grid, { cost, log });
    }
  }
  return [...merged.values()];
}

function merge(merged: Map<number, PartialOutcome>, grid: number, partial: PartialOutcome): void {
  const key = Math.round(partial.cost / grid);
  const known = merged.get(key);
  if (known === undefined) {
    merged.set(key, partial);
    return;
  }
  const [low, high] = [Math.min(known.log, partial.log), Math.max(known.log, partial.log)];
  known.log = high + Math.log1p(Math.exp(low - high));
}

function close(
  walk: Walk,
  partials: readonly PartialOutcome[],
  left: number,
  pair: readonly [MultinomialStage, MultinomialStage],
): void {
  if (partials.length === 0) return;
  const closing = multinomialClosing(pair, left);
  walk.work += 2 * (left + 1) + partials.length;
  for (const { cost, log } of partials) closing(walk.counted, log, walk.limit - cost);
}
