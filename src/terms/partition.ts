/** A record that waits for its file's next one before it counts (its stamp is far ahead). */
export interface WaitingEvent {
  readonly atMs: number;
  /** The cells it would count in; shown by `tallies`, not yet part of any tally. */
  readonly cells: readonly {
    readonly mix: string;
    readonly strand: string;
    readonly startMs: number;
    readonly endMs: number;
    readonly category: string;
  }[];
}

/** The first bytes of a file, to know it again: their number and their SHA-256 in hex. */
export interface Fingerprint {
  readonly bytes: number;
  readonly sha256: string;
}

/** One ordered source of records inside a collector: a file, a pipe, a broker's partition. */
export interface Partition {
  readonly collector: string;
  /** Stable identity inside the collector: `device:inode` for a file, `stdin` for the pipe. */
  readonly id: string;
  /** What people know it by: the path last seen. */
  readonly name: string;
  /** Bytes read and durable, together with the counts they led to. */
  readonly position: number;
  /** The partition was left inside a line over the limit; the rest of that line is skipped. */
  readonly insideLongLine: boolean;
  readonly fingerprint: Fingerprint | null;
  /** Time of the first accepted record; null before it. */
  readonly firstMs: number | null;
  /** Event time up to which the partition is complete; null before the first record. */
  readonly watermarkMs: number | null;
  /** Rotated away and read to its end: holds nobody back. */
  readonly ended: boolean;
  /** Real time at which its silence stopped holding the others back; null while it counts. */
  readonly quietSinceMs: number | null;
  readonly waiting: WaitingEvent | null;
}
