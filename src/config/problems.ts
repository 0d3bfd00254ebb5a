import type { ConfigProblem } from './types.js';

/** A place in the file, 1-based. */
export interface Place {
  readonly line: number;
  readonly column: number;
}

/** Collects everything that is wrong, so that one run tells all of it. */
export interface Problems {
  add(place: Place, message: string): void;
  /** In order of place; what was said twice at one place is kept once. */
  list(): readonly ConfigProblem[];
}

/** Most problems kept; past this a file is not a configuration. */
const MAX_PROBLEMS = 200;

export function collectProblems(): Problems {
  const found: ConfigProblem[] = [];
  return {
    add: ({ line, column }, message) => {
      const same = (other: ConfigProblem): boolean =>
        other.line === line && other.column === column && other.message === message;
      if (found.length < MAX_PROBLEMS && !found.some(same)) found.push({ line, column, message });
    },
    list: () => found.toSorted(inOrder),
  };
}

function inOrder(a: ConfigProblem, b: ConfigProblem): number {
  if (a.line !== b.line) return a.line - b.line;
  if (a.column !== b.column) return a.column - b.column;
  return a.message < b.message ? -1 : a.message > b.message ? 1 : 0;
}

/** One line for a person: `file:line:column: what is wrong; what to write`. */
export function formatProblem(file: string, problem: ConfigProblem): string {
  return `${file}:${problem.line}:${problem.column}: ${problem.message}`;
}

/** The known name that a mistyped one most likely meant; null when none is near. */
export function nearest(written: string, known: readonly string[]): string | null {
  const limit = Math.max(1, Math.min(3, Math.floor(written.length / 3)));
  let best: { name: string; distance: number } | null = null;
  for (const name of known.toSorted()) {
    if (Math.abs(name.length - written.length) > limit) continue;
    const distance = editDistance(written, name);
    if (distance <= limit && distance < (best?.distance ?? Infinity)) best = { name, distance };
  }
  return best?.name ?? null;
}

/** Insertions, deletions and replacements from one text to the other (Levenshtein 1966). */
function editDistance(from: string, to: string): number {
  let above = Array.from({ length: to.length + 1 }, (_, column) => column);
  for (let row = 1; row <= from.length; row += 1) {
    const current = [row];
    for (let column = 1; column <= to.length; column += 1) {
      const replaced = (above[column - 1] ?? 0) + (from[row - 1] === to[column - 1] ? 0 : 1);
      const added = (current[column - 1] ?? 0) + 1;
      current.push(Math.min(replaced, added, (above[column] ?? 0) + 1));
    }
    above = current;
  }
  return above[to.length] ?? 0;
}

/** A text as shown in a message: quoted, on one line, at most 60 characters. */
export function shown(text: string): string {
  return JSON.stringify(text.length > 60 ? `${text.slice(0, 57)}...` : text);
}
