import type { Read } from './leaves.js';

/** Counts from outside: one map a window, or a single map where the file names no windows. */
export interface FileCounts {
  readonly windows: readonly ReadonlyMap<string, number>[];
  readonly windowed: boolean;
}

const MAX_COUNTS_BYTES = 16 * 1_048_576;

/**
 * Reads CSV (RFC 4180) with the header `category,count` or `category,count,window`. Windows stand
 * in the order in which the file first names them. Refused, with the line: another header, a count
 * that is no whole number, a category twice in one window, and a file without any event.
 */
export function readCounts(text: string): Read<FileCounts> {
  if (Buffer.byteLength(text, 'utf8') > MAX_COUNTS_BYTES) {
    return { refused: 'is over 16 MiB; write a smaller file' };
  }
  const [header, ...rows] = csvRows(text.replace(/^\uFEFF/, ''));
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

/** Rows of a CSV text, empty lines left out; quoted fields may hold commas, quotes and lines. */
function csvRows(text: string): readonly Row[] {
  const rows: Row[] = [];
  const field = /(?:"((?:[^"]|""){0,4096})"|([^",\r\n]*))(,|\r?\n|$)/y;
  let cells: string[] = [];
  let line = 1;
  let begins = 1;
  while (field.lastIndex < text.length || cells.length > 0) {
    const match = field.exec(text);
    // Text after a closing quote: no field, which the number of fields then shows.
    if (match === null) return [...rows, { line: begins, cells: [] }];
    const [whole, quoted, plain, end] = match;
    cells.push(quoted === undefined ? (plain ?? '') : quoted.replaceAll('""', '"'));
    line += whole.split('\n').length - 1;
    if (end !== ',') {
      if (cells.length > 1 || cells[0] !== '') rows.push({ line: begins, cells });
      cells = [];
      begins = line;
    }
  }
  return rows;
}
