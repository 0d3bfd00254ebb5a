import { z } from 'zod';
import { nearest, shown } from './problems.js';
import type { Place, Problems } from './problems.js';
import { laterKeys } from './schema.js';
import type { Entry, Tree } from './tree.js';

type Path = readonly PropertyKey[];

/** Keys whose mappings are read as maps from category, so that order and odd names survive. */
const CATEGORY_MAPS = ['declared', 'each'];

/** A section that was read, perhaps with stand-ins. */
export interface Section<T> {
  readonly data: T;
  /** Keys that could not be read; `data` has their default or example, so say nothing of them. */
  readonly failed: ReadonlySet<PropertyKey>;
}

/**
 * Reads one section by its schema. Everything wrong in it goes to `problems`, each at its place. So
 * that checks across keys are made in the same run, keys that are wrong get stand-ins; null where
 * that is not possible.
 */
export function readSection<T>(
  schema: z.ZodType<T>,
  entry: Entry,
  problems: Problems,
): Section<T> | null {
  unknownKeys(schema, entry, problems);
  const plain = toPlain(entry.value);
  const result = schema.safeParse(plain);
  if (result.success) return { data: result.data, failed: new Set() };
  for (const issue of result.error.issues) tell(issue, schema, entry, problems);
  if (typeof plain !== 'object' || plain === null || entry.value.kind !== 'map') return null;
  const failed = new Set(result.error.issues.flatMap(({ path }) => path.slice(0, 1)));
  const kept = Object.entries(plain).filter(([key]) => !failed.has(key));
  const examples = [...failed].map((key) => [String(key), exampleOf(schema, String(key))]);
  const again = schema.safeParse(Object.fromEntries([...kept, ...examples]));
  return again.success ? { data: again.data, failed } : null;
}

/** Texts, lists and objects as the schema takes them; an empty value is null. */
function toPlain(tree: Tree): unknown {
  switch (tree.kind) {
    case 'text':
      return tree.text;
    case 'empty':
      return null;
    case 'list':
      return tree.items.map(toPlain);
    case 'map':
      return Object.fromEntries(
        tree.entries.map(({ key, value }) => [
          key,
          value.kind === 'map' && CATEGORY_MAPS.includes(key)
            ? toMap(value.entries)
            : toPlain(value),
        ]),
      );
  }
}

function toMap(entries: readonly Entry[]): ReadonlyMap<string, unknown> {
  return new Map(entries.map(({ key, value }) => [key, toPlain(value)]));
}

/** Where a path leads in the file: the last entry or item on it that is written there. */
export interface Found {
  readonly tree: Tree;
  /** A text's own place, else that of its key. */
  readonly place: Place;
  /** The key, for messages; list items have their number behind it. */
  readonly name: string;
  /** Steps of the path that the file has. */
  readonly depth: number;
}

/** Follows a path from an entry as far as the file goes. */
export function find(entry: Entry, path: Path): Found {
  let tree = entry.value;
  let name = entry.key;
  let key: Place = entry;
  let depth = 0;
  for (const step of path) {
    if (tree.kind === 'map') {
      const next: Entry | undefined = tree.entries.find((inner) => inner.key === step);
      if (next === undefined) break;
      [tree, name, key] = [next.value, next.key, next];
    } else {
      const item = tree.kind === 'list' ? tree.items[Number(step)] : undefined;
      if (item === undefined) break;
      [tree, name, key] = [item, `${name}[${String(Number(step) + 1)}]`, item];
    }
    depth += 1;
  }
  const { line, column } = tree.kind === 'text' ? tree : key;
  return { tree, place: { line, column }, name, depth };
}

/** Whether the section at the path has one of the keys itself. */
export function hasKey(tree: Tree, keys: readonly string[]): boolean {
  return tree.kind === 'map' && tree.entries.some(({ key }) => keys.includes(key));
}

/** Tells what is wrong at a path below an entry: `name "value" message`. */
export function tellAt(entry: Entry, path: Path, message: string, problems: Problems): void {
  const { tree, place, name } = find(entry, path);
  if (tree.kind === 'text' && tree.broken) return;
  const value = tree.kind === 'text' ? ` ${shown(tree.written)}` : '';
  problems.add(place, `${name}${value} ${message}`);
}

function tell(issue: z.core.$ZodIssue, schema: z.ZodType, entry: Entry, problems: Problems): void {
  if (issue.code !== 'invalid_type') {
    tellAt(entry, issue.path, issue.message, problems);
    return;
  }
  const found = find(entry, issue.path);
  const absent = found.tree.kind === 'map' && found.depth < issue.path.length;
  if (absent) tellMissing(issue.path, schema, found, problems);
  else tellType(issue.expected, found, problems);
}

/** The first example of a key's schema; required keys have one. */
function exampleOf(schema: z.core.$ZodType, key: string): string | undefined {
  const value = child(unwrap(schema), key);
  const examples = value === undefined ? undefined : z.globalRegistry.get(value)?.examples;
  return Array.isArray(examples) ? examples.map(String)[0] : undefined;
}

/** A missing key is not told where a key of a part to come may stand in its stead. */
function tellMissing(path: Path, schema: z.ZodType, found: Found, problems: Problems): void {
  const section = at(schema, path.slice(0, -1));
  const later = section === null ? [] : (laterKeys.get(section)?.later ?? []);
  if (hasKey(found.tree, later)) return;
  const missing = String(path.at(-1));
  const example = section === null ? undefined : exampleOf(section, missing);
  const write = example === undefined ? `${missing} and its value` : `${missing}: ${example}`;
  problems.add(found.place, `${missing} is missing in ${found.name}; write ${write}`);
}

const KINDS: Readonly<Record<string, string>> = {
  string: 'one text',
  array: 'a list, such as [ a, b ]',
  object: 'a mapping, such as { key: value }',
  map: 'a mapping from category to percentage',
  record: 'a mapping from name to section',
};

function tellType(expected: string, found: Found, problems: Problems): void {
  const write = KINDS[expected] ?? expected;
  const is = { text: 'is one text', empty: 'is empty', list: 'is a list', map: 'is a mapping' };
  const or = found.tree.kind === 'empty' ? ', or leave the key out' : '';
  problems.add(found.place, `${found.name} ${is[found.tree.kind]}; write ${write}${or}`);
}

/** Tells every key that the schema does not have, with the nearest one that it has. */
function unknownKeys(schema: z.core.$ZodType, entry: Entry, problems: Problems): void {
  const inner = unwrap(schema);
  const { value } = entry;
  if (inner instanceof z.ZodObject && value.kind === 'map') {
    const later = laterKeys.get(inner)?.later ?? [];
    for (const inside of value.entries) {
      const known = child(inner, inside.key);
      if (known === undefined) tellUnknown(inside, Object.keys(inner.shape), later, problems);
      else unknownKeys(known, inside, problems);
    }
  } else if (inner instanceof z.ZodArray && value.kind === 'list') {
    for (const item of value.items) {
      unknownKeys(inner.element, { ...item, key: entry.key, value: item }, problems);
    }
  }
}

/** Tells one key that is not known, or not yet. */
export function tellUnknown(
  entry: Entry,
  known: readonly string[],
  later: readonly string[],
  problems: Problems,
): void {
  if (later.includes(entry.key)) {
    problems.add(entry, `${entry.key} is not available yet; leave it out`);
    return;
  }
  const near = nearest(entry.key, [...known, ...later]);
  const write = near === null ? `one of ${known.toSorted().join(', ')}` : near;
  problems.add(entry, `${shown(entry.key)} is not a key here; write ${write}`);
}

/** The schema behind optional, defaulted and short forms. */
export function unwrap(schema: z.core.$ZodType): z.core.$ZodType {
  if (schema instanceof z.ZodOptional || schema instanceof z.ZodPrefault) {
    return unwrap(schema.unwrap());
  }
  if (schema instanceof z.ZodPipe) {
    return schema.in instanceof z.ZodTransform ? unwrap(schema.out) : schema;
  }
  return schema;
}

/** The section's schema at a path; null where the path leaves the schema. */
function at(schema: z.core.$ZodType, path: Path): z.core.$ZodType | null {
  let inner = unwrap(schema);
  for (const step of path) {
    const next = child(inner, String(step));
    if (next === undefined) return null;
    inner = unwrap(next);
  }
  return inner;
}

/** The schema of a key or item inside an unwrapped section or list. */
function child(schema: z.core.$ZodType, key: string): z.core.$ZodType | undefined {
  if (schema instanceof z.ZodArray) return schema.element;
  if (!(schema instanceof z.ZodObject)) return undefined;
  const shape: z.core.$ZodShape = schema.shape;
  return Object.hasOwn(shape, key) ? shape[key] : undefined;
}
