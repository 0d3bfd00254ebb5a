import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Database } from 'better-sqlite3';
import { StoreError } from '../store.js';
import { explainFileError } from './errors.js';

/** One change of the schema: a numbered file, e.g. `0001-first-tables.sql`. */
export interface Migration {
  readonly name: string;
  readonly sha256: string;
  readonly sql: string;
}

const LEDGER = 'tallyward_migrations';
const FILE_NAME = /^\d{4}-[a-z0-9-]+\.sql$/;

/**
 * Reads the numbered files of a folder, in order. Line ends are made `\n` first, so that a
 * checkout which rewrites them does not look like an edited file.
 * @throws StoreError when the folder cannot be read or the numbers are not 1, 2, 3 ...
 */
export function readMigrations(folder: string): readonly Migration[] {
  let names: string[];
  try {
    names = readdirSync(folder).filter((name) => FILE_NAME.test(name));
  } catch (error) {
    throw explainFileError(error, 'read the migrations', folder);
  }
  names.sort((a, b) => (a < b ? -1 : 1));
  return names.map((name, index) => {
    if (Number(name.slice(0, 4)) !== index + 1) {
      throw new StoreError(
        `migration ${join(folder, name)} should have number ${index + 1}; ` +
          'number the files 0001, 0002 ... without gaps, or install the program again',
      );
    }
    const sql = readFileSync(join(folder, name), 'utf8').replaceAll('\r\n', '\n');
    return { name, sha256: createHash('sha256').update(sql).digest('hex'), sql };
  });
}

/** Number of migrations the database has; 0 for an empty one. Refuses a foreign database. */
function appliedCount(db: Database, migrations: readonly Migration[], path: string): number {
  const tables = db
    .prepare<[], string>(
      `SELECT name FROM sqlite_schema WHERE name NOT LIKE 'sqlite\\_%' ESCAPE '\\'`,
    )
    .pluck()
    .all();
  if (tables.length === 0) return 0;
  if (!tables.includes(LEDGER)) {
    throw new StoreError(
      `store ${path} is the database of another program; name another file under \`store:\``,
    );
  }
  const applied = db
    .prepare<[], { name: string; sha256: string }>(
      `SELECT name, sha256 FROM ${LEDGER} ORDER BY number`,
    )
    .all();
  applied.forEach((row, index) => {
    compare(row, migrations[index], path);
  });
  return applied.length;
}

function compare(
  row: { readonly name: string; readonly sha256: string },
  known: Migration | undefined,
  path: string,
): void {
  if (known?.name !== row.name) {
    throw new StoreError(
      `store ${path} was written by a newer version of the program: it has the migration ` +
        `${row.name}, which this version does not know; install that version, or put back a ` +
        'backup from before it',
    );
  }
  if (known.sha256 !== row.sha256) {
    throw new StoreError(
      `migration ${row.name} is not the file that store ${path} was made with; ` +
        'a migration is never edited: put the file back and write the change as a new one',
    );
  }
}

/**
 * Looks only.
 * @throws StoreError for an edited migration, a newer database, another program's database
 */
export function refuseForeign(db: Database, migrations: readonly Migration[], path: string): void {
  appliedCount(db, migrations, path);
}

/**
 * Brings the database up to date, whole or not at all. Two processes may try at once: the second
 * waits for the first and then finds nothing left to do.
 * @throws StoreError as `refuseForeign`
 */
export function migrate(db: Database, migrations: readonly Migration[], path: string): void {
  if (appliedCount(db, migrations, path) === migrations.length) return;
  const apply = db.transaction(() => {
    const done = appliedCount(db, migrations, path);
    db.exec(
      `CREATE TABLE IF NOT EXISTS ${LEDGER} (
         number INTEGER PRIMARY KEY, name TEXT NOT NULL, sha256 TEXT NOT NULL) STRICT`,
    );
    const note = db.prepare(`INSERT INTO ${LEDGER} (name, sha256) VALUES (?, ?)`);
    for (const migration of migrations.slice(done)) {
      db.exec(migration.sql);
      note.run(migration.name, migration.sha256);
    }
  });
  apply.immediate();
}

/**
 * For a connection that only reads: refuses a database that is not up to date.
 * @throws StoreError as `migrate`, and for an older database
 */
export function requireCurrent(db: Database, migrations: readonly Migration[], path: string): void {
  if (appliedCount(db, migrations, path) === migrations.length) return;
  throw new StoreError(
    `store ${path} is not up to date with this version of the program; ` +
      'run `tallyward start` on it once, which brings it up to date',
  );
}
