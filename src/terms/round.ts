import type { Alert } from './alert.js';
import type { Message } from './message.js';
import type { StrandMemory } from './recipe.js';
import type { StrandKey } from './tally.js';
import type { Verdict } from './verdict.js';

/** One batch of a round: the mixes that closed together, judged as one family of tests. */
export interface Batch {
  /** The instant at which all windows of the round end. */
  readonly endMs: number;
  /** 0 for the first batch of the instant. */
  readonly number: number;
  readonly mixes: readonly string[];
  /** Per budget (`''` is the shared one): strands expected, tests made, and the level spent. */
  readonly families: readonly FamilyNote[];
}

export interface FamilyNote {
  readonly budget: string;
  /** Strands expected at the instant. */
  readonly expected: number;
  readonly tested: number;
  /** Level of the family, and false alarms that this batch may have cost. */
  readonly level: number;
  readonly spent: number;
}

/** The memory of one strand: a plain value, stored as JSON. */
export interface StrandState {
  readonly mix: string;
  readonly strand: StrandKey;
  readonly state: StrandMemory;
}

/** An alert event that waits for the next digest of a sender. */
export interface DigestEntry {
  readonly sender: string;
  readonly alertId: string;
  readonly event: string;
  readonly createdAtMs: number;
}

/** Everything a round leaves behind; committed whole or not at all. */
export interface RoundCommit {
  readonly batch: Batch;
  readonly verdicts: readonly Verdict[];
  readonly strands: readonly StrandState[];
  /** Strands to drop from the state, forgotten. */
  readonly forgotten: readonly { readonly mix: string; readonly strand: StrandKey }[];
  /** Alerts raised or changed. */
  readonly alerts: readonly Alert[];
  readonly messages: readonly Message[];
  readonly digestEntries: readonly DigestEntry[];
}
