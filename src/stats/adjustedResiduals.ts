import { tableMargins } from './tableMargins.js';

/**
 * Adjusted (standardised) residuals of an r x c table.
 *
 * Under independence of rows and columns each cell's
 * (O - E) / sqrt(E (1 - row/total) (1 - column/total)), E = row x column / total, is near a
 * standard normal. Cells of one column of a two-row table differ in sign only.
 * In: an r x c table of counts >= 0 (weighted ones too). Out: one number a cell; 0 where nothing
 * can deviate: in an empty row or column, or one that holds every event. Refuses a ragged table,
 * no rows and negative cells with RangeError. Source: Haberman (1973), from memory.
 */
export function adjustedResiduals(table: readonly (readonly number[])[]): number[][] {
  const { rows, columns, total, expected } = tableMargins(table);
  return table.map((row, i) =>
    row.map((observed, k) => {
      const e = expected[i]?.[k] ?? 0;
      const outside = (total - (rows[i] ?? 0)) * (total - (columns[k] ?? 0));
      return outside > 0 && e > 0 ? ((observed - e) * total) / Math.sqrt(e * outside) : 0;
    }),
  );
}
