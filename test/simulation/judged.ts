import { designWeight } from '../../src/stats/designWeight.js';
import type { Dispersion } from '../../src/stats/estimateDispersion.js';
import { quasiLikelihoodF } from '../../src/stats/quasiLikelihoodF.js';

/** A window beside a reference that was learnt from past windows, both as effective events. */
export interface Judged {
  readonly now: readonly number[];
  readonly weightNow: number;
  readonly reference: readonly number[];
  readonly weightReference: number;
  readonly df2: number;
}

export function besideReference(counts: readonly number[], past: Dispersion): Judged {
  const events = counts.reduce((a, b) => a + b, 0);
  return {
    now: counts.map((count) => count / events),
    weightNow: designWeight(events, past.rho),
    reference: past.shares,
    weightReference: past.weight,
    df2: past.df2,
  };
}

/** log p of the test of one window against what past windows taught. */
export function logPOf(counts: readonly number[], past: Dispersion): number {
  const { shares, weight, rho, df2 } = past;
  return quasiLikelihoodF({ now: counts, shares, weight, rho, df2 }).logP;
}
