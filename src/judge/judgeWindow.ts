import { REST } from '../config/strand.js';
import { newcombeLowerBound } from '../stats/newcombeLowerBound.js';
import { quasiLikelihoodF } from '../stats/quasiLikelihoodF.js';
import type { Comparison, Evidence } from '../terms/evidence.js';
import type { Carriers } from '../terms/recipe.js';
import type { Counts } from '../terms/tally.js';
import type { Bins } from './bins.js';
import { binCounts } from './bins.js';
import { describe, sharesOf } from './compare.js';
import type { Reference } from './reference.js';

/** A tested window: the evidence, and what the alert module needs to follow a shift. */
export interface Tested {
  readonly evidence: Evidence;
  /** At least the tolerance has moved (the gate after the test). */
  readonly overTolerance: boolean;
  /** The tolerance that the gate held it against: of the whole mix, or of one category. */
  readonly gateTolerance: number;
  /** The categories that the gate owes its passing to, as a set that rises or falls together. */
  readonly carriers: Carriers;
}

export interface Tolerance {
  readonly moved: number;
  readonly each: ReadonlyMap<string, number>;
}

export interface WindowInput {
  readonly counts: Counts;
  /** Counts behind the reference, or the declared shares. */
  readonly before: Counts;
  readonly declared: boolean;
  readonly bins: Bins;
  readonly reference: Reference;
}

/**
 * Tests one window against its reference: the 2 x K homogeneity G2 with the design effect inside
 * the weights, referred to F(K - 1, df2) (quasi-likelihood: McCullagh & Nelder 1989). A sampled
 * reference enters with its own error (weight W); only declared shares are taken as fixed.
 * `counts` must hold at least one event, `bins` at least two bins.
 */
export function compareWindow(input: WindowInput): {
  readonly comparison: Comparison & { readonly rho: number };
  readonly weightNow: number;
  readonly carriers: readonly number[];
} {
  const { bins, reference } = input;
  const now = binCounts(input.counts, bins);
  const test = quasiLikelihoodF({ now, ...reference });
  const { description, carriers } = describe({
    bins,
    now,
    before: input.declared ? null : binCounts(input.before, bins),
    shareOf: sharesOf(input.before, input.counts, bins),
    shares: reference.shares,
    weightNow: test.weightNow,
    weightReference: reference.weight,
    df2: reference.df2,
  });
  const comparison = {
    method: 'g2-f',
    statistic: test.f,
    df: test.df1,
    df2: test.df2,
    p: Math.exp(test.logP),
    logP: test.logP,
    rho: reference.rho,
    ...description,
  } as const;
  return { comparison, weightNow: test.weightNow, carriers };
}

/** The test of a window, its evidence, and the tolerance as a gate after it. */
export function judgeWindow(input: WindowInput & { readonly tolerance: Tolerance }): Tested {
  const { bins, reference, tolerance } = input;
  const { comparison, weightNow, carriers } = compareWindow(input);
  const evidence: Evidence = {
    ...comparison,
    reference: reference.note,
    weightNow,
    weightReference: Number.isFinite(reference.weight) ? reference.weight : null,
    theta: 1,
    rawLogP: comparison.logP,
    threshold: null,
    logThreshold: null,
    tolerance: tolerance.moved,
  };
  const now = binCounts(input.counts, bins);
  return withGate(evidence, { bins, now, reference, tolerance, carriers });
}

interface GateInput {
  readonly bins: Bins;
  readonly now: readonly number[];
  readonly reference: Reference;
  readonly tolerance: Tolerance;
  readonly carriers: readonly number[];
}

function withGate(evidence: Evidence, input: GateInput): Tested {
  const gateTolerance = input.tolerance.moved;
  if (evidence.moved.atLeast > gateTolerance) {
    const carriers = carriersOf(input.carriers, input);
    return { evidence, overTolerance: true, gateTolerance, carriers };
  }
  const own = categoryOverItsOwn(evidence, input);
  if (own !== null) {
    const carriers = carriersOf([own.at], input);
    return { evidence, overTolerance: true, gateTolerance: own.tolerance, carriers };
  }
  // A tolerance of nothing is no gate: the test alone decides.
  const overTolerance = gateTolerance === 0;
  return { evidence, overTolerance, gateTolerance, carriers: carriersOf(risen(input), input) };
}

/** The first category whose one-sided 95 % lower bound of change exceeds its own tolerance. */
function categoryOverItsOwn(
  evidence: Evidence,
  input: GateInput,
): { readonly at: number; readonly tolerance: number } | null {
  const total = input.now.reduce((a, b) => a + b, 0);
  for (const [at, members] of input.bins.members.entries()) {
    const [category] = members;
    if (members.length !== 1 || category === undefined) continue;
    const tolerance = input.tolerance.each.get(category);
    if (tolerance === undefined) continue;
    const bound = newcombeLowerBound({
      after: (input.now[at] ?? 0) / total,
      nAfter: evidence.weightNow,
      before: input.reference.shares[at] ?? 0,
      nBefore: input.reference.weight,
    });
    if (bound > tolerance) return { at, tolerance };
  }
  return null;
}

/** All bins whose share grew: what stands in for the carriers when none are shown. */
function risen(input: GateInput): number[] {
  const total = input.now.reduce((a, b) => a + b, 0);
  return [...input.now.keys()].filter(
    (at) => (input.now[at] ?? 0) / total > (input.reference.shares[at] ?? 0),
  );
}

function carriersOf(indexes: readonly number[], input: GateInput): Carriers {
  const { bins, now, reference } = input;
  const total = now.reduce((a, b) => a + b, 0);
  const sumAt = (values: readonly number[]): number =>
    indexes.reduce((s, at) => s + (values[at] ?? 0), 0);
  const categories = indexes.flatMap((at) => bins.members[at] ?? []);
  const rest = bins.members.findIndex((members) => members.includes(REST));
  const elsewhere = rest >= 0 ? rest : bins.pooledIndex;
  return {
    categories,
    named: bins.members.flat(),
    unnamed: elsewhere !== null && indexes.includes(elsewhere),
    before: sumAt(reference.shares),
    now: sumAt(now) / total,
  };
}
