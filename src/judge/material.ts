import { REST } from '../config/strand.js';
import { merge, total } from './counts.js';
import { FEWEST_CYCLES, slotAt, slotsOf } from './season.js';
import type { Calendar } from '../clock/calendar.js';
import type { MixConfig } from '../config/types.js';
import type { Recipe } from '../terms/recipe.js';
import type { Counts } from '../terms/tally.js';
import type { Window } from '../terms/window.js';
import type { Bins } from './bins.js';
import { binsByMargins, binsByShares, binsKey } from './bins.js';
import type { Learning, Reference, WindowCounts } from './reference.js';
import {
  baselineReference,
  declaredReference,
  fileReference,
  previousReference,
  seasonReference,
} from './reference.js';

/** What a window will be held against, before its bins are known. */
export interface Material {
  /** Counts of the reference by category, or the declared shares. */
  readonly before: Counts;
  readonly declared: boolean;
  bins(now: Counts): Bins;
  reference(bins: Bins): Reference | Learning;
}

/** Windows of the recipe that may serve: whole, inside it, outside alarms, not thin. */
export function usable(
  windows: readonly WindowCounts[],
  recipe: Recipe,
  minEvents: number,
): WindowCounts[] {
  return windows.filter(
    ({ window, counts }) =>
      window.startMs >= recipe.fromMs &&
      window.endMs <= recipe.toMs &&
      !recipe.excluded.some((e) => window.startMs < e.toMs && window.endMs > e.fromMs) &&
      total(counts) >= minEvents,
  );
}

/**
 * Makes the yardstick of a mix for one window from its usable past windows, in time order.
 * `recent` are those just before it, for a season that has no cycles yet (`lacksCycles`).
 * Pure: the same windows give the same material.
 */
export function materialFor(
  mix: MixConfig,
  calendar: Calendar,
  window: Window,
  past: readonly WindowCounts[],
  recent: readonly WindowCounts[] = past,
): Material {
  const { yardstick } = mix;
  switch (yardstick.kind) {
    case 'declared':
      return declared(mix, yardstick, past);
    case 'rolling':
    case 'pinned':
      return sampled(mix, merge(past), (bins) => baselineReference(past, bins));
    case 'file': {
      const before = merge(yardstick.windows.map((counts) => ({ counts })));
      const asWindows = yardstick.windows.map((counts) => ({ window: NOWHERE, counts }));
      return sampled(mix, before, (bins) =>
        yardstick.windowed ? fromFile(asWindows, bins) : fileReference(before, past, bins),
      );
    }
    case 'previous':
      return previous(mix, past, yardstick.windows, null);
    case 'season':
      return season(mix, calendar, window, { past, recent });
  }
}

/** The windows since a shift began, as a baseline of their own. */
export function materialSince(mix: MixConfig, past: readonly WindowCounts[]): Material {
  return sampled(mix, merge(past), (bins) => baselineReference(past, bins));
}

/** Windows of a counts file have no place on the time axis. */
const NOWHERE: Window = { startMs: 0, endMs: 0 };

function fromFile(windows: readonly WindowCounts[], bins: Bins): Reference | Learning {
  const found = baselineReference(windows, bins);
  if ('learning' in found) return found;
  return { ...found, note: { ...found.note, fromMs: null, toMs: null } };
}

function declared(
  mix: MixConfig,
  yardstick: Extract<MixConfig['yardstick'], { kind: 'declared' }>,
  past: readonly WindowCounts[],
): Material {
  const shares = declaredShares(yardstick);
  return remembering({
    before: shares,
    declared: true,
    bins: (now) => binsByShares(now, shares, optionsOf(mix)),
    reference: (bins) => declaredReference(shares, past, bins),
  });
}

/**
 * What the declaration leaves out is `(rest)`. Where no share is declared for it, it may hold half
 * a unit of the last digit written: the declaration cannot tell less than that from nothing.
 */
function declaredShares(
  yardstick: Extract<MixConfig['yardstick'], { kind: 'declared' }>,
): ReadonlyMap<string, number> {
  const shares = new Map(yardstick.shares.map((s) => [s.category, s.share]));
  if (shares.has(REST)) return shares;
  const scale = 1 / (1 + yardstick.halfUnit);
  const scaled = new Map([...shares].map(([category, share]) => [category, share * scale]));
  return scaled.set(REST, yardstick.halfUnit * scale);
}

function previous(
  mix: MixConfig,
  past: readonly WindowCounts[],
  n: number,
  provisional: string | null,
): Material {
  const before = past.slice(-n);
  const yardstick = mix.yardstick.kind === 'season' ? 'season' : 'previous';
  return sampled(mix, merge(before), (bins) =>
    before.length < n
      ? { learning: `${String(before.length)} of ${String(n)} previous windows so far` }
      : previousReference(before, past, bins, { yardstick, provisional }),
  );
}

function season(
  mix: MixConfig,
  calendar: Calendar,
  window: Window,
  sides: { readonly past: readonly WindowCounts[]; readonly recent: readonly WindowCounts[] },
): Material {
  const slots = slotsOf(mix, calendar, sides.past);
  const own = slots.get(slotAt(mix, calendar, window)) ?? [];
  if (own.length < FEWEST_CYCLES) {
    const why = 'fewer than two earlier cycles; held against the window before';
    return previous(mix, sides.recent, 1, why);
  }
  return sampled(mix, merge(own), (bins) => seasonReference(own, [...slots.values()], bins));
}

function sampled(
  mix: MixConfig,
  before: Counts,
  reference: (bins: Bins) => Reference | Learning,
): Material {
  return remembering({
    before,
    declared: false,
    bins: (now) => binsByMargins(now, before, optionsOf(mix)),
    reference,
  });
}

/** Most ways of gathering whose reference is remembered: neighbouring windows share one or two. */
const REMEMBERED = 4;

/** Working out a reference again for the same bins gives the same, so it is done once. */
function remembering(material: Material): Material {
  const known = new Map<string, Reference | Learning>();
  return {
    ...material,
    reference: (bins) => {
      const key = binsKey(bins);
      const found = known.get(key) ?? material.reference(bins);
      if (known.size >= REMEMBERED) known.clear();
      known.set(key, found);
      return found;
    },
  };
}

function optionsOf(mix: MixConfig): {
  ordered: readonly string[] | null;
  categoriesJudged: number;
  pooling: true;
} {
  return { ordered: mix.ordered, categoriesJudged: mix.limits.categoriesJudged, pooling: true };
}
