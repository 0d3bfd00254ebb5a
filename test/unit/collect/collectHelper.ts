import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { virtualClock } from '../../../src/clock/virtualClock.js';
import type { VirtualClock } from '../../../src/clock/virtualClock.js';
import type { CollectorConfig, MixConfig } from '../../../src/config/types.js';
import type { Collector, ReadingMode } from '../../../src/collect/collector.js';
import { openCollector } from '../../../src/collect/open.js';
import type { CollectorOptions } from '../../../src/collect/options.js';
import type { CountBatch } from '../../../src/store/store.js';
import type { Partition } from '../../../src/terms/partition.js';

export const MINUTE = 60_000;
export const HOUR = 3_600_000;
export const DAY = 86_400_000;
/** An arbitrary round start of event time. */
export const T0 = Date.UTC(2026, 10, 3, 10);

export function collectorConfig(changes: Partial<CollectorConfig> = {}): CollectorConfig {
  return {
    name: 'gateway',
    source: { kind: 'stdin' },
    decode: { kind: 'json' },
    time: { field: ['ts'], format: { kind: 'iso' }, zone: 'UTC' },
    maxLineBytes: 1_048_576,
    ...changes,
  };
}

export function mixConfig(changes: Partial<MixConfig> = {}): MixConfig {
  return {
    name: 'outcomes',
    from: 'gateway',
    category: ['outcome'],
    where: [],
    split: [],
    window: { kind: 'sub-day', ms: 5 * MINUTE },
    zone: 'UTC',
    latenessMs: 30_000,
    yardstick: { kind: 'rolling', lastMs: 14 * DAY },
    tolerance: { moved: 0.01, each: new Map() },
    ordered: null,
    limits: {
      categoriesJudged: 64,
      categoriesStored: 10_000,
      strands: 1_000,
      forgetMs: 7 * DAY,
      minEvents: 20,
    },
    settleMs: null,
    falseAlarms: null,
    ...changes,
  };
}

/** One log line without its end. */
export function record(atMs: number, outcome = 'approved', more: object = {}): string {
  return JSON.stringify({ ts: new Date(atMs).toISOString(), outcome, ...more });
}

/** Lines `everyMs` apart. */
export function lines(fromMs: number, count: number, everyMs: number, outcome = 'approved') {
  return Array.from({ length: count }, (_, i) => `${record(fromMs + i * everyMs, outcome)}\n`);
}

/** What a store would hold: counts by `mix|strand|window start|category`, and the rows. */
export class Ledger {
  readonly counts = new Map<string, { onTime: number; late: number }>();
  readonly rejected = new Map<string, number>();
  readonly rows = new Map<string, Partition>();
  accepted = 0;

  commit(batch: CountBatch): void {
    for (const { mix, strand, window, counts } of batch.tallies) {
      for (const [category, count] of counts) {
        const key = [mix, strand, window.startMs, category].join('|');
        const before = this.counts.get(key) ?? { onTime: 0, late: 0 };
        this.counts.set(key, {
          onTime: before.onTime + count.onTime,
          late: before.late + count.late,
        });
      }
    }
    for (const { reason, count } of batch.rejected) {
      this.rejected.set(reason, (this.rejected.get(reason) ?? 0) + count);
    }
    for (const { count } of batch.accepted) this.accepted += count;
    for (const row of batch.partitions) this.rows.set(row.id, row);
  }

  partitions(): Promise<readonly Partition[]> {
    return Promise.resolve([...this.rows.values()]);
  }

  /** Events of a category over all windows of the whole, late ones included. */
  events(category: string): number {
    let events = 0;
    for (const [key, count] of this.counts) {
      if (key.includes('|all|') && key.endsWith(`|${category}`)) {
        events += count.onTime + count.late;
      }
    }
    return events;
  }

  /** All that must not depend on chunks, restarts or time of reading, in a canonical order. */
  summary(): unknown {
    const sorted = <V>(map: Map<string, V>) => [...map].sort(([a], [b]) => (a < b ? -1 : 1));
    return {
      counts: sorted(this.counts),
      rejected: sorted(this.rejected),
      accepted: this.accepted,
    };
  }
}

/** A temp folder, a clock and a store's worth of memory for tailing files. */
export class TailBench {
  readonly folder = mkdtempSync(path.join(tmpdir(), 'tallyward-collect-'));
  readonly clock: VirtualClock = virtualClock(T0 + 30 * DAY);
  readonly ledger = new Ledger();
  private opened: Collector | null = null;

  file(name: string): string {
    return path.join(this.folder, name);
  }

  /** Opens (again) over patterns inside the folder; what was not drained is lost, as in a crash. */
  async open(
    mode: ReadingMode,
    patterns: readonly string[],
    changes: Partial<CollectorOptions> = {},
  ): Promise<Collector> {
    await this.opened?.close();
    const paths = patterns.map((pattern) => this.file(pattern));
    this.opened = await openCollector({
      config: collectorConfig({ source: { kind: 'tail', paths } }),
      mixes: [mixConfig()],
      mode,
      clock: this.clock,
      store: this.ledger,
      judgedTo: () => -Infinity,
      ...changes,
    });
    return this.opened;
  }

  /** Looks around, reads all there is, and commits. */
  async read(collector: Collector): Promise<void> {
    let bytes = await collector.step({ lookAround: true });
    while (bytes > 0) bytes = await collector.step({ lookAround: false });
    this.ledger.commit(collector.drain());
  }

  async end(): Promise<void> {
    await this.opened?.close();
    rmSync(this.folder, { recursive: true, force: true });
  }
}
