import { existsSync, mkdirSync } from 'node:fs';
import { dirname } from 'node:path';
import { fileURLToPath } from 'node:url';
import SqliteDatabase from 'better-sqlite3';
import type { Database } from 'better-sqlite3';
import { StoreError } from '../store.js';
import { explainError, explainFileError } from './errors.js';
import { migrate, readMigrations, refuseForeign, requireCurrent } from './migrate.js';

export interface SqliteOptions {
  /** The database file; made, with its folder, when absent. `:memory:` lives until closed. */
  readonly path: string;
  /** Folder of the numbered SQL files; the program's own by default. */
  readonly migrationsFolder?: string;
  /** For a second connection beside the writer; the file must exist. */
  readonly readOnly?: boolean;
  /** How long to wait for another process that writes; 5,000 by default. */
  readonly busyTimeoutMs?: number;
}

const IN_MEMORY = ':memory:';

/** The same way up from `src/store/sqlite` and from `dist/store/sqlite`. */
const OWN_MIGRATIONS = fileURLToPath(new URL('../../../migrations/sqlite', import.meta.url));
const DEFAULT_BUSY_TIMEOUT_MS = 5_000;
/** After a large transaction the log shrinks back to this size. */
const KEPT_LOG_BYTES = 64 * 1024 * 1024;

function prepareFile(options: SqliteOptions): void {
  const { path } = options;
  if (path === '') throw new StoreError('the store has no path; write one under `store:`');
  if (path === IN_MEMORY) {
    if (options.readOnly !== true) return;
    throw new StoreError('a store in memory is always new, so it cannot be opened read-only');
  }
  if (options.readOnly === true) {
    if (existsSync(path)) return;
    throw new StoreError(
      `there is no store ${path}; correct the path under \`store:\`, or start the daemon first`,
    );
  }
  try {
    mkdirSync(dirname(path), { recursive: true });
  } catch (error) {
    throw explainFileError(error, 'make the folder of the store', dirname(path));
  }
}

function prepareDatabase(db: Database, options: SqliteOptions): void {
  const migrations = readMigrations(options.migrationsFolder ?? OWN_MIGRATIONS);
  if (options.readOnly === true) {
    db.pragma('query_only = ON');
    requireCurrent(db, migrations, options.path);
    return;
  }
  db.pragma('foreign_keys = ON');
  // Another program's database is refused before anything in it is changed, journal mode included.
  refuseForeign(db, migrations, options.path);
  db.pragma('journal_mode = WAL');
  db.pragma('synchronous = FULL');
  db.pragma(`journal_size_limit = ${KEPT_LOG_BYTES}`);
  migrate(db, migrations, options.path);
}

/**
 * Opens a database file that is up to date with the program's migrations.
 * @throws StoreError when it cannot be opened, is not ours, is damaged, locked, newer or edited
 */
export function openConnection(options: SqliteOptions): Database {
  prepareFile(options);
  let db: Database | null = null;
  try {
    db = new SqliteDatabase(options.path, {
      readonly: options.readOnly === true,
      timeout: options.busyTimeoutMs ?? DEFAULT_BUSY_TIMEOUT_MS,
    });
    prepareDatabase(db, options);
    return db;
  } catch (error) {
    db?.close();
    throw explainError(error, 'open the store', options.path);
  }
}
