import Database from 'better-sqlite3';
import { describe, expect, it } from 'vitest';
import { explainError, explainFileError } from '../../../../src/store/sqlite/errors.js';
import { StoreError } from '../../../../src/store/store.js';

function thrownBy(work: () => unknown): unknown {
  try {
    work();
  } catch (error) {
    return error;
  }
  throw new Error('nothing was thrown');
}

function withCode(code: string): Error {
  return Object.assign(new Error('said by the system'), { code });
}

describe('explaining an error', () => {
  it('says that the disk is full when SQLite may not take another page', () => {
    const db = new Database(':memory:');
    db.exec('CREATE TABLE t (x BLOB)');
    db.pragma(`max_page_count = ${String(db.pragma('page_count', { simple: true }))}`);
    const full = thrownBy(() => db.exec('INSERT INTO t VALUES (zeroblob(100000))'));
    db.close();
    const explained = explainError(full, 'commit counts', 'var/x.db');
    expect(explained).toBeInstanceOf(StoreError);
    expect((explained as Error).message).toBe(
      'cannot commit counts: store var/x.db: there is no space left to write to (SQLITE_FULL); ' +
        'free some space on that disk',
    );
  });

  it.each([
    ['SQLITE_BUSY_SNAPSHOT', 'another process holds it for writing'],
    ['SQLITE_READONLY_DIRECTORY', 'the file or its folder may not be written'],
    ['SQLITE_IOERR_FSYNC', 'the disk failed to read or write'],
    ['SQLITE_CORRUPT', 'the database is damaged'],
    ['SQLITE_SCHEMA', 'SQLite refused: said by the system (SQLITE_SCHEMA); report this'],
  ])('of code %s says what it means', (code, text) => {
    const explained = explainError(withCode(code), 'read', 'x.db') as Error;
    expect(explained).toBeInstanceOf(StoreError);
    expect(explained.message).toContain(text);
    expect(explained.cause).toBeInstanceOf(Error);
  });

  it.each([
    ['EACCES', 'give the program the right to write there'],
    ['EROFS', 'that disk is read-only'],
    ['ENOSPC', 'no space left'],
    ['EIO', 'see that the path is right'],
  ])('of the file system, code %s, says what to do', (code, text) => {
    const explained = explainFileError(withCode(code), 'make the folder', 'var') as Error;
    expect(explained).toBeInstanceOf(StoreError);
    expect(explained.message).toContain(text);
  });

  it('leaves errors alone that are not of the database', () => {
    const own = new RangeError('a fault');
    expect(explainError(own, 'read', 'x.db')).toBe(own);
    expect(explainFileError(own, 'read', 'x.db')).toBe(own);
    expect(explainError('text', 'read', 'x.db')).toBe('text');
  });
});
