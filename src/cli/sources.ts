import type { Collector } from '../collect/collector.js';
import type { Config } from '../config/types.js';
import type { ServerSources } from '../serve/server.js';
import type { Store } from '../store/store.js';
import type { Spending } from './spending.js';

/** What the server shows of a running daemon, read from the store and its collectors. */
export function daemonSources(parts: {
  readonly config: Config;
  readonly store: Store;
  readonly collectors: readonly Collector[];
  readonly spending: Pick<Spending, 'ratio'>;
  readonly state: () => { readonly lastRoundMs: number | null; readonly caughtUp: boolean };
}): ServerSources {
  const { config, store, collectors, spending, state } = parts;
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
      budgetSpentRatio: spending.ratio(),
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
