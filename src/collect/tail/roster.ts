import type { FileHandle } from 'node:fs/promises';
import type { Partition } from '../../terms/partition.js';
import type { ReadingMode } from '../collector.js';
import type { Counter } from '../tally/counter.js';
import { PartitionReader, freshPartition } from '../tally/partitionReader.js';
import type { Progress } from '../watermark.js';
import { findRenamed, identify, isGone, lookFor } from './find.js';
import type { FoundFile } from './find.js';
import { reasonOf } from './glob.js';
import { TailFile } from './tailFile.js';

/** Files followed at a time. */
const MAX_PARTITIONS = 1_000;

export interface RosterOptions {
  readonly collector: string;
  readonly patterns: readonly string[];
  readonly mode: ReadingMode;
  /** Real time of silence after which a file holds nobody back. */
  readonly quietMs: number;
  readonly maxLineBytes: number;
  readonly counter: Counter;
  readonly open: (file: TailFile) => Promise<FileHandle>;
  readonly close: (file: TailFile) => Promise<void>;
}

/** The files of one tail: finds them, follows them, and says which is read next. */
export class Roster {
  problems: string[] = [];
  private readonly options: RosterOptions;
  private readonly files = new Map<string, TailFile>();
  /** When each path that leads nowhere was first found so. */
  private awaited = new Map<string, number>();
  /** What the partitions that ended and were let go still say together. */
  private past: Progress | null = null;

  constructor(options: RosterOptions) {
    this.options = options;
  }

  restore(stored: readonly Partition[], nowMs: number): void {
    for (const partition of stored) {
      this.files.set(partition.id, new TailFile(this.reader(partition), partition.name, nowMs));
    }
  }

  /** Looks for new, grown, renamed, emptied and vanished files. */
  async look(nowMs: number): Promise<void> {
    const found = await lookFor(this.options.patterns);
    this.problems = found.problems;
    const left = this.inOrder().filter((file) => !found.files.has(file.reader.id));
    for (const file of left) await this.follow(file, nowMs);
    for (const entry of found.files.values()) await this.meet(entry, nowMs);
    for (const file of this.inOrder()) await this.settle(file, nowMs);
    this.awaited = new Map(found.missing.map((path) => [path, this.awaited.get(path) ?? nowMs]));
    this.letGo();
  }

  /** The readable file whose watermark is lowest, one without any first; null when none. */
  next(): TailFile | null {
    let best: TailFile | null = null;
    for (const file of this.files.values()) {
      if (file.isReadable && (best === null || isBefore(file, best))) best = file;
    }
    return best;
  }

  /** Marks what follows from where the file is: ended, quiet, or at the end of input. */
  async settle(file: TailFile, nowMs: number): Promise<void> {
    if (file.blocked || file.unreadBytes > 0) return;
    const { reader } = file;
    const { mode, quietMs } = this.options;
    const isSilent = nowMs - file.lastGrowthMs >= quietMs;
    if (mode === 'rehearse' && !file.finished) {
      file.finished = true;
      reader.endOfInput();
    }
    if (file.rotated) {
      if (!reader.ended) endReader(file);
      reader.settleWaiting();
      // Whoever wrote it may hold it open for a moment longer.
      if (isSilent || file.lost) await this.options.close(file);
    } else if (mode === 'live' && isSilent && reader.quietSinceMs === null && !reader.ended) {
      reader.quietSinceMs = nowMs;
      reader.changed = true;
    }
  }

  /** Takes a file that cannot be read out of the running until the next look. */
  block(file: TailFile, problem: string): void {
    file.blocked = true;
    this.problems.push(problem);
  }

  /** Rows of the partitions that changed since the last drain, by identity. */
  drain(): Partition[] {
    const rows: Partition[] = [];
    for (const file of this.inOrder()) {
      if (!file.reader.changed) continue;
      file.updateFingerprint();
      rows.push(file.reader.snapshot());
      file.reader.changed = false;
    }
    return rows;
  }

  progress(): Progress[] {
    const all = [...this.files.values()].map((file) => file.progress);
    return this.past === null ? all : [...all, this.past];
  }

  unreadBytes(): number {
    let bytes = 0;
    for (const file of this.files.values()) bytes += file.unreadBytes;
    return bytes;
  }

  /** Whether a path that leads to no file yet holds the collector back. */
  isAwaiting(nowMs: number): boolean {
    if (this.options.mode === 'rehearse') return false;
    if (this.options.mode === 'once') return this.awaited.size > 0;
    return [...this.awaited.values()].some((sinceMs) => nowMs - sinceMs < this.options.quietMs);
  }

  /** A file found by the patterns: new, as before, emptied, renamed, or another in its place. */
  private async meet(entry: FoundFile, nowMs: number): Promise<void> {
    const first = entry.paths[0] ?? '';
    const file = this.files.get(entry.id) ?? this.add(entry.id, first, nowMs);
    if (file === null) return;
    const { reader } = file;
    const keepsName = entry.paths.includes(reader.name);
    file.path = keepsName ? reader.name : first;
    file.lost = false;
    if (!(await this.measure(file, entry.size, nowMs))) {
      if (keepsName && !reader.ended) file.restart();
      else file.replace(this.reader(freshPartition(this.options.collector, entry.id, first)));
      this.grow(file, entry.size, nowMs);
    } else file.rotated = reader.ended || !(keepsName || (await this.isAt(file, reader.name)));
  }

  /** A known file that no pattern finds any more: look for it in the folder it was in. */
  private async follow(file: TailFile, nowMs: number): Promise<void> {
    if (file.reader.ended && file.handle === null) {
      file.lost = true;
      return;
    }
    let place: { path: string; size: number } | null;
    try {
      place = await this.placeOf(file);
    } catch (error) {
      this.block(file, `cannot look at "${file.path}": ${reasonOf(error)}`);
      return;
    }
    file.rotated = true;
    file.blocked = false;
    file.lost = place === null;
    if (place !== null) {
      file.path = place.path;
      if (!(await this.measure(file, place.size, nowMs))) file.size = file.reader.readBytes;
    } else {
      const stats = await file.handle?.stat();
      this.grow(file, Math.max(stats?.size ?? 0, file.reader.readBytes), nowMs);
    }
  }

  /** @throws where its path cannot be looked at although it may be there */
  private async placeOf(file: TailFile): Promise<{ path: string; size: number } | null> {
    const { id } = file.reader;
    try {
      const here = await identify(file.path);
      if (here?.id === id) return { path: file.path, size: here.size };
    } catch (error) {
      if (!isGone(error)) throw error;
    }
    return findRenamed(id, file.path, this.problems);
  }

  private async isAt(file: TailFile, path: string): Promise<boolean> {
    try {
      return (await identify(path))?.id === file.reader.id;
    } catch (error) {
      if (!isGone(error)) this.problems.push(`cannot look at "${path}": ${reasonOf(error)}`);
      return false;
    }
  }

  /** Takes in the size found; false when the file no longer holds what was read of it. */
  private async measure(file: TailFile, size: number, nowMs: number): Promise<boolean> {
    file.blocked = false;
    if (size < file.reader.readBytes) return false;
    if (size !== file.size || file.isUnproven) {
      try {
        const handle = await this.options.open(file);
        if (!(await file.isSameFile(handle))) return false;
      } catch (error) {
        this.block(file, `cannot read "${file.path}": ${reasonOf(error)}`);
      }
    }
    this.grow(file, size, nowMs);
    return true;
  }

  private grow(file: TailFile, size: number, nowMs: number): void {
    const grew = size > file.size || (size > 0 && file.reader.readBytes === 0);
    file.size = size;
    if (!grew) return;
    file.lastGrowthMs = nowMs;
    if (file.reader.quietSinceMs === null) return;
    file.reader.quietSinceMs = null;
    file.reader.changed = true;
  }

  private add(id: string, path: string, nowMs: number): TailFile | null {
    if (this.files.size >= MAX_PARTITIONS) {
      this.problems.push(
        `"${path}" is not read: ${MAX_PARTITIONS} files are followed already; ` +
          'write narrower paths or move finished files away',
      );
      return null;
    }
    const reader = this.reader(freshPartition(this.options.collector, id, path));
    reader.changed = true;
    const file = new TailFile(reader, path, nowMs);
    this.files.set(id, file);
    return file;
  }

  /** Forgets partitions that ended, are closed and cannot be found; their rows stay stored. */
  private letGo(): void {
    for (const [id, file] of this.files) {
      const { reader } = file;
      if (!reader.ended || !file.lost || file.handle !== null || reader.changed) continue;
      this.past = together(this.past, file.progress);
      this.files.delete(id);
    }
  }

  private reader(row: Partition): PartitionReader {
    return new PartitionReader(row, this.options.counter, this.options.maxLineBytes);
  }

  /** By identity, so that nothing depends on the order in which files were met. */
  private inOrder(): TailFile[] {
    return [...this.files.values()].sort((a, b) => (a.reader.id < b.reader.id ? -1 : 1));
  }
}

/** The partition of a rotated file is over; from now on its name is where the file went. */
function endReader(file: TailFile): void {
  file.reader.ended = true;
  file.reader.name = file.path;
  file.reader.changed = true;
}

function isBefore(a: TailFile, b: TailFile): boolean {
  const aMs = a.reader.watermarkMs ?? -Infinity;
  const bMs = b.reader.watermarkMs ?? -Infinity;
  if (aMs !== bMs) return aMs < bMs;
  if (a.reader.name !== b.reader.name) return a.reader.name < b.reader.name;
  return a.reader.id < b.reader.id;
}

function together(a: Progress | null, b: Progress): Progress {
  const latest = (x: number | null | undefined, y: number | null): number | null =>
    x === null || x === undefined ? y : Math.max(x, y ?? -Infinity);
  return {
    firstMs: latest(a?.firstMs, b.firstMs),
    watermarkMs: latest(a?.watermarkMs, b.watermarkMs),
    ended: true,
    quietSinceMs: null,
    atEnd: true,
  };
}
