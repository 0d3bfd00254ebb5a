import type { Config } from '../config/types.js';
import { planMixes } from '../schedule/plan.js';
import type { Store } from '../store/store.js';
import type { Batch } from '../terms/round.js';

const WEEK_MS = 604_800_000;

/**
 * The false alarms that the last judged week may have cost, kept as rounds are judged: a week of
 * short windows holds too many batches to read them for every look at the metrics.
 */
export class Spending {
  private readonly acceptedPerWeek: number;
  /** Spent by instant, in the order of judging. */
  private readonly spent = new Map<number, number>();
  private untilMs = Number.MIN_SAFE_INTEGER;

  private constructor(config: Config) {
    const shares = new Set(planMixes(config).map((plan) => plan.share));
    this.acceptedPerWeek = [...shares].reduce((sum, share) => sum + share.perWeek, 0);
  }

  /** Reads what the stored rounds of the last week have spent. */
  static async load(config: Config, store: Pick<Store, 'judgedTo' | 'batches'>): Promise<Spending> {
    const spending = new Spending(config);
    const judgedMs = [...(await store.judgedTo()).values()];
    if (judgedMs.length === 0) return spending;
    for await (const batch of store.batches(Math.max(...judgedMs) - WEEK_MS)) spending.add(batch);
    return spending;
  }

  add({ endMs, families }: Batch): void {
    const spent = families.reduce((sum, family) => sum + family.spent, 0);
    this.spent.set(endMs, (this.spent.get(endMs) ?? 0) + spent);
    this.untilMs = Math.max(this.untilMs, endMs);
    for (const oldMs of this.spent.keys()) {
      if (oldMs >= this.untilMs - WEEK_MS) break;
      this.spent.delete(oldMs);
    }
  }

  /** Spent over accepted; null before the first round. */
  ratio(): number | null {
    if (this.spent.size === 0) return null;
    let sum = 0;
    for (const [endMs, spent] of this.spent) if (endMs >= this.untilMs - WEEK_MS) sum += spent;
    return sum / this.acceptedPerWeek;
  }
}
