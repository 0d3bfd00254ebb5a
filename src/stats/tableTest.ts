import type { ChiSquaredResult } from '../terms/evidence.js';
import { chiSquaredResult } from './chiSquaredResult.js';
import { tableMargins } from './tableMargins.js';

/** A test of independence, with the expected counts it compared with. */
export interface TableTest extends ChiSquaredResult {
  readonly expected: readonly (readonly number[])[];
}

/** Adds up one term a cell that has an expectation; df from the rows and columns with events. */
export function tableTest(
  table: readonly (readonly number[])[],
  term: (observed: number, expected: number) => number,
): TableTest {
  const { expected, filledRows, filledColumns } = tableMargins(table);
  let statistic = 0;
  table.forEach((row, i) => {
    row.forEach((observed, k) => {
      const e = expected[i]?.[k] ?? 0;
      if (e > 0) statistic += term(observed, e);
    });
  });
  const df = Math.max(0, filledRows - 1) * Math.max(0, filledColumns - 1);
  return { ...chiSquaredResult(statistic, df), expected };
}
