import type { Readable } from 'node:stream';
import type { Clock } from '../clock/clock.js';
import type { Collector, ReadingMode } from '../collect/collector.js';
import { openCollector } from '../collect/open.js';
import type { Config } from '../config/types.js';
import type { Rounds } from '../schedule/rounds.js';
import type { Store } from '../store/store.js';

/** Opens all collectors of a configuration where the store's positions left off. */
export async function collectorsOf(
  config: Config,
  parts: {
    readonly mode: ReadingMode;
    readonly clock: Clock;
    readonly store: Store;
    readonly rounds: Rounds;
    readonly stdin: Readable;
  },
): Promise<Collector[]> {
  const { mode, clock, store, rounds, stdin } = parts;
  const states = await store.strandStates();
  const strands = states.map(({ mix, strand, state }) => ({ mix, strand, lastMs: state.lastMs }));
  const collectors: Collector[] = [];
  for (const collector of config.collectors) {
    collectors.push(
      await openCollector({
        config: collector,
        mixes: config.mixes,
        mode,
        clock,
        store,
        judgedTo: (mix) => rounds.judgedTo(mix),
        stdin,
        known: { strands, categories: [] },
      }),
    );
  }
  return collectors;
}
