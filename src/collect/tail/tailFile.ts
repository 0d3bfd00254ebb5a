import type { FileHandle } from 'node:fs/promises';
import type { Fingerprint } from '../../terms/partition.js';
import type { PartitionReader } from '../tally/partitionReader.js';
import type { Progress } from '../watermark.js';
import { FINGERPRINT_BYTES, fingerprintOf, readAt } from './fileBytes.js';

/** One file of a tail: where it is, how long it is, and the reader that counts it. */
export class TailFile {
  reader: PartitionReader;
  /** Where the file is now; its partition keeps the name it was found by until it ended. */
  path: string;
  handle: FileHandle | null = null;
  /** Bytes it had when last looked at. */
  size: number;
  /** Its name belongs to another file now, or to none. */
  rotated = false;
  /** It cannot be found by any path; only what is open can still be read. */
  lost = false;
  /** It could not be read; tried again at the next look. */
  blocked = false;
  /** `rehearse`: its end was the end of input. */
  finished = false;
  /** Real time at which it last grew or was read. */
  lastGrowthMs: number;
  /** The first bytes that were read. */
  private head: Buffer = Buffer.alloc(0);
  /** Stored before this process began, and not held against the file yet. */
  private unproven: Fingerprint | null;

  constructor(reader: PartitionReader, path: string, nowMs: number) {
    this.reader = reader;
    this.path = path;
    this.size = reader.readBytes;
    this.lastGrowthMs = nowMs;
    this.unproven = reader.fingerprint;
  }

  /** Its stored fingerprint has not been held against it yet. */
  get isUnproven(): boolean {
    return this.unproven !== null;
  }

  get unreadBytes(): number {
    return Math.max(0, this.size - this.reader.readBytes);
  }

  /** It has bytes that can be read now. */
  get isReadable(): boolean {
    return !this.blocked && this.unreadBytes > 0;
  }

  get progress(): Progress {
    const { firstMs, watermarkMs, ended, quietSinceMs } = this.reader;
    const atEnd = this.unreadBytes === 0;
    return { firstMs, watermarkMs, ended, quietSinceMs, atEnd };
  }

  /** Whether the file still begins with what was read of it. */
  async isSameFile(handle: FileHandle): Promise<boolean> {
    const length = this.unproven?.bytes ?? this.head.length;
    if (length === 0) return true;
    const bytes = await readAt(handle, Buffer.alloc(length), length, 0);
    if (this.unproven === null) return bytes.equals(this.head);
    if (fingerprintOf(bytes)?.sha256 !== this.unproven.sha256) return false;
    this.head = bytes;
    this.unproven = null;
    return true;
  }

  /** Counts bytes read at the reader's place. */
  feed(chunk: Buffer, nowMs: number): void {
    const at = this.reader.readBytes;
    if (this.unproven === null && at === this.head.length && at < FINGERPRINT_BYTES) {
      this.head = Buffer.concat([this.head, chunk.subarray(0, FINGERPRINT_BYTES - at)]);
    }
    this.lastGrowthMs = nowMs;
    this.reader.feed(chunk);
  }

  /** The file was emptied: read it from its start as the same partition. */
  restart(): void {
    this.reader.restart();
    this.forgetHead();
  }

  /** Another file took its identity: `reader` begins a partition of its own. */
  replace(reader: PartitionReader): void {
    this.reader.settleWaiting();
    this.reader = reader;
    this.reader.changed = true;
    this.rotated = false;
    this.forgetHead();
  }

  /** Brings the stored fingerprint up to what is durable. */
  updateFingerprint(): void {
    const bytes = Math.min(FINGERPRINT_BYTES, this.reader.snapshot().position);
    if (this.unproven !== null || bytes === (this.reader.fingerprint?.bytes ?? 0)) return;
    this.reader.fingerprint = fingerprintOf(this.head.subarray(0, bytes));
  }

  private forgetHead(): void {
    this.head = Buffer.alloc(0);
    this.unproven = null;
  }
}
