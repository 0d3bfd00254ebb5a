import { designWeight } from '../stats/designWeight.js';
import { changePoint } from '../stats/changePoint.js';
import type { Since } from '../terms/alert.js';
import type { Window } from '../terms/window.js';

/** Windows that a search for the start looks back over. */
export const SINCE_WINDOWS = 60;

/** Stands in for the infinite weight of declared shares; far above any count of events. */
const FIXED_WEIGHT = 1e9;

export interface SinceInput {
  /** Recent windows up to the one that raised, in time order, counts by bin. */
  readonly windows: readonly {
    readonly window: Window;
    readonly counts: readonly number[];
    /** The window is part of the reference, and must not count twice. */
    readonly inReference: boolean;
  }[];
  readonly shares: readonly number[];
  readonly weight: number;
  readonly rho: number;
}

/**
 * When the shift began: the split of the recent windows that a change of shares explains best,
 * and the windows that explain it nearly as well (Siegmund 1988; counts weighted by their design
 * effect). At least one window.
 */
export function sinceWhen(input: SinceInput): Since {
  const weighted = input.windows.map((w) => weigh(w.counts, input.rho));
  const weight = Number.isFinite(input.weight) ? input.weight : FIXED_WEIGHT;
  const baseline = input.shares.map((share, bin) => {
    const overlap = input.windows.reduce(
      (sum, w, at) => sum + (w.inReference ? (weighted[at]?.[bin] ?? 0) : 0),
      0,
    );
    return Math.max(0, share * weight - overlap);
  });
  const found = changePoint({ baseline, windows: weighted, phi: 1 });
  const startOf = (at: number): number => input.windows[at]?.window.startMs ?? Number.NaN;
  return {
    estimateMs: startOf(found.estimate),
    earliestMs: startOf(found.earliest),
    latestMs: startOf(found.latest),
  };
}

function weigh(counts: readonly number[], rho: number): number[] {
  const n = counts.reduce((a, b) => a + b, 0);
  return n === 0 ? [...counts] : counts.map((count) => (count * designWeight(n, rho)) / n);
}
