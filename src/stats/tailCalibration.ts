import { requireInteger } from './preconditions.js';
import { requireLogP } from './requireLogP.js';
import { sum } from './sum.js';

const MOST_KEPT = 1000;
const LEAST_NEEDED = 200;
const TAIL_SHARE = 0.05;
/** log 20: where the tail begins when p-values are as they should be. */
const TAIL_FROM = -Math.log(TAIL_SHARE);

/** The memory of a calibration, a plain value to be stored and read back. */
export interface TailHistory {
  /** -log p of windows in control against the current yardstick, oldest first, at most 1000. */
  readonly evidence: readonly number[];
}

export interface TailCalibration {
  /** Values behind it. */
  readonly size: number;
  /** There are enough of them; before that p-values are used as they are. */
  readonly ready: boolean;
  /** How many times too heavy the tail is, >= 1; over 2 the yardstick's model is wrong. */
  readonly theta: number;
  /** u*: evidence up to here is left alone, or cut to log 20. */
  readonly threshold: number;
}

/** Where every strand begins, and begins again when its yardstick is pinned anew. */
export const EMPTY_TAIL: TailHistory = { evidence: [] };

/**
 * The history with one more window in control; the oldest falls out beyond 1000.
 *
 * In: the natural log of the window's p-value before any adjustment, finite and <= 0. The caller
 * never gives one of a window in alarm. Out: a new history; the old one is not touched. Refuses
 * other input with RangeError: p = 0 is an impossible event, and never one in control.
 */
export function observeTail(history: TailHistory, logP: number): TailHistory {
  requireLogP('logP', logP);
  if (logP === -Infinity) throw new RangeError('logP: must be finite, got -Infinity');
  return { evidence: [...history.evidence, 0 - logP].slice(-MOST_KEPT) };
}

/**
 * What a strand's own p-values say about their tail.
 *
 * With L = -log p, u their 95 % quantile (linear between order statistics) and
 * theta = max(1, mean of L - u over those above u), Hill's estimate of how heavy the tail is:
 * evidence counts in full up to u* = max(u, log 20) and is divided by theta beyond.
 *
 * In: the history; minimum, how many values make it `ready` (200; the design takes 50 for windows
 * of a day or longer that borrow from other strands). Out: see `TailCalibration`; theta is 1 and
 * the threshold log 20 while not ready. Refuses a minimum under 1 with RangeError.
 * Source: Hill (1975), from memory, applied to p-values (own). Cost: n log n.
 */
export function tailCalibration(
  history: TailHistory,
  options: { readonly minimum?: number } = {},
): TailCalibration {
  const { minimum = LEAST_NEEDED } = options;
  requireInteger('minimum', minimum, 1, Number.MAX_SAFE_INTEGER);
  const size = history.evidence.length;
  if (size < minimum) return { size, ready: false, theta: 1, threshold: TAIL_FROM };
  // Sorted, so that the sum below does not depend on the order of the windows.
  const sorted = [...history.evidence].sort((a, b) => a - b);
  const u = quantile(sorted, 1 - TAIL_SHARE);
  const above = sorted.filter((evidence) => evidence > u);
  const heavy = above.length > 0 ? sum(above.map((evidence) => evidence - u)) / above.length : 1;
  return { size, ready: true, theta: Math.max(1, heavy), threshold: Math.max(u, TAIL_FROM) };
}

/**
 * A p-value held against the strand's own past: weakened where its tail is heavy, never
 * strengthened.
 *
 * L beyond u* becomes log 20 + (L - u*)/theta, L between log 20 and u* becomes log 20, and L up
 * to log 20 stays; not `ready`, all stays.
 *
 * In: the history, without the window itself; the natural log of its p-value (-Infinity, for an
 * impossible event, stays that); minimum as in `tailCalibration`. Out: natural log of the
 * adjusted p-value, >= logP. Refuses a logP > 0 with RangeError. Cost: n log n.
 */
export function adjustTail(
  history: TailHistory,
  logP: number,
  options: { readonly minimum?: number } = {},
): number {
  requireLogP('logP', logP);
  const { ready, theta, threshold } = tailCalibration(history, options);
  const evidence = -logP;
  if (!ready || evidence <= TAIL_FROM) return logP;
  if (evidence <= threshold) return -TAIL_FROM;
  return Math.max(logP, -(TAIL_FROM + (evidence - threshold) / theta));
}

/** Histories put together, for strands whose own is still short. */
export function joinTails(histories: readonly TailHistory[]): TailHistory {
  return { evidence: histories.flatMap((history) => history.evidence) };
}

/** Linear between order statistics: definition 7 of Hyndman & Fan (1996, from memory). */
function quantile(sorted: readonly number[], share: number): number {
  const at = share * (sorted.length - 1);
  const below = Math.floor(at);
  const low = sorted[below] ?? 0;
  const high = sorted[below + 1] ?? low;
  return low + (at - below) * (high - low);
}
