import { fLogSf } from './fLogSf.js';
import { gateBound, gateVariances } from './gatePower.js';
import { plannedTest, requirePlanning } from './planningInput.js';
import type { PlanningInput } from './planningInput.js';
import { requireFraction } from './preconditions.js';
import { noncentralityBeyond } from './requiredNoncentrality.js';
import { shiftDeviance } from './shiftForNoncentrality.js';

/** Events a window; null: not at any volume. */
export interface EventsNeeded {
  /** Enough for the test and the gate: the larger of the next two. */
  readonly eventsNeeded: number | null;
  readonly testEvents: number | null;
  /** 1 without a tolerance. */
  readonly gateEvents: number | null;
  /** Which of the two asks for more. */
  readonly binds: 'test' | 'tolerance';
  /** By Pearson's form, v = delta^2 / (lambda p(1-p)): too few. */
  readonly guessEvents: number | null;
}

/** What to find, at any volume. */
export interface EventsPlan extends PlanningInput {
  /** The rise to find, in points (hundredths of all events), above 0; share + rise at most 1. */
  readonly points: number;
  /** Share of events that may move without anyone caring, 0..1; 0 for no gate. */
  readonly tolerance: number;
}

/**
 * How many events a window must have, so that one window shows a given rise of one category.
 *
 * `detectableShift` the other way round, with baseline windows as large as the window judged.
 * Both lambda_G and the gate's noncentrality are then w times a factor without w, so
 * w = lambda / factor. From w = N/(1 + (N-1) rho): N = w (1 - rho)/(1 - w rho), rounded up. At
 * w rho >= 1 there is no such N: windows that scatter by rho never hold more than 1/rho effective
 * events each. Then only a longer average helps: creep, or a longer window when that lowers rho.
 *
 * In: see `PlanningInput` and `EventsPlan`. Out: see `EventsNeeded`; whole numbers >= 1. A
 * rise within the tolerance never passes the gate: null. Refuses other input with RangeError.
 * Source: as `detectableShift`. Cost: two noncentralities.
 */
export function eventsNeeded(plan: EventsPlan): EventsNeeded {
  check(plan);
  const { share, rho, tolerance, baselineWindows } = plan;
  const delta = plan.points / 100;
  const { df2, lambda } = plannedTest(plan);
  const one = { share, weightNow: 1, weightReference: baselineWindows };
  const testEvents = eventsOfWeight(lambda / shiftDeviance(delta, one), rho);
  const gateEvents = tolerance === 0 ? 1 : eventsOfWeight(gateWeight(plan, delta, df2), rho);
  const guess = lambda * (1 + 1 / baselineWindows) * share * (1 - share);
  const binds = (gateEvents ?? Infinity) > (testEvents ?? Infinity) ? 'tolerance' : 'test';
  return {
    eventsNeeded: binds === 'test' || testEvents === null ? testEvents : gateEvents,
    testEvents,
    gateEvents,
    binds,
    guessEvents: eventsOfWeight(guess / (delta * delta), rho),
  };
}

/** Effective events at which the rise passes the gate with the wanted power. */
function gateWeight(plan: EventsPlan, delta: number, df2: number): number {
  const { share, categories, baselineWindows, power, tolerance } = plan;
  const excess = delta - tolerance;
  if (!(excess > 0)) return Infinity;
  const one = { share, delta, weightNow: 1, weightReference: baselineWindows };
  const { assumed, actual } = gateVariances(one);
  const critical = (gateBound(categories, df2) * assumed) / actual;
  if (fLogSf(critical, 1, df2) >= Math.log(power)) return 0;
  const lambda = noncentralityBeyond(critical, { df1: 1, df2, power });
  return (lambda * actual) / (excess * excess);
}

/** The least N with at least `weight` effective events, or null. */
function eventsOfWeight(weight: number, rho: number): number | null {
  const left = 1 - weight * rho;
  if (!(left > 0) || weight === Infinity) return null;
  // What is left over of a whole number by rounding is not another event.
  const events = Math.max(1, (weight * (1 - rho)) / left);
  const least = Math.ceil(events * (1 - 1e-12));
  return least <= Number.MAX_SAFE_INTEGER ? least : null;
}

function check(plan: EventsPlan): void {
  requirePlanning(plan);
  if (!(plan.points > 0 && plan.share + plan.points / 100 <= 1)) {
    const most = 100 * (1 - plan.share);
    throw new RangeError(`points: must lie above 0 and at most at ${most}, got ${plan.points}`);
  }
  requireFraction('tolerance', plan.tolerance);
}
