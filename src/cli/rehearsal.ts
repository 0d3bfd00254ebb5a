import { type AlertData, alertData } from '../alert/alertData.js';
import { expectedFalseAlarms, familyLevel } from '../alert/budget.js';
import type { Clock } from '../clock/clock.js';
import type { Config } from '../config/types.js';
import { planMixes } from '../schedule/plan.js';
import { Rounds } from '../schedule/rounds.js';
import type { SqliteStore } from '../store/sqlite/open.js';
import { collectorsOf } from './collectors.js';
import { Engine } from './engine.js';
import type { QuerySpan } from './options.js';
import { breathe, type Ports, printLine } from './ports.js';
import { progress } from './progress.js';
import { programVersion } from './version.js';

/** What a rehearsal reports, as published JSON. */
export interface Rehearsal {
  readonly events: number;
  readonly rejected: Readonly<Record<string, number>>;
  readonly late: number;
  readonly strands: number;
  readonly windows: number;
  readonly rounds: number;
  readonly verdicts: Readonly<Record<string, number>>;
  readonly level: number;
  readonly expectedFalseAlarms: number;
  readonly alerts: readonly AlertData[];
}

/** Time stands still while rehearsing: only the freshness of messages would look at it. */
const STANDING_CLOCK: Clock = { nowMs: () => 0 };

/** Reads every collector from its start to its end into an empty store, and judges it. */
export async function rehearseLogs(
  config: Config,
  store: SqliteStore,
  ports: Ports,
): Promise<void> {
  const rounds = await load(config, store);
  const collectors = await collectorsOf(config, {
    mode: 'rehearse',
    clock: STANDING_CLOCK,
    store,
    rounds,
    stdin: ports.stdin,
  });
  const show = progress(ports, collectors);
  const engine = new Engine({
    collectors,
    rounds,
    store,
    clock: STANDING_CLOCK,
    whole: true,
    onRound: () => undefined,
  });
  for (let busy = true; busy;) {
    const pass = await engine.pass({ lookAround: false });
    show.add(pass.bytes);
    busy = pass.bytes > 0 || pass.rounds > 0 || !engine.exhausted();
  }
  // At the end of all input, what is complete need not wait for mixes that never will be.
  while ((await engine.judge({ whole: false })) > 0);
  show.end();
  for (const problem of collectors.flatMap((collector) => collector.problems())) {
    printLine(ports.stderr, problem);
  }
  for (const collector of collectors) await collector.close();
}

/** Judges the tallies of another store again, in the batches that were made there. */
export async function rehearseTallies(
  config: Config,
  store: SqliteStore,
  path: string,
): Promise<void> {
  const batches = await store.copyTalliesFrom(path);
  const rounds = await load(config, store);
  for (const batch of batches) await rounds.replay(batch);
}

/** Sums a rehearsed store up; verdicts and alerts only of windows inside the span. */
export async function summarise(
  config: Config,
  store: SqliteStore,
  span: QuerySpan,
): Promise<Rehearsal> {
  const totals = await store.totals();
  const { verdicts, windows, strands, instants } = await countVerdicts(store, span);
  const plans = planMixes(config);
  const shares = [...new Set(plans.map((plan) => plan.share))];
  const levels = plans.map(({ share, calendar }) => familyLevel(share.perWeek, calendar.perWeek));
  const alerts = await store.alerts({});
  const inside = alerts.filter(
    ({ window }) =>
      window.startMs >= (span.fromMs ?? -Infinity) && window.endMs <= (span.toMs ?? Infinity),
  );
  return {
    events: [...totals.accepted.values()].reduce((a, b) => a + b, 0),
    rejected: byReason(totals.rejected),
    late: [...totals.mixes.values()].reduce((sum, mix) => sum + mix.late, 0),
    strands,
    windows,
    rounds: instants,
    verdicts,
    level: Math.max(...levels),
    expectedFalseAlarms: expectedFalseAlarms(shares),
    alerts: inside.map(alertData),
  };
}

function load(config: Config, store: SqliteStore): Promise<Rounds> {
  return Rounds.load({
    config: { ...config, send: [] },
    store,
    clock: STANDING_CLOCK,
    version: programVersion(),
    breathe,
  });
}

async function countVerdicts(
  store: SqliteStore,
  span: QuerySpan,
): Promise<{
  verdicts: Record<string, number>;
  windows: number;
  strands: number;
  instants: number;
}> {
  const verdicts: Record<string, number> = {};
  const strands = new Set<string>();
  const instants = new Set<number>();
  let windows = 0;
  for await (const { mix, strand, window, verdict } of store.verdicts(span)) {
    verdicts[verdict] = (verdicts[verdict] ?? 0) + 1;
    strands.add(JSON.stringify([mix, strand]));
    instants.add(window.endMs);
    windows++;
  }
  return { verdicts, windows, strands: strands.size, instants: instants.size };
}

function byReason(
  rejected: readonly { readonly reason: string; readonly count: number }[],
): Record<string, number> {
  const sums: Record<string, number> = {};
  for (const { reason, count } of rejected) sums[reason] = (sums[reason] ?? 0) + count;
  return sums;
}
