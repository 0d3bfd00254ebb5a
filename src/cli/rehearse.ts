import { openSqliteStore } from '../store/sqlite/open.js';
import { loadConfig } from './loadConfig.js';
import { spanOption, type SpanOptions } from './options.js';
import { EXIT, type Ports, printLine } from './ports.js';
import { rehearsalText } from './rehearsalText.js';
import { rehearseLogs, rehearseTallies, summarise } from './rehearsal.js';
import { writeVerdicts } from './verdicts.js';

export interface RehearseOptions extends SpanOptions {
  readonly config: string;
  readonly verdicts?: string;
  readonly store?: string;
  readonly json?: boolean;
}

/** `rehearse`: runs history through the very same code on a virtual clock; sends nothing. */
export async function rehearse(options: RehearseOptions, ports: Ports): Promise<number> {
  const config = loadConfig(options.config, ports);
  const span = spanOption(options);
  const store = await openSqliteStore({ path: ':memory:' });
  try {
    if (options.store === undefined) await rehearseLogs(config, store, ports);
    else await rehearseTallies(config, store, options.store);
    const result = await summarise(config, store, span);
    if (options.verdicts !== undefined) await writeVerdicts(store, options.verdicts, span);
    printLine(ports.stdout, options.json === true ? JSON.stringify(result) : rehearsalText(result));
    return EXIT.done;
  } finally {
    await store.close();
  }
}
