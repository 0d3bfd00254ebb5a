import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

import { drawTable } from './drawTable.js';
import { logGamma } from './logGamma.js';
import { requireInteger } from './preconditions.js';
import { requireIntegerTable } from './requireIntegerTable.js';
import { sum } from './sum.js';
import { tableMargins } from './tableMargins.js';

const MAX_SAMPLES = 10_000_000;
const MAX_SEED = 0xffffffff;
/** Log-factorials kept ready; beyond, they are computed as needed. */
const MAX_READY = 1_000_000;
/** A sampled statistic this close to the observed one, relatively, counts as equal to it. */
const TIE = 1e-7;

export interface SampledResult {
  readonly p: number;
  readonly logP: number;
  /** Tables drawn, and those of them at least as far from independence as the observed one. */
  readonly samples: number;
  readonly exceeding: number;
  /** Whether so many exceedances came that further samples were spared. */
  readonly stoppedEarly: boolean;
}

/**
 * Monte Carlo test of an r x c table with both margins fixed, by Pearson's X2.
 *
 * Null: rows and columns are independent. Tables are drawn (see `drawTable`). With b of m samples
 * at least as far from independence as the table itself, p = (b + 1)/(m + 1), never 0 (Davison &
 * Hinkley 1997, from memory). With `exceedances` h it stops as soon as h samples are as far: after
 * l draws p = h/l, and still P(p <= a) <= a under the null (Besag & Clifford 1991, "Sequential
 * Monte Carlo p-values", from memory); the relative error of such a p is about 1/sqrt(h).
 *
 * In: whole counts; samples 1..1e7; exceedances from 1 up (never stop without); seed 0..2^32 - 1.
 * The same seed gives the same result. Out: p in [1/(m+1), 1] with its natural log, and how it
 * came about; with fewer than two rows or columns that have events, p is 1 without a sample.
 * Refuses other input with RangeError. Cost: at most samples x cells draws. Valid only without
 * overdispersion.
 */
export function monteCarloTable(input: {
  readonly table: readonly (readonly number[])[];
  readonly samples: number;
  readonly exceedances?: number;
  readonly seed: number;
}): SampledResult {
  const { table, samples: most, exceedances, seed } = input;
  requireIntegerTable(table);
  requireInteger('samples', most, 1, MAX_SAMPLES);
  if (exceedances !== undefined) requireInteger('exceedances', exceedances, 1, MAX_SAMPLES);
  requireInteger('seed', seed, 0, MAX_SEED);
  const margins = filledMargins(table);
  if (margins.rows.length < 2 || margins.columns.length < 2) {
    return { p: 1, logP: 0, samples: 0, exceeding: 0, stoppedEarly: true };
  }
  const random = xoroshiro128plus(seed);
  const logFactorial = makeLogFactorial(sum(margins.rows));
  const reach = reachOf(table, margins);
  let [samples, exceeding] = [0, 0];
  while (samples < most && exceeding !== exceedances) {
    samples += 1;
    if (squares(drawTable(random, margins, logFactorial), margins) >= reach) exceeding += 1;
  }
  const stoppedEarly = exceeding === exceedances;
  const p = stoppedEarly ? exceeding / samples : (exceeding + 1) / (samples + 1);
  return { p, logP: Math.log(p), samples, exceeding, stoppedEarly };
}

/** X2 = total (squares - 1), so that X2 >= X2 observed (1 - TIE) asks for squares of this size. */
function reachOf(table: readonly (readonly number[])[], margins: Margins): number {
  const filled = table.map((row) => row.filter((_, k) => (margins.all[k] ?? 0) > 0));
  const observed = squares(
    filled.filter((row) => sum(row) > 0),
    margins,
  );
  return 1 + (observed - 1) * (1 - TIE) - 1e-14;
}

interface Margins {
  readonly rows: readonly number[];
  readonly columns: readonly number[];
  /** All column totals, empty ones too. */
  readonly all: readonly number[];
}

function filledMargins(table: readonly (readonly number[])[]): Margins {
  const { rows, columns } = tableMargins(table);
  const filled = (n: number): boolean => n > 0;
  return { rows: rows.filter(filled), columns: columns.filter(filled), all: columns };
}

/** sum of x^2/(row column): 1 under perfect independence. */
function squares(table: readonly (readonly number[])[], margins: Margins): number {
  let total = 0;
  table.forEach((row, i) => {
    const rowTotal = margins.rows[i] ?? 0;
    row.forEach((x, k) => {
      total += x ** 2 / (rowTotal * (margins.columns[k] ?? 0));
    });
  });
  return total;
}

function makeLogFactorial(total: number): (n: number) => number {
  const ready = new Float64Array(Math.min(total, MAX_READY) + 1);
  for (let n = 2; n < ready.length; n += 1) ready[n] = logGamma(n + 1);
  return (n) => ready[n] ?? logGamma(n + 1);
}
