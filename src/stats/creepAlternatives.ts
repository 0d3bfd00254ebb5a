import {
  requireFraction,
  requireInteger,
  requireLength,
  requirePositiveOrInfinite,
  requireShares,
} from './preconditions.js';

/** Sizes of change that are looked for, as shares. */
const SIZES = [0.01, 0.02, 0.04, 0.08, 0.16] as const;
/** Standard errors of the anchor that a share may be off: from 24 windows on, and before. */
const WIDE_ANCHOR_WINDOWS = 24;
const Z_WIDE = 1.5;
const Z_NARROW = 2;
/** Standard deviations of a wandering share that do not count as creep. */
const Z_WANDER = 5;
/** A fall is looked for only if it takes no more than this part of the share. */
const GREATEST_FALL = 0.95;
/** The guarded shares are kept inside. */
const LEAST_P0 = 1e-6;
const GREATEST_P0 = 0.999;

/** One way in which the mix may creep: a category's share beyond p0, at p1. */
export interface CreepAlternative {
  readonly category: number;
  /** 1 for a rise, -1 for a fall. */
  readonly sign: 1 | -1;
  readonly size: number;
  /** The share at the edge of the guard: what lies inside is no creep. */
  readonly p0: number;
  readonly p1: number;
}

/** Intra-window correlation of the anchor's windows and of their successive differences. */
export interface WanderRhos {
  readonly rhoBaseline: number;
  readonly rhoSuccessive: number;
}

/**
 * The alternatives that a creep detector weighs, each outside a guard around the anchor's share.
 *
 * guard_k = max(z sqrt(p (1-p)/W), least guard_k, with wander 5 sqrt(max(0, rho_b - rho_s)
 * p (1-p))), z = 1.5 from 24 windows on, else 2. For each category and size d of .01 .02 .04 .08
 * .16, a rise from p0 = p + guard to p1 = min(p0 + d, (1 + p0)/2) and, if d < .95 p, a fall from
 * p0 = p - guard to p1 = max(p0 - d, .02 p0). p0 is kept in [1e-6, .999].
 * Where keeping it there would narrow the guard the alternative is left out: p0 would lie nearer
 * to the anchor than the guard, or on its other side (a share of .9995 would creep away from .999
 * by standing still), and the bound on false alarms would be lost.
 *
 * In: the anchor's shares (sum 1), its effective events W > 0 (Infinity for declared shares), its
 * number of windows, for each category the least guard 0..1 (the tolerance or, if larger, half
 * a unit of the last digit of a declared share), and the two correlations of an anchor that
 * wanders by itself, else null. Out: at most 10 a category, by category, rises first, sizes
 * ascending; possibly none. Refuses other input with RangeError.
 * Source: own, by simulation; over 1,500 windows a false alarm with probability .010 for an anchor
 * of 96 windows and .17 for one of 24, by the design's simulations at a threshold of 1e4.
 */
export function creepAlternatives(input: {
  readonly shares: readonly number[];
  readonly weight: number;
  readonly windows: number;
  readonly leastGuards: readonly number[];
  readonly wander: WanderRhos | null;
}): CreepAlternative[] {
  const { shares, weight, windows, leastGuards, wander } = input;
  requireShares('shares', shares);
  requirePositiveOrInfinite('weight', weight);
  requireInteger('windows', windows, 0, Number.MAX_SAFE_INTEGER);
  requireLength('leastGuards', leastGuards, shares.length);
  leastGuards.forEach((guard, k) => requireFraction(`leastGuards[${k}]`, guard));
  const excess = wander === null ? 0 : excessRho(wander);
  const z = windows >= WIDE_ANCHOR_WINDOWS ? Z_WIDE : Z_NARROW;
  return shares.flatMap((p, category) => {
    const spread = p * (1 - p);
    const guard = Math.max(
      z * Math.sqrt(spread / weight),
      leastGuards[category] ?? 0,
      Z_WANDER * Math.sqrt(excess * spread),
    );
    return [...rises(category, p, guard), ...falls(category, p, guard)];
  });
}

function excessRho({ rhoBaseline, rhoSuccessive }: WanderRhos): number {
  const excess = rhoBaseline - rhoSuccessive;
  if (!Number.isFinite(excess)) {
    throw new RangeError(`wander: must hold finite numbers, got ${rhoBaseline}, ${rhoSuccessive}`);
  }
  return Math.max(0, excess);
}

function rises(category: number, p: number, guard: number): CreepAlternative[] {
  if (p + guard > GREATEST_P0) return [];
  const p0 = Math.max(LEAST_P0, p + guard);
  return SIZES.map((size) => {
    return { category, sign: 1, size, p0, p1: Math.min(p0 + size, (1 + p0) / 2) };
  });
}

function falls(category: number, p: number, guard: number): CreepAlternative[] {
  if (p - guard < LEAST_P0) return [];
  const p0 = Math.min(GREATEST_P0, p - guard);
  return SIZES.filter((size) => size < GREATEST_FALL * p).map((size) => {
    return { category, sign: -1, size, p0, p1: Math.max(p0 - size, 0.02 * p0) };
  });
}
