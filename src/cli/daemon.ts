import type { Collector } from '../collect/collector.js';
import type { Config } from '../config/types.js';
import { Rounds } from '../schedule/rounds.js';
import { closeDigests } from '../send/digest.js';
import { deliverDue } from '../send/outbox.js';
import { postOverHttp } from '../send/post.js';
import { createMetrics, type Metrics } from '../serve/metrics.js';
import type { ServerSources } from '../serve/server.js';
import { lockStore, type StoreLock } from '../store/sqlite/lock.js';
import { openSqliteStore } from '../store/sqlite/open.js';
import type { Store } from '../store/store.js';
import type { RoundCommit } from '../terms/round.js';
import { collectorsOf } from './collectors.js';
import { Engine } from './engine.js';
import { Journal } from './journal.js';
import { breathe, type Ports, printLine } from './ports.js';
import { progress, type Progress } from './progress.js';
import { daemonSources } from './sources.js';
import { Spending } from './spending.js';
import { programVersion } from './version.js';

export interface DaemonOptions {
  readonly config: Config;
  readonly mode: 'live' | 'once';
  readonly ports: Ports;
  /** Tell of alerts only, not of every window that is not steady. */
  readonly alertsOnly: boolean;
}

interface Parts {
  readonly lock: StoreLock;
  readonly store: Store;
  readonly rounds: Rounds;
  readonly collectors: readonly Collector[];
  readonly spending: Spending;
}

/** Puts collecting, judging, sending and telling together over one store. */
export class Daemon {
  readonly metrics: Metrics = createMetrics();
  private readonly options: DaemonOptions;
  private readonly parts: Parts;
  private readonly engine: Engine;
  private readonly journal: Journal;
  private readonly progress: Progress;
  private beating: Promise<void> | null = null;
  private delivering: Promise<void> | null = null;
  private deliveryFailure: Error | null = null;
  private caughtUp = false;
  private lastRoundMs: number | null = null;

  private constructor(options: DaemonOptions, parts: Parts) {
    this.options = options;
    this.parts = parts;
    this.journal = new Journal(options.ports, options.alertsOnly);
    this.progress = progress(options.ports, parts.collectors);
    this.engine = new Engine({
      ...parts,
      clock: options.ports.clock,
      whole: false,
      onRound: (round, durationMs) => this.onRound(round, durationMs),
    });
  }

  /** Takes the store for itself; a second daemon on the same store is refused. */
  static async open(options: DaemonOptions): Promise<Daemon> {
    const { config, mode, ports } = options;
    const lock = lockStore(config.store);
    try {
      const store = await openSqliteStore({ path: config.store });
      const version = programVersion();
      const rounds = await Rounds.load({ config, store, clock: ports.clock, version, breathe });
      const collectors = await collectorsOf(config, {
        mode,
        clock: ports.clock,
        store,
        rounds,
        stdin: ports.stdin,
      });
      const spending = await Spending.load(config, store);
      return new Daemon(options, { lock, store, rounds, collectors, spending });
    } catch (error) {
      lock.release();
      throw error;
    }
  }

  /** What the HTTP server may ask. */
  sources(): ServerSources {
    return daemonSources({
      config: this.options.config,
      store: this.parts.store,
      collectors: this.parts.collectors,
      spending: this.parts.spending,
      state: () => ({ lastRoundMs: this.lastRoundMs, caughtUp: this.caughtUp }),
    });
  }

  /** Everything that is there now: read, judged, told, sent once. */
  async runOnce(): Promise<void> {
    await this.catchUp();
    this.progress.end();
    await this.closeDigests();
    await this.deliver();
    this.journal.summary(this.options.ports.clock.nowMs());
  }

  /** One heartbeat: does nothing while the last one is still at work. */
  async beat(): Promise<void> {
    if (this.beating !== null) return;
    this.beating = this.work();
    try {
      await this.beating;
    } finally {
      this.beating = null;
    }
  }

  async close(): Promise<void> {
    await this.beating;
    await this.delivering;
    for (const collector of this.parts.collectors) await collector.close();
    await this.parts.store.close();
    this.parts.lock.release();
  }

  private async work(): Promise<void> {
    await this.catchUp();
    this.progress.end();
    await this.closeDigests();
    this.caughtUp = true;
    this.deliverBeside();
    this.journal.everyMinute(this.options.ports.clock.nowMs());
  }

  /** All that was there when it began: what a busy writer adds meanwhile is the next beat's. */
  private async catchUp(): Promise<void> {
    let pass = await this.engine.pass({ lookAround: true });
    while (pass.bytes > 0 || pass.rounds > 0) {
      this.progress.add(pass.bytes);
      pass = await this.engine.pass({ lookAround: false });
    }
    this.tellProblems();
  }

  private async closeDigests(): Promise<void> {
    const { config, ports } = this.options;
    await closeDigests({
      store: this.parts.store,
      senders: config.send,
      clock: ports.clock,
      caughtUp: !this.caughtUp,
    });
  }

  /** A slow receiver must not hold up the next beat; what fails here fails that beat. */
  private deliverBeside(): void {
    if (this.deliveryFailure !== null) throw this.deliveryFailure;
    this.delivering ??= this.deliver()
      .catch((error: unknown) => {
        this.deliveryFailure = error instanceof Error ? error : new Error(String(error));
      })
      .finally(() => {
        this.delivering = null;
      });
  }

  private async deliver(): Promise<void> {
    const { config, ports } = this.options;
    await deliverDue({
      store: this.parts.store,
      senders: config.send,
      source: `urn:tallyward:${await this.parts.store.instanceId()}`,
      clock: ports.clock,
      post: postOverHttp,
      random: ports.random,
    });
  }

  private onRound(round: RoundCommit, durationMs: number): void {
    this.metrics.observeRound(durationMs);
    this.parts.spending.add(round.batch);
    this.lastRoundMs = this.options.ports.clock.nowMs();
    this.progress.end();
    this.journal.round(round);
  }

  private tellProblems(): void {
    const problems = this.parts.collectors.flatMap((collector) => collector.problems());
    for (const problem of this.journal.newProblems(problems)) {
      printLine(this.options.ports.stderr, problem);
    }
  }
}
