import { virtualClock } from '../../../src/clock/virtualClock.js';
import type { Config, MixConfig } from '../../../src/config/types.js';
import { Rounds } from '../../../src/schedule/rounds.js';
import { openSqliteStore, type SqliteStore } from '../../../src/store/sqlite/open.js';
import type { Alert } from '../../../src/terms/alert.js';
import type { RoundCommit } from '../../../src/terms/round.js';
import type { StrandKey } from '../../../src/terms/tally.js';
import type { Verdict } from '../../../src/terms/verdict.js';

export const MINUTE = 60_000;
/** An invented midnight in UTC, a Wednesday. */
export const T0 = Date.UTC(2031, 2, 5);

export type Numbers = Readonly<Record<string, number>>;

/** Hand-made counts of an invented mix of 1,000 events a window. */
export const CALM: Numbers = { ok: 900, bad: 80, odd: 20 };
export const SHIFTED: Numbers = { ok: 800, bad: 180, odd: 20 };
export const WORSE: Numbers = { ok: 600, bad: 380, odd: 20 };

/** A mix of one-minute windows against the last hour, with what a test wants changed. */
export function mixOf(changed: Partial<MixConfig> = {}): MixConfig {
  return {
    name: 'outcomes',
    from: 'gateway',
    category: ['outcome'],
    where: [],
    split: [],
    window: { kind: 'sub-day', ms: MINUTE },
    zone: 'UTC',
    latenessMs: 30_000,
    yardstick: { kind: 'rolling', lastMs: 60 * MINUTE },
    tolerance: { moved: 0.01, each: new Map() },
    ordered: null,
    limits: {
      categoriesJudged: 64,
      categoriesStored: 10_000,
      strands: 1_000,
      forgetMs: 24 * MINUTE,
      minEvents: 20,
    },
    settleMs: 24 * MINUTE,
    falseAlarms: null,
    ...changed,
  };
}

export function configOf(mixes: readonly MixConfig[], changed: Partial<Config> = {}): Config {
  return {
    file: 'scene.yaml',
    text: 'scene',
    digest: 'sha256:scene',
    store: ':memory:',
    listen: { host: '127.0.0.1', port: 7417 },
    falseAlarms: { perWeek: 1 },
    collectors: [],
    mixes,
    send: [],
    notes: [],
    ...changed,
  };
}

export interface Place {
  readonly mix?: string;
  readonly strand?: StrandKey;
  readonly lengthMs?: number;
  readonly late?: number;
}

/** A store in memory that tests fill by hand, and the rounds over it. */
export class Scene {
  readonly clock = virtualClock(T0);
  readonly store: SqliteStore;
  readonly config: Config;

  private constructor(store: SqliteStore, config: Config) {
    this.store = store;
    this.config = config;
  }

  static async open(config: Config): Promise<Scene> {
    return new Scene(await openSqliteStore({ path: ':memory:' }), config);
  }

  /** Counts of window number `at` from T0. */
  async put(at: number, numbers: Numbers, place: Place = {}): Promise<void> {
    const lengthMs = place.lengthMs ?? MINUTE;
    const startMs = T0 + at * lengthMs;
    const counts = new Map(
      Object.entries(numbers).map(([category, onTime]) => [
        category,
        { onTime, late: place.late ?? 0 },
      ]),
    );
    const mix = place.mix ?? 'outcomes';
    const strand = place.strand ?? 'all';
    const window = { startMs, endMs: startMs + lengthMs };
    const tallies = [{ mix, strand, window, counts }];
    await this.store.commitCounts({ tallies, partitions: [], rejected: [], accepted: [] });
  }

  /** The same counts in the windows [from, to). */
  async fill(from: number, to: number, numbers: Numbers, place: Place = {}): Promise<void> {
    for (let at = from; at < to; at++) await this.put(at, numbers, place);
  }

  load(): Promise<Rounds> {
    return Rounds.load({
      config: this.config,
      store: this.store,
      clock: this.clock,
      version: '0.0.0-test',
      breathe: () => Promise.resolve(),
    });
  }

  /** Judges everything complete when all collectors have come to window number `at`. */
  async judgeTo(at: number, options: { readonly anew?: boolean } = {}): Promise<RoundCommit[]> {
    const made: RoundCommit[] = [];
    let rounds = await this.load();
    for (;;) {
      const round = await rounds.next(() => T0 + at * MINUTE + 30_000);
      if (round === null) return made;
      made.push(round);
      if (options.anew === true) rounds = await this.load();
    }
  }

  async verdicts(mix = 'outcomes', strand: StrandKey = 'all'): Promise<Verdict[]> {
    const found: Verdict[] = [];
    for await (const verdict of this.store.verdicts({ mix })) {
      if (verdict.strand === strand) found.push(verdict);
    }
    return found;
  }

  /** Verdicts in short: `learning 0-11, steady 12-39`, windows numbered from T0. */
  async story(mix = 'outcomes', strand: StrandKey = 'all'): Promise<string> {
    const runs: { name: string; from: number; to: number }[] = [];
    for (const { verdict, window } of await this.verdicts(mix, strand)) {
      const at = (window.startMs - T0) / MINUTE;
      const last = runs.at(-1);
      if (last?.name === verdict && last.to === at - 1) last.to = at;
      else runs.push({ name: verdict, from: at, to: at });
    }
    const text = ({ from, to }: { from: number; to: number }): string =>
      from === to ? String(from) : `${String(from)}-${String(to)}`;
    return runs.map((run) => `${run.name} ${text(run)}`).join(', ');
  }

  async alerts(): Promise<readonly Alert[]> {
    return this.store.alerts({});
  }
}

/** What happened to an alert: event and window number at which, in order. */
export function lifeOf(alert: Alert | undefined): string {
  const steps = (alert?.history ?? []).map(
    ({ event, atMs }) => `${event} ${String((atMs - T0) / MINUTE - 1)}`,
  );
  return steps.join(', ');
}
