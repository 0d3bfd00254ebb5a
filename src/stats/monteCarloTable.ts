import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';

import { drawHypergeometric } from './drawHypergeometric.js';
import { logGamma } from './logGamma.js';
import { requireInteger } from './preconditions.js';
import { requireIntegerTable } from './requireIntegerTable.js';
import { tableMargins } from './tableMargins.js';
import type { TableMargins } from './tableMargins.js';

const MAX_SAMPLES = 10_000_000;
const MAX_SEED = 0xffffffff;
/** Log-factorials kept ready; beyond, they are computed as needed. */
const MAX_READY = 1_000_000;
/** A sampled statistic this close to the observed one, relatively, counts as equal to it. */
const TIE = 1e-7;

/**
 * Monte Carlo test of an r x c table with both margins fixed.
 *
 * Null: rows and columns are independent. Tables are drawn cell by cell from the hypergeometric
 * distributions that fixed margins imply (the law of Patefield 1981, from memory). With b
 * of m samples at least as far from independence by Pearson's X2 as the table itself,
 * p = (b + 1)/(m + 1), never 0 (Davison & Hinkley 1997, from memory).
 *
 * In: whole counts; samples 1..1e7; seed 0..2^32 - 1. The same seed gives the same p.
 * Out: p in [1/(m+1), 1], its natural log, and m. Refuses other input with RangeError.
 * Cost: samples x cells draws. Valid only without overdispersion.
 */
export function monteCarloTable(input: {
  readonly table: readonly (readonly number[])[];
  readonly samples: number;
  readonly seed: number;
}): { readonly p: number; readonly logP: number; readonly samples: number } {
  const { table, samples, seed } = input;
  requireIntegerTable(table);
  requireInteger('samples', samples, 1, MAX_SAMPLES);
  requireInteger('seed', seed, 0, MAX_SEED);
  const margins = filledMargins(tableMargins(table));
  const random = xoroshiro128plus(seed);
  const logFactorial = makeLogFactorial(margins.total);
  const observed = observedSquares(table, tableMargins(table));
  // X2 = total (squares - 1), so that X2 >= X2 observed (1 - TIE) reads:
  const reach = 1 + (observed - 1) * (1 - TIE) - 1e-14;
  let exceeding = 0;
  for (let sample = 0; sample < samples; sample += 1) {
    if (drawSquares(random, margins, logFactorial) >= reach) exceeding += 1;
  }
  const p = (exceeding + 1) / (samples + 1);
  return { p, logP: Math.log(p), samples };
}

interface Margins {
  readonly rows: readonly number[];
  readonly columns: readonly number[];
  readonly total: number;
}

function filledMargins(margins: TableMargins): Margins {
  const filled = (n: number): boolean => n > 0;
  const { total } = margins;
  return { rows: margins.rows.filter(filled), columns: margins.columns.filter(filled), total };
}

/** sum of x^2/(row column): 1 under perfect independence. */
function observedSquares(table: readonly (readonly number[])[], margins: TableMargins): number {
  let squares = 0;
  table.forEach((row, i) => {
    row.forEach((x, k) => {
      if (x > 0) squares += x ** 2 / ((margins.rows[i] ?? 0) * (margins.columns[k] ?? 0));
    });
  });
  return squares;
}

/** Draws one table and gives its sum of squares. */
function drawSquares(
  random: RandomGenerator,
  margins: Margins,
  logFactorial: (n: number) => number,
): number {
  const columnsLeft = [...margins.columns];
  let totalLeft = margins.total;
  let squares = 0;
  margins.rows.forEach((row, i) => {
    const isLast = i === margins.rows.length - 1;
    let rowLeft = row;
    let urn = totalLeft;
    margins.columns.forEach((column, k) => {
      const marked = columnsLeft[k] ?? 0;
      const x = isLast
        ? marked
        : drawHypergeometric(random, { total: urn, marked, drawn: rowLeft }, logFactorial);
      urn -= marked;
      rowLeft -= x;
      columnsLeft[k] = marked - x;
      squares += x ** 2 / (row * column);
    });
    totalLeft -= row;
  });
  return squares;
}

function makeLogFactorial(total: number): (n: number) => number {
  const ready = new Float64Array(Math.min(total, MAX_READY) + 1);
  for (let n = 2; n < ready.length; n += 1) ready[n] = logGamma(n + 1);
  return (n) => ready[n] ?? logGamma(n + 1);
}
