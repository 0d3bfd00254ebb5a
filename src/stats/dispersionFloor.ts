import { plannedTest, requirePlanning } from './planningInput.js';
import type { PlanningInput } from './planningInput.js';
import { shiftForNoncentrality } from './shiftForNoncentrality.js';

/** The shift below which no volume helps. */
export interface DispersionFloor {
  /** sqrt(lambda rho (1 + 1/B)), Cohen's w by Pearson's form; 0 without dispersion. */
  readonly w: number;
  /** The rise it gives, in points (hundredths of all events): w sqrt(p(1-p)). */
  readonly floorPoints: number;
  /** By the deviance, the limit of `detectableShift`; null when no rise is enough. */
  readonly exactPoints: number | null;
}

/**
 * The smallest rise of one category that a window of endless volume would show.
 *
 * Windows that scatter by rho tend to 1/rho effective events each, so v = 1/w + 1/W tends to
 * rho (1 + 1/B) and the rise to sqrt(lambda v p(1-p)), 5 to 20 % too small like every such guess;
 * exactly, lambda_G(delta) = lambda at w = 1/rho, W = B/rho. The test alone, without the gate.
 *
 * In: see `PlanningInput`. Out: see `DispersionFloor`; all 0 at rho = 0. Refuses other input with
 * RangeError. Source: as `detectableShift`. Cost: one noncentrality.
 */
export function dispersionFloor(plan: PlanningInput): DispersionFloor {
  requirePlanning(plan);
  const { share, rho, baselineWindows } = plan;
  const { lambda } = plannedTest(plan);
  if (rho === 0) return { w: 0, floorPoints: 0, exactPoints: 0 };
  const w = Math.sqrt(lambda * rho * (1 + 1 / baselineWindows));
  const weights = { weightNow: 1 / rho, weightReference: baselineWindows / rho };
  const exact = shiftForNoncentrality({ share, ...weights, lambda });
  return {
    w,
    floorPoints: 100 * w * Math.sqrt(share * (1 - share)),
    exactPoints: exact === null ? null : 100 * exact,
  };
}
