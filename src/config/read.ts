import { createHash } from 'node:crypto';
import type { z } from 'zod';
import type { TimeTools } from '../terms/time.js';
import { resolveCollector } from './collectors.js';
import type { Environment } from './environment.js';
import { resolveMix } from './mixes.js';
import type { Known } from './mixes.js';
import { collectProblems, shown } from './problems.js';
import type { Problems } from './problems.js';
import type { Context } from './resolve.js';
import { configSchema, laterKeys } from './schema.js';
import type { ConfigSchema, SenderSection } from './schema.js';
import { readSection, tellUnknown } from './sections.js';
import type { Section } from './sections.js';
import { readTree } from './tree.js';
import type { Entry, Tree } from './tree.js';
import type { CollectorConfig, Config, ConfigProblem, SenderConfig } from './types.js';

export interface ConfigInput {
  /** The file's text. */
  readonly text: string;
  /** Its path, for messages and for `Config.file`. */
  readonly file: string;
  readonly env: Environment;
  /** Text of a file named by a yardstick; throws an Error when it cannot be read. */
  readonly readText: (path: string) => string;
  /** `timeTools` of `clock/timeTools.ts`. */
  readonly time: TimeTools;
}

export type ConfigResult =
  { readonly config: Config } | { readonly problems: readonly ConfigProblem[] };

/**
 * Reads a configuration: YAML 1.2 of at most 1 MiB. Gives the resolved configuration, or everything
 * that is wrong with it in order of place. Pure but for `readText`.
 */
export function readConfig(input: ConfigInput): ConfigResult {
  const problems = collectProblems();
  const tree = readTree(input.text, input.env, problems);
  const config = tree === null ? null : resolve(tree, input, problems);
  const found = problems.list();
  if (config !== null && found.length === 0) return { config };
  return { problems: found };
}

/** `sha256:` and the hex digest of the text's UTF-8 bytes. */
function configDigest(text: string): string {
  return `sha256:${createHash('sha256').update(text, 'utf8').digest('hex')}`;
}

function resolve(tree: Tree, input: ConfigInput, problems: Problems): Config | null {
  if (tree.kind !== 'map') {
    problems.add(tree, 'the file is not a mapping; write keys such as collectors: and mixes:');
    return null;
  }
  const schema = configSchema(input.time);
  const context = { time: input.time, problems, readText: input.readText, notes: [] as string[] };
  const settings = readSettings(tree, schema, problems)?.data;
  const collectors = resolveCollectors(tree, schema, context);
  const mixes = readNamed(tree, 'mixes', schema.mix, problems).flatMap(([entry, section]) => {
    const mix = section === null ? null : resolveMix(entry, section, collectors, context);
    return mix === null ? [] : [mix];
  });
  const send = readNamed(tree, 'send', schema.sender, problems).flatMap(([entry, section]) =>
    section === null ? [] : [toSender(entry.key, section.data)],
  );
  if (settings === undefined) return null;
  return {
    file: input.file,
    text: input.text,
    digest: configDigest(input.text),
    store: settings.store,
    listen: settings.listen,
    falseAlarms: { perWeek: settings.false_alarms.per_week },
    collectors: collectors.collectors,
    mixes,
    send,
    notes: context.notes,
  };
}

type MapTree = Extract<Tree, { readonly kind: 'map' }>;

/** The keys at the top that are no named sections; and whether all keys there are known. */
function readSettings(tree: MapTree, schema: ConfigSchema, problems: Problems) {
  const known = Object.keys(schema.whole.shape);
  const later = laterKeys.get(schema.whole)?.later ?? [];
  const own = Object.keys(schema.settings.shape);
  for (const entry of tree.entries) {
    if (!known.includes(entry.key)) tellUnknown(entry, known, later, problems);
  }
  const entries = tree.entries.filter(({ key }) => own.includes(key));
  const root: Entry = { key: 'the file', line: 1, column: 1, value: { ...tree, entries } };
  return readSection(schema.settings, root, problems);
}

/** Each section under a key, in the order written; null where one could not be read. */
function readNamed<T>(
  tree: MapTree,
  key: 'collectors' | 'mixes' | 'send',
  schema: z.ZodType<T>,
  problems: Problems,
): readonly (readonly [Entry, Section<T> | null])[] {
  const entry = tree.entries.find((inner) => inner.key === key);
  const required = key !== 'send';
  if (entry === undefined) {
    const missing = `${key} is missing; write ${key}: with at least one`;
    if (required) problems.add({ line: 1, column: 1 }, missing);
    return [];
  }
  if (entry.value.kind !== 'map' || (required && entry.value.entries.length === 0)) {
    problems.add(entry, `${key} has no named section; write a name and its keys under it`);
    return [];
  }
  return entry.value.entries.map((named) => {
    checkName(named, problems);
    return [named, readSection(schema, named, problems)] as const;
  });
}

function checkName(entry: Entry, problems: Problems): void {
  if (/^[a-z0-9][a-z0-9_-]{0,63}$/.test(entry.key)) return;
  const write = 'write up to 64 of a-z, 0-9, _ and -, first a letter or digit';
  problems.add(entry, `${shown(entry.key)} is not a name; ${write}`);
}

function resolveCollectors(tree: MapTree, schema: ConfigSchema, context: Context): Known {
  const collectors: CollectorConfig[] = [];
  const named = readNamed(tree, 'collectors', schema.collector, context.problems);
  for (const [entry, section] of named) {
    const collector = section === null ? null : resolveCollector(entry, section, context);
    if (collector === null) continue;
    const reader = collectors.find(({ source }) => source.kind === 'stdin');
    if (collector.source.kind === 'stdin' && reader !== undefined) {
      const what = `${entry.key} reads stdin, as ${reader.name} does; write tail, or leave one out`;
      context.problems.add(entry, what);
    }
    collectors.push(collector);
  }
  return { names: named.map(([entry]) => entry.key), collectors };
}

function toSender(name: string, section: SenderSection): SenderConfig {
  return {
    name,
    webhook: section.webhook,
    secret: section.secret ?? null,
    freshMs: section.fresh,
    digestMs: section.digest,
  };
}
