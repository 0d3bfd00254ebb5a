import type { Alert } from '../terms/alert.js';
import type { Delivery, Message } from '../terms/message.js';
import type { Partition } from '../terms/partition.js';
import type { Batch, DigestEntry, RoundCommit, StrandState } from '../terms/round.js';
import type { StrandKey, Tally } from '../terms/tally.js';
import type { Verdict, VerdictName } from '../terms/verdict.js';
import type { Window } from '../terms/window.js';

/** What collectors add in one transaction: counts (to be added), and how far they have read. */
export interface CountBatch {
  readonly tallies: readonly Tally[];
  readonly partitions: readonly Partition[];
  /** Records refused since the last commit. */
  readonly rejected: readonly {
    readonly collector: string;
    readonly reason: string;
    readonly count: number;
  }[];
  /** Records accepted since the last commit, by collector. */
  readonly accepted: readonly { readonly collector: string; readonly count: number }[];
}

/** Sums since the store was made; they survive restarts, so counters never go back. */
export interface Totals {
  readonly accepted: ReadonlyMap<string, number>;
  readonly rejected: readonly {
    readonly collector: string;
    readonly reason: string;
    readonly count: number;
  }[];
  /** By mix: events counted (late included), late ones, by category (late included). */
  readonly mixes: ReadonlyMap<
    string,
    {
      readonly events: number;
      readonly late: number;
      readonly categories: ReadonlyMap<string, number>;
    }
  >;
  readonly verdicts: readonly {
    readonly mix: string;
    readonly verdict: VerdictName;
    readonly count: number;
  }[];
  readonly deliveries: readonly {
    readonly sender: string;
    readonly outcome: 'delivered' | 'failed' | 'gave-up';
    readonly count: number;
  }[];
}

export interface TallyQuery {
  readonly mix: string;
  readonly strand?: StrandKey;
  /** Windows with startMs >= fromMs and endMs <= toMs. */
  readonly fromMs?: number;
  readonly toMs?: number;
}

/** A durable home for counts, rounds, alerts and messages. Errors are thrown as StoreError. */
export interface Store {
  // Counting -----------------------------------------------------------------------------------
  /** Adds the counts and replaces the partitions' rows, all in one transaction. */
  commitCounts(batch: CountBatch): Promise<void>;
  partitions(collector: string): Promise<readonly Partition[]>;
  totals(): Promise<Totals>;

  // Reading tallies ----------------------------------------------------------------------------
  /** Every strand's tally of one window, in order of strand key (code points). */
  windowTallies(mix: string, startMs: number): Promise<readonly Tally[]>;
  /** Tallies in order of start, then strand key. */
  tallies(query: TallyQuery): AsyncIterable<Tally>;
  /** The windows of one strand that begin in [fromMs, toMs), in order of start. */
  strandTallies(
    mix: string,
    strand: StrandKey,
    fromMs: number,
    toMs: number,
  ): Promise<readonly Tally[]>;
  /** The first window that begins at or after fromMs and holds any on-time event. */
  nextWindow(mix: string, fromMs: number): Promise<Window | null>;

  // Judging ------------------------------------------------------------------------------------
  /** Verdicts, batch, strand states, alerts, messages and digest entries: all or nothing. */
  commitRound(round: RoundCommit): Promise<void>;
  strandStates(): Promise<readonly StrandState[]>;
  /** End of the last judged window by mix; a mix never judged is absent. */
  judgedTo(): Promise<ReadonlyMap<string, number>>;
  /** Stored batches in order of (endMs, number). */
  batches(fromMs?: number): AsyncIterable<Batch>;
  /** Verdicts in order of window end, mix, strand key (code points). */
  verdicts(query: {
    readonly mix?: string;
    readonly fromMs?: number;
    readonly toMs?: number;
  }): AsyncIterable<Verdict>;
  /** The last verdict of every strand of every mix. */
  latestVerdicts(): Promise<readonly Verdict[]>;
  /** Alerts in order of raising, then id; `open` means not in state normal. */
  alerts(query: {
    readonly open?: boolean;
    readonly ids?: readonly string[];
  }): Promise<readonly Alert[]>;
  /** Keeps the text that a digest stands for; a digest once kept never changes. */
  keepConfig(digest: string, text: string): Promise<void>;
  configText(digest: string): Promise<string | null>;

  // Outbox -------------------------------------------------------------------------------------
  /** Senders for which messages wait, in order of name. */
  waitingSenders(): Promise<readonly string[]>;
  /** A sender's messages, due or not, in the order of their making, at most `limit`. */
  waiting(sender: string, limit: number): Promise<readonly Delivery[]>;
  delivered(messageId: string): Promise<void>;
  deliveryFailed(messageId: string, nextAttemptMs: number, error: string): Promise<void>;
  /** Moves a message out of the way for good; it stays readable as given up. */
  deliveryGivenUp(messageId: string, error: string): Promise<void>;
  /** In the order of their making. */
  digestEntries(sender: string): Promise<readonly DigestEntry[]>;
  /** Replaces the first `entries` of the message's sender by the message, in one transaction. */
  closeDigest(message: Message, entries: number): Promise<void>;

  /** 32 hex digits drawn when the store was made: who it is to receivers of its messages. */
  instanceId(): Promise<string>;

  // Upkeep -------------------------------------------------------------------------------------
  bytes(): Promise<number>;
  close(): Promise<void>;
}

/** The store refused; the message says what, where and what to do. */
export class StoreError extends Error {
  override readonly name = 'StoreError';
}
