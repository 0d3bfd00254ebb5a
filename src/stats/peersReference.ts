import { designWeight } from './designWeight.js';
import type { PeersBaseline } from './peersBaseline.js';
import { requireFraction, requireLength, requireTable } from './preconditions.js';
import { sum } from './sum.js';
import { sumsOfOthers } from './sumsOfOthers.js';

/** Extra scatter of the peers' change is never taken for less than this share of their own. */
const LEAST_SPREAD = 0.2;

/** What one strand is held against, as `quasiLikelihoodF` takes it. */
export interface PeersReference {
  readonly shares: readonly number[];
  /** W, effective events behind the shares. */
  readonly weight: number;
  /** c, how widely the carried-over change scatters; null where the peers were simply pooled. */
  readonly spread: number | null;
}

interface Peer {
  readonly index: number;
  readonly weight: number;
  readonly shares: readonly number[];
}

/**
 * What each strand of a window is held against: its peers, the other strands of that window.
 *
 * Without a baseline (form 1) the reference is the others pooled by their effective events w, and
 * W is their sum: right when strands are alike. With one (form 2) the strand keeps its own usual
 * shares and takes over the change its peers show against theirs. Sums over the others:
 * O_k = sum w q_k, E_k = sum w base_k, Wnow = sum w, now_k = (O_k + 1/2)/(Wnow + K/2);
 * r_k = base_jk (O_k + 1/2)/(E_k + 1/2), made to sum 1; c = max(1/5, (sum r_k/now_k - 1)/(K - 1));
 * 1/W = 1/Wown_j + c (1/Wnow + sum w^2/Wown / Wnow^2).
 * What moves all strands alike drops out; a shift of all alike is not seen.
 *
 * In: the window as S strands x K bins, K >= 2, in the strands' fixed order; a row without events
 * is a strand that is neither judged nor a peer. rho in 0..1; baseline of the same S strands and
 * K bins, or null. Out: one reference a strand, null where the strand has no events, or no peer
 * has. Refuses other shapes, negative cells and a baseline without windows with RangeError.
 * Own, by simulation: form 2 errs at 5e-6 for a nominal 1e-5, at 7e-5 with 4 quite
 * unlike strands.
 * Measured against 50 digits on the design's check (test/published/lenses.py):
 * shares and weight within 1e-12. Cost: S K.
 */
export function peersReference(input: {
  readonly now: readonly (readonly number[])[];
  readonly rho: number;
  readonly baseline: PeersBaseline | null;
}): (PeersReference | null)[] {
  const { now, rho, baseline } = input;
  check(input);
  const peers = now.flatMap((row, index): Peer[] => {
    const events = sum(row);
    if (events === 0) return [];
    return [{ index, weight: designWeight(events, rho), shares: row.map((x) => x / events) }];
  });
  const found = baseline === null ? pooled(peers) : carriedOver(peers, rho, baseline);
  const references = now.map((): PeersReference | null => null);
  if (peers.length < 2) return references;
  peers.forEach(({ index }, at) => {
    references[index] = found[at] ?? null;
  });
  return references;
}

function check({ now, rho, baseline }: Parameters<typeof peersReference>[0]): void {
  requireTable('now', now);
  requireFraction('rho', rho);
  const bins = now[0]?.length ?? 0;
  if (bins < 2) throw new RangeError(`now: must have at least 2 bins, got ${bins}`);
  if (baseline === null) return;
  if (baseline.windows === 0) throw new RangeError('baseline: must hold a window, got none');
  requireLength('baseline.shares', baseline.shares, now.length);
  requireLength('baseline.shares[0]', baseline.shares[0] ?? [], bins);
}

function weightedShares({ weight, shares }: Peer): number[] {
  return shares.map((share) => weight * share);
}

/** Form 1. */
function pooled(peers: readonly Peer[]): PeersReference[] {
  return sumsOfOthers(peers.map(weightedShares)).map((observed) => {
    const weight = sum(observed);
    return { shares: observed.map((o) => o / weight), weight, spread: null };
  });
}

/** Form 2. */
function carriedOver(
  peers: readonly Peer[],
  rho: number,
  baseline: PeersBaseline,
): PeersReference[] {
  const bases = peers.map(({ index }) => baseline.shares[index] ?? []);
  const openness = peers.map(({ index }) => {
    const { fixed, perRho } = baseline.scatter[index] ?? { fixed: 0, perRho: 0 };
    return fixed + rho * perRho;
  });
  const observed = sumsOfOthers(peers.map(weightedShares));
  const expected = sumsOfOthers(
    bases.map((base, s) => base.map((share) => (peers[s]?.weight ?? 0) * share)),
  );
  const sizes = sumsOfOthers(
    peers.map(({ weight }, s) => [weight, weight * weight * (openness[s] ?? 0)]),
  );
  return bases.map((base, s) => {
    const [weightNow = 0, open = 0] = sizes[s] ?? [];
    const { shares, spread } = carryOver(base, observed[s] ?? [], expected[s] ?? [], weightNow);
    const carried = spread * (1 / weightNow + open / weightNow ** 2);
    return { shares, weight: 1 / ((openness[s] ?? 0) + carried), spread };
  });
}

/** A strand's usual shares with its peers' change, and how widely that change scatters. */
function carryOver(
  base: readonly number[],
  observed: readonly number[],
  expected: readonly number[],
  weightNow: number,
): { shares: number[]; spread: number } {
  const bins = base.length;
  const raw = base.map(
    (share, k) => (share * ((observed[k] ?? 0) + 0.5)) / ((expected[k] ?? 0) + 0.5),
  );
  const whole = sum(raw);
  const shares = raw.map((r) => r / whole);
  const over = shares.map((r, k) => (r * (weightNow + 0.5 * bins)) / ((observed[k] ?? 0) + 0.5));
  return { shares, spread: Math.max(LEAST_SPREAD, (sum(over) - 1) / (bins - 1)) };
}
