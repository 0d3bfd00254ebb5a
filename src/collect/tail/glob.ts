import type { Dirent } from 'node:fs';
import { readdir } from 'node:fs/promises';
import path from 'node:path';

/** Entries looked at in one folder; more are a problem told to the user. */
const MAX_FOLDER_ENTRIES = 10_000;

/** Paths that one look may yield. */
const MAX_PATHS = 10_000;

export interface Expansion {
  /** Existing candidates of a wildcard, or the path itself; sorted, each once. */
  readonly paths: readonly string[];
  readonly problems: readonly string[];
}

/** True when the path holds `*` or `?`; no other character is special. */
export function hasWildcard(pattern: string): boolean {
  return /[*?]/.test(pattern);
}

/**
 * Paths that match a pattern: `*` stands for any run of characters and `?` for one, inside one
 * segment of the path; names that begin with a dot match only a segment that does too.
 */
export async function expandGlob(pattern: string): Promise<Expansion> {
  const problems: string[] = [];
  const { root } = path.parse(pattern);
  const segments = pattern
    .slice(root.length)
    .split(/\/+/)
    .filter((segment) => segment !== '');
  let paths = [root];
  for (const segment of segments) {
    const next: string[] = [];
    for (const folder of paths) {
      if (!hasWildcard(segment)) next.push(join(folder, segment));
      else next.push(...(await matchesIn(folder, segment, problems)));
    }
    if (next.length > MAX_PATHS) {
      problems.push(`"${pattern}" matches over ${MAX_PATHS} paths; write a narrower one`);
    }
    paths = next.slice(0, MAX_PATHS);
  }
  return { paths: [...new Set(paths)].sort(byCodeUnit), problems };
}

async function matchesIn(folder: string, segment: string, problems: string[]): Promise<string[]> {
  const names = await namesIn(folder, problems);
  return names.filter((name) => matches(name, segment)).map((name) => join(folder, name));
}

/** Names in a folder, sorted; an unreadable folder is a problem and has none. */
export async function namesIn(folder: string, problems: string[]): Promise<string[]> {
  let entries: Dirent[];
  try {
    entries = await readdir(folder === '' ? '.' : folder, { withFileTypes: true });
  } catch (error) {
    problems.push(`cannot list the folder "${folder === '' ? '.' : folder}": ${reasonOf(error)}`);
    return [];
  }
  if (entries.length > MAX_FOLDER_ENTRIES) {
    problems.push(
      `"${folder}" holds over ${MAX_FOLDER_ENTRIES} files; only the first are looked at`,
    );
  }
  const names = entries.map((entry) => entry.name).sort(byCodeUnit);
  return names.slice(0, MAX_FOLDER_ENTRIES);
}

/** Wildcard match of a whole name in time proportional to name times pattern. */
export function matches(name: string, pattern: string): boolean {
  if (name.startsWith('.') && !pattern.startsWith('.')) return false;
  const text = Array.from(name);
  const wild = Array.from(pattern);
  let t = 0;
  let w = 0;
  let star = -1;
  let resume = 0;
  while (t < text.length) {
    if (wild[w] === '*') {
      star = w;
      resume = t;
      w += 1;
    } else if (wild[w] === '?' || wild[w] === text[t]) {
      t += 1;
      w += 1;
    } else if (star >= 0) {
      // Let the last star take one character more.
      resume += 1;
      t = resume;
      w = star + 1;
    } else return false;
  }
  while (wild[w] === '*') w += 1;
  return w === wild.length;
}

/** What went wrong with a file, for a person. */
export function reasonOf(error: unknown): string {
  const code = codeOf(error);
  if (code === 'ENOENT') return 'it does not exist';
  if (code === 'EACCES' || code === 'EPERM') return 'permission denied';
  if (code === 'ENOTDIR') return 'a part of its path is not a folder';
  if (code === 'EMFILE' || code === 'ENFILE') return 'too many files are open';
  return error instanceof Error ? error.message : String(error);
}

export function codeOf(error: unknown): string | null {
  if (typeof error !== 'object' || error === null || !('code' in error)) return null;
  return typeof error.code === 'string' ? error.code : null;
}

export function join(folder: string, name: string): string {
  return folder === '' || folder.endsWith('/') ? folder + name : `${folder}/${name}`;
}

function byCodeUnit(a: string, b: string): number {
  return a < b ? -1 : a > b ? 1 : 0;
}
