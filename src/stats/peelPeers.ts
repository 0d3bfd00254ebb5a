import type { PeersBaseline } from './peersBaseline.js';
import { peersReference } from './peersReference.js';
import { quasiLikelihoodF } from './quasiLikelihoodF.js';
import type { QuasiLikelihoodF } from './quasiLikelihoodF.js';
import { requireInteger, requireTable } from './preconditions.js';
import { requireLogP } from './requireLogP.js';
import { sum } from './sum.js';

/** With fewer strands than this there is no majority to hold one against. */
const LEAST_STRANDS = 4;
const LEAST_REMAINING = 3;

export interface PeelingInput {
  /** S strands x K bins; a row without events is a strand that takes no part. */
  readonly now: readonly (readonly number[])[];
  /** As found by `dispersionOfPeers` from the windows before. */
  readonly rho: number;
  readonly df2: number;
  readonly baseline: PeersBaseline | null;
  /** Strands with an open alert: out from the start. */
  readonly open: readonly number[];
  /** A strand passes, and is blamed, when its logP is at most this. */
  readonly logThreshold: number;
}

export interface PeeledPeers {
  /** In the order in which they were blamed. */
  readonly blamed: readonly number[];
  /** Strands that still serve as peers, ascending. */
  readonly remaining: readonly number[];
  /**
   * One a strand: the test that blamed it, or its last one against the peers that remained; null
   * for a strand that was not judged.
   */
  readonly tests: readonly (QuasiLikelihoodF | null)[];
  /** More than a third was blamed: the strands have divided, and who moved cannot be told. */
  readonly divided: boolean;
  /** None passed any more, or too few were left to go on. */
  readonly stopped: 'none passes' | 'too few';
}

/**
 * Which strands of a window differ from their peers, one after the other.
 *
 * A strand that moved pulls its peers' references along. So all are judged; when the smallest
 * p-value passes, that strand is blamed, no longer serves as a peer, and the others are judged
 * again, until none passes or fewer than max(3, floor((S+1)/2)) remain. S counts the strands with
 * events, those with an open alert included. Blaming more than S/3 means that the strands have
 * divided into camps, and which of them moved cannot be told.
 *
 * In: see `PeelingInput`; rho in 0..1, df2 > 0 or Infinity, logThreshold <= 0. Equal p-values go
 * by the order of strands. Out: see `PeeledPeers`; with fewer than 4 strands nobody is judged.
 * Refuses other input with RangeError. Own, by simulation. Cost: at most S/2 rounds of S K.
 */
export function peelPeers(input: PeelingInput): PeeledPeers {
  check(input);
  const { now, open, logThreshold } = input;
  const present = now.map((_, s) => s).filter((s) => sum(now[s] ?? []) > 0);
  let remaining = present.filter((s) => !open.includes(s));
  const tests = now.map((): QuasiLikelihoodF | null => null);
  const blamed: number[] = [];
  const fewest = Math.max(LEAST_REMAINING, Math.floor((present.length + 1) / 2));
  let stopped: PeeledPeers['stopped'] = 'too few';
  while (present.length >= LEAST_STRANDS && remaining.length >= fewest) {
    const judged = judgeAll(input, remaining);
    remaining.forEach((s) => (tests[s] = judged[s] ?? null));
    const worst = worstOf(remaining, judged);
    if (worst === null || worst.logP > logThreshold) {
      stopped = 'none passes';
      break;
    }
    blamed.push(worst.strand);
    remaining = remaining.filter((s) => s !== worst.strand);
  }
  return { blamed, remaining, tests, divided: 3 * blamed.length > present.length, stopped };
}

function check({ now, open, logThreshold }: PeelingInput): void {
  requireTable('now', now);
  open.forEach((strand, i) => {
    requireInteger(`open[${i}]`, strand, 0, now.length - 1);
  });
  requireLogP('logThreshold', logThreshold);
}

/** Each of the remaining strands against the others of them. */
function judgeAll(input: PeelingInput, remaining: readonly number[]): (QuasiLikelihoodF | null)[] {
  const { rho, df2, baseline } = input;
  const members = new Set(remaining);
  const now = input.now.map((row, s) => (members.has(s) ? row : row.map(() => 0)));
  return peersReference({ now, rho, baseline }).map((reference, s) => {
    if (reference === null) return null;
    const { shares, weight } = reference;
    return quasiLikelihoodF({ now: now[s] ?? [], shares, weight, rho, df2 });
  });
}

function worstOf(
  strands: readonly number[],
  tests: readonly (QuasiLikelihoodF | null)[],
): { strand: number; logP: number } | null {
  let worst: { strand: number; logP: number } | null = null;
  for (const strand of strands) {
    const logP = tests[strand]?.logP ?? 0;
    if (worst === null || logP < worst.logP) worst = { strand, logP };
  }
  return worst;
}
