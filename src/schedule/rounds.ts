import type { BudgetShare } from '../alert/budget.js';
import type { Clock } from '../clock/clock.js';
import type { Config } from '../config/types.js';
import type { Store } from '../store/store.js';
import type { Batch, FamilyNote, RoundCommit } from '../terms/round.js';
import type { Counts, StrandKey } from '../terms/tally.js';
import type { Window } from '../terms/window.js';
import { type BatchInput, judgeBatch } from './batch.js';
import { onTime, Past } from './past.js';
import { type MixPlan, planMixes } from './plan.js';
import { Strands } from './strands.js';

/** Event time up to which a collector is complete; null while that is unknown. */
export type WatermarkOf = (collector: string) => number | null;

export interface RoundsOptions {
  readonly config: Config;
  readonly store: Store;
  /** Real time: only for how fresh an alert is, never for a verdict. */
  readonly clock: Clock;
  readonly version: string;
  /** Lets other work of the process have its turn. */
  readonly breathe: () => Promise<void>;
}

/** Before any event time. */
const BEGINNING_MS = Number.MIN_SAFE_INTEGER;

/** A mix whose next window is known. */
interface Due {
  readonly plan: MixPlan;
  readonly window: Window;
}

/**
 * Judges closed windows, oldest instant first. Live running, catching up after downtime and
 * rehearsing are all this one class: it asks how far collectors have come, never what time it is.
 */
export class Rounds {
  private readonly options: RoundsOptions;
  private readonly plans: readonly MixPlan[];
  private readonly shares: readonly BudgetShare[];
  private readonly past: Past;
  private readonly strands: Strands;
  private readonly judged: Map<string, number>;

  private constructor(
    options: RoundsOptions,
    loaded: { strands: Strands; judged: Map<string, number> },
  ) {
    this.options = options;
    this.plans = planMixes(options.config);
    this.shares = [...new Set(this.plans.map((plan) => plan.share))];
    this.past = new Past(options.store);
    this.strands = loaded.strands;
    this.judged = loaded.judged;
  }

  /** Reads the state that the last committed round left. */
  static async load(options: RoundsOptions): Promise<Rounds> {
    const { store, config } = options;
    await store.keepConfig(config.digest, config.text);
    const alerts = await store.alerts({ open: true });
    const strands = new Strands(await store.strandStates(), alerts);
    return new Rounds(options, { strands, judged: new Map(await store.judgedTo()) });
  }

  /** End of the last judged window of a mix; -Infinity before the first. */
  judgedTo(mix: string): number {
    return this.judged.get(mix) ?? -Infinity;
  }

  /**
   * Judges and commits the next batch that is complete; null when none is. With `whole`, an
   * instant waits until every mix with a window that ends there is complete: one batch a round.
   */
  async next(
    watermarkOf: WatermarkOf,
    options: { readonly whole: boolean } = { whole: false },
  ): Promise<RoundCommit | null> {
    const due = await this.due();
    const isReady = ({ plan, window }: Due): boolean =>
      window.endMs + plan.mix.latenessMs <= (watermarkOf(plan.mix.from) ?? -Infinity);
    const ready = options.whole ? due : due.filter(isReady);
    const endMs = Math.min(...ready.map(({ window }) => window.endMs));
    const members = ready.filter(({ window }) => window.endMs === endMs);
    if (members.length === 0) return null;
    if (options.whole && !this.allComplete(endMs, watermarkOf)) return null;
    return this.judge(endMs, members);
  }

  private allComplete(endMs: number, watermarkOf: WatermarkOf): boolean {
    return this.plans.every(
      ({ mix }) => endMs + mix.latenessMs <= (watermarkOf(mix.from) ?? -Infinity),
    );
  }

  /**
   * Judges exactly the mixes that a stored batch names, at its instant. Where it notes how many
   * strands were expected then, that is obeyed: batches are stored by instant, and mixes of
   * another lateness may have been judged in another order.
   */
  async replay(batch: Batch): Promise<RoundCommit | null> {
    const named = new Set(batch.mixes);
    const members = (await this.due()).filter(
      ({ plan, window }) => named.has(plan.mix.name) && window.endMs === batch.endMs,
    );
    return members.length === 0 ? null : this.judge(batch.endMs, members, batch.families);
  }

  /** The next window of every mix that has one. */
  private async due(): Promise<Due[]> {
    const due: Due[] = [];
    for (const plan of this.plans) {
      const window = await this.nextWindow(plan);
      if (window !== null) due.push({ plan, window });
    }
    return due;
  }

  /** The window after the last judged one; where no strand is alive, the next with events. */
  private async nextWindow(plan: MixPlan): Promise<Window | null> {
    const { name } = plan.mix;
    const judgedTo = Math.max(BEGINNING_MS, this.judgedTo(name));
    if (this.strands.alive(name) > 0) return plan.calendar.windowAt(judgedTo);
    const found = await this.options.store.nextWindow(name, judgedTo);
    // What was counted in windows of another length, before a change, has none of its own.
    return found === null ? null : plan.calendar.windowAt(found.startMs);
  }

  private async judge(
    endMs: number,
    members: readonly Due[],
    noted: readonly FamilyNote[] = [],
  ): Promise<RoundCommit> {
    const earlier = await this.earlier(endMs);
    const input = await this.batchInput(endMs, members, earlier);
    const round = await judgeBatch({ ...input, ...this.asNoted(input, noted) });
    await this.options.store.commitRound(round);
    this.strands.apply(round);
    for (const { plan } of members) this.judged.set(plan.mix.name, endMs);
    return round;
  }

  /**
   * The instant's batches so far: their tests count in its family. Later instants may have been
   * judged since, where mixes differ in lateness or collectors in speed.
   */
  private async earlier(endMs: number): Promise<Batch[]> {
    const found: Batch[] = [];
    for await (const batch of this.options.store.batches(endMs)) {
      if (batch.endMs > endMs) break;
      found.push(batch);
    }
    return found;
  }

  private asNoted(
    input: BatchInput,
    noted: readonly FamilyNote[],
  ): Pick<BatchInput, 'elsewhere' | 'active'> {
    const elsewhere = new Map(input.elsewhere);
    const active = new Map(input.active);
    for (const { budget, expected, tested } of noted) {
      elsewhere.set(budget, expected - tested);
      active.set(budget, expected);
    }
    return { elsewhere, active };
  }

  private async batchInput(
    endMs: number,
    members: readonly Due[],
    earlier: readonly Batch[],
  ): Promise<BatchInput> {
    const { options, past, shares } = this;
    const gathered = [];
    for (const { plan, window } of members) {
      const tallies = await this.tallies(plan.mix.name, window);
      gathered.push(this.strands.subjects(plan, window, tallies));
    }
    const forgotten = gathered.flatMap((one) => one.forgotten);
    return {
      endMs,
      number: earlier.length,
      mixes: members.map(({ plan }) => plan.mix.name),
      subjects: gathered.flatMap((one) => one.subjects),
      forgotten: forgotten.map(({ mix, strand }) => ({ mix, strand })),
      closed: forgotten.flatMap(({ closed }) => (closed === null ? [] : [closed])),
      shares,
      elsewhere: this.perShare((share) => this.elsewhere(share, endMs, members, earlier)),
      active: this.perShare((share) => this.alive(share)),
      judgeableMs: new Map(members.map(({ plan: { mix } }) => [mix.name, endMs + mix.latenessMs])),
      alerts: this.strands.alerts(),
      past,
      nowMs: options.clock.nowMs(),
      senders: options.config.send,
      configDigest: options.config.digest,
      version: options.version,
      breathe: options.breathe,
    };
  }

  private async tallies(mix: string, window: Window): Promise<Map<StrandKey, Counts>> {
    const tallies = await this.options.store.windowTallies(mix, window.startMs);
    const counts = tallies
      .filter((tally) => tally.window.endMs === window.endMs)
      .map((tally): [StrandKey, Counts] => [tally.strand, onTime(tally)]);
    return new Map(counts.filter(([, categories]) => categories.size > 0));
  }

  /** Tests of the instant's earlier batches, and strands of mixes whose window is still to come. */
  private elsewhere(
    share: BudgetShare,
    endMs: number,
    members: readonly Due[],
    earlier: readonly Batch[],
  ): number {
    const tested = earlier
      .flatMap((batch) => batch.families)
      .filter((family) => family.budget === share.budget)
      .reduce((sum, family) => sum + family.tested, 0);
    const here = new Set(members.map(({ plan }) => plan.mix.name));
    const coming = this.plans
      .filter(({ mix }) => share.roundsPerWeek.has(mix.name) && !here.has(mix.name))
      .filter((plan) => this.judgedTo(plan.mix.name) < endMs)
      .filter(({ calendar }) => calendar.windowAt(endMs - 1).endMs === endMs)
      .reduce((sum, { mix }) => sum + this.strands.alive(mix.name), 0);
    return tested + coming;
  }

  private alive(share: BudgetShare): number {
    return [...share.roundsPerWeek.keys()].reduce((sum, mix) => sum + this.strands.alive(mix), 0);
  }

  private perShare(count: (share: BudgetShare) => number): Map<string, number> {
    return new Map(this.shares.map((share) => [share.budget, count(share)]));
  }
}
