import { devianceTerm } from './devianceTerm.js';
import { tableTest } from './tableTest.js';
import type { TableTest } from './tableTest.js';

/**
 * Likelihood ratio test of independence (G2).
 *
 * Null: the rows share one set of shares. G2 = 2 sum O log(O/E), E = row x column / total, on
 * (r-1)(c-1) degrees of freedom; a cell without events adds nothing to the sum.
 * In, out and refusals: as `pearsonChiSquared`. Source: Wilks (1938, from memory). Each term is
 * taken with its linear part, which cancels over the table, so that G2 is never negative.
 */
export function likelihoodRatio(table: readonly (readonly number[])[]): TableTest {
  return tableTest(table, (observed, expected) => 2 * devianceTerm(observed, expected));
}
