import type { Database } from 'better-sqlite3';
import { explainError } from './errors.js';
import { openNames, type Names } from './names.js';

/** One open connection with what all parts of the store share. */
export interface Session {
  readonly db: Database;
  readonly names: Names;
  readonly path: string;
  /** Runs work that reads; what SQLite throws becomes a StoreError that names `doing`. */
  read<T>(this: void, doing: string, work: () => T): Promise<T>;
  /**
   * The same for work that writes, all in one transaction that takes the write lock at its
   * start, so that what it reads cannot be changed by another process before it writes.
   */
  write<T>(this: void, doing: string, work: () => T): Promise<T>;
}

export function openSession(db: Database, path: string): Session {
  const names = openNames(db);
  // better-sqlite3 is synchronous: by the time the promise is made, the work is done.
  // better-sqlite3 is synchronous: by the time the promise is made, the work is done.
  const read = async <T>(doing: string, work: () => T): Promise<T> => {
    try {
      return work();
    } catch (error) {
      throw explainError(error, doing, path);
    }
  };
  const write = <T>(doing: string, work: () => T): Promise<T> =>
    read(doing, () => {
      try {
        return db.transaction(work).immediate();
      } catch (error) {
        // Ids given inside the transaction were rolled back with it.
        names.forget();
        throw error;
      }
    });
  return { db, names, path, read, write };
}
