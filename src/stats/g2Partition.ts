import type { ChiSquaredResult } from '../terms/evidence.js';
import { chiSquaredResult } from './chiSquaredResult.js';
import { likelihoodRatio } from './likelihoodRatio.js';
import { requireStrata } from './requireStrata.js';
import { sum } from './sum.js';

export interface G2Partition {
  /** Rows against categories, splits added up: what a look at the whole mix shows. */
  readonly overall: ChiSquaredResult;
  /** Rows against (split, category): everything that changed. */
  readonly joint: ChiSquaredResult;
  /** Rows against split: the traffic. */
  readonly traffic: ChiSquaredResult;
  /** The splits' own tests added up: what changed inside them. */
  readonly within: ChiSquaredResult;
  /** Rows against category in each split, in the order given. */
  readonly splits: readonly ChiSquaredResult[];
}

/**
 * Divides the likelihood ratio of windows against (split, category) into traffic and within.
 *
 * G2(joint) = G2(traffic) + sum over splits of G2(rows x category in it), exactly (Lancaster 1951,
 * from memory). Degrees of freedom add up too when every split has events in every row; one that
 * has not is all traffic, has df 0 itself, and its categories' df stay with the joint test alone.
 * `overall` is no part of the sum: traffic between unlike splits moves the whole mix by itself.
 * In: one r x c table of counts >= 0 a split, rows the windows (before, now), all of one shape.
 * Out: see `G2Partition`. Refuses other shapes and cells with RangeError.
 * Source: Agresti (2002), Categorical Data Analysis, on partitioning, from memory. Cost: linear.
 */
export function g2Partition(splits: readonly (readonly (readonly number[])[])[]): G2Partition {
  const { rows, columns } = requireStrata('splits', splits);
  const eachRow = <T>(value: (row: number) => T): T[] =>
    Array.from({ length: rows }, (_, row) => value(row));
  const pooled = eachRow((i) =>
    Array.from({ length: columns }, (_, k) => sum(splits.map((table) => table[i]?.[k] ?? 0))),
  );
  const own = splits.map((table) => g2(table));
  return {
    overall: g2(pooled),
    joint: g2(eachRow((i) => splits.flatMap((table) => table[i] ?? []))),
    traffic: g2(eachRow((i) => splits.map((table) => sum(table[i] ?? [])))),
    within: chiSquaredResult(
      sum(own.map((split) => split.statistic)),
      sum(own.map((split) => split.df)),
    ),
    splits: own,
  };
}

function g2(table: readonly (readonly number[])[]): ChiSquaredResult {
  const { statistic, df, p, logP } = likelihoodRatio(table);
  return { statistic, df, p, logP };
}
