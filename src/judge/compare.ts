import { REST } from '../config/strand.js';
import { cohensW } from '../stats/cohensW.js';
import { cramersV } from '../stats/cramersV.js';
import { goodnessOfFit } from '../stats/goodnessOfFit.js';
import { likelihoodRatio } from '../stats/likelihoodRatio.js';
import { moved as movedShare } from '../stats/moved.js';
import { newcombe } from '../stats/newcombe.js';
import { pearsonChiSquared } from '../stats/pearsonChiSquared.js';
import { peel } from '../stats/peel.js';
import type {
  ChiSquaredResult,
  Comparison,
  EvidenceTable,
  MemberShare,
  Mover,
} from '../terms/evidence.js';
import type { Counts } from '../terms/tally.js';
import type { Bins } from './bins.js';

/** Level of the intervals: simultaneous over the categories by Bonferroni's rule. */
const INTERVAL_ERROR = 0.05;

/** Members of a joint bin that are listed. */
const MEMBERS_SHOWN = 5;

/** Both sides of a comparison, by bin. Weights are effective events; Infinity if declared. */
export interface Sides {
  readonly bins: Bins;
  readonly now: readonly number[];
  /** Counts of the reference as they were observed; null for declared shares. */
  readonly before: readonly number[] | null;
  /** Shares of the reference, as the test uses them. */
  readonly shares: readonly number[];
  readonly weightNow: number;
  readonly weightReference: number;
  /** Share of a single category on either side, for bins that hold several. */
  readonly shareOf: (side: 'before' | 'after', category: string) => number;
  /** Degrees of freedom behind the dispersion; Infinity where none was estimated. */
  readonly df2: number;
}

export type Description = Pick<
  Comparison,
  'pearson' | 'g2' | 'table' | 'pooled' | 'moved' | 'cramersV' | 'cohensW' | 'movers'
>;

/** All of a comparison that does not depend on which test judges it. */
export function describe(sides: Sides): {
  readonly description: Description;
  /** Bins whose rise gives `moved.atLeast`; none when nothing is shown to have moved. */
  readonly carriers: readonly number[];
} {
  const { bins, now, shares } = sides;
  const total = sum(now);
  const nowShares = now.map((n) => n / total);
  const plain = plainTests(sides);
  const amount = movedShare({
    now: nowShares,
    weightNow: sides.weightNow,
    reference: shares,
    weightReference: sides.weightReference,
    df2: sides.df2,
    pooledIndex: bins.pooledIndex,
  });
  const description = {
    ...plain,
    pooled: bins.pooled,
    moved: { estimate: amount.estimate, atLeast: amount.atLeast, atMost: amount.atMost },
    cohensW: cohensW(nowShares, shares),
    movers: movers(sides, nowShares),
  };
  return { description, carriers: amount.carriers };
}

/**
 * Reads single categories' shares off the counts; declared shares stand for their counts. What has
 * no place of its own in the bins is `(rest)`.
 */
export function sharesOf(before: Counts, after: Counts, bins: Bins): Sides['shareOf'] {
  const named = new Set(bins.members.flat());
  const restOf = (counts: Counts): number =>
    sum([...counts].filter(([c]) => c === REST || !named.has(c)).map(([, n]) => n));
  const sides = { before, after };
  const whole = { before: totalOf(before), after: totalOf(after) };
  const rest = { before: restOf(before), after: restOf(after) };
  return (side, category) =>
    (category === REST ? rest[side] : (sides[side].get(category) ?? 0)) / whole[side];
}

function totalOf(counts: Counts): number {
  return sum([...counts.values()]);
}

interface PlainTests {
  readonly pearson: ChiSquaredResult;
  readonly g2: ChiSquaredResult;
  readonly table: EvidenceTable;
  readonly cramersV: number;
}

function plainTests(sides: Sides): PlainTests {
  const { bins, now, before, shares } = sides;
  if (before === null) {
    const fit = goodnessOfFit(now, shares);
    const table = {
      rows: ['after'],
      categories: bins.names,
      observed: [now],
      expected: [fit.expected],
    };
    // For one sample V is the root of X2 / (N (K - 1)): 1 when all events are in one category.
    const largest = sum(now) * Math.max(1, bins.names.length - 1);
    const v = Math.sqrt(fit.pearson.statistic / largest);
    return { pearson: chi(fit.pearson), g2: chi(fit.g2), table, cramersV: v };
  }
  const observed = [before, now];
  const pearson = pearsonChiSquared(observed);
  const table = {
    rows: ['before', 'after'],
    categories: bins.names,
    observed,
    expected: pearson.expected,
  };
  const v = cramersV(pearson.statistic, observed);
  return { pearson: chi(pearson), g2: chi(likelihoodRatio(observed)), table, cramersV: v };
}

function chi(result: ChiSquaredResult): ChiSquaredResult {
  return {
    statistic: result.statistic,
    df: result.df,
    p: result.p,
    logP: result.logP,
  };
}

function membersOf(sides: Sides, categories: readonly string[]): Pick<Mover, 'members'> {
  if (categories.length < 2) return {};
  const members = categories.map((category) => ({
    category,
    before: sides.shareOf('before', category),
    after: sides.shareOf('after', category),
  }));
  const change = (m: MemberShare): number => Math.abs(m.after - m.before);
  const order = members.sort((a, b) => change(b) - change(a) || (a.category < b.category ? -1 : 1));
  return { members: order.slice(0, MEMBERS_SHOWN) };
}

/** Blamed categories first, then by the size of the change. */
function movers(sides: Sides, nowShares: readonly number[]): Mover[] {
  const { bins, shares } = sides;
  const peeled = peel({
    now: nowShares,
    weightNow: sides.weightNow,
    reference: shares,
    weightReference: sides.weightReference,
    df2: sides.df2,
  });
  const blamed = new Set(peeled.blamed.map((b) => b.index));
  const list = bins.names.map((category, at): Mover => {
    const before = shares[at] ?? 0;
    const after = nowShares[at] ?? 0;
    const interval = newcombe({
      after,
      nAfter: sides.weightNow,
      before,
      nBefore: sides.weightReference,
      level: 1 - INTERVAL_ERROR / bins.names.length,
    });
    return {
      category,
      before,
      after,
      difference: after - before,
      interval,
      residual: peeled.residuals[at] ?? 0,
      blamed: blamed.has(at),
      ...membersOf(sides, bins.members[at] ?? []),
    };
  });
  return list.sort(byWeight);
}

function byWeight(a: Mover, b: Mover): number {
  if (a.blamed !== b.blamed) return a.blamed ? -1 : 1;
  const size = Math.abs(b.difference) - Math.abs(a.difference);
  if (size !== 0) return size;
  return a.category < b.category ? -1 : 1;
}

function sum(numbers: readonly number[]): number {
  return numbers.reduce((total, n) => total + n, 0);
}
