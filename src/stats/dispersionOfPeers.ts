import { dispersionOfSlots } from './dispersionOfSlots.js';
import { designWeight } from './designWeight.js';
import { pairDeviance } from './pairDeviance.js';
import type { PeersBaseline } from './peersBaseline.js';
import { peersReference } from './peersReference.js';
import { requireTable } from './preconditions.js';
import { solveRho } from './solveRho.js';
import { sum } from './sum.js';

/** Two strands tell nothing of which of them scatters: df2 counts a window's strands less 2. */
const LEAST_STRANDS = 3;
const LEAST_WINDOWS = 8;
const LEAST_DF2 = 20;

export interface PeersDispersion {
  /** Intra-window correlation, 0..0.999. */
  readonly rho: number;
  /** sum_h (S_h - 2)(K - 1), S_h counting the strands with events in window h. */
  readonly df2: number;
  /** H, past windows with at least 3 strands. */
  readonly windows: number;
  /** H >= 8 and df2 >= 20: enough for an alert to rest on. */
  readonly ready: boolean;
}

/**
 * Intra-window correlation of strands that are held against each other.
 *
 * Without a baseline (form 1) each past window is a slot with its own shares:
 * sum_h sum_s G_hs/(1 + (N_hs - 1) rho) = sum_h (S_h - 1)(K - 1). With one (form 2), G_hs(rho)
 * being the deviance of strand s from its reference at that rho (`peersReference`), it solves
 * sum_h sum_s G_hs(rho) = sum_h S_h (K - 1). df2 = sum_h (S_h - 2)(K - 1) in both.
 *
 * In: the windows before the one judged, never that one (a shift of many strands would hide
 * itself), each S strands x K bins with a row without events for a strand that was silent or in
 * alarm; at most 24 are of use. baseline as in `peersReference`, or null. Out: see
 * `PeersDispersion`; rho 0 and df2 0 when no window has 3 strands. Refuses other shapes and
 * negative cells with RangeError. Own, by simulation. Cost: some 10 to 40 times H S K in form 2.
 */
export function dispersionOfPeers(input: {
  readonly windows: readonly (readonly (readonly number[])[])[];
  readonly baseline: PeersBaseline | null;
}): PeersDispersion {
  const { baseline } = input;
  input.windows.forEach((window, h) => {
    requireTable(`windows[${h}]`, window);
  });
  const usable = input.windows.filter((window) => strandsOf(window) >= LEAST_STRANDS);
  const bins = usable[0]?.[0]?.length ?? 0;
  const total = (less: number): number =>
    usable.reduce((df, window) => df + (strandsOf(window) - less) * (bins - 1), 0);
  const df2 = total(2);
  const ready = usable.length >= LEAST_WINDOWS && df2 >= LEAST_DF2;
  const found = { df2, windows: usable.length, ready };
  if (df2 === 0) return { rho: 0, ...found };
  if (baseline === null) return { rho: dispersionOfSlots(usable).rho, ...found };
  const deviance = (rho: number): number =>
    sum(usable.map((now) => windowDeviance(now, rho, baseline)));
  return { rho: solveRho(deviance, total(0)), ...found };
}

function strandsOf(window: readonly (readonly number[])[]): number {
  return window.filter((row) => sum(row) > 0).length;
}

/** sum_s G_s(rho) of one window. */
function windowDeviance(
  now: readonly (readonly number[])[],
  rho: number,
  baseline: PeersBaseline,
): number {
  const references = peersReference({ now, rho, baseline });
  return sum(
    now.map((row, s) => {
      const reference = references[s] ?? null;
      if (reference === null) return 0;
      const events = sum(row);
      return pairDeviance({
        now: row.map((x) => x / events),
        weightNow: designWeight(events, rho),
        reference: reference.shares,
        weightReference: reference.weight,
      });
    }),
  );
}
