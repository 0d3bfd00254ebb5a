import { designWeight } from './designWeight.js';
import { chanceToPass, gateBound } from './gatePower.js';
import { noncentralFLogSf } from './noncentralFLogSf.js';
import { fUpperQuantile } from './fUpperQuantile.js';
import { plannedTest, requirePlanning } from './planningInput.js';
import type { PlanningInput } from './planningInput.js';
import { requireFraction, requireInteger } from './preconditions.js';
import { shiftDeviance, shiftForNoncentrality, smallestShift } from './shiftForNoncentrality.js';

/** More in one window than anyone counts, and as far as the noncentral tails stay quick. */
const MOST_EVENTS = 1e10;

/** Shifts in points: hundredths of all events. Null: no shift of this category is enough. */
export interface DetectableShift {
  /** Smallest rise found with the wanted power: the larger of the next two. */
  readonly detectablePoints: number | null;
  /** Smallest rise that the test finds with that power. */
  readonly testPoints: number | null;
  /** Smallest rise that passes the gate with that power; 0 without a tolerance. */
  readonly gatePoints: number | null;
  /** Which of the two asks for more. */
  readonly binds: 'test' | 'tolerance';
  /** Power of each at `detectablePoints`; null where that is. */
  readonly testPower: number | null;
  readonly gatePower: number | null;
  /** Noncentrality the test needs. */
  readonly lambda: number;
  /** sqrt(lambda v), v = 1/w + 1/W: Cohen's w by Pearson's form, and the rise it gives. */
  readonly w: number;
  readonly guessPoints: number;
}

/** What to plan, in one window. */
export interface ShiftPlan extends PlanningInput {
  /** Events of the window to judge; whole, 1..1e10. */
  readonly events: number;
  /** Events of each window of the baseline; whole, 1..1e10. */
  readonly baselineEvents: number;
  /** Share of events that may move without anyone caring, 0..1; 0 for no gate. */
  readonly tolerance: number;
}

/**
 * The smallest rise of one category that a single window shows with a given power.
 *
 * The test: quasi-likelihood F on K-1 and (B-1)(K-1). lambda is the noncentrality it needs, and
 * the rise solves lambda_G(delta) = lambda, with lambda_G the deviance at the expected shares (the
 * others shrink in proportion). The gate: see `gatePower`. An alert takes both, so the larger
 * rise is the answer and the other's power is given beside it. The first guess,
 * sqrt(lambda v p(1-p)), is too small by 5 to 20 %.
 *
 * In: see `PlanningInput` and `ShiftPlan`. Out: see `DetectableShift`. Refuses other input with
 * RangeError. A fall is not planned: a small category's cannot exceed its share.
 * Source: noncentral F (Patnaik 1949, from memory); lambda_G in place of Pearson's form is own:
 * by the design's simulations it plans for .80 and gets .74 to .80. Cost: some 150 noncentral
 * tails with a tolerance, 20 without.
 */
export function detectableShift(plan: ShiftPlan): DetectableShift {
  check(plan);
  const { share, events, baselineEvents, baselineWindows, rho, tolerance } = plan;
  const { df2, lambda } = plannedTest(plan);
  const weights = {
    weightNow: designWeight(events, rho),
    weightReference: baselineWindows * designWeight(baselineEvents, rho),
  };
  const byTest = shiftForNoncentrality({ share, ...weights, lambda });
  const gate = { share, ...weights, categories: plan.categories, df2, tolerance };
  const bound = gateBound(plan.categories, df2);
  const passes = (delta: number): number => chanceToPass({ ...gate, delta }, bound);
  const byGate = tolerance === 0 ? 0 : smallestShift(share, (d) => passes(d) >= plan.power);
  const either = byTest === null || byGate === null ? null : Math.max(byTest, byGate);
  const w = Math.sqrt(lambda * (1 / weights.weightNow + 1 / weights.weightReference));
  return {
    detectablePoints: points(either),
    testPoints: points(byTest),
    gatePoints: points(byGate),
    binds: (byGate ?? Infinity) > (byTest ?? Infinity) ? 'tolerance' : 'test',
    testPower: either === null ? null : testPower(plan, df2, shiftDeviance(either, gate)),
    gatePower: either === null ? null : tolerance === 0 ? 1 : passes(either),
    lambda,
    w,
    guessPoints: 100 * w * Math.sqrt(share * (1 - share)),
  };
}

function check(plan: ShiftPlan): void {
  requirePlanning(plan);
  requireInteger('events', plan.events, 1, MOST_EVENTS);
  requireInteger('baselineEvents', plan.baselineEvents, 1, MOST_EVENTS);
  requireFraction('tolerance', plan.tolerance);
}

function points(delta: number | null): number | null {
  return delta === null ? null : 100 * delta;
}

function testPower(plan: ShiftPlan, df2: number, lambda: number): number {
  const df1 = plan.categories - 1;
  return Math.exp(noncentralFLogSf(fUpperQuantile(plan.alpha, df1, df2), df1, df2, lambda));
}
