import { checkGroup } from './collectors.js';
import { nearest } from './problems.js';
import { categoryProblem, presentKeys, teller } from './resolve.js';
import type { Context, Tell } from './resolve.js';
import { LATER_YARDSTICKS } from './schema.js';
import type { MixSection } from './schema.js';
import { find, hasKey } from './sections.js';
import type { Section } from './sections.js';
import type { Entry } from './tree.js';
import type { CollectorConfig, MixConfig, WhereConfig } from './types.js';
import { nominalMs, toWindowLength } from './windowLength.js';
import { resolveYardstick } from './yardstick.js';

/** Categories kept in the store; those past the judged ones are for looking up only. */
const STORED_CATEGORIES = 10_000;
/** Fewest windows without events before a strand is forgotten. */
const FORGET_WINDOWS = 24;

/** The collectors that a mix may name: all in the file, and those that could be resolved. */
export interface Known {
  readonly names: readonly string[];
  readonly collectors: readonly CollectorConfig[];
}

/** The resolved mix; null when something in it cannot stand, which is told. */
export function resolveMix(
  entry: Entry,
  read: Section<MixSection>,
  known: Known,
  context: Context,
): MixConfig | null {
  const tell = teller(entry, read, context);
  const section = read.data;
  const window = toWindowLength(section.window, section.week_starts);
  const { zone } = section;
  checkFrom(section, known, tell);
  checkFields(section, known, tell);
  checkCategories(section, tell);
  const later = hasKey(find(entry, ['yardstick']).tree, LATER_YARDSTICKS);
  const yardstick = resolveYardstick(section.yardstick, {
    ...{ mix: entry.key, window, zone, tell, later, context },
  });
  const where = section.where.map((condition, at) => resolveWhere(condition, at, tell));
  if (yardstick === null) return null;
  return {
    name: entry.key,
    from: section.from,
    category: section.category,
    where,
    split: section.split,
    window,
    zone,
    latenessMs: section.lateness,
    yardstick,
    tolerance: { moved: section.tolerance.moved, each: section.tolerance.each ?? new Map() },
    ordered: section.ordered ?? null,
    limits: limitsOf(section, nominalMs(window)),
    settleMs: section.settle ?? null,
    falseAlarms: section.false_alarms ? { perWeek: section.false_alarms.per_week } : null,
  };
}

function limitsOf({ limits }: MixSection, windowMs: number): MixConfig['limits'] {
  return {
    categoriesJudged: limits.categories,
    categoriesStored: STORED_CATEGORIES,
    strands: limits.strands,
    forgetMs: Math.max(limits.forget, FORGET_WINDOWS * windowMs),
    minEvents: limits.min_events,
  };
}

function checkFrom(section: MixSection, { names }: Known, tell: Tell): void {
  if (names.includes(section.from)) return;
  const near = nearest(section.from, names);
  const choices = names.length === 0 ? 'the name of a collector' : `one of ${names.join(', ')}`;
  tell(['from'], `is not a collector; write ${near ?? choices}`);
}

/** Fields that cannot be there, or stand for the same thing twice. */
function checkFields(section: MixSection, { collectors }: Known, tell: Tell): void {
  const names = section.split.map((field) => field.join('.'));
  names.forEach((name, at) => {
    if (names.indexOf(name) < at) tell(['split', at], 'is written twice; keep one');
  });
  const decode = collectors.find(({ name }) => name === section.from)?.decode;
  if (decode?.kind !== 'pattern') return;
  const check = (field: readonly string[], path: readonly PropertyKey[]): void =>
    checkGroup(decode.pattern, field, path, tell);
  check(section.category, ['category']);
  section.split.forEach((field, at) => check(field, ['split', at]));
  section.where.forEach(({ field }, at) => check(field, ['where', at, 'field']));
}

function checkCategories(section: MixSection, tell: Tell): void {
  const ordered = section.ordered ?? [];
  ordered.forEach((category, at) => {
    const problem = categoryProblem(category);
    if (problem !== null) tell(['ordered', at], problem);
    if (ordered.indexOf(category) < at) tell(['ordered', at], 'is written twice; keep one');
  });
  for (const category of section.tolerance.each?.keys() ?? []) {
    const problem = categoryProblem(category);
    if (problem !== null) tell(['tolerance', 'each'], problem);
  }
}

function resolveWhere(section: MixSection['where'][number], at: number, tell: Tell): WhereConfig {
  const present = presentKeys(section).filter((key) => key !== 'field');
  const path = ['where', at];
  if (present.length === 0) {
    tell(path, 'has no condition; write is, at_least, at_most, matches or missing');
  }
  if (section.missing === 'true' && present.length > 1) {
    tell([...path, 'missing'], 'leaves nothing to compare; write it alone');
  }
  const { at_least: atLeast = null, at_most: atMost = null } = section;
  if (atLeast !== null && atMost !== null && atLeast > atMost) {
    tell([...path, 'at_most'], 'is below at_least; write a greater number');
  }
  return {
    field: section.field,
    is: section.is ?? null,
    atLeast,
    atMost,
    matches: section.matches ?? null,
    missing: section.missing === undefined ? null : section.missing === 'true',
  };
}
