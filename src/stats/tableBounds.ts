import { sum } from './sum.js';

/** What the completions of a partly filled table can weigh: natural logarithms. */
export interface TableBounds {
  /** No completion weighs more, none less. */
  readonly most: number;
  readonly least: number;
  /** The summed weight of all completions. */
  readonly whole: number;
}

/**
 * Bounds on the ways to fill the remaining columns, given what is left in the rows.
 *
 * The weight of a way is the product over columns of C_j! / prod_i x_ij!. `whole` is the number
 * of ways to deal n events to the rows, n! / prod R_i!. `most` (own): by weak duality, with the
 * multipliers log R_i - log(n)/2 and log C_j - log(n)/2, sum log x_ij! is at least
 * sum R_i log R_i + sum C_j log C_j - n log n - sum_ij max_x (x log m_ij - log x!), where
 * m_ij = R_i C_j / n and the maximum is at x = floor(m_ij). `least`: log x! is convex, so no
 * row has a larger sum of it than with its events in as few, and as large, columns as it can;
 * the same for columns, and the smaller total holds.
 * In: columns of whole numbers > 0; rows with the same total; log n! up to it.
 */
export function makeTableBounds(
  columns: readonly number[],
  logFactorial: Float64Array,
): (rows: readonly number[]) => TableBounds {
  const lf = (n: number): number => logFactorial[n] ?? NaN;
  const events = sum(columns);
  const logColumns = sum(columns.map(lf));
  const largestColumns = [...columns].sort((a, b) => b - a);
  const ofColumns = sum(columns.map(timesLog)) - timesLog(events);
  return (rows) => {
    const filled = rows.filter((row) => row > 0);
    let modes = 0;
    for (const row of filled) {
      for (const column of columns) modes += highestLog((row * column) / events, lf);
    }
    const atLeast = sum(filled.map(timesLog)) + ofColumns - modes;
    const largestRows = [...filled].sort((a, b) => b - a);
    const byRows = sum(filled.map((row) => crowded(row, largestColumns, lf)));
    const byColumns = sum(columns.map((column) => crowded(column, largestRows, lf)));
    return {
      most: logColumns - atLeast,
      least: logColumns - Math.min(byRows, byColumns),
      whole: lf(events) - sum(filled.map(lf)),
    };
  };
}

function timesLog(n: number): number {
  return n === 0 ? 0 : n * Math.log(n);
}

/** max over whole x of x log(mean) - log x!. */
function highestLog(mean: number, lf: (n: number) => number): number {
  const x = Math.floor(mean);
  return x === 0 ? 0 : x * Math.log(mean) - lf(x);
}

/** The greatest sum of log x! for `events` placed in cells with room for `caps`, descending. */
function crowded(events: number, caps: readonly number[], lf: (n: number) => number): number {
  let left = events;
  let total = 0;
  for (const cap of caps) {
    const x = Math.min(left, cap);
    total += lf(x);
    left -= x;
    if (left === 0) break;
  }
  return total;
}
