import type { ChiSquaredResult } from '../terms/evidence.js';
import { chiSquaredResult } from './chiSquaredResult.js';
import { generalisedQuadratic } from './generalisedQuadratic.js';
import { requireScores } from './requireScores.js';
import { requireStrata } from './requireStrata.js';
import { tableMargins } from './tableMargins.js';
import type { TableMargins } from './tableMargins.js';

/** Contrasts followed at once; the work grows with their third power. */
const MAX_COMPONENTS = 1000;

/**
 * Cochran-Mantel-Haenszel test, generalised: are rows and columns associated within the splits?
 *
 * Null: in every split (stratum) rows and columns are independent, whatever the traffic between
 * splits does. U = sum over splits of observed less expected counts, V = sum of their covariance
 * with all margins fixed, T^2/(T - 1) (diag(r) - r r') x (diag(c) - c c') with row and column
 * shares r, c; Q = U' V^- U with a generalised inverse, on the rank of V degrees of freedom
 * (Landis, Heyman & Koch 1978, from memory). For two rows this is sum n m / (T^2 (T - 1))
 * (T diag(c) - c c'). Strong against shifts that go one way in all splits.
 * Without scores: general association, df (r - 1)(c - 1). With scores for the columns (or rows)
 * their mean scores are compared; with both, the one linear trend.
 *
 * In: one r x c table of counts >= 0 a split, all of one shape (weighted ones too); scores finite.
 * A split with T < 2, or with events in one row or one column only, adds nothing; rows and
 * columns empty everywhere take no degree of freedom. With nothing to test, p is 1 on df 0.
 * Out: statistic, df, p and its natural log. No continuity correction; no overdispersion (divide
 * the statistic by it, and use F). Refuses other shapes and cells, and over 1,000 contrasts, with
 * RangeError. Cost: contrasts squared x splits + contrasts cubed.
 */
export function cochranMantelHaenszel(
  splits: readonly (readonly (readonly number[])[])[],
  scores: { readonly rows?: readonly number[]; readonly columns?: readonly number[] } = {},
): ChiSquaredResult {
  const shape = requireStrata('splits', splits);
  if (scores.rows !== undefined) requireScores('scores.rows', scores.rows, shape.rows);
  if (scores.columns !== undefined) requireScores('scores.columns', scores.columns, shape.columns);
  const used = splits
    .map((table) => ({ table, margins: tableMargins(table) }))
    .filter(({ margins }) => margins.filledRows > 1 && margins.filledColumns > 1)
    .filter(({ margins }) => margins.total >= 2);
  // All but the last: given its total, a row or column has one count fewer that is free.
  const across = scores.rows ? [scores.rows] : units(shape.rows);
  const along = scores.columns ? [scores.columns] : units(shape.columns);
  const components = across.length * along.length;
  if (components > MAX_COMPONENTS) {
    throw new RangeError(
      `splits: must have at most ${MAX_COMPONENTS} contrasts, got ${components}`,
    );
  }
  const score = new Array<number>(components).fill(0);
  const covariance = score.map(() => [...score]);
  for (const { table, margins } of used) {
    addScore(score, { table, margins, across, along });
    addCovariance(covariance, margins, across, along);
  }
  const { quadratic, rank } = generalisedQuadratic(covariance, score);
  return chiSquaredResult(quadratic, rank);
}

type Contrasts = readonly (readonly number[])[];

/** (1, 0, ...), (0, 1, 0, ...) ... without the last. */
function units(length: number): number[][] {
  return Array.from({ length: length - 1 }, (_, i) =>
    Array.from({ length }, (__, k) => (k === i ? 1 : 0)),
  );
}

function addScore(
  score: number[],
  split: {
    table: readonly (readonly number[])[];
    margins: TableMargins;
    across: Contrasts;
    along: Contrasts;
  },
): void {
  const excess = split.table.map((row, i) =>
    row.map((x, k) => x - (split.margins.expected[i]?.[k] ?? 0)),
  );
  split.across.forEach((a, i) => {
    split.along.forEach((b, k) => {
      const value = excess.reduce((s, row, r) => s + (a[r] ?? 0) * dot(row, b), 0);
      const at = i * split.along.length + k;
      score[at] = (score[at] ?? 0) + value;
    });
  });
}

function addCovariance(
  covariance: number[][],
  { rows, columns, total }: TableMargins,
  across: Contrasts,
  along: Contrasts,
): void {
  const scale = total ** 2 / (total - 1);
  const ofRows = spread(rows, total, across);
  const ofColumns = spread(columns, total, along);
  const width = along.length;
  covariance.forEach((line, p) => {
    const [i, k] = [Math.floor(p / width), p % width];
    line.forEach((value, q) => {
      const fromRows = ofRows[i]?.[Math.floor(q / width)] ?? 0;
      line[q] = value + scale * fromRows * (ofColumns[k]?.[q % width] ?? 0);
    });
  });
}

/** a (diag(s) - s s') b' for all pairs of contrasts, s the shares of the totals. */
function spread(totals: readonly number[], whole: number, contrasts: Contrasts): number[][] {
  const shares = totals.map((n) => n / whole);
  const means = contrasts.map((a) => dot(a, shares));
  // Each less its mean, so that equal scores leave nothing instead of a rounding error.
  return contrasts.map((a, i) =>
    contrasts.map((b, k) =>
      shares.reduce(
        (s, share, c) =>
          s + share * ((a[c] ?? 0) - (means[i] ?? 0)) * ((b[c] ?? 0) - (means[k] ?? 0)),
        0,
      ),
    ),
  );
}

function dot(a: readonly number[], b: readonly number[]): number {
  return a.reduce((s, value, i) => s + value * (b[i] ?? 0), 0);
}
