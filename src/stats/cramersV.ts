import { tableMargins } from './tableMargins.js';

/**
 * Cramer's V of a table: sqrt(X2 / (n (min(r, c) - 1))), for two rows sqrt(X2/(N+M)).
 *
 * In: Pearson's statistic of the table, and the table itself. Out: 0..1; 0 when fewer than two
 * rows or columns have events. Depends on the ratio of the sample sizes, so it is shown and
 * never used as a tolerance. Source: Cramer (1946, from memory).
 */
export function cramersV(statistic: number, table: readonly (readonly number[])[]): number {
  const { total, filledRows, filledColumns } = tableMargins(table);
  const smaller = Math.min(filledRows, filledColumns) - 1;
  return smaller < 1 ? 0 : Math.min(1, Math.sqrt(statistic / (total * smaller)));
}
