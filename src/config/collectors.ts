import { namedGroups } from './leaves.js';
import { teller } from './resolve.js';
import type { Context, Tell } from './resolve.js';
import { LATER_SOURCES } from './schema.js';
import type { CollectorSection } from './schema.js';
import { hasKey } from './sections.js';
import type { Section } from './sections.js';
import type { Entry } from './tree.js';
import type { CollectorConfig, DecodeConfig, SourceConfig } from './types.js';

/** Longest line that is read, in bytes without its end. */
const MAX_LINE_BYTES = 1_048_576;

/** The resolved collector; null when something in it cannot stand, which is told. */
export function resolveCollector(
  entry: Entry,
  read: Section<CollectorSection>,
  context: Context,
): CollectorConfig | null {
  const tell = teller(entry, read, context);
  const { data: section, failed } = read;
  const unsure = (...keys: readonly string[]): boolean => keys.some((key) => failed.has(key));
  const source = unsure('tail', 'stdin') ? null : sourceOf(entry, section, tell);
  const decode = unsure('decode', 'pattern') ? null : decodeOf(section, tell);
  if (source === null || decode === null) return null;
  if (decode.kind === 'pattern') checkGroup(decode.pattern, section.time.field, ['time'], tell);
  return {
    name: entry.key,
    source,
    decode,
    time: section.time,
    maxLineBytes: MAX_LINE_BYTES,
  };
}

function sourceOf(entry: Entry, section: CollectorSection, tell: Tell): SourceConfig | null {
  const { tail, stdin } = section;
  if (tail !== undefined && stdin !== undefined) {
    tell([], 'has both tail and stdin; write one of them');
    return null;
  }
  if (tail !== undefined) return { kind: 'tail', paths: tail };
  if (stdin !== undefined) return { kind: 'stdin' };
  // A source of a part to come has been told already.
  if (!hasKey(entry.value, LATER_SOURCES)) tell([], 'has no source; write tail or stdin: true');
  return null;
}

function decodeOf(section: CollectorSection, tell: Tell): DecodeConfig | null {
  const { decode, pattern } = section;
  if (decode === 'json') {
    if (pattern !== undefined) tell(['pattern'], 'is not used by decode: json; leave it out');
    return { kind: 'json' };
  }
  if (pattern === undefined) {
    tell(['decode'], "needs a pattern; write e.g. pattern: '(?P<ts>[^ ]+) (?P<outcome>.*)'");
    return null;
  }
  if (namedGroups(pattern).length === 0) {
    tell(['pattern'], 'has no named group; write e.g. (?P<ts>[^ ]+) for each field');
    return null;
  }
  return { kind: 'pattern', pattern };
}

/** A field of a pattern-decoded record must be one of the pattern's named groups. */
export function checkGroup(
  pattern: string,
  field: readonly string[],
  path: readonly PropertyKey[],
  tell: Tell,
): void {
  const groups = namedGroups(pattern);
  if (groups.includes(field.join('.'))) return;
  tell(path, `is not a named group of the pattern; write one of ${groups.join(', ')}`);
}
