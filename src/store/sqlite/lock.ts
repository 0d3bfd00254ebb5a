import Database from 'better-sqlite3';
import { mkdirSync } from 'node:fs';
import { dirname } from 'node:path';
import { StoreError } from '../store.js';

/** Held for as long as a process counts into a store. */
export interface StoreLock {
  release(): void;
}

/**
 * Keeps a store for one counting process: two of them would count every event twice. The lock is
 * one of the operating system on a file beside the store, so that a killed process leaves none.
 *
 * @throws StoreError when another process holds it, or the folder cannot be written.
 */
export function lockStore(path: string): StoreLock {
  const lockPath = `${path}.lock`;
  try {
    mkdirSync(dirname(lockPath), { recursive: true });
    const db = new Database(lockPath, { timeout: 0 });
    db.exec('BEGIN EXCLUSIVE');
    return { release: () => void db.close() };
  } catch (error) {
    throw lockError(path, error);
  }
}

function lockError(path: string, error: unknown): StoreError {
  const why = error instanceof Error ? error.message : String(error);
  const message = /locked|busy/i.test(why)
    ? `${path}: another tallyward is already counting into this store; stop it first, or give ` +
      'this one a store of its own'
    : `${path}.lock: cannot be made (${why}); check that the folder can be written to`;
  return new StoreError(message, { cause: error });
}
