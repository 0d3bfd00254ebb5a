import type { Database } from 'better-sqlite3';
import type { Batch, FamilyNote } from '../../terms/round.js';
import { StoreError } from '../store.js';
import { openConnection, type SqliteOptions } from './connection.js';
import { explainError } from './errors.js';
import { fromJson } from './json.js';

/** What is copied, in an order in which no row refers to a later one. */
const COPIED: readonly (readonly [table: string, columns: readonly string[]])[] = [
  ['mixes', ['id', 'name', 'events', 'late']],
  ['strands', ['id', 'mix_id', 'name']],
  ['categories', ['mix_id', 'id', 'name']],
  ['windows', ['mix_id', 'start_ms', 'end_ms', 'on_time']],
  ['tallies', ['mix_id', 'start_ms', 'end_ms', 'strand_id', 'counts']],
  ['category_totals', ['mix_id', 'category', 'count']],
  ['accepted_totals', ['collector', 'count']],
  ['rejected_totals', ['collector', 'reason', 'count']],
];

function copyTable(from: Database, to: Database, table: string, columns: readonly string[]): void {
  const list = columns.join(', ');
  const insert = to.prepare(
    `INSERT INTO ${table} (${list}) VALUES (${columns.map(() => '?').join(', ')})`,
  );
  const rows = from.prepare<[], unknown[]>(`SELECT ${list} FROM ${table}`).raw();
  for (const row of rows.iterate()) insert.run(...row);
}

/** Which mixes were judged together, and allowing for how many strands: what replay must obey. */
function readBatches(from: Database): readonly Batch[] {
  return from
    .prepare<[], { endMs: number; number: number; mixes: string; families: string }>(
      'SELECT end_ms AS endMs, number, mixes, families FROM batches ORDER BY end_ms, number',
    )
    .all()
    .map((row) => ({
      ...row,
      mixes: fromJson(row.mixes) as readonly string[],
      families: fromJson(row.families) as readonly FamilyNote[],
    }));
}

/**
 * Copies the tallies, with their mixes, strands, categories and totals of events, of another
 * database file into an empty store; the batches of its rounds are handed back. Verdicts, alerts
 * and states stay behind. The source is only read, as it is at one instant, and may be in use.
 *
 * @throws StoreError when the source cannot be read or is not up to date, or `to` is not empty
 */
export function copyRows(source: SqliteOptions, to: Database): readonly Batch[] {
  if (to.prepare('SELECT 1 FROM mixes LIMIT 1').get() !== undefined) {
    throw new StoreError(
      `tallies of ${source.path} can only be copied into an empty store; open a new one`,
    );
  }
  const from = openConnection({ ...source, readOnly: true });
  try {
    const copy = from.transaction(() => {
      for (const [table, columns] of COPIED) copyTable(from, to, table, columns);
      return readBatches(from);
    });
    return copy();
  } catch (error) {
    throw explainError(error, 'copy its tallies', source.path);
  } finally {
    from.close();
  }
}
