import type { Collector } from '../collect/collector.js';
import type { Clock } from '../clock/clock.js';
import type { Rounds } from '../schedule/rounds.js';
import type { Store } from '../store/store.js';
import type { RoundCommit } from '../terms/round.js';
import { breathe } from './ports.js';

/** Bytes read before they are committed: about a second of catching up. */
const COMMIT_BYTES = 4 * 1024 * 1024;

/** Rounds judged in one pass, so that reading and delivering get their turn. */
const ROUNDS_PER_PASS = 200;

export interface EngineOptions {
  readonly collectors: readonly Collector[];
  readonly rounds: Rounds;
  readonly store: Pick<Store, 'commitCounts'>;
  readonly clock: Clock;
  /** One batch a round, as rehearsing does. */
  readonly whole: boolean;
  readonly onRound: (round: RoundCommit, durationMs: number) => void;
}

/** What one pass did; nothing left to do when all are zero. */
export interface Pass {
  readonly bytes: number;
  readonly rounds: number;
}

/** Reads, commits and judges: the one path of live running, catching up and rehearsing. */
export class Engine {
  private readonly options: EngineOptions;

  constructor(options: EngineOptions) {
    this.options = options;
  }

  /**
   * Reads what is there up to a commit's worth, commits it, judges what is complete. Only with
   * `lookAround` are new files and growth seen, so that repeating without it comes to an end.
   */
  async pass(options: { readonly lookAround: boolean }): Promise<Pass> {
    // What was found is kept before it is read: it may be renamed while nobody runs.
    await this.commit();
    const bytes = await this.read(options.lookAround);
    await this.commit();
    const rounds = await this.judge({ whole: this.options.whole });
    return { bytes, rounds };
  }

  /** Judges what is complete, whether or not the rest of its round is. */
  async judge(options: { readonly whole: boolean }): Promise<number> {
    let judged = 0;
    while (judged < ROUNDS_PER_PASS) {
      const startedMs = this.options.clock.nowMs();
      const round = await this.options.rounds.next((name) => this.watermarkOf(name), options);
      if (round === null) break;
      this.options.onRound(round, this.options.clock.nowMs() - startedMs);
      judged++;
      await breathe();
    }
    return judged;
  }

  exhausted(): boolean {
    return this.options.collectors.every((collector) => collector.exhausted());
  }

  /** Reads from the collector that is furthest behind, so that memory holds few open windows. */
  private async read(lookAround: boolean): Promise<number> {
    let bytes = 0;
    const open = new Set(this.options.collectors);
    const looked = new Set<Collector>();
    while (open.size > 0 && bytes < COMMIT_BYTES) {
      const [collector] = [...open].sort((a, b) => behind(a) - behind(b));
      if (collector === undefined) break;
      const taken = await collector.step({ lookAround: lookAround && !looked.has(collector) });
      looked.add(collector);
      bytes += taken;
      if (taken === 0) open.delete(collector);
      await breathe();
    }
    return bytes;
  }

  private async commit(): Promise<void> {
    for (const collector of this.options.collectors) {
      const batch = collector.drain();
      const sizes = [batch.tallies, batch.partitions, batch.rejected, batch.accepted];
      if (sizes.some((list) => list.length > 0)) await this.options.store.commitCounts(batch);
    }
  }

  private watermarkOf(name: string): number | null {
    return this.options.collectors.find((c) => c.name === name)?.watermarkMs() ?? null;
  }
}

function behind(collector: Collector): number {
  return collector.watermarkMs() ?? Number.NEGATIVE_INFINITY;
}
