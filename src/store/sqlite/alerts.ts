import type { Alert } from '../../terms/alert.js';
import type { Store } from '../store.js';
import { checkTime } from './checks.js';
import { fromJson, toJson } from './json.js';
import type { Session } from './session.js';

/** Writes an alert in the place of its former row; for use inside a transaction. */
export function alertWriter({ db, names }: Session): (alert: Alert) => void {
  const upsert = db.prepare<[string, number, number, string, number, string]>(
    `INSERT INTO alerts (id, mix_id, strand_id, state, raised_at_ms, body)
     VALUES (?, ?, ?, ?, ?, ?)
     ON CONFLICT DO UPDATE SET mix_id = excluded.mix_id, strand_id = excluded.strand_id,
       state = excluded.state, raised_at_ms = excluded.raised_at_ms, body = excluded.body`,
  );
  return (alert) => {
    const { id, mix, strand, state, raisedAtMs } = alert;
    checkTime(raisedAtMs, () => `the time at which alert ${id} was raised`);
    const mixId = names.mixId(mix);
    upsert.run(id, mixId, names.strandId(mixId, strand), state, raisedAtMs, toJson(alert));
  };
}

type AlertQuery = Parameters<Store['alerts']>[0];

/** The conditions differ in the index that serves them, so each combination is its own SQL. */
function selectSql({ open, ids }: AlertQuery): string {
  const conditions: string[] = [];
  if (open === true) conditions.push(`state <> 'normal'`);
  if (open === false) conditions.push(`state = 'normal'`);
  if (ids !== undefined) conditions.push('id IN (SELECT value FROM json_each(?))');
  const where = conditions.length === 0 ? '' : `WHERE ${conditions.join(' AND ')}`;
  return `SELECT body FROM alerts ${where} ORDER BY raised_at_ms, id`;
}

export function alertMethods({ db, read }: Session): Pick<Store, 'alerts'> {
  return {
    alerts: (query) =>
      read('read alerts', () => {
        const select = db.prepare<string[], string>(selectSql(query)).pluck();
        const bodies = query.ids === undefined ? select.all() : select.all(toJson(query.ids));
        return bodies.map((body) => fromJson(body) as Alert);
      }),
  };
}
