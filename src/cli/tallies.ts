import { once } from 'node:events';
import type { Writable } from 'node:stream';
import { formatInstant } from '../clock/format.js';
import type { MixConfig } from '../config/types.js';
import { parseStrandKey, WHOLE } from '../config/strand.js';
import { openSqliteStore } from '../store/sqlite/open.js';
import type { Store } from '../store/store.js';
import type { Partition } from '../terms/partition.js';
import type { Tally } from '../terms/tally.js';
import { loadConfig } from './loadConfig.js';
import { mixesOf, type QuerySpan, spanOption, type SpanOptions } from './options.js';
import { EXIT, type Ports } from './ports.js';

export interface TalliesOptions extends SpanOptions {
  readonly config: string;
  readonly mix?: string;
  readonly csv?: boolean;
  readonly json?: boolean;
}

/** One count of one category, as published. */
interface TallyRow {
  readonly mix: string;
  readonly strand: Readonly<Record<string, string>>;
  readonly start: string;
  readonly end: string;
  readonly category: string;
  /** Late events included. */
  readonly count: number;
  readonly late: number;
}

/** `tallies`: the stored counts, also while the daemon runs; the user's data can always leave. */
export async function tallies(options: TalliesOptions, ports: Ports): Promise<number> {
  const config = loadConfig(options.config, ports);
  const mixes = mixesOf(config, options.mix);
  const span = spanOption(options);
  const store = await openSqliteStore({ path: config.store, readOnly: true });
  try {
    const waiting = await waitingEvents(
      store,
      config.collectors.map((c) => c.name),
    );
    const rows = talliesOf(store, mixes, span, waiting);
    await print(rows, options, ports.stdout);
    return EXIT.done;
  } finally {
    await store.close();
  }
}

/** Counts of a split mix are listed by its split strands, those of others as the whole. */
async function* talliesOf(
  store: Store,
  mixes: readonly MixConfig[],
  span: QuerySpan,
  waiting: readonly Tally[],
): AsyncGenerator<TallyRow> {
  for (const { name, split } of mixes) {
    const listed = (tally: Tally): boolean => (tally.strand === WHOLE) === (split.length === 0);
    const left = new Set(waiting.filter((t) => t.mix === name && listed(t) && inside(t, span)));
    for await (const tally of store.tallies({ mix: name, ...span })) {
      if (!listed(tally)) continue;
      const same = [...left].filter((t) => samePlace(t, tally));
      for (const t of same) left.delete(t);
      yield* rowsOf(tally, same);
    }
    for (const tally of left) yield* rowsOf(tally, []);
  }
}

function* rowsOf(tally: Tally, more: readonly Tally[]): Generator<TallyRow> {
  const sums = new Map<string, { count: number; late: number }>();
  for (const one of [tally, ...more]) {
    for (const [category, { onTime, late }] of one.counts) {
      const sum = sums.get(category) ?? { count: 0, late: 0 };
      sums.set(category, { count: sum.count + onTime + late, late: sum.late + late });
    }
  }
  for (const [category, sum] of [...sums].sort(([a], [b]) => (a < b ? -1 : 1))) {
    yield {
      mix: tally.mix,
      strand: parseStrandKey(tally.strand),
      start: formatInstant(tally.window.startMs),
      end: formatInstant(tally.window.endMs),
      category,
      ...sum,
    };
  }
}

/** Records that wait for their file's next one: read, shown, and part of no tally yet. */
async function waitingEvents(
  store: Pick<Store, 'partitions'>,
  collectors: readonly string[],
): Promise<Tally[]> {
  const partitions: Partition[] = [];
  for (const name of collectors) partitions.push(...(await store.partitions(name)));
  const cells = partitions.flatMap((partition) => partition.waiting?.cells ?? []);
  return cells.map(({ mix, strand, startMs, endMs, category }) => ({
    mix,
    strand,
    window: { startMs, endMs },
    counts: new Map([[category, { onTime: 1, late: 0 }]]),
  }));
}

function inside({ window }: Tally, span: QuerySpan): boolean {
  return window.startMs >= (span.fromMs ?? -Infinity) && window.endMs <= (span.toMs ?? Infinity);
}

function samePlace(a: Tally, b: Tally): boolean {
  return a.strand === b.strand && a.window.startMs === b.window.startMs;
}

async function print(
  rows: AsyncIterable<TallyRow>,
  options: TalliesOptions,
  out: Writable,
): Promise<void> {
  const form = options.json === true ? JSON_FORM : options.csv === true ? CSV_FORM : TEXT_FORM;
  await write(out, form.head);
  let first = true;
  for await (const row of rows) {
    await write(out, (first ? '' : form.between) + form.row(row));
    first = false;
  }
  await write(out, form.tail);
}

async function write(out: Writable, text: string): Promise<void> {
  if (text !== '' && !out.write(text)) await once(out, 'drain');
}

interface Form {
  readonly head: string;
  readonly between: string;
  readonly tail: string;
  readonly row: (row: TallyRow) => string;
}

const JSON_FORM: Form = {
  head: '{"tallies":[',
  between: ',\n',
  tail: ']}\n',
  row: (row) => JSON.stringify(row),
};

const CSV_FORM: Form = {
  head: 'mix,strand,start,end,category,count,late\n',
  between: '',
  tail: '',
  row: (row) =>
    [row.mix, strandText(row), row.start, row.end, row.category, row.count, row.late]
      .map((value) => csvField(String(value)))
      .join(',') + '\n',
};

const TEXT_FORM: Form = {
  head: '',
  between: '',
  tail: '',
  row: (row) => {
    const late = row.late === 0 ? '' : ` (${String(row.late)} late)`;
    const place = [row.mix, strandText(row)].filter((part) => part !== '').join(', ');
    return `${row.start} to ${row.end}  ${place}  ${row.category}: ${String(row.count)}${late}\n`;
  },
};

function strandText(row: TallyRow): string {
  return Object.entries(row.strand)
    .map(([field, value]) => `${field}=${value}`)
    .join(',');
}

/**
 * RFC 4180, and a value that a spreadsheet would take for a formula gets an apostrophe in front:
 * whoever writes the log must not get to run formulas in a reader's spreadsheet.
 */
function csvField(text: string): string {
  const safe = /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}
