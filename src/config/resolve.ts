import type { TimeTools } from '../terms/time.js';
import type { Problems } from './problems.js';
import { tellAt } from './sections.js';
import type { Entry } from './tree.js';

/** What resolving a section needs besides the section itself. */
export interface Context {
  readonly time: TimeTools;
  readonly problems: Problems;
  /** Text of a file that the configuration names; throws when it cannot be read. */
  readonly readText: (path: string) => string;
  readonly notes: string[];
}

/** Tells a problem at a path below the entry. */
export type Tell = (path: readonly PropertyKey[], message: string) => void;

/** Tells problems of an entry's section, but none of keys that only have stand-ins. */
export function teller(
  entry: Entry,
  { failed }: { readonly failed: ReadonlySet<PropertyKey> },
  context: Context,
): Tell {
  return (path, message) => {
    const [key] = path;
    if (key === undefined || !failed.has(key)) tellAt(entry, path, message, context.problems);
  };
}

/** The keys of a section that the file has, in schema order. */
export function presentKeys(section: Readonly<Record<string, unknown>>): readonly string[] {
  return Object.keys(section).filter((key) => section[key] !== undefined);
}

/**
 * Category texts that begin with `(` are made categories; a real one needs a backslash there.
 * Returns what is wrong with one, or null.
 */
export function categoryProblem(category: string): string | null {
  if (!category.startsWith('(') || category === '(rest)' || category === '(missing)') return null;
  return `names ${JSON.stringify(category)}, which is no made category; write \\${category}`;
}
