import type { WindowLength } from '../terms/window.js';
import { readCounts } from './countsFile.js';
import { declaredShares } from './declared.js';
import { categoryProblem, presentKeys } from './resolve.js';
import type { Context, Tell } from './resolve.js';
import type { YardstickSection } from './schema.js';
import { nominalMs } from './windowLength.js';
import type { YardstickConfig } from './types.js';

/** Fewest windows that a baseline is judged from (methods: below, every verdict is `learning`). */
const LEAST_WINDOWS = 8;

const DAY_MS = 86_400_000;

/** The mix's settings that a yardstick depends on. */
export interface Setting {
  readonly mix: string;
  readonly window: WindowLength;
  readonly zone: string;
  readonly tell: Tell;
  /** A yardstick that is not built yet is written, and has been told. */
  readonly later: boolean;
  readonly context: Context;
}

/** The resolved yardstick; null when it cannot stand, which is told. */
export function resolveYardstick(
  section: YardstickSection,
  setting: Setting,
): YardstickConfig | null {
  const { baseline, previous, season, declared } = section;
  const { tell } = setting;
  const present = presentKeys(section);
  if (present.length === 0 && !setting.later) {
    const write = 'write one of baseline, previous, season, declared';
    tell(['yardstick'], `has no key; ${write}`);
  }
  if (present.length > 1) {
    tell(['yardstick'], `has both ${present.join(' and ')}; write one of them`);
    return null;
  }
  if (declared !== undefined) return resolveDeclared(declared, setting);
  if (previous !== undefined) return { kind: 'previous', windows: previous };
  if (season !== undefined) return resolveSeason(season, setting);
  if (baseline !== undefined) return resolveBaseline(baseline, setting);
  return null;
}

function resolveDeclared(
  written: NonNullable<YardstickSection['declared']>,
  { mix, tell, context }: Setting,
): YardstickConfig | null {
  const path = ['yardstick', 'declared'];
  for (const category of written.keys()) {
    const problem = categoryProblem(category);
    if (problem !== null) tell(path, problem);
  }
  const result = declaredShares(written);
  if ('refused' in result) {
    tell(path, result.refused);
    return null;
  }
  if (result.scaledFrom !== null) {
    const note = `the declared shares sum to ${result.scaledFrom} and are scaled to 100%`;
    context.notes.push(`mix ${mix}: ${note}`);
  }
  return result.declared;
}

function resolveSeason(
  season: NonNullable<YardstickSection['season']>,
  { window, tell }: Setting,
): YardstickConfig | null {
  const cycle = season.cycle === '1d' ? 'day' : 'week';
  const cycleMs = cycle === 'day' ? DAY_MS : 7 * DAY_MS;
  if (nominalMs(window) > cycleMs) {
    tell(['yardstick', 'season', 'cycle'], 'is shorter than the window; write a longer cycle');
    return null;
  }
  return { kind: 'season', cycle, keep: season.keep, except: season.except };
}

type Baseline = NonNullable<YardstickSection['baseline']>;

function resolveBaseline(baseline: Baseline, setting: Setting): YardstickConfig | null {
  const present = presentKeys(baseline).join(' ');
  const path = ['yardstick', 'baseline'];
  if (baseline.last !== undefined && present === 'last') {
    return resolveRolling(baseline.last, setting);
  }
  if (baseline.from !== undefined && baseline.to !== undefined && present === 'from to') {
    return resolvePinned(baseline.from, baseline.to, setting);
  }
  if (baseline.file !== undefined && present === 'file') {
    return resolveFile(baseline.file, setting);
  }
  setting.tell(path, 'is not one of its forms; write last, or from and to, or file');
  return null;
}

function resolveRolling(lastMs: number, setting: Setting): YardstickConfig | null {
  const { window, tell, context } = setting;
  const leastMs = LEAST_WINDOWS * nominalMs(window);
  if (lastMs >= leastMs) return { kind: 'rolling', lastMs };
  const least = context.time.formatDuration(Math.ceil(leastMs / DAY_MS) * DAY_MS);
  const why = `(the last ${context.time.formatDuration(lastMs)} hold fewer than 8 windows)`;
  tell(['yardstick', 'baseline', 'last'], `is too short for the window ${why}; write ${least}`);
  return null;
}

function resolvePinned(from: string, to: string, setting: Setting): YardstickConfig | null {
  const { zone, window, tell, context } = setting;
  const path = ['yardstick', 'baseline'];
  const fromMs = context.time.parseInstant(from, zone);
  const toMs = context.time.parseInstant(to, zone);
  const wrong = 'is not a time; write RFC 3339, such as 2026-10-01T00:00:00Z, or a date';
  if (fromMs === null) tell([...path, 'from'], wrong);
  if (toMs === null) tell([...path, 'to'], wrong);
  if (fromMs === null || toMs === null) return null;
  if (fromMs >= toMs) {
    tell([...path, 'to'], 'is not after from; write a later time');
    return null;
  }
  if (toMs - fromMs < LEAST_WINDOWS * shortestMs(window)) {
    tell([...path, 'to'], 'leaves fewer than 8 windows from from; write a later time');
    return null;
  }
  return { kind: 'pinned', fromMs, toMs };
}

/** Eight months, or days across a change of clocks, may be shorter than their mean. */
function shortestMs(window: WindowLength): number {
  if (window.kind === 'month') return 28 * DAY_MS;
  return nominalMs(window) - (window.kind === 'sub-day' ? 0 : DAY_MS / 24);
}

function resolveFile(path: string, { tell, context }: Setting): YardstickConfig | null {
  const at = ['yardstick', 'baseline', 'file'];
  let text: string;
  try {
    text = context.readText(path);
  } catch (error) {
    const why = error instanceof Error ? error.message : String(error);
    tell(at, `cannot be read (${why}); write the path of a CSV file`);
    return null;
  }
  const read = readCounts(text);
  if ('value' in read) return { kind: 'file', path, ...read.value };
  tell(at, read.refused);
  return null;
}
