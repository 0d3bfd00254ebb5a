import type { FieldValue } from '../../decode/types.js';
import type { Fingerprint, Partition, WaitingEvent } from '../../terms/partition.js';
import type { Counter, Reason } from './counter.js';
import { Lines } from './lines.js';

/** A stamp further than this ahead of its partition's watermark waits for the next record. */
const FAR_AHEAD_MS = 86_400_000;

/** A record that waits, with all that is needed to count it or to come back to it. */
interface Waiting {
  readonly atMs: number;
  readonly fields: readonly FieldValue[];
  /** Start of its line: where reading goes on after a restart. */
  readonly offset: number;
}

/**
 * Counts one partition's bytes and knows how far they are durable.
 *
 * A record stamped more than a day ahead of the watermark, or the very first, waits for the next
 * one with a valid time: if that lies no more than a day below, there was a gap and both count,
 * else the waiting one is refused as `future`. So one bad stamp cannot carry the watermark off.
 * Until then the durable position stays at the start of its line, and refusals met meanwhile are
 * held back, since a restart would meet them again.
 */
export class PartitionReader {
  readonly id: string;
  name: string;
  ended: boolean;
  quietSinceMs: number | null;
  fingerprint: Fingerprint | null;
  watermarkMs: number | null;
  firstMs: number | null;
  /** Something durable changed since the last drain. */
  changed = false;
  private readonly collector: string;
  private readonly counter: Counter;
  private readonly maxLineBytes: number;
  private lines: Lines;
  private waiting: Waiting | null = null;
  private readonly held = new Map<Reason, number>();
  /** What a former process left waiting; its record is read again unless its bytes are gone. */
  private leftWaiting: WaitingEvent | null;

  /** @param from the partition's stored row, or a fresh one */
  constructor(from: Partition, counter: Counter, maxLineBytes: number) {
    this.collector = from.collector;
    this.id = from.id;
    this.name = from.name;
    this.ended = from.ended;
    this.quietSinceMs = from.quietSinceMs;
    this.fingerprint = from.fingerprint;
    this.watermarkMs = from.watermarkMs;
    this.firstMs = from.firstMs;
    this.leftWaiting = from.waiting;
    this.counter = counter;
    this.maxLineBytes = maxLineBytes;
    this.lines = this.linesFrom(from.position, from.insideLongLine);
  }

  /** Bytes taken in, durable or not. */
  get readBytes(): number {
    return this.lines.readBytes;
  }

  /** A record waits for the next one. */
  get isWaiting(): boolean {
    return this.waiting !== null || this.leftWaiting !== null;
  }

  /** Takes the next bytes, which the caller may reuse afterwards. */
  feed(chunk: Buffer): void {
    this.changed = true;
    this.leftWaiting = null;
    this.lines.feed(chunk);
  }

  /** No byte follows the last: a line without its end counts, and so does what waits. */
  endOfInput(): void {
    this.changed = true;
    this.lines.finish();
    this.settleWaiting();
  }

  /** No record follows for now or ever: what waits counts, and moves no watermark. */
  settleWaiting(): void {
    if (!this.isWaiting) return;
    this.changed = true;
    if (this.waiting !== null) {
      this.counter.count(this.waiting.fields, this.waiting.atMs, this.watermarkMs);
      this.firstMs ??= this.waiting.atMs;
      this.stopWaiting();
    } else if (this.leftWaiting !== null) {
      this.counter.countWaiting(this.leftWaiting, this.watermarkMs);
      this.firstMs ??= this.leftWaiting.atMs;
      this.leftWaiting = null;
    }
  }

  /** The file was emptied and begins again; its unread rest is lost. */
  restart(): void {
    this.settleWaiting();
    this.changed = true;
    this.fingerprint = null;
    this.lines = this.linesFrom(0, false);
  }

  /** The partition as it is durable once the counts drained with it are. */
  snapshot(): Partition {
    const { waiting, lines } = this;
    return {
      collector: this.collector,
      id: this.id,
      name: this.name,
      position: waiting === null ? lines.lineBytes : waiting.offset,
      insideLongLine: waiting === null && lines.insideLongLine,
      fingerprint: this.fingerprint,
      firstMs: this.firstMs,
      watermarkMs: this.watermarkMs,
      ended: this.ended,
      quietSinceMs: this.quietSinceMs,
      waiting: waiting === null ? this.leftWaiting : this.waitingEvent(waiting),
    };
  }

  private linesFrom(offset: number, insideLongLine: boolean): Lines {
    const sink = {
      line: this.takeLine.bind(this),
      refused: this.refuse.bind(this),
    };
    return new Lines(this.maxLineBytes, sink, { offset, insideLongLine });
  }

  private waitingEvent(waiting: Waiting): WaitingEvent {
    return { atMs: waiting.atMs, cells: this.counter.peek(waiting.fields, waiting.atMs) };
  }

  private takeLine(bytes: Buffer, start: number, end: number, offset: number): void {
    const { counter } = this;
    const reason = counter.read(bytes, start, end);
    if (reason !== null) {
      this.refuse(reason);
      return;
    }
    const { atMs } = counter;
    if (this.waiting !== null) this.resolve(this.waiting, atMs);
    if (this.watermarkMs === null || atMs > this.watermarkMs + FAR_AHEAD_MS) {
      this.waiting = { atMs, fields: counter.fields.slice(), offset };
    } else this.accept(counter.fields, atMs);
  }

  private resolve(waiting: Waiting, nextMs: number): void {
    if (nextMs >= waiting.atMs - FAR_AHEAD_MS) this.accept(waiting.fields, waiting.atMs);
    else this.counter.reject('future', 1);
    this.stopWaiting();
  }

  private accept(fields: readonly FieldValue[], atMs: number): void {
    this.counter.count(fields, atMs, this.watermarkMs);
    this.firstMs ??= atMs;
    if (this.watermarkMs === null || atMs > this.watermarkMs) this.watermarkMs = atMs;
  }

  private stopWaiting(): void {
    this.waiting = null;
    for (const [reason, count] of this.held) this.counter.reject(reason, count);
    this.held.clear();
  }

  private refuse(reason: Reason): void {
    if (this.waiting === null) this.counter.reject(reason, 1);
    else this.held.set(reason, (this.held.get(reason) ?? 0) + 1);
  }
}

/** The row of a partition of which nothing has been read. */
export function freshPartition(collector: string, id: string, name: string): Partition {
  return {
    collector,
    id,
    name,
    position: 0,
    insideLongLine: false,
    fingerprint: null,
    firstMs: null,
    watermarkMs: null,
    ended: false,
    quietSinceMs: null,
    waiting: null,
  };
}
