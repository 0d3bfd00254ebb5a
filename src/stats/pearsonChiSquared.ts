import { tableTest } from './tableTest.js';
import type { TableTest } from './tableTest.js';

/**
 * Pearson's chi-squared test of independence (of homogeneity, for rows that are samples).
 *
 * Null: the rows share one set of shares. X2 = sum (O - E)^2 / E, E = row x column / total, on
 * (r-1)(c-1) degrees of freedom. No continuity correction.
 * In: an r x c table of counts >= 0; rows and columns without events are left out of df. Out:
 * statistic >= 0, df, p and its natural log, expected counts. With df 0: statistic 0, p 1.
 * Refuses a ragged table, no rows and negative cells with RangeError.
 * Source: Pearson (1900), df Fisher (1922), both from memory. Error of logP: chiSquaredLogSf's.
 */
export function pearsonChiSquared(table: readonly (readonly number[])[]): TableTest {
  return tableTest(table, (observed, expected) => (observed - expected) ** 2 / expected);
}
