import type { CountBatch } from '../store/store.js';

/**
 * How reading ends. `live`: it does not; a partition that is silent for lateness plus 30 s of real
 * time stops holding the others back. `once`: what is there now is read, more may come later, so
 * nothing is closed by silence. `rehearse`: the end of each file is the end of input.
 */
export type ReadingMode = 'live' | 'once' | 'rehearse';

/** A place that events come from: finds its partitions, reads them and counts. */
export interface Collector {
  readonly name: string;
  /**
   * Reads and counts at most one chunk (256 KiB) of the partition whose watermark is lowest.
   * Looks for new, rotated and truncated files first when `lookAround` is set.
   * Resolves to the bytes taken in; 0 when there is nothing to read now.
   */
  step(options: { readonly lookAround: boolean }): Promise<number>;
  /** Counts and positions since the last drain, ready to be committed in one transaction. */
  drain(): CountBatch;
  /** Event time up to which the collector is complete, as of the last drain; never falls. */
  watermarkMs(): number | null;
  /** Bytes known to be unread; null where that cannot be known (pipes). */
  lagBytes(): number | null;
  /** True when no more input can come (a pipe at its end; a file at its end in `rehearse`). */
  exhausted(): boolean;
  /** What keeps it from reading something now, in plain words; empty when all is well. */
  problems(): readonly string[];
  close(): Promise<void>;
}
