import { excessOverLog } from './excessOverLog.js';

/**
 * x log(x/m) + m - x: one cell's part of a deviance, never negative.
 *
 * The linear part sums to nothing over a table whose totals agree, and keeps each term from
 * cancelling when x is close to m. In: observed x >= 0 and expected m >= 0 (counts or weighted
 * counts). Out: >= 0; x = 0 gives m; x > 0 against m = 0 gives Infinity.
 */
export function devianceTerm(x: number, m: number): number {
  if (x === 0) return m;
  if (m === 0) return Infinity;
  return x * excessOverLog((m - x) / x, m / x);
}
