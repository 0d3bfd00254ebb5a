import type { Readable } from 'node:stream';
import type { CountBatch } from '../store/store.js';
import type { Partition } from '../terms/partition.js';
import type { Collector } from './collector.js';
import type { CollectorOptions } from './options.js';
import { Counter } from './tally/counter.js';
import { PartitionReader, freshPartition } from './tally/partitionReader.js';
import { reasonOf } from './tail/glob.js';

const STDIN_ID = 'stdin';

/**
 * Reads one pipe. It cannot be read again, so each start begins a fresh one and its position only
 * counts bytes. The stream is read on demand: what waits is bounded by the stream's own buffer, and
 * whoever writes into the pipe is held up meanwhile.
 */
export class Stdin implements Collector {
  readonly name: string;
  private readonly options: CollectorOptions;
  private readonly stream: Readable;
  private readonly counter: Counter;
  private readonly reader: PartitionReader;
  private readonly problemTexts: string[] = [];
  private drainedWatermarkMs: number | null = null;
  private wake: (() => void) | null = null;
  /** Listeners by event, taken off again by `close`. */
  private readonly listeners = {
    readable: (): void => this.awaken(),
    end: (): void => this.end(),
    close: (): void => this.end(),
    error: (error: unknown): void => {
      this.problemTexts.push(`cannot read the standard input: ${reasonOf(error)}`);
      this.end();
    },
  };

  private constructor(options: CollectorOptions, stream: Readable, stored: readonly Partition[]) {
    const { config } = options;
    this.name = config.name;
    this.options = options;
    this.stream = stream;
    this.counter = new Counter(options);
    // A record that waited when the last pipe broke can only be counted from its row.
    for (const row of stored) {
      new PartitionReader(row, this.counter, config.maxLineBytes).settleWaiting();
    }
    const fresh = freshPartition(config.name, STDIN_ID, STDIN_ID);
    this.reader = new PartitionReader(fresh, this.counter, config.maxLineBytes);
    this.reader.changed = true;
    for (const [event, listener] of Object.entries(this.listeners)) stream.on(event, listener);
  }

  static async open(options: CollectorOptions, stream: Readable): Promise<Stdin> {
    return new Stdin(options, stream, await options.store.partitions(options.config.name));
  }

  /** In `live` nothing waits; else the step waits until something comes or the pipe ends. */
  async step(): Promise<number> {
    for (;;) {
      const bytes = this.reader.ended ? null : bytesOf(this.stream.read());
      if (bytes !== null) {
        this.reader.feed(bytes);
        return bytes.length;
      }
      const isOver = this.reader.ended || this.stream.destroyed;
      if (isOver || this.options.mode === 'live') return 0;
      await new Promise<void>((resolve) => {
        this.wake = resolve;
      });
    }
  }

  drain(): CountBatch {
    const partitions = this.reader.changed ? [this.reader.snapshot()] : [];
    this.reader.changed = false;
    this.drainedWatermarkMs = this.reader.watermarkMs;
    return { ...this.counter.drain(), partitions };
  }

  watermarkMs(): number | null {
    return this.drainedWatermarkMs;
  }

  lagBytes(): null {
    return null;
  }

  exhausted(): boolean {
    return this.reader.ended;
  }

  problems(): readonly string[] {
    return this.problemTexts;
  }

  async close(): Promise<void> {
    for (const [event, listener] of Object.entries(this.listeners)) {
      this.stream.off(event, listener);
    }
    this.awaken();
    this.stream.destroy();
    return Promise.resolve();
  }

  private end(): void {
    if (this.reader.ended) return;
    this.reader.endOfInput();
    this.reader.ended = true;
    this.awaken();
  }

  private awaken(): void {
    this.wake?.();
    this.wake = null;
  }
}

/** What a stream gave: bytes, or text where an encoding was set on it; null for nothing. */
function bytesOf(chunk: unknown): Buffer | null {
  if (Buffer.isBuffer(chunk)) return chunk;
  return typeof chunk === 'string' ? Buffer.from(chunk) : null;
}
