import { SINCE_WINDOWS, sinceWhen, type SinceInput } from '../alert/since.js';
import { binCounts } from '../judge/bins.js';
import { total } from '../judge/counts.js';
import type { WindowCounts } from '../judge/reference.js';
import type { Since } from '../terms/alert.js';
import type { StrandMemory } from '../terms/recipe.js';
import type { Window } from '../terms/window.js';
import { familyTest } from './conclude.js';
import type { Examined, Test } from './examine.js';
import type { Past } from './past.js';

/** Looks for the start of a shift in the strand's last windows, back to its last alarm's end. */
export async function findSince(examined: Examined, past: Past): Promise<Since> {
  const { plan, strand, window } = examined.subject;
  const test = familyTest(examined);
  if (test === null) throw new RangeError('only a tested window has a start to look for');
  const first = firstWindow(examined, test);
  const found = await past.windows(plan, strand, first.startMs, window.endMs);
  const windows = found.filter((w) => total(w.counts) > 0);
  const { shares, weight, rho, note } = test.reference;
  const seasonal = note.yardstick === 'season' && note.provisional === null;
  return sinceWhen({
    windows: seasonal
      ? await inOneSlot(examined, test, past, windows)
      : windows.map((w) => asObserved(examined, test, w)),
    shares,
    weight,
    rho,
  });
}

/**
 * What differs from a reference of neighbouring windows began in it or after it; what was before
 * is another matter. Those of a season lie cycles apart and say nothing of the kind.
 */
function firstWindow({ subject, memory }: Examined, { reference }: Test): Window {
  const { fromMs, yardstick, provisional } = reference.note;
  const near = yardstick === 'baseline' || yardstick === 'previous' || provisional !== null;
  const referenceStartMs = near ? (fromMs ?? -Infinity) : -Infinity;
  const earliestMs = Math.max(memory.alarm?.endMs ?? lastEndMs(memory), referenceStartMs);
  const { calendar } = subject.plan;
  let first = subject.window;
  for (let at = 1; at < SINCE_WINDOWS; at++) {
    const before = calendar.previous(first);
    if (before.startMs < earliestMs) break;
    first = before;
  }
  return first;
}

/** End of the strand's last alarm, or the beginning of its present mix. */
function lastEndMs(memory: StrandMemory): number {
  return Math.max(memory.epochMs, ...memory.excluded.map((span) => span.toMs));
}

type SinceWindow = SinceInput['windows'][number];

function asObserved(
  { subject }: Examined,
  test: Test,
  { window, counts }: WindowCounts,
): SinceWindow {
  const { fromMs, toMs } = test.reference.note;
  const inside =
    fromMs !== null && toMs !== null && window.startMs >= fromMs && window.endMs <= toMs;
  return {
    window,
    counts: binCounts(counts, test.bins),
    inReference: inside && total(counts) >= subject.plan.mix.limits.minEvents,
  };
}

/**
 * Windows of other slots as they would look in the slot of the shift: each share divided by its
 * usual one there and multiplied by the usual one here, so that the pattern of the cycle drops
 * out. (Own; not simulated.) Windows whose slot has no reference yet are left out.
 */
async function inOneSlot(
  { subject, memory }: Examined,
  test: Test,
  past: Past,
  windows: readonly WindowCounts[],
): Promise<SinceWindow[]> {
  const { plan, strand } = subject;
  const { recipe } = memory;
  if (recipe === null) throw new RangeError('a seasonal reference has a recipe');
  const found: SinceWindow[] = [];
  for (const { window, counts } of windows) {
    const there = await past.slot(plan, strand, window, recipe);
    if (there === null) continue;
    const usual = binCounts(there, test.bins);
    found.push({
      window,
      counts: translated(binCounts(counts, test.bins), usual, test),
      inReference: false,
    });
  }
  return found;
}

function translated(counts: readonly number[], usual: readonly number[], test: Test): number[] {
  const { shares, note } = test.reference;
  const whole = note.events ?? 0;
  // Half an event in every bin keeps a bin that is empty there or here from being 0 or infinite.
  const moved = counts.map(
    (n, k) => (n * (whole * (shares[k] ?? 0) + 0.5)) / ((usual[k] ?? 0) + 0.5),
  );
  const events = counts.reduce((a, b) => a + b, 0);
  const sum = moved.reduce((a, b) => a + b, 0);
  return moved.map((n) => (sum === 0 ? 0 : (n * events) / sum));
}
