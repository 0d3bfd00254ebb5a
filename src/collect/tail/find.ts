import { stat } from 'node:fs/promises';
import path from 'node:path';
import { codeOf, expandGlob, hasWildcard, join, namesIn, reasonOf } from './glob.js';

/** A regular file as it is now. */
export interface FoundFile {
  /** `device:inode`. */
  readonly id: string;
  readonly size: number;
  /** Every matched path that leads to it, sorted; at least one. */
  readonly paths: readonly string[];
}

export interface Look {
  readonly files: ReadonlyMap<string, FoundFile>;
  /** Paths that lead to nothing that can be looked at, mostly because it does not exist yet. */
  readonly missing: readonly string[];
  readonly problems: string[];
}

/** The identity and size of a file; null where the path leads to none or to no regular file. */
export async function identify(file: string): Promise<{ id: string; size: number } | null> {
  const found = await stat(file, { bigint: true });
  if (!found.isFile()) return null;
  return { id: `${found.dev}:${found.ino}`, size: Number(found.size) };
}

/** All files that the patterns lead to now, in order of path. */
export async function lookFor(patterns: readonly string[]): Promise<Look> {
  const files = new Map<string, FoundFile>();
  const missing: string[] = [];
  const problems: string[] = [];
  for (const pattern of patterns) {
    const expansion = await expandGlob(pattern);
    problems.push(...expansion.problems);
    const before = files.size;
    for (const file of expansion.paths) {
      const exists = await add(file, files, problems);
      if (!exists && !hasWildcard(pattern)) missing.push(file);
    }
    if (hasWildcard(pattern) && expansion.paths.length === 0 && files.size === before) {
      problems.push(`no file matches "${pattern}" yet`);
    }
  }
  return { files, missing, problems };
}

/** Adds what the path leads to; false when that cannot be looked at. */
async function add(
  file: string,
  files: Map<string, FoundFile>,
  problems: string[],
): Promise<boolean> {
  if (file.endsWith('.gz')) {
    problems.push(`"${file}" is left out: compressed logs are not available yet`);
    return true;
  }
  try {
    const found = await identify(file);
    if (found === null) {
      problems.push(`"${file}" is not a regular file; name the log itself`);
      return true;
    }
    const paths = files.get(found.id)?.paths ?? [];
    files.set(found.id, { ...found, paths: [...new Set([...paths, file])] });
    return true;
  } catch (error) {
    problems.push(`cannot look at "${file}": ${reasonOf(error)}`);
    return false;
  }
}

/** Where a file that left its path now is, within the folder it was in; null when gone. */
export async function findRenamed(
  id: string,
  formerPath: string,
  problems: string[],
): Promise<{ path: string; size: number } | null> {
  const { dir } = path.parse(formerPath);
  for (const name of await namesIn(dir, problems)) {
    const candidate = join(dir, name);
    const found = await identifyQuietly(candidate);
    if (found?.id === id) return { path: candidate, size: found.size };
  }
  return null;
}

/** As `identify`, where not being able to look is the same as not being there. */
async function identifyQuietly(file: string): Promise<{ id: string; size: number } | null> {
  try {
    return await identify(file);
  } catch (error) {
    if (codeOf(error) === null) throw error;
    return null;
  }
}

/** Whether the error says that the path leads nowhere, rather than that one may not look. */
export function isGone(error: unknown): boolean {
  return codeOf(error) === 'ENOENT' || codeOf(error) === 'ENOTDIR';
}
