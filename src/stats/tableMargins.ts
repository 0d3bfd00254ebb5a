import { requireTable } from './preconditions.js';
import { sum } from './sum.js';

export interface TableMargins {
  readonly rows: readonly number[];
  readonly columns: readonly number[];
  readonly total: number;
  /** Rows and columns with events. */
  readonly filledRows: number;
  readonly filledColumns: number;
  /** Expected counts under independence; 0 in an empty row or column. */
  readonly expected: readonly (readonly number[])[];
}

/** Totals and expected counts of an r x c table of counts. Refuses a ragged or negative one. */
export function tableMargins(table: readonly (readonly number[])[]): TableMargins {
  requireTable('table', table);
  const rows = table.map(sum);
  const columns = (table[0] ?? []).map((_, k) => sum(table.map((row) => row[k] ?? 0)));
  const total = sum(rows);
  const share = (row: number, column: number): number => (total > 0 ? (row * column) / total : 0);
  return {
    rows,
    columns,
    total,
    filledRows: rows.filter((n) => n > 0).length,
    filledColumns: columns.filter((n) => n > 0).length,
    expected: rows.map((row) => columns.map((column) => share(row, column))),
  };
}
