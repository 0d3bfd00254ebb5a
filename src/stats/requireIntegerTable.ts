import { requireInteger, requireTable } from './preconditions.js';

/** Refuses a table that is not made of whole counts: exact and sampled tests need those. */
export function requireIntegerTable(table: readonly (readonly number[])[]): void {
  requireTable('table', table);
  table.forEach((row, i) => {
    row.forEach((count, k) => {
      requireInteger(`table[${i}][${k}]`, count, 0, Number.MAX_SAFE_INTEGER);
    });
  });
}
