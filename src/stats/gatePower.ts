import { fUpperQuantile } from './fUpperQuantile.js';
import { noncentralFLogSf } from './noncentralFLogSf.js';
import {
  requireFraction,
  requireInteger,
  requireOpenFraction,
  requirePositive,
  requirePositiveOrInfinite,
} from './preconditions.js';

/** Error of the Scheffe bound that the gate holds against the tolerance. */
const ERROR = 0.05;

/** One category's rise from `share` to `share + delta`, as the gate will see it. */
export interface GatePoint {
  /** Share before, strictly between 0 and 1. */
  readonly share: number;
  /** Rise, above 0 and at most 1 - share. */
  readonly delta: number;
  /** Effective events of the window and of the reference, > 0; the latter may be Infinity. */
  readonly weightNow: number;
  readonly weightReference: number;
  /** K, bins of the table, whole >= 2. */
  readonly categories: number;
  /** Degrees of freedom of the dispersion, > 0 or Infinity. */
  readonly df2: number;
  /** Share of events that may move without anyone caring, 0..1. */
  readonly tolerance: number;
}

/**
 * The chance that a shift of known size passes the minimum-effect gate.
 *
 * The gate asks that Scheffe's lower bound of the moved share exceed the tolerance tau. On the
 * risen category alone: d - tau > sqrt((K-1) F_.05(K-1, df2) v P(1-P)), d the rise seen, P the
 * joint share, v = 1/w + 1/W. With s^2 = q(1-q)/w + p(1-p)/W the true variance of d,
 * (d - tau)^2 / s^2 is noncentral F on 1 and df2 with lambda = (delta - tau)^2 / s^2.
 *
 * In: see `GatePoint`. Out: a chance in [0, 1]; 0 when delta <= tolerance (the gate passes such a
 * shift in under one window of 200, by the design's simulations). Refuses other input with
 * RangeError. Own. Pessimistic, because a set with further categories may exceed the bound too:
 * where it plans for .80, `npm run simulate` measured .79 to .90 (the most at 30 categories and 96
 * baseline windows). Cost: one noncentral tail.
 */
export function gatePower(point: GatePoint): number {
  check(point);
  return chanceToPass(point, gateBound(point.categories, point.df2));
}

/** (K-1) F_.05(K-1, df2): the square of Scheffe's factor. */
export function gateBound(categories: number, df2: number): number {
  return (categories - 1) * fUpperQuantile(ERROR, categories - 1, df2);
}

/** The gate's power for checked input, given its bound. */
export function chanceToPass(point: GatePoint, bound: number): number {
  const excess = point.delta - point.tolerance;
  if (!(excess > 0)) return 0;
  const { assumed, actual } = gateVariances(point);
  // Without scatter the answer is certain.
  if (actual === 0) return excess * excess > bound * assumed ? 1 : 0;
  const critical = (bound * assumed) / actual;
  return Math.exp(noncentralFLogSf(critical, 1, point.df2, (excess * excess) / actual));
}

/** Variance of the rise as the gate reckons it (joint share) and as it is. */
export function gateVariances(
  point: Pick<GatePoint, 'share' | 'delta' | 'weightNow' | 'weightReference'>,
): { assumed: number; actual: number } {
  const { share, delta, weightNow, weightReference } = point;
  const [now, reference] = [1 / weightNow, 1 / weightReference];
  const v = now + reference;
  // (w q + W p)/(w + W) = p + delta (1/W)/(1/w + 1/W), which also holds at W = Infinity.
  const joint = share + (delta * reference) / v;
  const after = share + delta;
  return {
    assumed: v * joint * (1 - joint),
    actual: now * after * Math.max(0, 1 - after) + reference * share * (1 - share),
  };
}

function check(point: GatePoint): void {
  requireOpenFraction('share', point.share);
  requireFraction('delta', point.delta);
  if (point.share + point.delta > 1) {
    throw new RangeError(`delta: must leave a share of at most 1, got ${point.delta}`);
  }
  requirePositive('weightNow', point.weightNow);
  requirePositiveOrInfinite('weightReference', point.weightReference);
  requireInteger('categories', point.categories, 2, Number.MAX_SAFE_INTEGER);
  requirePositiveOrInfinite('df2', point.df2);
  requireFraction('tolerance', point.tolerance);
}
