import type { ChiSquaredResult } from '../terms/evidence.js';
import { chiSquaredResult } from './chiSquaredResult.js';
import { devianceTerm } from './devianceTerm.js';
import { requireCounts, requireLength, requireShares } from './preconditions.js';
import { sum } from './sum.js';

/**
 * Goodness of fit of counts to shares that were fixed beforehand.
 *
 * Null: the events were drawn from exactly these shares. X2 = sum (O - E)^2 / E and
 * G2 = 2 sum O log(O/E) with E = N p, each on (shares > 0) - 1 degrees of freedom. Shares that
 * were themselves counted do not belong here but in a table.
 * In: K counts, K shares (sum 1). A share 0 with events makes both statistics Infinity and logP
 * -Infinity; without events it is left out. Out: both results, expected counts.
 * Refuses unequal lengths, negative cells and shares off 1 in sum with RangeError.
 * Source: Pearson (1900), Wilks (1938), from memory.
 */
export function goodnessOfFit(
  counts: readonly number[],
  shares: readonly number[],
): {
  readonly pearson: ChiSquaredResult;
  readonly g2: ChiSquaredResult;
  readonly expected: readonly number[];
} {
  requireCounts('counts', counts);
  requireLength('shares', shares, counts.length);
  requireShares('shares', shares);
  const n = sum(counts);
  const expected = shares.map((share) => n * share);
  const df = shares.filter((share) => share > 0).length - 1;
  const impossible = counts.some((count, k) => count > 0 && shares[k] === 0);
  let pearson = impossible ? Infinity : 0;
  let g2 = pearson;
  expected.forEach((e, k) => {
    const observed = counts[k] ?? 0;
    if (e === 0) return;
    pearson += (observed - e) ** 2 / e;
    g2 += 2 * devianceTerm(observed, e);
  });
  return { pearson: chiSquaredResult(pearson, df), g2: chiSquaredResult(g2, df), expected };
}
