import type { ReadingMode } from './collector.js';

/** A partition that spans less event time than this is not yet taken for finished. */
const MIN_SUCCEEDED_MS = 600_000;

/** What of a partition decides whether it holds its collector back. */
export interface Progress {
  readonly firstMs: number | null;
  readonly watermarkMs: number | null;
  readonly ended: boolean;
  readonly quietSinceMs: number | null;
  /** Read to its end as it is now. */
  readonly atEnd: boolean;
}

/**
 * Event time up to which a collector is complete: the least watermark of its live partitions, or
 * the greatest of all when none is live.
 *
 * Not live are partitions that ended; that were succeeded (read to their end, at least ten minutes
 * of event time long, and another began at or after their watermark: dated files); in `live` those
 * quiet for long; in `rehearse` those at their end without a record.
 *
 * @param awaited a path written without wildcards has no file yet (never so in `rehearse`)
 * @returns null until every live partition has a record, and while a file is awaited
 */
export function collectorWatermark(
  partitions: readonly Progress[],
  mode: ReadingMode,
  awaited: boolean,
): number | null {
  if (awaited) return null;
  let lastFirstMs = -Infinity;
  let greatestMs = -Infinity;
  for (const { firstMs, watermarkMs } of partitions) {
    lastFirstMs = Math.max(lastFirstMs, firstMs ?? -Infinity);
    greatestMs = Math.max(greatestMs, watermarkMs ?? -Infinity);
  }
  let leastMs = Infinity;
  for (const partition of partitions) {
    if (!isLive(partition, mode, lastFirstMs)) continue;
    if (partition.watermarkMs === null) return null;
    leastMs = Math.min(leastMs, partition.watermarkMs);
  }
  const watermarkMs = leastMs === Infinity ? greatestMs : leastMs;
  return watermarkMs === -Infinity ? null : watermarkMs;
}

function isLive(partition: Progress, mode: ReadingMode, lastFirstMs: number): boolean {
  const { firstMs, watermarkMs, ended, quietSinceMs, atEnd } = partition;
  if (ended || (mode === 'live' && quietSinceMs !== null)) return false;
  if (!atEnd) return true;
  if (watermarkMs === null || firstMs === null) return mode !== 'rehearse';
  // Being ten minutes long it began before its own watermark: whoever began after is another.
  return watermarkMs - firstMs < MIN_SUCCEEDED_MS || lastFirstMs < watermarkMs;
}
