import { StoreError } from '../store.js';

/** What went wrong, by the first word(s) of SQLite's result code, and what to do about it. */
const EXPLANATIONS: readonly (readonly [code: string, what: string, next: string])[] = [
  ['SQLITE_BUSY', 'another process holds it for writing', 'wait for that process, or stop it'],
  ['SQLITE_LOCKED', 'another process holds it for writing', 'wait for that process, or stop it'],
  [
    'SQLITE_NOTADB',
    'the file is not a SQLite database',
    'name another file under `store:`, or move this one away',
  ],
  ['SQLITE_CORRUPT', 'the database is damaged', 'put back the last backup'],
  ['SQLITE_FULL', 'there is no space left to write to', 'free some space on that disk'],
  [
    'SQLITE_READONLY',
    'the file or its folder may not be written',
    'give the program the right to write there',
  ],
  [
    'SQLITE_CANTOPEN',
    'the file cannot be opened',
    'see that the path is a file, and that it and its folder may be read and written',
  ],
  ['SQLITE_PERM', 'access was denied', 'give the program the right to read and write there'],
  ['SQLITE_IOERR', 'the disk failed to read or write', 'check that disk and its free space'],
  ['SQLITE_TOOBIG', 'a value is too large to be stored', 'shorten the texts in the records'],
  ['SQLITE_NOMEM', 'there is not enough memory', 'give the program more memory'],
  [
    'SQLITE_CONSTRAINT_CHECK',
    'a number left the range in which it is kept exactly (0 to 2^53 - 1)',
    'report this as a fault',
  ],
];

/** Node's codes of files and folders, from fs calls. */
const FILE_EXPLANATIONS: ReadonlyMap<string, string> = new Map([
  ['EACCES', 'access is denied; give the program the right to write there'],
  ['EPERM', 'access is denied; give the program the right to write there'],
  ['EROFS', 'that disk is read-only; choose a folder that may be written'],
  ['ENOSPC', 'there is no space left on that disk; free some'],
  ['ENOTDIR', 'part of the path is a file, not a folder; correct the path'],
  ['EEXIST', 'part of the path is a file, not a folder; correct the path'],
  ['ENOENT', 'it does not exist; correct the path'],
  ['ENAMETOOLONG', 'the path is too long; choose a shorter one'],
]);

function codeOf(error: unknown): string | null {
  if (!(error instanceof Error) || !('code' in error)) return null;
  return typeof error.code === 'string' ? error.code : null;
}

/**
 * Turns what SQLite threw into a StoreError that a person can act on.
 * Everything that is not SQLite's (our own StoreErrors, faults in the program) comes back as it is.
 *
 * @param doing what was attempted, e.g. `commit counts`
 * @param path the database file
 */
export function explainError(error: unknown, doing: string, path: string): unknown {
  if (error instanceof TypeError && error.message.includes('connection is not open')) {
    return new StoreError(`cannot ${doing}: store ${path} is closed; open it again`, {
      cause: error,
    });
  }
  const code = codeOf(error);
  if (code === null || !code.startsWith('SQLITE_')) return error;
  const known = EXPLANATIONS.find(([prefix]) => code === prefix || code.startsWith(`${prefix}_`));
  const what = known?.[1] ?? `SQLite refused: ${(error as Error).message}`;
  const next = known?.[2] ?? 'report this as a fault';
  return new StoreError(`cannot ${doing}: store ${path}: ${what} (${code}); ${next}`, {
    cause: error,
  });
}

/** The same for a failed call to the file system. */
export function explainFileError(error: unknown, doing: string, path: string): unknown {
  const code = codeOf(error);
  if (code === null) return error;
  const why = FILE_EXPLANATIONS.get(code) ?? 'see that the path is right and may be used';
  return new StoreError(`cannot ${doing}: ${path}: ${why} (${code})`, { cause: error });
}
