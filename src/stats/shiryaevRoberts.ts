import { betaBinomialLogRatio } from './betaBinomialLogRatio.js';
import type { CreepAlternative } from './creepAlternatives.js';
import { log1pexp } from './log1pexp.js';
import { requireCounts, requireLength } from './preconditions.js';
import { sum } from './sum.js';

/** What one window may say for or against an alternative, at most. */
const MAX_LOG_RATIO = 60;

/** What the detector remembers: plain values that survive JSON. */
export interface ShiryaevRobertsState {
  /** log R_j, in the order of the alternatives; empty while every R_j is 0. */
  readonly logR: readonly number[];
}

export interface ShiryaevRobertsStep {
  readonly state: ShiryaevRobertsState;
  /** log of the mean of the R_j; -Infinity while they are 0. */
  readonly logD: number;
  /** Index of the alternative with the largest R_j, the first of equals; null while all are 0. */
  readonly leading: number | null;
}

/** Before the first window, and again after an alarm: every R_j is 0. */
export const SHIRYAEV_ROBERTS_START: ShiryaevRobertsState = { logR: [] };

/**
 * One step of a mixture Shiryaev-Roberts e-detector for a small lasting shift of a mix.
 *
 * Null: every share lies inside its guard (see `creepAlternatives`), and windows scatter by rho.
 * For each alternative j the window's ratio is LLR_j, beta-binomial, of the count of its
 * category, cut at +-60; R_j <- (1 + R_j) exp(LLR_j); D = mean of the R_j. Under the null the mean
 * number of windows until D >= c is at least c.
 *
 * In: the state before, the alternatives it was begun with, the window's counts by category, rho
 * in [0, 1). A window without events changes nothing. Out: the state after, log D and the
 * leading alternative; compare log D with log(c) of `creepThreshold`, and start anew after an
 * alarm. Without an alternative log D stays -Infinity. Refuses counts that lack a category,
 * negative cells, and a state of other length or with a cell that is no number, with RangeError.
 * Source: Shiryaev (1963), Roberts (1966), Pollak (1987), Lorden (1971) for the bound, from
 * memory; e-detectors: Shin, Ramdas & Rinaldo (2022, abstract); guard own.
 * Check values of the design to all their digits. Cost: one ratio an alternative.
 */
export function shiryaevRoberts(input: {
  readonly state: ShiryaevRobertsState;
  readonly alternatives: readonly CreepAlternative[];
  readonly counts: readonly number[];
  readonly rho: number;
}): ShiryaevRobertsStep {
  const { state, alternatives, counts, rho } = input;
  requireCounts('counts', counts);
  requireState(state, alternatives.length);
  const events = sum(counts);
  if (events === 0 || alternatives.length === 0) return describe(state);
  const logR = alternatives.map(({ category, p0, p1 }, j) => {
    const count = counts[category];
    if (count === undefined) {
      throw new RangeError(`counts: must reach to category ${category}, got ${counts.length}`);
    }
    const ratio = betaBinomialLogRatio({ count, events, p0, p1, rho });
    const cut = Math.max(-MAX_LOG_RATIO, Math.min(MAX_LOG_RATIO, ratio));
    return log1pexp(state.logR[j] ?? -Infinity) + cut;
  });
  return describe({ logR });
}

function requireState({ logR }: ShiryaevRobertsState, length: number): void {
  if (logR.length > 0) requireLength('state.logR', logR, length);
  logR.forEach((log, j) => {
    if (!(log < Infinity)) {
      throw new RangeError(`state.logR[${j}]: must be a number below Infinity, got ${log}`);
    }
  });
}

function describe(state: ShiryaevRobertsState): ShiryaevRobertsStep {
  const { logR } = state;
  if (logR.length === 0) return { state, logD: -Infinity, leading: null };
  const leading = logR.reduce((best, log, j) => (log > (logR[best] ?? 0) ? j : best), 0);
  const greatest = logR[leading] ?? 0;
  const scaled = sum(logR.map((log) => Math.exp(log - greatest)));
  return { state, logD: greatest + Math.log(scaled / logR.length), leading };
}
