import { createWriteStream } from 'node:fs';
import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { verdictData } from '../alert/verdictData.js';
import { openSqliteStore } from '../store/sqlite/open.js';
import type { Store } from '../store/store.js';
import { loadConfig } from './loadConfig.js';
import { mixesOf, type QuerySpan, spanOption, type SpanOptions } from './options.js';
import { EXIT, type Ports, printLine } from './ports.js';
import { verdictLine } from './verdictLine.js';

export interface VerdictsOptions extends SpanOptions {
  readonly config: string;
  readonly mix?: string;
  readonly json?: boolean;
}

/** `verdicts`: the stored verdicts, a line each; with --json each line is the whole evidence. */
export async function verdicts(options: VerdictsOptions, ports: Ports): Promise<number> {
  const config = loadConfig(options.config, ports);
  mixesOf(config, options.mix);
  const query = {
    ...spanOption(options),
    ...(options.mix === undefined ? {} : { mix: options.mix }),
  };
  // Opened last, so that wrong usage is told first and leaves nothing open.
  const store = await openSqliteStore({ path: config.store, readOnly: true });
  try {
    for await (const verdict of store.verdicts(query)) {
      const line =
        options.json === true ? JSON.stringify(verdictData(verdict)) : verdictLine(verdict);
      printLine(ports.stdout, line);
    }
    return EXIT.done;
  } finally {
    await store.close();
  }
}

/** Writes one JSON line a verdict, with its whole evidence. */
export async function writeVerdicts(
  store: Pick<Store, 'verdicts'>,
  path: string,
  span: QuerySpan,
): Promise<void> {
  async function* lines(): AsyncGenerator<string> {
    for await (const verdict of store.verdicts(span)) {
      yield `${JSON.stringify(verdictData(verdict))}\n`;
    }
  }
  await pipeline(Readable.from(lines()), createWriteStream(path));
}
