import { requireFraction, requireInteger, requireOpenFraction } from './preconditions.js';
import { requiredNoncentrality } from './requiredNoncentrality.js';

/** What every planning function asks: the test that will be made, and the shift to find. */
export interface PlanningInput {
  /** Share of the category that will rise, before it does; strictly between 0 and 1. */
  readonly share: number;
  /** K, bins of the table after pooling; whole, 2..1e6. */
  readonly categories: number;
  /** B, windows of the baseline; whole, 2..1e6. */
  readonly baselineWindows: number;
  /** Intra-window correlation; 0 (plain sampling) to 1. */
  readonly rho: number;
  /**
   * Level of the one test, 0..1 exclusive: the false alarms wanted a week over mixes times rounds
   * a week, halved when two lenses share it.
   */
  readonly alpha: number;
  /** Chance wanted of finding the shift in the first window that has it; above alpha, below 1. */
  readonly power: number;
}

const MOST = 1e6;

/** Refuses a plan that cannot be made; alpha and power are refused by the noncentrality. */
export function requirePlanning(input: PlanningInput): void {
  requireOpenFraction('share', input.share);
  requireInteger('categories', input.categories, 2, MOST);
  requireInteger('baselineWindows', input.baselineWindows, 2, MOST);
  requireFraction('rho', input.rho);
}

/** nu2 = (B-1)(K-1) and the noncentrality that the test of such a plan needs. */
export function plannedTest(input: PlanningInput): { df2: number; lambda: number } {
  const { categories, baselineWindows, alpha, power } = input;
  const df2 = (baselineWindows - 1) * (categories - 1);
  return { df2, lambda: requiredNoncentrality({ df1: categories - 1, df2, alpha, power }) };
}
