import type { MixConfig } from '../config/types.js';
import { type Material, materialFor, materialSince, usable } from '../judge/material.js';
import { neighbourReach } from '../judge/recipe.js';
import type { WindowCounts } from '../judge/reference.js';
import { lacksCycles } from '../judge/season.js';
import type { Store } from '../store/store.js';
import type { Recipe } from '../terms/recipe.js';
import type { Counts, StrandKey, Tally } from '../terms/tally.js';
import type { Window } from '../terms/window.js';
import type { MixPlan } from './plan.js';

/** Windows held in memory over all strands; beyond it the longest unused are read again. */
const MOST_WINDOWS = 200_000;

interface Entry {
  readonly key: string;
  readonly past: readonly WindowCounts[];
  /** Kept where one material serves every window of the step. */
  material: Material | null;
}

/** Reads the past of strands from stored tallies, and remembers what a whole step shares. */
export class Past {
  private readonly store: Pick<Store, 'strandTallies'>;
  private readonly entries = new Map<string, Entry>();
  private held = 0;

  constructor(store: Pick<Store, 'strandTallies'>) {
    this.store = store;
  }

  /**
   * The windows of a strand with events on time, that begin in [fromMs, toMs), in order. Windows
   * of another length, from before the configuration was changed, are left out.
   */
  async windows(
    { mix, calendar }: MixPlan,
    strand: StrandKey,
    fromMs: number,
    toMs: number,
  ): Promise<WindowCounts[]> {
    const tallies = await this.store.strandTallies(mix.name, strand, fromMs, toMs);
    return tallies
      .filter(({ window }) => calendar.windowAt(window.startMs).endMs === window.endMs)
      .map((tally) => ({ window: tally.window, counts: onTime(tally) }))
      .filter(({ counts }) => counts.size > 0);
  }

  /**
   * What a window of the strand is held against by the recipe. `untilMs`: where the window before
   * has to stand in for a cycle, it ends here at the latest.
   */
  async material(
    plan: MixPlan,
    strand: StrandKey,
    window: Window,
    { recipe, untilMs }: { readonly recipe: Recipe; readonly untilMs: number },
  ): Promise<Material> {
    const { mix, calendar } = plan;
    const entry = await this.entry(plan, strand, recipe);
    if (!servesAStep(mix)) {
      return this.made(plan, strand, window, { recipe, untilMs }, entry.past);
    }
    entry.material ??= materialFor(mix, calendar, window, entry.past);
    return entry.material;
  }

  /** Usual counts of a window's slot in a season; null where it has no reference of its own. */
  async slot(
    plan: MixPlan,
    strand: StrandKey,
    window: Window,
    recipe: Recipe,
  ): Promise<Counts | null> {
    const { mix, calendar } = plan;
    const { past } = await this.entry(plan, strand, recipe);
    if (lacksCycles(mix, calendar, window, past)) return null;
    return materialFor(mix, calendar, window, past).before;
  }

  /** The windows since a shift was raised, up to a window, as a reference of their own. */
  async materialSince(
    plan: MixPlan,
    strand: StrandKey,
    fromMs: number,
    window: Window,
  ): Promise<Material> {
    const windows = await this.windows(plan, strand, fromMs, window.startMs);
    const recipe = { step: 0, fromMs, toMs: window.startMs, excluded: [] };
    return materialSince(plan.mix, usable(windows, recipe, plan.mix.limits.minEvents));
  }

  /** Counts of the last `most` windows that begin at or after fromMs, silent ones as empty. */
  async run(
    plan: MixPlan,
    strand: StrandKey,
    fromMs: number,
    last: Window,
    most: number,
  ): Promise<Counts[]> {
    const places: Window[] = [];
    for (let w = last; w.startMs >= fromMs && places.length < most; w = plan.calendar.previous(w)) {
      places.push(w);
    }
    const first = places.at(-1);
    if (first === undefined) return [];
    const found = await this.windows(plan, strand, first.startMs, last.endMs);
    const byStart = new Map(found.map((w) => [w.window.startMs, w.counts]));
    return places.reverse().map((w) => byStart.get(w.startMs) ?? NOTHING);
  }

  /** A season's recipe stands still for days: what lies between it and the window is read here. */
  private async made(
    plan: MixPlan,
    strand: StrandKey,
    window: Window,
    { recipe, untilMs }: { readonly recipe: Recipe; readonly untilMs: number },
    past: readonly WindowCounts[],
  ): Promise<Material> {
    const { mix, calendar } = plan;
    if (!lacksCycles(mix, calendar, window, past)) return materialFor(mix, calendar, window, past);
    const fromMs = Math.max(recipe.fromMs, untilMs - neighbourReach(calendar, 1));
    const windows = await this.windows(plan, strand, fromMs, untilMs);
    const recent = usable(windows, { ...recipe, fromMs, toMs: untilMs }, mix.limits.minEvents);
    return materialFor(mix, calendar, window, past, recent);
  }

  private async entry(plan: MixPlan, strand: StrandKey, recipe: Recipe): Promise<Entry> {
    const place = JSON.stringify([plan.mix.name, strand]);
    const key = JSON.stringify(recipe);
    const known = this.entries.get(place);
    if (known?.key === key) {
      this.entries.delete(place);
      this.entries.set(place, known);
      return known;
    }
    const windows = await this.windows(plan, strand, recipe.fromMs, recipe.toMs);
    const past = usable(windows, recipe, plan.mix.limits.minEvents);
    const entry = { key, past, material: null };
    this.remember(place, entry);
    return entry;
  }

  private remember(place: string, entry: Entry): void {
    this.forget(place);
    this.entries.set(place, entry);
    this.held += entry.past.length;
    for (const oldest of this.entries.keys()) {
      if (this.held <= MOST_WINDOWS || oldest === place) break;
      this.forget(oldest);
    }
  }

  private forget(place: string): void {
    this.held -= this.entries.get(place)?.past.length ?? 0;
    this.entries.delete(place);
  }
}

const NOTHING: Counts = new Map();

/** A tally's on-time counts, categories in code-point order, so that sums never depend on luck. */
export function onTime(tally: Tally): Counts {
  const pairs = [...tally.counts]
    .map(([category, count]): [string, number] => [category, count.onTime])
    .filter(([, n]) => n > 0);
  return new Map(pairs.sort(([a], [b]) => (a < b ? -1 : 1)));
}

function servesAStep(mix: MixConfig): boolean {
  return mix.yardstick.kind === 'rolling' || mix.yardstick.kind === 'pinned';
}
