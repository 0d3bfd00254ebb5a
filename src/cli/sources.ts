import type { Clock } from '../clock/clock.js';
import type { Collector } from '../collect/collector.js';
import type { Config } from '../config/types.js';
import { planMixes } from '../schedule/plan.js';
import type { ServerSources } from '../serve/server.js';
import type { Store } from '../store/store.js';

const WEEK_MS = 604_800_000;

/** What the server shows of a running daemon, read from the store and its collectors. */
export function daemonSources(parts: {
  readonly config: Config;
  readonly store: Store;
  readonly collectors: readonly Collector[];
  readonly clock: Clock;
  readonly state: () => { readonly lastRoundMs: number | null; readonly caughtUp: boolean };
}): ServerSources {
  const { config, store, collectors, state } = parts;
  return {
    metrics: async () => ({
      mixes: config.mixes.map((mix) => mix.name),
      senders: config.send.map((sender) => sender.name),
      totals: await store.totals(),
      latestVerdicts: await store.latestVerdicts(),
      alerts: await store.alerts({ open: true }),
      judgedToMs: await store.judgedTo(),
      collectors: collectors.map((collector) => ({
        name: collector.name,
        watermarkMs: collector.watermarkMs(),
        lagBytes: collector.lagBytes(),
      })),
      lastRoundMs: state().lastRoundMs,
      budgetSpentRatio: await budgetSpent(config, store),
      storeBytes: await store.bytes(),
    }),
    readiness: () => {
      const problems = collectors.flatMap((collector) => collector.problems());
      const ready = state().caughtUp;
      return Promise.resolve({
        ready,
        problems: ready ? problems : ['still catching up with what is there to read', ...problems],
      });
    },
  };
}

/** False alarms spent in the last judged week over those accepted. */
async function budgetSpent(config: Config, store: Store): Promise<number | null> {
  const judged = [...(await store.judgedTo()).values()];
  if (judged.length === 0) return null;
  const untilMs = Math.max(...judged);
  let spent = 0;
  for await (const batch of store.batches(untilMs - WEEK_MS)) {
    spent += batch.families.reduce((sum, family) => sum + family.spent, 0);
  }
  const shares = new Set(planMixes(config).map((plan) => plan.share));
  const accepted = [...shares].reduce((sum, share) => sum + share.perWeek, 0);
  return spent / accepted;
}
