import type { Readable } from 'node:stream';
import type { Clock } from '../clock/clock.js';
import type { CollectorConfig, MixConfig } from '../config/types.js';
import type { Store } from '../store/store.js';
import type { ReadingMode } from './collector.js';
import type { JudgedTo, Known } from './tally/mixCounter.js';

/** Real time beyond the mixes' lateness after which a silent file holds nobody back. */
const QUIET_BEYOND_LATENESS_MS = 30_000;

/** All that a collector needs from outside. */
export interface CollectorOptions {
  readonly config: CollectorConfig;
  /** All mixes; those of other collectors are left out. */
  readonly mixes: readonly MixConfig[];
  readonly mode: ReadingMode;
  readonly clock: Clock;
  readonly store: Pick<Store, 'partitions'>;
  /** End of the mix's last judged window; -Infinity when none was. Asked for every event. */
  readonly judgedTo: JudgedTo;
  /** Needed by a collector that reads the standard input. */
  readonly stdin?: Readable;
  /** Strands and categories stored already, so that the caps go on where they were. */
  readonly known?: Known;
}

/** Real time of silence after which a file of this collector counts as quiet. */
export function quietAfterMs(collector: string, mixes: readonly MixConfig[]): number {
  const own = mixes.filter((mix) => mix.from === collector);
  return Math.max(0, ...own.map((mix) => mix.latenessMs)) + QUIET_BEYOND_LATENESS_MS;
}
