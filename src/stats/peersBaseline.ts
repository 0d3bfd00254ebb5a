import { requireTable } from './preconditions.js';
import { sum } from './sum.js';

/** What each strand usually looks like, over windows that all of them have in common. */
export interface PeersBaseline {
  /** B, windows in which every strand had events. */
  readonly windows: number;
  /** For each strand its smoothed shares, sum 1. */
  readonly shares: readonly (readonly number[])[];
  /**
   * For each strand, 1/W of these shares is `scatter.fixed + rho x scatter.perRho`: what its
   * windows' effective events leave open.
   */
  readonly scatter: readonly { readonly fixed: number; readonly perRho: number }[];
}

/**
 * Shares of every strand in the windows they have in common, each window weighing alike for all.
 *
 * With g_b = sum_s N_sb: base_sk = sum_b g_b q_sbk / sum_b g_b, smoothed to
 * (M_s base_sk + 1/2)/(M_s + K/2), M_s the strand's events, and
 * 1/Wown_s = sum_b g_b^2/w_sb / (sum_b g_b)^2. Common weights g let what moves all strands alike
 * drop out of their comparison.
 *
 * In: windows in any fixed order, each a table of S strands (in one order) by K bins. Windows in
 * which a strand has no events are not common and are ignored. Out: see `PeersBaseline`; with
 * `windows` 0 and nothing else when none is common. Refuses no windows, other shapes and negative
 * cells with RangeError. Own, by simulation. Cost: linear.
 */
export function peersBaseline(windows: readonly (readonly (readonly number[])[])[]): PeersBaseline {
  const [first] = windows;
  if (first === undefined) throw new RangeError('windows: must hold at least one, got none');
  windows.forEach((window, b) => {
    requireTable(`windows[${b}]`, window);
    if (window.length !== first.length || window[0]?.length !== first[0]?.length) {
      const [own, shape] = [window, first].map((t) => `${t.length} x ${t[0]?.length ?? 0}`);
      throw new RangeError(`windows[${b}]: must be ${shape ?? ''} as the first, got ${own ?? ''}`);
    }
  });
  const common = windows.filter((window) => window.every((row) => sum(row) > 0));
  if (common.length === 0) return { windows: 0, shares: [], scatter: [] };
  const weights = common.map((window) => sum(window.map(sum)));
  const strands = first.map((_, s) =>
    ofStrand(
      common.map((window) => window[s] ?? []),
      weights,
    ),
  );
  return {
    windows: common.length,
    shares: strands.map((strand) => strand.shares),
    scatter: strands.map((strand) => strand.scatter),
  };
}

function ofStrand(
  rows: readonly (readonly number[])[],
  weights: readonly number[],
): { shares: number[]; scatter: { fixed: number; perRho: number } } {
  const events = rows.map(sum);
  const [whole, total] = [sum(weights), sum(events)];
  const bins = rows[0]?.length ?? 0;
  const shares = Array.from({ length: bins }, (_, k) => {
    const mean = sum(rows.map((row, b) => ((weights[b] ?? 0) * (row[k] ?? 0)) / (events[b] ?? 1)));
    return ((total * mean) / whole + 0.5) / (total + 0.5 * bins);
  });
  // 1/w = (1 + (N - 1) rho)/N is straight in rho, and so is their sum.
  const square = (b: number): number => ((weights[b] ?? 0) / whole) ** 2;
  const fixed = sum(events.map((n, b) => square(b) / n));
  const perRho = sum(events.map((n, b) => (square(b) * Math.max(0, n - 1)) / n));
  return { shares, scatter: { fixed, perRho } };
}
