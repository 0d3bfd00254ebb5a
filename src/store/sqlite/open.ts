import { statSync } from 'node:fs';
import type { Batch } from '../../terms/round.js';
import type { Store } from '../store.js';
import { alertMethods } from './alerts.js';
import { configMethods } from './configs.js';
import { openConnection, type SqliteOptions } from './connection.js';
import { copyRows } from './copy.js';
import { countingMethods } from './counting.js';
import { outboxMethods } from './outbox.js';
import { roundMethods } from './rounds.js';
import { openSession, type Session } from './session.js';
import { tallyMethods } from './tallies.js';
import { totalsMethods } from './totals.js';
import { verdictMethods } from './verdicts.js';

export type { SqliteOptions };

/** The embedded form of the store. */
export interface SqliteStore extends Store {
  /**
   * Copies the stored tallies of another database file into this store, which must be empty, for
   * replaying them. The source is only read and may be in use by a running daemon.
   *
   * @returns the batches of the source's rounds, in order of (endMs, number)
   * @throws StoreError when the source cannot be read, or this store is not empty
   */
  copyTalliesFrom(path: string): Promise<readonly Batch[]>;
}

function upkeepMethods({ db, path, read }: Session): Pick<Store, 'bytes' | 'close'> {
  const pages = (name: string): number => Number(db.pragma(name, { simple: true }));
  return {
    /** The database and its write-ahead log. */
    bytes: () =>
      read('measure the store', () => {
        const log = db.memory ? undefined : statSync(`${path}-wal`, { throwIfNoEntry: false });
        return pages('page_count') * pages('page_size') + (log?.size ?? 0);
      }),
    close: () => read('close the store', () => void db.close()),
  };
}

/**
 * Opens the store in a SQLite file, made and brought up to date when needed. Closing twice does
 * no harm. Each call is one synchronous piece of work on the calling thread.
 *
 * @throws StoreError when the file cannot be used: what is wrong, where, what to do
 */
export function openSqliteStore(options: SqliteOptions): Promise<SqliteStore> {
  return new Promise((resolve) => {
    const db = openConnection(options);
    const session = openSession(db, options.path);
    resolve({
      ...countingMethods(session),
      ...totalsMethods(session),
      ...tallyMethods(session),
      ...roundMethods(session),
      ...verdictMethods(session),
      ...alertMethods(session),
      ...configMethods(session),
      ...outboxMethods(session),
      ...upkeepMethods(session),
      copyTalliesFrom: (path) =>
        session.write('copy tallies', () => copyRows({ ...options, path }, db)),
    });
  });
}
