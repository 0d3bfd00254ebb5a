import type { ChiSquaredResult } from '../terms/evidence.js';
import { noncentralChiSquaredLogSf } from './noncentralChiSquaredLogSf.js';
import { requirePositive } from './preconditions.js';

export interface MinimumEffectResult extends ChiSquaredResult {
  /** The noncentrality at the edge of the null. */
  readonly lambda: number;
}

/**
 * Is the effect larger than w, not merely larger than nothing?
 *
 * Null: Cohen's w is at most `w`. A Pearson or likelihood ratio statistic is held against
 * noncentral chi-squared with lambda = events w^2, the edge of the null, where p is largest.
 * With w = 0 it is the ordinary test. A w is not a share of events moved: two small categories
 * that trade a little have a large w.
 * In: statistic >= 0 (Infinity allowed), df real > 0, events >= 0 (the n for which the statistic
 * is n times the squared sample effect: all events of a goodness of fit; effective ones where
 * events cluster), w finite and >= 0. Out: p with its natural log, and lambda. Refuses other
 * input with RangeError.
 * Source: Murphy & Myors (1999, "Testing the hypothesis that treatments have negligible
 * effects"); the same construction: MacCallum, Browne & Sugawara (1996), both from memory.
 * Error and cost: those of `noncentralChiSquaredLogSf`.
 */
export function minimumEffectTest(input: {
  readonly statistic: number;
  readonly df: number;
  readonly events: number;
  readonly w: number;
}): MinimumEffectResult {
  const { statistic, df, events, w } = input;
  if (!(statistic >= 0)) throw new RangeError(`statistic: must be >= 0, got ${statistic}`);
  requirePositive('df', df);
  requireFiniteNotNegative('events', events);
  requireFiniteNotNegative('w', w);
  const lambda = events * w * w;
  const logP =
    statistic === Infinity ? -Infinity : noncentralChiSquaredLogSf(statistic, df, lambda);
  return { statistic, df, lambda, p: Math.exp(logP), logP };
}

function requireFiniteNotNegative(name: string, value: number): void {
  if (!(value >= 0 && value < Infinity)) {
    throw new RangeError(`${name}: must be a finite number >= 0, got ${value}`);
  }
}
