import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { cohensW } from '../../../src/stats/cohensW.js';
import { moved } from '../../../src/stats/moved.js';
import { newcombeLowerBound } from '../../../src/stats/newcombeLowerBound.js';
import { pairDeviance } from '../../../src/stats/pairDeviance.js';
import type { WeightedPair } from '../../../src/stats/pairDeviance.js';
import { peel } from '../../../src/stats/peel.js';
import { quasiLikelihoodF } from '../../../src/stats/quasiLikelihoodF.js';
import {
  arrange,
  expectAtMost,
  expectLogP,
  expectSame,
  halve,
  merge,
  orderOf,
  pairOf,
  pick,
  RUNS,
  sharesOf,
} from './arbitraries.js';

describe('a window against weighted shares', () => {
  const weightOf = fc.integer({ min: 5, max: 50_000 });
  const pairs = fc.tuple(pairOf, weightOf, weightOf, pick).map(([rows, a, b, seed]) => {
    const [now = [], reference = []] = rows.map(sharesOf);
    return { pair: { now, weightNow: a, reference, weightReference: b }, counts: rows[0], seed };
  });
  const change = (
    pair: WeightedPair,
    by: (values: readonly number[]) => number[],
  ): WeightedPair => {
    return { ...pair, now: by(pair.now), reference: by(pair.reference) };
  };

  it('pairDeviance, quasiLikelihoodF and cohensW: order, weight, halving, merging', () => {
    fc.assert(
      fc.property(pairs, ({ pair, counts, seed }) => {
        const order = orderOf(pair.now.length, seed);
        const mixed = change(pair, (values) => arrange(values, order));
        const halved = change(pair, (values) => halve(values, seed));
        const merged = change(pair, (values) => merge(values, seed));
        const g = pairDeviance(pair);
        const w = cohensW(pair.now, pair.reference);
        expectSame(pairDeviance(mixed), g, 1e-8);
        expectSame(pairDeviance(halved), g, 1e-8);
        expectAtMost(pairDeviance(merged), g);
        expectSame(cohensW(mixed.now, mixed.reference), w);
        expectSame(cohensW(halved.now, halved.reference), w);
        expectAtMost(cohensW(merged.now, merged.reference), w);
        const [weightNow, weightReference] = [2 * pair.weightNow, 2 * pair.weightReference];
        expectSame(pairDeviance({ ...pair, weightNow, weightReference }), 2 * g, 1e-8);
        const input = { weight: pair.weightReference, rho: 0.003, df2: 55 };
        const test = quasiLikelihoodF({ ...input, now: counts, shares: pair.reference });
        const other = quasiLikelihoodF({
          ...input,
          now: arrange(counts, order),
          shares: mixed.reference,
        });
        expectLogP(test.logP);
        expectSame(other.g, test.g, 1e-8);
        expectSame(other.logP, test.logP, 1e-8);
        // More clustering can only weaken the evidence.
        const clustered = { ...input, now: counts, shares: pair.reference, rho: 0.01 };
        expectAtMost(quasiLikelihoodF(clustered).g, test.g);
      }),
      RUNS,
    );
  });

  it('moved and newcombeLowerBound: order, halving, merging, more events', () => {
    fc.assert(
      fc.property(pairs, ({ pair, seed }) => {
        const input = { df2: 80, pooledIndex: null };
        const found = moved({ ...pair, ...input });
        const order = orderOf(pair.now.length, seed);
        const mixed = moved({ ...change(pair, (values) => arrange(values, order)), ...input });
        expectSame(mixed.atLeast, found.atLeast);
        expectSame(mixed.estimate, found.estimate);
        expectSame(mixed.atMost, found.atMost);
        const halved = moved({ ...change(pair, (values) => halve(values, seed)), ...input });
        // The same distance, one more bin to have been picked by.
        expectSame(halved.atMost, found.atMost);
        expectAtMost(halved.atLeast, found.atLeast);
        const merged = moved({ ...change(pair, (values) => merge(values, seed)), ...input });
        expectAtMost(merged.atMost, found.atMost);
        const [weightNow, weightReference] = [4 * pair.weightNow, 4 * pair.weightReference];
        const more = moved({ ...pair, ...input, weightNow, weightReference });
        expectAtMost(found.atLeast, more.atLeast);
        expectAtMost(more.atMost, found.atMost);
        const [after, before] = [pair.now[0] ?? 0, pair.reference[0] ?? 0];
        const sides = { nAfter: pair.weightNow, nBefore: pair.weightReference };
        const bound = newcombeLowerBound({ after, before, ...sides });
        expectAtMost(bound, Math.abs(after - before));
      }),
      RUNS,
    );
  });

  it('peel: blames the same categories whatever their order', () => {
    fc.assert(
      fc.property(pairs, ({ pair, seed }) => {
        const order = orderOf(pair.now.length, seed);
        const found = peel({ ...pair, df2: 80 });
        const turned = change(pair, (values) => arrange(values, order));
        const mixed = peel({ ...turned, df2: 80 });
        const told = (from: WeightedPair, peeled: typeof found): (number | undefined)[][] =>
          peeled.blamed.map(({ index, sign }) => [from.now[index], from.reference[index], sign]);
        // Of the last two either may be named, their residuals being equal; of categories with
        // the same shares, the first. All others are what they are.
        const filled = pair.now.filter((q, k) => q > 0 || (pair.reference[k] ?? 0) > 0);
        const sure = Math.min(found.blamed.length, filled.length - 2);
        expect(mixed.blamed).toHaveLength(found.blamed.length);
        expect(told(turned, mixed).slice(0, sure)).toEqual(told(pair, found).slice(0, sure));
        arrange(found.residuals, order).forEach((r, k) =>
          expectSame(mixed.residuals[k] ?? NaN, r, 1e-8),
        );
      }),
      RUNS,
    );
  });
});
