import type { Percent } from './leaves.js';
import type { YardstickConfig } from './types.js';

export type Declared = Extract<YardstickConfig, { readonly kind: 'declared' }>;

/** Declared shares, with the sum as text when they had to be scaled; or what is wrong. */
export type DeclaredResult =
  | { readonly declared: Declared; readonly scaledFrom: string | null }
  | { readonly refused: string };

/**
 * Shares that sum to 1 from percentages as written. The sum is exact: all are brought to whole
 * units of the finest last digit (at most 9 decimals). A sum within half a last digit a share of
 * 100 % is scaled. `halfUnit` is that of the coarsest share.
 */
export function declaredShares(written: ReadonlyMap<string, Percent>): DeclaredResult {
  if (written.size < 2) return { refused: 'has fewer than 2 categories; write them all' };
  const percents = [...written.values()];
  const finest = Math.max(...percents.map(({ decimals }) => decimals));
  const coarsest = Math.min(...percents.map(({ decimals }) => decimals));
  const units = percents.map(({ units: own, decimals }) => own * 10 ** (finest - decimals));
  const sum = units.reduce((total, own) => total + own, 0);
  const whole = 100 * 10 ** finest;
  // Twice the slack, so that halves stay whole numbers.
  const slack = percents.reduce((total, { decimals }) => total + 10 ** (finest - decimals), 0);
  const sumText = `${(sum / 10 ** finest).toFixed(finest)}%`;
  if (2 * Math.abs(sum - whole) > slack) {
    return { refused: `sums to ${sumText}; write shares with the sum 100%` };
  }
  const shares = [...written.keys()].map((category, at) => ({
    category,
    share: (units[at] ?? 0) / sum,
  }));
  const halfUnit = Number(`5e-${coarsest + 3}`);
  const declared: Declared = { kind: 'declared', shares, halfUnit };
  return { declared, scaledFrom: sum === whole ? null : sumText };
}
