import { statSync } from 'node:fs';
import type { Store } from '../store.js';
import { alertMethods } from './alerts.js';
import { configMethods } from './configs.js';
import { openConnection, type SqliteOptions } from './connection.js';
import { copyRows, type BatchNote } from './copy.js';
import { countingMethods } from './counting.js';
import { outboxMethods } from './outbox.js';
import { roundMethods } from './rounds.js';
import { openSession, type Session } from './session.js';
import { tallyMethods } from './tallies.js';
import { totalsMethods } from './totals.js';
import { verdictMethods } from './verdicts.js';

export type { BatchNote, SqliteOptions };

/** The embedded form of the store. */
export interface SqliteStore extends Store {
  /** See `copyTallies`. */
  copyTalliesFrom(path: string): Promise<readonly BatchNote[]>;
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

/**
 * Copies the stored tallies of another database file into an empty store, for replaying them.
 * The source is opened read-only and may be in use by a running daemon.
 *
 * @param fromPath the database file to read
 * @param toStore an empty store, e.g. one in memory
 * @returns the batches of the source's rounds, in order of (endMs, number)
 * @throws StoreError when the source cannot be read, or the target is not empty
 */
export function copyTallies(fromPath: string, toStore: SqliteStore): Promise<readonly BatchNote[]> {
  return toStore.copyTalliesFrom(fromPath);
}
