import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';

import { drawHypergeometric } from './drawHypergeometric.js';
import { sum } from './sum.js';

/**
 * One random r x c table with the given margins, under independence.
 *
 * Cell after cell from the hypergeometric distribution that the margins left over imply (the law
 * of Patefield 1981, "Algorithm AS 159", from memory); the last row is what remains.
 * In: whole totals >= 0 with equal sums; `logFactorial` of whole numbers up to that sum. Out: the
 * counts, row by row. Advances `random` by one draw a cell outside the last row.
 */
export function drawTable(
  random: RandomGenerator,
  margins: { readonly rows: readonly number[]; readonly columns: readonly number[] },
  logFactorial: (n: number) => number,
): number[][] {
  const columnsLeft = [...margins.columns];
  const lastRow = margins.rows.length - 1;
  return margins.rows.map((row, i) => {
    if (i === lastRow) return columnsLeft;
    let rowLeft = row;
    let total = sum(columnsLeft);
    return margins.columns.map((_, k) => {
      const marked = columnsLeft[k] ?? 0;
      const x = drawHypergeometric(random, { total, marked, drawn: rowLeft }, logFactorial);
      total -= marked;
      rowLeft -= x;
      columnsLeft[k] = marked - x;
      return x;
    });
  });
}
