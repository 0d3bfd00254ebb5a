import type { Alert } from '../terms/alert.js';
import type { RoundCommit, StrandState } from '../terms/round.js';
import type { StrandMemory } from '../terms/recipe.js';
import type { Counts, StrandKey } from '../terms/tally.js';
import type { Window } from '../terms/window.js';
import { returned } from '../alert/life.js';
import type { Subject } from './examine.js';
import type { MixPlan } from './plan.js';

/** A strand that has been silent for too long, and the alert that ends with it. */
export interface Forgotten {
  readonly mix: string;
  readonly strand: StrandKey;
  readonly closed: Alert | null;
}

/** What is known of all strands and open alerts: the state that rounds carry forward. */
export class Strands {
  private readonly memories = new Map<string, Map<StrandKey, StrandMemory>>();
  private readonly open = new Map<string, Alert>();

  constructor(states: readonly StrandState[], alerts: readonly Alert[]) {
    for (const { mix, strand, state } of states) this.of(mix).set(strand, state);
    for (const alert of alerts) this.open.set(alert.id, alert);
  }

  alerts(): ReadonlyMap<string, Alert> {
    return this.open;
  }

  /** Strands alive in a mix. */
  alive(mix: string): number {
    return this.of(mix).size;
  }

  /** The strands that a window of the mix concerns, in order of key, and those to be forgotten. */
  subjects(
    plan: MixPlan,
    window: Window,
    tallies: ReadonlyMap<StrandKey, Counts>,
  ): { subjects: Subject[]; forgotten: Forgotten[] } {
    const known = this.of(plan.mix.name);
    const forgotten = [...known]
      .filter(([strand, memory]) => !tallies.has(strand) && isForgotten(plan, window, memory))
      .map(([strand, memory]) => this.forgetting(plan, window, strand, memory));
    const gone = new Set(forgotten.map(({ strand }) => strand));
    const strands = [...new Set([...known.keys(), ...tallies.keys()])]
      .filter((strand) => !gone.has(strand))
      .sort((a, b) => (a < b ? -1 : 1));
    const subjects = strands.map((strand) => ({
      plan,
      strand,
      window,
      counts: tallies.get(strand) ?? NOTHING,
      memory: known.get(strand) ?? firstMemory(window),
    }));
    return { subjects, forgotten };
  }

  /** Takes in what a round has committed. */
  apply(round: RoundCommit): void {
    for (const { mix, strand } of round.forgotten) this.of(mix).delete(strand);
    for (const { mix, strand, state } of round.strands) this.of(mix).set(strand, state);
    for (const alert of round.alerts) {
      if (alert.state === 'normal') this.open.delete(alert.id);
      else this.open.set(alert.id, alert);
    }
  }

  private forgetting(
    plan: MixPlan,
    window: Window,
    strand: StrandKey,
    memory: StrandMemory,
  ): Forgotten {
    const alert = memory.alarm === null ? undefined : this.open.get(memory.alarm.alertId);
    const note = 'the strand fell silent and was forgotten';
    const closed = alert === undefined ? null : returned(alert, window.endMs, note);
    return { mix: plan.mix.name, strand, closed };
  }

  private of(mix: string): Map<StrandKey, StrandMemory> {
    const known = this.memories.get(mix) ?? new Map<StrandKey, StrandMemory>();
    this.memories.set(mix, known);
    return known;
  }
}

const NOTHING: Counts = new Map();

function isForgotten(plan: MixPlan, window: Window, memory: StrandMemory): boolean {
  return window.endMs - memory.lastMs > plan.mix.limits.forgetMs;
}

function firstMemory(window: Window): StrandMemory {
  return {
    epochMs: window.startMs,
    excluded: [],
    firstMs: window.startMs,
    lastMs: window.endMs,
    recipe: null,
    alarm: null,
    former: null,
    returnedAlertId: null,
  };
}
