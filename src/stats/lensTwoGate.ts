import { newcombeLowerBound } from './newcombeLowerBound.js';
import { requireFraction, requireInteger, requirePositive } from './preconditions.js';
import { requirePositiveOrInfinite } from './preconditions.js';
import { wilson } from './wilson.js';

/** Upper 5 % point of the standard normal distribution. */
const Z95 = 1.6448536269514722;
/** So many events of a category never seen before are worth a look by themselves. */
const ENOUGH_NEW_EVENTS = 20;

export interface LensTwoGate {
  readonly passes: boolean;
  /** What is shown to have moved at least, at 95 % one-sided. */
  readonly bound: number;
  /** What the bound was held against. */
  readonly tolerance: number;
  /** How it was passed or missed: a changed share, a new category, or no gate at all. */
  readonly rule: 'changed' | 'new' | 'none';
}

/**
 * Gate for an alert that is owed to one category: has this category moved beyond its tolerance?
 *
 * A share that changed must have its one-sided 95 % bound (`newcombeLowerBound`) above the
 * category's own tolerance; without one, above the smaller of the mix's tolerance and half the
 * former share. A category never seen before passes with 20 events, or when Wilson's lower limit
 * of its share is above the mix's tolerance; a tolerance of its own then takes the place of both.
 * A tolerance of 0 for the mix, with none for the category, is no gate.
 *
 * In: count 0..events, events >= 1; share, that of the reference, 0..1; effective events of the
 * window (> 0) and of the reference (Infinity for a declared share); tolerance 0..1 of the mix,
 * own 0..1 of the category, or null. Out: see `LensTwoGate`. Refuses other input with RangeError.
 * Source: Newcombe (1998), Wilson (1927), from memory; the gate is own, by simulation.
 */
export function lensTwoGate(input: {
  readonly count: number;
  readonly events: number;
  readonly weightNow: number;
  readonly share: number;
  readonly weightReference: number;
  readonly tolerance: number;
  readonly own: number | null;
}): LensTwoGate {
  check(input);
  const { count, events, weightNow, share, weightReference, own } = input;
  const after = count / events;
  if (share === 0) {
    const bound = wilson(after, weightNow, Z95).lower;
    const tolerance = own ?? input.tolerance;
    const isMany = own === null && count >= ENOUGH_NEW_EVENTS;
    if (own === null && tolerance === 0) return { passes: true, bound, tolerance, rule: 'none' };
    return { passes: isMany || bound > tolerance, bound, tolerance, rule: 'new' };
  }
  const bound = newcombeLowerBound({
    after,
    nAfter: weightNow,
    before: share,
    nBefore: weightReference,
  });
  const tolerance = own ?? Math.min(input.tolerance, share / 2);
  if (own === null && tolerance === 0) return { passes: true, bound, tolerance, rule: 'none' };
  return { passes: bound > tolerance, bound, tolerance, rule: 'changed' };
}

function check(input: Parameters<typeof lensTwoGate>[0]): void {
  requireInteger('events', input.events, 1, Number.MAX_SAFE_INTEGER);
  requireInteger('count', input.count, 0, input.events);
  requirePositive('weightNow', input.weightNow);
  requireFraction('share', input.share);
  requirePositiveOrInfinite('weightReference', input.weightReference);
  requireFraction('tolerance', input.tolerance);
  if (input.own !== null) requireFraction('own', input.own);
}
