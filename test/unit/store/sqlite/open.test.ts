import { cpSync, existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import Database from 'better-sqlite3';
import { describe, expect, it } from 'vitest';
import { openSqliteStore, type SqliteOptions } from '../../../../src/store/sqlite/open.js';
import { StoreError } from '../../../../src/store/store.js';
import { ownFolder } from './folder.js';

const ownMigrations = fileURLToPath(new URL('../../../../migrations/sqlite', import.meta.url));

/** The error that opening ends with; fails when there is none or it is no StoreError. */
async function refusal(options: SqliteOptions): Promise<string> {
  const error: unknown = await openSqliteStore(options).then(
    async (store) => {
      await store.close();
      return null;
    },
    (thrown: unknown) => thrown,
  );
  expect(error).toBeInstanceOf(StoreError);
  return (error as StoreError).message;
}

function copyOfMigrations(): string {
  const folder = join(ownFolder(), 'sqlite');
  cpSync(ownMigrations, folder, { recursive: true });
  return folder;
}

async function makeStore(path: string): Promise<void> {
  const store = await openSqliteStore({ path });
  await store.close();
}

describe('opening a store', () => {
  it('makes the file and its folders, with the settings that survive power loss', async () => {
    const path = join(ownFolder(), 'a', 'b', 'store.db');
    await makeStore(path);
    const db = new Database(path, { readonly: true });
    expect(db.pragma('journal_mode', { simple: true })).toBe('wal');
    expect(db.pragma('integrity_check', { simple: true })).toBe('ok');
    db.close();
  });

  it('refuses a path below a file and says so', async () => {
    const folder = ownFolder();
    writeFileSync(join(folder, 'file'), '');
    const message = await refusal({ path: join(folder, 'file', 'store.db') });
    expect(message).toContain(`cannot make the folder of the store: ${join(folder, 'file')}`);
    expect(message).toContain('part of the path is a file, not a folder; correct the path');
  });

  it('takes a second opening of the same file at the same time', async () => {
    const path = join(ownFolder(), 'store.db');
    const stores = await Promise.all([openSqliteStore({ path }), openSqliteStore({ path })]);
    await stores[0].keepConfig('d', 'text');
    expect(await stores[1].configText('d')).toBe('text');
    for (const store of stores) await store.close();
  });

  it('refuses a folder in the place of the file', async () => {
    const folder = ownFolder();
    const message = await refusal({ path: folder });
    expect(message).toContain(`store ${folder}: the file cannot be opened`);
  });

  it('refuses a file that is no database and leaves it as it was', async () => {
    const path = join(ownFolder(), 'notes.txt');
    const text = 'not a database, but long enough to have a header\n'.repeat(100);
    writeFileSync(path, text);
    expect(await refusal({ path })).toContain('the file is not a SQLite database');
    expect(readFileSync(path, 'utf8')).toBe(text);
  });

  it("refuses another program's database and leaves it as it was", async () => {
    const path = join(ownFolder(), 'other.db');
    const other = new Database(path);
    other.exec('CREATE TABLE songs (title TEXT)');
    other.close();
    const before = readFileSync(path);
    expect(await refusal({ path })).toContain('is the database of another program; name another');
    expect(readFileSync(path).equals(before)).toBe(true);
  });

  it('refuses to write while another process writes, after the wait is over', async () => {
    const path = join(ownFolder(), 'store.db');
    await makeStore(path);
    const other = new Database(path);
    const store = await openSqliteStore({ path, busyTimeoutMs: 20 });
    other.exec('BEGIN IMMEDIATE');
    await expect(store.keepConfig('d', 'text')).rejects.toThrow(
      /another process holds it for writing \(SQLITE_BUSY\); wait for that process/,
    );
    other.exec('ROLLBACK');
    await store.keepConfig('d', 'text');
    expect(await store.configText('d')).toBe('text');
    await store.close();
    other.close();
  });

  it('refuses a missing file, an empty path and memory when it should only read', async () => {
    const path = join(ownFolder(), 'store.db');
    expect(await refusal({ path, readOnly: true })).toContain(`there is no store ${path}`);
    expect(existsSync(path)).toBe(false);
    expect(await refusal({ path: '' })).toContain('the store has no path');
    expect(await refusal({ path: ':memory:', readOnly: true })).toContain('a store in memory');
  });

  it('refuses to write through a connection that only reads', async () => {
    const path = join(ownFolder(), 'store.db');
    await makeStore(path);
    const store = await openSqliteStore({ path, readOnly: true });
    await expect(store.keepConfig('d', 'text')).rejects.toThrow(/may not be written/);
    await store.close();
  });

  it('says that the store is closed when it is used afterwards', async () => {
    const store = await openSqliteStore({ path: ':memory:' });
    await store.close();
    await store.close();
    await expect(store.totals()).rejects.toThrow(
      'cannot read the totals: store :memory: is closed; open it again',
    );
  });
});

describe('migrations', () => {
  it('refuse a database when one of its files was edited afterwards', async () => {
    const [path, migrationsFolder] = [join(ownFolder(), 'store.db'), copyOfMigrations()];
    await makeStore(path);
    const file = join(migrationsFolder, '0001-first-tables.sql');
    writeFileSync(file, `${readFileSync(file, 'utf8')}-- one more line\n`);
    const expected = `migration 0001-first-tables.sql is not the file that store ${path} was made`;
    expect(await refusal({ path, migrationsFolder })).toContain(expected);
    expect(await refusal({ path, migrationsFolder, readOnly: true })).toContain(expected);
  });

  it('accept files whose line ends alone were rewritten', async () => {
    const [path, migrationsFolder] = [join(ownFolder(), 'store.db'), copyOfMigrations()];
    await makeStore(path);
    const file = join(migrationsFolder, '0001-first-tables.sql');
    writeFileSync(file, readFileSync(file, 'utf8').replaceAll('\n', '\r\n'));
    const store = await openSqliteStore({ path, migrationsFolder });
    expect(await store.judgedTo()).toEqual(new Map());
    await store.close();
  });

  it('refuse a database that is newer than the program', async () => {
    const [path, migrationsFolder] = [join(ownFolder(), 'store.db'), copyOfMigrations()];
    writeFileSync(join(migrationsFolder, '0002-later.sql'), 'CREATE TABLE later (id INTEGER);');
    const newer = await openSqliteStore({ path, migrationsFolder });
    await newer.close();
    const message = await refusal({ path });
    expect(message).toContain(`store ${path} was written by a newer version of the program`);
    expect(message).toContain('0002-later.sql');
  });

  it('bring an older database up to date and keep what is in it', async () => {
    const [path, migrationsFolder] = [join(ownFolder(), 'store.db'), copyOfMigrations()];
    const old = await openSqliteStore({ path });
    await old.keepConfig('d', 'text');
    await old.close();
    writeFileSync(join(migrationsFolder, '0002-later.sql'), 'CREATE TABLE later (id INTEGER);');
    const readOnly = await refusal({ path, migrationsFolder, readOnly: true });
    expect(readOnly).toContain('is not up to date with this version');
    const store = await openSqliteStore({ path, migrationsFolder });
    expect(await store.configText('d')).toBe('text');
    await store.close();
  });

  it('leave the database as it was when one of them fails', async () => {
    const [path, migrationsFolder] = [join(ownFolder(), 'store.db'), copyOfMigrations()];
    await makeStore(path);
    const sql = 'CREATE TABLE later (id INTEGER); CREATE TABLE later (id INTEGER);';
    writeFileSync(join(migrationsFolder, '0002-later.sql'), sql);
    expect(await refusal({ path, migrationsFolder })).toContain('table later already exists');
    const store = await openSqliteStore({ path });
    expect(await store.judgedTo()).toEqual(new Map());
    await store.close();
  });

  it('refuse a gap in their numbers and a folder that is not there', async () => {
    const migrationsFolder = copyOfMigrations();
    writeFileSync(join(migrationsFolder, '0003-gap.sql'), 'CREATE TABLE gap (id INTEGER);');
    expect(await refusal({ path: ':memory:', migrationsFolder })).toContain('should have number 2');
    const missing = join(migrationsFolder, 'missing');
    expect(await refusal({ path: ':memory:', migrationsFolder: missing })).toContain(
      `cannot read the migrations: ${missing}: it does not exist`,
    );
  });
});
