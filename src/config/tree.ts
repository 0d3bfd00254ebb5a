import { isAlias, isMap, isScalar, isSeq } from 'yaml';
import type { Document, LineCounter, Scalar, YAMLMap } from 'yaml';
import { fillEnvironment } from './environment.js';
import type { Environment } from './environment.js';
import { shown } from './problems.js';
import type { Place, Problems } from './problems.js';
import { MAX_DEPTH, parseYaml, tooDeep } from './yaml.js';

/**
 * The file as texts with their places. Every scalar is its text as written, so that `00`, `0x10`
 * and `yes` stay themselves; what is a number is decided by the key it stands under.
 */
export type Tree = Place &
  (
    | {
        readonly kind: 'text';
        /** With `${NAME}` filled in; may be secret. */
        readonly text: string;
        /** As in the file: what messages show. */
        readonly written: string;
        /** A variable in it could not be filled in; that has been told. */
        readonly broken: boolean;
      }
    | { readonly kind: 'empty' }
    | { readonly kind: 'list'; readonly items: readonly Tree[] }
    | { readonly kind: 'map'; readonly entries: readonly Entry[] }
  );

/** A key with its place, and its value. */
export interface Entry extends Place {
  readonly key: string;
  readonly value: Tree;
}

const MAX_CONFIG_BYTES = 1_048_576;
const MAX_ALIASES = 32;
/** Nodes after aliases are followed. */
const MAX_NODES = 50_000;

interface Reading {
  readonly document: Document;
  readonly lines: LineCounter;
  readonly environment: Environment;
  readonly problems: Problems;
  aliases: number;
  nodes: number;
}

/** Parses YAML 1.2 text. null when nothing can be made of it; the problems then say why. */
export function readTree(text: string, environment: Environment, problems: Problems): Tree | null {
  if (Buffer.byteLength(text, 'utf8') > MAX_CONFIG_BYTES) {
    problems.add({ line: 1, column: 1 }, 'the file is over 1 MiB; write a smaller one');
    return null;
  }
  const parsed = parseYaml(text, problems);
  if (parsed === null) return null;
  const { document, lines } = parsed;
  if (document.contents === null) {
    problems.add({ line: 1, column: 1 }, 'the file is empty; write collectors and mixes');
    return null;
  }
  const reading = { document, lines, environment, problems, aliases: 0, nodes: 0 };
  return toTree(reading, document.contents, { line: 1, column: 1 }, 0);
}

/** `near` is the place of the key or list, used for values that have no place of their own. */
function toTree(reading: Reading, node: unknown, near: Place, depth: number): Tree {
  const place = placeOf(reading, node) ?? near;
  reading.nodes += 1;
  if (depth > MAX_DEPTH || reading.nodes > MAX_NODES) {
    const tooMany = `more than ${MAX_NODES} values; write a smaller file`;
    reading.problems.add(place, depth > MAX_DEPTH ? tooDeep : tooMany);
    return { ...place, kind: 'empty' };
  }
  if (isAlias(node)) return followAlias(reading, node.source, place, depth);
  if (isMap(node)) return { ...place, kind: 'map', entries: toEntries(reading, node, depth) };
  if (isSeq(node)) {
    const items = node.items.map((item) => toTree(reading, item, place, depth + 1));
    return { ...place, kind: 'list', items };
  }
  return isScalar(node) ? toText(reading, node, place, near) : { ...near, kind: 'empty' };
}

function toText(reading: Reading, node: Scalar, place: Place, near: Place): Tree {
  const written = typeof node.value === 'string' ? node.value : '';
  if (node.type === 'PLAIN' && written === '') return { ...near, kind: 'empty' };
  const filled = fillEnvironment(written, reading.environment);
  for (const message of filled.problems) reading.problems.add(place, message);
  const broken = filled.problems.length > 0;
  return { ...place, kind: 'text', text: filled.text, written, broken };
}

function toEntries(reading: Reading, map: YAMLMap, depth: number): readonly Entry[] {
  const entries: Entry[] = [];
  const seen = new Set<string>();
  for (const { key, value } of map.items) {
    const place = placeOf(reading, key) ?? placeOf(reading, map) ?? { line: 1, column: 1 };
    if (!isScalar(key) || typeof key.value !== 'string') {
      reading.problems.add(place, 'a key must be plain text; write name: value');
    } else if (seen.has(key.value)) {
      reading.problems.add(place, `key ${shown(key.value)} is written twice; keep one`);
    } else {
      seen.add(key.value);
      const tree = toTree(reading, value, place, depth + 1);
      entries.push({ ...place, key: key.value, value: tree });
    }
  }
  return entries;
}

function followAlias(reading: Reading, name: string, place: Place, depth: number): Tree {
  reading.aliases += 1;
  if (reading.aliases > MAX_ALIASES) {
    reading.problems.add(place, `more than ${MAX_ALIASES} aliases; write the values out`);
    return { ...place, kind: 'empty' };
  }
  const target = anchored(reading.document, name);
  if (target === null) {
    reading.problems.add(
      place,
      `alias *${name} names nothing; write the value, or &${name} before`,
    );
    return { ...place, kind: 'empty' };
  }
  const tree = toTree(reading, target, place, depth + 1);
  return tree.kind === 'empty' ? tree : { ...tree, ...place };
}

function anchored(document: Document, name: string): unknown {
  let found: unknown = null;
  const visit = (node: unknown): void => {
    if (found !== null) return;
    if ((isMap(node) || isSeq(node) || isScalar(node)) && node.anchor === name) found = node;
    else if (isMap(node)) node.items.forEach((pair) => visit(pair.value));
    else if (isSeq(node)) node.items.forEach(visit);
  };
  visit(document.contents);
  return found;
}

function placeOf(reading: Reading, node: unknown): Place | null {
  if (!isAlias(node) && !isMap(node) && !isSeq(node) && !isScalar(node)) return null;
  if (node.range === undefined || node.range === null) return null;
  const { line, col } = reading.lines.linePos(node.range[0]);
  return { line, column: col };
}
