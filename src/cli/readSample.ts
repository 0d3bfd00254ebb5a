import { createReadStream, readFileSync } from 'node:fs';
import { createInterface } from 'node:readline';
import type { Calendar } from '../clock/calendar.js';
import { calendarOf } from '../clock/calendar.js';
import { timeParser } from '../clock/time.js';
import { timeTools } from '../clock/timeTools.js';
import { readCounts } from '../config/countsFile.js';
import { escapeCategory, MISSING } from '../config/strand.js';
import { windowLength } from '../config/specialLeaves.js';
import { toWindowLength } from '../config/windowLength.js';
import { decoderOf } from '../decode/decoder.js';
import { type Decoder, NOT_SCALAR } from '../decode/types.js';
import type { WindowCounts } from '../judge/reference.js';
import type { Counts } from '../terms/tally.js';
import { CommandError, EXIT } from './ports.js';
import { wholeShares } from './wholeShares.js';

/** How a sample's records are read; without a category the file is `category,count` CSV. */
export interface SampleOptions {
  readonly category?: string;
  readonly decode?: string;
  readonly time?: string;
  readonly window?: string;
  /** The numbers of a CSV file are fixed shares, any that are not negative. */
  readonly areShares?: boolean;
}

export interface Sample {
  readonly counts: Counts;
  /** The windows it came in, where --window asks for them. */
  readonly windows: readonly WindowCounts[] | null;
  /** Records that could not be counted. */
  readonly rejected: number;
}

/** Reads one side of a comparison. */
export async function readSample(path: string, options: SampleOptions): Promise<Sample> {
  try {
    return options.category === undefined
      ? readCsv(path, options.areShares === true)
      : await readLog(path, options.category, options);
  } catch (error) {
    if (error instanceof CommandError) throw error;
    const why = error instanceof Error ? error.message : String(error);
    throw new CommandError(`${path}: cannot be read (${why}); give the path of a file`, EXIT.usage);
  }
}

function readCsv(path: string, areShares: boolean): Sample {
  const written = readFileSync(path, 'utf8');
  const text = areShares ? wholeShares(written) : written;
  const header = /^\uFEFF?category,count/.test(text) ? '' : 'category,count\n';
  const read = readCounts(header + text);
  if ('refused' in read) {
    const hint = 'for a log, name its field with --category';
    throw new CommandError(`${path}: ${read.refused} (${hint})`, EXIT.usage);
  }
  const counts = new Map<string, number>();
  for (const window of read.value.windows) {
    for (const [category, n] of window) add(counts, category, n);
  }
  return { counts, windows: null, rejected: 0 };
}

async function readLog(path: string, category: string, options: SampleOptions): Promise<Sample> {
  if ((options.decode ?? 'json') !== 'json') {
    throw new CommandError(
      `--decode ${options.decode ?? ''}: only json can be read here`,
      EXIT.usage,
    );
  }
  const paths = [category.split('.'), (options.time ?? '').split('.')];
  const decoder = decoderOf({ kind: 'json' }, paths);
  const windows = options.window === undefined ? null : new WindowedCounts(options);
  const counts = new Map<string, number>();
  let rejected = 0;
  const lines = createInterface({ input: createReadStream(path), crlfDelay: Infinity });
  for await (const line of lines) {
    if (line.trim() === '') continue;
    const found = categoryOf(decoder, line);
    const counted = found !== null && (windows?.add(decoder.fields[1], found) ?? true);
    if (counted) add(counts, found, 1);
    else rejected++;
  }
  return { counts, windows: windows?.inOrder() ?? null, rejected };
}

function categoryOf(decoder: Decoder, line: string): string | null {
  const bytes = Buffer.from(line);
  if (decoder.decode(bytes, 0, bytes.length) !== null) return null;
  const [value] = decoder.fields;
  if (value === NOT_SCALAR || value === undefined) return null;
  return value === null ? MISSING : escapeCategory(value);
}

/** Counts by window of event time. */
class WindowedCounts {
  private readonly calendar: Calendar;
  private readonly parse = timeParser({ kind: 'iso' }, 'UTC');
  private readonly windows = new Map<number, Map<string, number>>();

  constructor(options: SampleOptions) {
    const length = windowLength(timeTools).safeParse(options.window ?? '');
    if (!length.success || options.time === undefined) {
      const what = `--window ${options.window ?? ''} --time ${options.time ?? '(none)'}`;
      throw new CommandError(
        `${what}: give a window such as 5m, 1h, 1d and the field of the time`,
        EXIT.usage,
      );
    }
    this.calendar = calendarOf(toWindowLength(length.data, 'monday'), 'UTC');
  }

  /** False when the time cannot be read. */
  add(time: Decoder['fields'][number] | undefined, category: string): boolean {
    const ms = typeof time === 'string' ? this.parse(time) : null;
    if (ms === null) return false;
    const { startMs } = this.calendar.windowAt(ms);
    const counts = this.windows.get(startMs) ?? new Map<string, number>();
    this.windows.set(startMs, counts);
    add(counts, category, 1);
    return true;
  }

  inOrder(): WindowCounts[] {
    return [...this.windows]
      .sort(([a], [b]) => a - b)
      .map(([startMs, counts]) => ({ window: this.calendar.windowAt(startMs), counts }));
  }
}

function add(counts: Map<string, number>, category: string, n: number): void {
  counts.set(category, (counts.get(category) ?? 0) + n);
}
