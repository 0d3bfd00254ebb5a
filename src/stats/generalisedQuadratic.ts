/** A pivot below this share of its variance is rounding, and its component depends on others. */
const RANK_TOLERANCE = 1e-10;

/**
 * U' V^- U and the rank of V, for a symmetric V >= 0 that may be singular.
 *
 * Gaussian elimination with the largest remaining share of its own variance as the pivot, until
 * none is left. When U lies in the range of V, as a score vector with covariance V does, every
 * generalised inverse gives the same value, so this is the one of the pseudo-inverse.
 * In: V as rows, n x n; U with n cells. Out: quadratic >= 0, rank 0..n. Cost: n^3 / 3.
 */
export function generalisedQuadratic(
  covariance: readonly (readonly number[])[],
  score: readonly number[],
): { readonly quadratic: number; readonly rank: number } {
  const left = covariance.map((row) => [...row]);
  const rest = [...score];
  const variances = covariance.map((row, i) => row[i] ?? 0);
  const open = new Set(score.keys());
  let [quadratic, rank] = [0, 0];
  for (;;) {
    const pivot = largestPivot(left, variances, open);
    if (pivot === undefined) return { quadratic, rank };
    open.delete(pivot);
    rank += 1;
    const row = left[pivot] ?? [];
    const variance = row[pivot] ?? 0;
    const value = rest[pivot] ?? 0;
    quadratic += value ** 2 / variance;
    for (const i of open) {
      const target = left[i] ?? [];
      const factor = (target[pivot] ?? 0) / variance;
      rest[i] = (rest[i] ?? 0) - factor * value;
      for (const k of open) target[k] = (target[k] ?? 0) - factor * (row[k] ?? 0);
    }
  }
}

function largestPivot(
  left: readonly (readonly number[])[],
  variances: readonly number[],
  open: ReadonlySet<number>,
): number | undefined {
  let found: number | undefined;
  let largest = RANK_TOLERANCE;
  for (const i of open) {
    const variance = variances[i] ?? 0;
    const share = variance > 0 ? (left[i]?.[i] ?? 0) / variance : 0;
    if (share <= largest) continue;
    largest = share;
    found = i;
  }
  return found;
}
