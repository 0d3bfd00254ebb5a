import type { FileHandle } from 'node:fs/promises';
import type { CountBatch } from '../../store/store.js';
import type { Partition } from '../../terms/partition.js';
import type { Collector } from '../collector.js';
import type { CollectorOptions } from '../options.js';
import { quietAfterMs } from '../options.js';
import { Counter } from '../tally/counter.js';
import { collectorWatermark } from '../watermark.js';
import { FilePool, readAt } from './fileBytes.js';
import { reasonOf } from './glob.js';
import { Roster } from './roster.js';
import type { TailFile } from './tailFile.js';

/** Bytes read at a time. */
const CHUNK_BYTES = 262_144;

/** Follows files by device and inode, through renaming and emptying, merged by event time. */
export class Tail implements Collector {
  readonly name: string;
  private readonly options: CollectorOptions;
  private readonly counter: Counter;
  private readonly pool = new FilePool();
  private readonly buffer = Buffer.allocUnsafe(CHUNK_BYTES);
  private readonly roster: Roster;
  private drainedWatermarkMs: number | null = null;

  private constructor(
    options: CollectorOptions,
    patterns: readonly string[],
    stored: readonly Partition[],
  ) {
    const { config, mixes, mode, clock } = options;
    this.name = config.name;
    this.options = options;
    this.counter = new Counter(options);
    this.roster = new Roster({
      collector: config.name,
      patterns,
      mode,
      quietMs: quietAfterMs(config.name, mixes),
      maxLineBytes: config.maxLineBytes,
      counter: this.counter,
      open: this.open.bind(this),
      close: this.pool.close.bind(this.pool),
    });
    this.roster.restore(stored, clock.nowMs());
  }

  /** Looks for the files, so that the watermark is known before anything is read. */
  static async open(options: CollectorOptions, patterns: readonly string[]): Promise<Tail> {
    const stored = await options.store.partitions(options.config.name);
    const tail = new Tail(options, patterns, stored);
    await tail.roster.look(options.clock.nowMs());
    tail.advanceWatermark();
    return tail;
  }

  async step({ lookAround }: { readonly lookAround: boolean }): Promise<number> {
    // What `rehearse` reads is what was there at its start.
    if (lookAround && this.options.mode !== 'rehearse') {
      await this.roster.look(this.options.clock.nowMs());
    }
    for (let file = this.roster.next(); file !== null; file = this.roster.next()) {
      const bytes = await this.read(file);
      if (bytes > 0) return bytes;
    }
    return 0;
  }

  drain(): CountBatch {
    const partitions = this.roster.drain();
    this.advanceWatermark();
    return { ...this.counter.drain(), partitions };
  }

  watermarkMs(): number | null {
    return this.drainedWatermarkMs;
  }

  lagBytes(): number {
    return this.roster.unreadBytes();
  }

  exhausted(): boolean {
    return this.options.mode === 'rehearse' && this.roster.next() === null;
  }

  problems(): readonly string[] {
    return this.roster.problems;
  }

  async close(): Promise<void> {
    await this.pool.closeAll();
  }

  private advanceWatermark(): void {
    const { mode, clock } = this.options;
    const awaited = this.roster.isAwaiting(clock.nowMs());
    const nowMs = collectorWatermark(this.roster.progress(), mode, awaited);
    const beforeMs = this.drainedWatermarkMs;
    if (nowMs !== null && (beforeMs === null || nowMs > beforeMs)) this.drainedWatermarkMs = nowMs;
  }

  /** Reads one chunk; 0 where the file could not be read, which takes it out of the running. */
  private async read(file: TailFile): Promise<number> {
    const from = file.reader.readBytes;
    let chunk: Buffer;
    try {
      const handle = await this.open(file);
      chunk = await readAt(handle, this.buffer, Math.min(CHUNK_BYTES, file.unreadBytes), from);
    } catch (error) {
      this.roster.block(file, `cannot read "${file.path}": ${reasonOf(error)}`);
      return 0;
    }
    const nowMs = this.options.clock.nowMs();
    if (chunk.length === 0) file.size = from;
    else file.feed(chunk, nowMs);
    await this.roster.settle(file, nowMs);
    return chunk.length;
  }

  /** Opens the file at its path and makes sure that it is the one that was found there. */
  private async open(file: TailFile): Promise<FileHandle> {
    const wasOpen = file.handle !== null;
    const handle = await this.pool.use(file, file.path);
    if (wasOpen) return handle;
    const { dev, ino } = await handle.stat({ bigint: true });
    if (`${dev}:${ino}` === file.reader.id) return handle;
    await this.pool.close(file);
    throw new Error('another file took its place; it is looked for again');
  }
}
