import type { ChiSquaredResult } from '../terms/evidence.js';
import { chiSquaredResult } from './chiSquaredResult.js';
import { requireScores } from './requireScores.js';
import { tableMargins } from './tableMargins.js';

export interface LinearTrend extends ChiSquaredResult {
  /** Signed root of the statistic: above 0 when high rows go with high columns. */
  readonly z: number;
  /** Pearson's correlation of the scores, -1..1. */
  readonly correlation: number;
}

/**
 * Linear-by-linear association of ordered rows and ordered columns.
 *
 * Null: rows and columns are independent; powerful when the mix slides one way along its order.
 * M2 = (n - 1) r^2 on 1 degree of freedom, r the correlation of row and column scores over the
 * events (Agresti 2002, Categorical Data Analysis, section 3.4, from memory): n - 1 is the exact
 * variance given both margins. `large-sample` takes n instead: with two columns (or rows) that
 * is the trend test that Cochran (1954) and Armitage (1955) print.
 * In: an r x c table of counts >= 0 (weighted ones too); scores in the order of rows and columns,
 * finite, 1, 2, 3 ... when left out. Only their relative distances matter.
 * Out: statistic >= 0, df, p and its natural log, z, correlation. With one score, or at most one
 * event, there is nothing to test: statistic 0, df 0, p 1. Refuses other input with RangeError.
 */
export function linearByLinear(input: {
  readonly table: readonly (readonly number[])[];
  readonly rowScores?: readonly number[];
  readonly columnScores?: readonly number[];
  /** `margins` (n - 1) when left out. */
  readonly variance?: 'margins' | 'large-sample';
}): LinearTrend {
  const { table } = input;
  const { rows, columns, total } = tableMargins(table);
  const rowScores = input.rowScores ?? rows.map((_, i) => i + 1);
  const columnScores = input.columnScores ?? columns.map((_, k) => k + 1);
  requireScores('rowScores', rowScores, rows.length);
  requireScores('columnScores', columnScores, columns.length);
  const across = centred(rowScores, rows, total);
  const along = centred(columnScores, columns, total);
  let covariance = 0;
  table.forEach((row, i) => {
    row.forEach((x, k) => {
      covariance += x * (across.scores[i] ?? 0) * (along.scores[k] ?? 0);
    });
  });
  const scale = Math.sqrt(across.squares) * Math.sqrt(along.squares);
  if (!(scale > 0 && total > 1)) return { ...chiSquaredResult(0, 0), z: 0, correlation: 0 };
  const correlation = Math.max(-1, Math.min(1, covariance / scale));
  const size = input.variance === 'large-sample' ? total : total - 1;
  const z = Math.sqrt(size) * correlation;
  return { ...chiSquaredResult(z * z, 1), z, correlation };
}

/** Scores less their mean over the events, and the sum of their squares. */
function centred(
  scores: readonly number[],
  counts: readonly number[],
  total: number,
): { scores: number[]; squares: number } {
  const used = scores.filter((_, i) => (counts[i] ?? 0) > 0);
  // Without this, one score for all events could leave a rounding error instead of 0.
  if (used.every((score) => score === used[0])) return { scores: scores.map(() => 0), squares: 0 };
  const mean = counts.reduce((s, count, i) => s + count * (scores[i] ?? 0), 0) / total;
  const less = scores.map((score) => score - mean);
  return { scores: less, squares: counts.reduce((s, n, i) => s + n * (less[i] ?? 0) ** 2, 0) };
}
