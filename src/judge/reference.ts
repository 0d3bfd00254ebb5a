import { designWeight } from '../stats/designWeight.js';
import { dispersionOfSlots } from '../stats/dispersionOfSlots.js';
import { dispersionOfSuccessive, type SuccessivePair } from '../stats/dispersionOfSuccessive.js';
import { estimateDispersion } from '../stats/estimateDispersion.js';
import type { ReferenceNote } from '../terms/evidence.js';
import type { Counts } from '../terms/tally.js';
import type { Window } from '../terms/window.js';
import type { Bins } from './bins.js';
import { binCounts } from './bins.js';

/** Fewest windows, or pairs of windows, from which dispersion is learned. */
export const FEWEST_WINDOWS = 8;
/** Fewest degrees of freedom behind the dispersion with which a window may be judged. */
const FEWEST_DF2 = 20;
/** Pairs of neighbouring windows that a dispersion by successive differences looks at. */
export const PAIRS = 96;

/** A window's on-time counts. */
export interface WindowCounts {
  readonly window: Window;
  readonly counts: Counts;
}

/** What a window is held against, gathered into the bins of its table. */
export interface Reference {
  readonly shares: readonly number[];
  /** Effective events W; Infinity for declared shares. */
  readonly weight: number;
  readonly rho: number;
  readonly df2: number;
  readonly note: ReferenceNote;
}

/** Why a window cannot be judged yet, in plain words. */
export interface Learning {
  readonly learning: string;
}

type Yardstick = ReferenceNote['yardstick'];

/** Past windows of the strand, pinned or rolling: their dispersion is the spread among them. */
export function baselineReference(
  windows: readonly WindowCounts[],
  bins: Bins,
): Reference | Learning {
  if (windows.length < FEWEST_WINDOWS) return tooFew(windows.length, 'windows in the baseline');
  const table = windows.map((w) => binCounts(w.counts, bins));
  const spread = estimateDispersion(table);
  return enough({
    shares: spread.shares,
    weight: spread.weight,
    rho: spread.rho,
    df2: spread.df2,
    note: noteOf('baseline', windows, null),
  });
}

/** Counts from a file that names no windows: dispersion comes from the strand's own windows. */
export function fileReference(
  counts: Counts,
  recent: readonly WindowCounts[],
  bins: Bins,
): Reference | Learning {
  const dispersion = fromNeighbours(recent, 1, bins);
  if ('learning' in dispersion) return dispersion;
  const before = binCounts(counts, bins);
  const events = sum(before);
  return enough({
    shares: before.map((n) => n / events),
    weight: designWeight(events, dispersion.rho),
    ...dispersion,
    note: {
      yardstick: 'baseline',
      windows: null,
      events,
      fromMs: null,
      toMs: null,
      provisional: null,
    },
  });
}

/** The n windows just before; dispersion by successive differences, which a slow wander passes. */
export function previousReference(
  before: readonly WindowCounts[],
  recent: readonly WindowCounts[],
  bins: Bins,
  as: { readonly yardstick: Yardstick; readonly provisional: string | null },
): Reference | Learning {
  const dispersion = fromNeighbours(recent, before.length, bins);
  if ('learning' in dispersion) return dispersion;
  const weighed = weighedShares(before, bins, dispersion.rho);
  return enough({
    ...weighed,
    ...dispersion,
    note: noteOf(as.yardstick, before, as.provisional),
  });
}

/** The same slot of earlier cycles; dispersion pooled over all slots of the cycle. */
export function seasonReference(
  slot: readonly WindowCounts[],
  slots: readonly (readonly WindowCounts[])[],
  bins: Bins,
): Reference | Learning {
  const pooled = dispersionOfSlots(slots.map((s) => s.map((w) => binCounts(w.counts, bins))));
  return enough({
    ...weighedShares(slot, bins, pooled.rho),
    rho: pooled.rho,
    df2: pooled.df2,
    note: noteOf('season', slot, null),
  });
}

/** Shares that were declared, not sampled: the only ones without an error of their own. */
export function declaredReference(
  shares: ReadonlyMap<string, number>,
  recent: readonly WindowCounts[],
  bins: Bins,
): Reference | Learning {
  const dispersion = fromNeighbours(recent, 1, bins);
  if ('learning' in dispersion) return dispersion;
  return enough({
    shares: bins.members.map((bin) => sum(bin.map((category) => shares.get(category) ?? 0))),
    weight: Infinity,
    ...dispersion,
    note: {
      yardstick: 'declared',
      windows: null,
      events: null,
      fromMs: null,
      toMs: null,
      provisional: null,
    },
  });
}

function fromNeighbours(
  recent: readonly WindowCounts[],
  n: number,
  bins: Bins,
): { rho: number; df2: number } | Learning {
  const pairs = neighbours(recent, n, bins);
  if (pairs.length < FEWEST_WINDOWS) return tooFew(pairs.length, 'pairs of neighbouring windows');
  const found = dispersionOfSuccessive(pairs);
  return found.pairs < FEWEST_WINDOWS
    ? tooFew(found.pairs, 'comparable pairs of neighbouring windows')
    : { rho: found.rho, df2: found.df2 };
}

/** (sum of n windows, the next one), newest PAIRS of them, only where no window is missing. */
function neighbours(recent: readonly WindowCounts[], n: number, bins: Bins): SuccessivePair[] {
  const counts = recent.map((w) => binCounts(w.counts, bins));
  const pairs: SuccessivePair[] = [];
  for (let at = recent.length - 1; at >= n && pairs.length < PAIRS; at--) {
    const after = counts[at];
    if (after === undefined || !isUnbroken(recent.slice(at - n, at + 1))) continue;
    const run = counts.slice(at - n, at);
    const before = run.reduce((total, row) => total.map((v, k) => v + (row[k] ?? 0)));
    pairs.push({ before, sizes: run.map(sum), after });
  }
  return pairs;
}

function isUnbroken(run: readonly WindowCounts[]): boolean {
  return run.every((w, at) => at === 0 || run[at - 1]?.window.endMs === w.window.startMs);
}

function weighedShares(
  windows: readonly WindowCounts[],
  bins: Bins,
  rho: number,
): { shares: number[]; weight: number } {
  let weight = 0;
  const sums = bins.names.map(() => 0);
  for (const w of windows) {
    const counts = binCounts(w.counts, bins);
    const n = sum(counts);
    const per = n === 0 ? 0 : designWeight(n, rho) / n;
    weight += per * n;
    counts.forEach((count, at) => {
      sums[at] = (sums[at] ?? 0) + per * count;
    });
  }
  return { shares: sums.map((s) => s / weight), weight };
}

function enough(reference: Reference): Reference | Learning {
  if (reference.weight <= 0) return { learning: 'the reference holds no events yet' };
  if (reference.df2 >= FEWEST_DF2) return reference;
  return {
    learning:
      `too little history to know how much this mix varies by itself ` +
      `(${format(reference.df2)} of ${String(FEWEST_DF2)} degrees of freedom)`,
  };
}

function tooFew(have: number, what: string): Learning {
  return { learning: `${String(have)} of ${String(FEWEST_WINDOWS)} ${what} so far` };
}

function noteOf(
  yardstick: Yardstick,
  windows: readonly WindowCounts[],
  provisional: string | null,
): ReferenceNote {
  return {
    yardstick,
    windows: windows.length,
    events: sum(windows.map((w) => sum([...w.counts.values()]))),
    fromMs: windows[0]?.window.startMs ?? null,
    toMs: windows.at(-1)?.window.endMs ?? null,
    provisional,
  };
}

function format(n: number): string {
  return Number.isInteger(n) ? String(n) : n.toFixed(1);
}

function sum(numbers: readonly number[]): number {
  return numbers.reduce((total, n) => total + n, 0);
}
