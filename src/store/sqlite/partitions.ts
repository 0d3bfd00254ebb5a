import type { Fingerprint, Partition, WaitingEvent } from '../../terms/partition.js';
import { fromJson, toJson } from './json.js';
import type { Session } from './session.js';

interface Row {
  collector: string;
  id: string;
  name: string;
  position: number;
  inside_long_line: number;
  fingerprint: string | null;
  first_ms: number | null;
  watermark_ms: number | null;
  ended: number;
  quiet_since_ms: number | null;
  waiting: string | null;
}

function fromRow(row: Row): Partition {
  const { fingerprint, waiting } = row;
  return {
    collector: row.collector,
    id: row.id,
    name: row.name,
    position: row.position,
    insideLongLine: row.inside_long_line === 1,
    fingerprint: fingerprint === null ? null : (fromJson(fingerprint) as Fingerprint),
    firstMs: row.first_ms,
    watermarkMs: row.watermark_ms,
    ended: row.ended === 1,
    quietSinceMs: row.quiet_since_ms,
    waiting: waiting === null ? null : (fromJson(waiting) as WaitingEvent),
  };
}

function toRow(partition: Partition): Row {
  const { fingerprint, waiting } = partition;
  return {
    collector: partition.collector,
    id: partition.id,
    name: partition.name,
    position: partition.position,
    inside_long_line: partition.insideLongLine ? 1 : 0,
    fingerprint: fingerprint === null ? null : toJson(fingerprint),
    first_ms: partition.firstMs,
    watermark_ms: partition.watermarkMs,
    ended: partition.ended ? 1 : 0,
    quiet_since_ms: partition.quietSinceMs,
    waiting: waiting === null ? null : toJson(waiting),
  };
}

/** Rows of how far collectors have read. */
export function partitionRows({ db }: Session): {
  /** Puts the row in the place of the partition's former one. */
  replace(this: void, partition: Partition): void;
  /** In order of id (code points). */
  ofCollector(collector: string): readonly Partition[];
} {
  const replace = db.prepare<Row>(
    `INSERT OR REPLACE INTO partitions
       (collector, id, name, position, inside_long_line, fingerprint, first_ms, watermark_ms,
        ended, quiet_since_ms, waiting)
     VALUES
       (@collector, @id, @name, @position, @inside_long_line, @fingerprint, @first_ms,
        @watermark_ms, @ended, @quiet_since_ms, @waiting)`,
  );
  const select = db.prepare<[string], Row>(
    'SELECT * FROM partitions WHERE collector = ? ORDER BY id',
  );
  return {
    replace: (partition) => void replace.run(toRow(partition)),
    ofCollector: (collector) => select.all(collector).map(fromRow),
  };
}
