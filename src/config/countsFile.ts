import { CsvError } from 'csv-parse';
import { parse } from 'csv-parse/sync';
import type { Read } from './leaves.js';

/** Counts from outside: one map a window, or a single map where the file names no windows. */
export interface FileCounts {
  readonly windows: readonly ReadonlyMap<string, number>[];
  readonly windowed: boolean;
}

const MAX_COUNTS_BYTES = 16 * 1_048_576;
const MAX_ROW_CHARACTERS = 65_536;

/**
 * Reads CSV (RFC 4180) with the header `category,count` or `category,count,window`. Windows stand
 * in the order in which the file first names them. Refused, with the line: another header, a count
 * that is no whole number, a category twice in one window, and a file without any event.
 */
export function readCounts(text: string): Read<FileCounts> {
  if (Buffer.byteLength(text, 'utf8') > MAX_COUNTS_BYTES) {
    return { refused: 'is over 16 MiB; write a smaller file' };
  }
  const read = csvRows(text);
  if (typeof read === 'string') return { refused: `is no CSV (${read}); quote fields as RFC 4180` };
  const [header, ...rows] = read;
  const columns = header?.cells.join(',');
  if (columns !== 'category,count' && columns !== 'category,count,window') {
    return { refused: 'has no header category,count or category,count,window; write one' };
  }
  const windowed = columns === 'category,count,window';
  const windows = new Map<string, Map<string, number>>();
  for (const row of rows) {
    const wrong = addRow(row.cells, windowed ? 3 : 2, windows);
    if (wrong !== null) return { refused: `line ${row.line} ${wrong}` };
  }
  const maps = [...windows.values()];
  const any = maps.some((counts) => [...counts.values()].some((count) => count > 0));
  if (!any) return { refused: 'holds no events; write a category and a count a line' };
  return { value: { windows: maps, windowed } };
}

function addRow(
  cells: readonly string[],
  width: number,
  windows: Map<string, Map<string, number>>,
): string | null {
  const [category = '', written = '', window = ''] = cells;
  if (cells.length !== width) return `has ${cells.length} fields; write ${width}`;
  const count = /^\d{1,16}$/.test(written) ? Number(written) : NaN;
  if (!Number.isSafeInteger(count)) return 'has a count that is no whole number; write one';
  const counts = windows.get(window) ?? new Map<string, number>();
  if (counts.has(category)) return 'repeats a category of its window; write their sum once';
  counts.set(category, count);
  windows.set(window, counts);
  return null;
}

interface Row {
  readonly line: number;
  readonly cells: readonly string[];
}

interface Parsed {
  readonly info: { readonly lines: number };
  readonly record: readonly string[];
}

/** Rows of a CSV text, or what is wrong with it; empty lines left out. */
function csvRows(text: string): readonly Row[] | string {
  try {
    // The library's types do not know what `info` makes of its answer.
    const rows: unknown = parse(text, {
      bom: true,
      info: true,
      relax_column_count: true,
      skip_empty_lines: true,
      max_record_size: MAX_ROW_CHARACTERS,
    });
    return (rows as Parsed[]).map(({ info, record }) => ({ line: info.lines, cells: record }));
  } catch (error) {
    if (error instanceof CsvError) return error.message;
    throw error;
  }
}
