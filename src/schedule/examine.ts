import { hasReturned, RETURN_LENGTHS } from '../alert/returned.js';
import type { Bins } from '../judge/bins.js';
import { judgeWindow, type Tested } from '../judge/judgeWindow.js';
import { total } from '../judge/counts.js';
import type { Material } from '../judge/material.js';
import { recipeFor } from '../judge/recipe.js';
import { FEWEST_WINDOWS, type Reference } from '../judge/reference.js';
import type { Alarm, StrandMemory } from '../terms/recipe.js';
import type { Counts, StrandKey } from '../terms/tally.js';
import type { Window } from '../terms/window.js';
import type { Past } from './past.js';
import type { MixPlan } from './plan.js';

/** One strand's window, about to be judged. */
export interface Subject {
  readonly plan: MixPlan;
  readonly strand: StrandKey;
  readonly window: Window;
  /** On-time counts, categories in code-point order. */
  readonly counts: Counts;
  readonly memory: StrandMemory;
}

/** A test made, with what it takes to look for the start of a shift. */
export interface Test {
  readonly tested: Tested;
  readonly bins: Bins;
  readonly reference: Reference;
}

export type Finding =
  | { readonly kind: 'silent' | 'thin' | 'learning' | 'untestable'; readonly reason: string }
  | { readonly kind: 'tested'; readonly test: Test };

/** What looking at one window found, before the family decides. */
export interface Examined {
  readonly subject: Subject;
  /** The memory with its recipe and last events brought up to this window. */
  readonly memory: StrandMemory;
  readonly finding: Finding;
  /** The test against the windows since the raise; only for a strand long enough in alarm. */
  readonly again: Test | null;
  /** The alarm ends with this window. */
  readonly ends: 'returned' | 'settled' | null;
  /** The mix is back where it was before a shift that had settled. */
  readonly backToFormer: boolean;
}

/** p above this against the former reference: the window looks like the former mix. */
const LOG_ALIKE = Math.log(0.05);

/** Reads what is needed of the past and tests the window; decides nothing about alerts. */
export async function examine(subject: Subject, past: Past): Promise<Examined> {
  const { window, counts } = subject;
  const lastMs = total(counts) > 0 ? window.endMs : subject.memory.lastMs;
  const memory = { ...subject.memory, lastMs };
  return memory.alarm === null
    ? examineAtRest({ ...subject, memory }, past)
    : examineInAlarm({ ...subject, memory }, memory.alarm, past);
}

async function examineAtRest(subject: Subject, past: Past): Promise<Examined> {
  const { plan, window, memory } = subject;
  const recipe = recipeFor(plan.mix, plan.calendar, window, memory, memory.recipe);
  const finding = await find(subject, () =>
    past.material(plan, subject.strand, window, { recipe, untilMs: window.startMs }),
  );
  return {
    subject,
    memory: { ...memory, recipe },
    finding,
    again: null,
    ends: null,
    backToFormer: await isBackToFormer(subject, finding, past),
  };
}

async function examineInAlarm(subject: Subject, alarm: Alarm, past: Past): Promise<Examined> {
  const { plan, strand, window, memory, counts } = subject;
  const finding = await find(subject, () =>
    past.material(plan, strand, window, { recipe: alarm.recipe, untilMs: alarm.startMs }),
  );
  const after = await past.run(plan, strand, alarm.endMs, window, longest());
  const returned = hasReturned(alarm, after);
  const settled = !returned && (await settles(subject, alarm, past));
  const ends = returned ? 'returned' : settled ? 'settled' : null;
  // The windows since the raise lie in other slots of a season: the cycle itself would move.
  const comparable = plan.mix.yardstick.kind !== 'season';
  const away = looksMoved(finding) && !hasReturned(alarm, [counts], [1]);
  const movesOn = ends === null && comparable && away;
  const again = movesOn ? await testAgain(subject, alarm, past) : null;
  return { subject, memory, finding, again, ends, backToFormer: false };
}

/** A window that agrees with the former reference is a recovery, not another move. */
function looksMoved(finding: Finding): boolean {
  return finding.kind === 'tested' && finding.test.tested.evidence.logP <= LOG_ALIKE;
}

async function testAgain(subject: Subject, alarm: Alarm, past: Past): Promise<Test | null> {
  const { plan, strand, window } = subject;
  const finding = await find(subject, () => past.materialSince(plan, strand, alarm.endMs, window));
  return finding.kind === 'tested' ? finding.test : null;
}

/**
 * A rolling reference takes a lasting shift over; a pinned or declared one never by itself. Silence
 * is not lasting: the new mix must have the windows that make a reference.
 */
async function settles(subject: Subject, alarm: Alarm, past: Past): Promise<boolean> {
  const { plan, strand, window } = subject;
  const { kind } = plan.mix.yardstick;
  const moves = kind === 'rolling' || kind === 'previous' || kind === 'season';
  if (!moves || window.endMs - alarm.endMs < plan.settleMs) return false;
  const since = await past.windows(plan, strand, alarm.startMs, window.endMs);
  const full = since.filter(({ counts }) => total(counts) >= plan.mix.limits.minEvents);
  return full.length >= FEWEST_WINDOWS;
}

/**
 * Either the run of windows shows the return, or a single window that would otherwise be called a
 * shift already lies where the former mix was.
 */
async function isBackToFormer(subject: Subject, finding: Finding, past: Past): Promise<boolean> {
  const { plan, strand, window, memory, counts } = subject;
  const { former } = memory;
  if (former === null) return false;
  const after = await past.run(plan, strand, former.alarm.endMs, window, longest());
  if (hasReturned(former.alarm, after)) return true;
  return looksMoved(finding) && hasReturned(former.alarm, [counts], [1]);
}

function longest(): number {
  return Math.max(...RETURN_LENGTHS);
}

/** Reads the past only for a window that can be tested at all. */
async function find(subject: Subject, material: () => Promise<Material>): Promise<Finding> {
  const { counts, window, plan } = subject;
  const { mix } = plan;
  const events = total(counts);
  if (events === 0) return { kind: 'silent', reason: 'no events' };
  if (events < mix.limits.minEvents) {
    const least = String(mix.limits.minEvents);
    return { kind: 'thin', reason: `${String(events)} events, fewer than the ${least} needed` };
  }
  if (mix.yardstick.kind === 'pinned' && window.startMs < mix.yardstick.toMs) {
    return { kind: 'learning', reason: 'the span of the pinned baseline is not over' };
  }
  return testOn(subject, await material());
}

function testOn(subject: Subject, material: Material): Finding {
  const { counts, plan } = subject;
  if (total(material.before) === 0) {
    return { kind: 'learning', reason: 'no past windows to hold it against yet' };
  }
  const bins = material.bins(counts);
  if (bins.names.length < 2) return withoutTable(counts, material);
  const reference = material.reference(bins);
  if ('learning' in reference) return { kind: 'learning', reason: reference.learning };
  const { before, declared } = material;
  const { tolerance } = plan.mix;
  const tested = judgeWindow({ counts, before, declared, bins, reference, tolerance });
  return { kind: 'tested', test: { tested, bins, reference } };
}

function withoutTable(counts: Counts, { before }: Material): Finding {
  const categories = new Set([...counts.keys(), ...before.keys()]);
  return categories.size < 2
    ? { kind: 'untestable', reason: 'all events fall into one category, before and now' }
    : { kind: 'thin', reason: 'too few events outside the largest category for a test' };
}
