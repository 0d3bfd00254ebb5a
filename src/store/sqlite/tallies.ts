import type { Count, Tally } from '../../terms/tally.js';
import type { Window } from '../../terms/window.js';
import { StoreError, type Store, type TallyQuery } from '../store.js';
import { timeText } from './checks.js';
import type { CategoryBook, Names } from './names.js';
import { unpackCounts, type Entry } from './pack.js';
import type { Session } from './session.js';

/** Windows looked up at once while streaming. */
const PAGE = 500;

interface Row {
  strand: string;
  start_ms: number;
  end_ms: number;
  counts: Buffer;
}

/** Sorts by name unless it is sorted already, which is common: ids are given in that order. */
function inNameOrder(entries: Entry[], { rank }: CategoryBook): Entry[] {
  const place = (entry: Entry | undefined): number => rank[entry?.id ?? 0] ?? 0;
  const sorted = entries.every((entry, i) => i === 0 || place(entries[i - 1]) < place(entry));
  return sorted ? entries : entries.sort((a, b) => place(a) - place(b));
}

function toCounts(names: Names, mixId: number, bytes: Uint8Array): Map<string, Count> {
  const entries = unpackCounts(bytes);
  let book = names.categories(mixId);
  // Another process may have added categories since they were last loaded. Ids have no gaps.
  const known = (): boolean => (entries.at(-1)?.id ?? 0) < book.names.length;
  if (entries.length > 0 && !known()) book = names.categories(mixId, 'reload');
  if (entries.length > 0 && !known()) {
    throw new StoreError('a tally has a category without a name; put back the last backup');
  }
  const counts = new Map<string, Count>();
  for (const { id, onTime, late } of inNameOrder(entries, book)) {
    counts.set(book.names[id] ?? '', { onTime, late });
  }
  return counts;
}

/** Rows of tallies become Tally values, counts in code-point order of category. */
function tallyReader({ names, path }: Session): (mix: string, mixId: number, row: Row) => Tally {
  return (mix, mixId, row) => {
    const window = { startMs: row.start_ms, endMs: row.end_ms };
    try {
      return { mix, strand: row.strand, window, counts: toCounts(names, mixId, row.counts) };
    } catch (error) {
      if (!(error instanceof StoreError)) throw error;
      const start = timeText(row.start_ms);
      throw new StoreError(
        `mix ${mix}, strand ${row.strand}, window from ${start} in store ${path}: ${error.message}`,
        { cause: error },
      );
    }
  };
}

type Selected = (mix: string, startMs: number) => readonly Tally[];
type StrandSelected = (mix: string, strand: string, fromMs: number, toMs: number) => Tally[];

function windowSelector(session: Session): Selected {
  const toTally = tallyReader(session);
  const select = session.db.prepare<[number, number], Row>(
    `SELECT s.name AS strand, t.start_ms, t.end_ms, t.counts
     FROM tallies t CROSS JOIN strands s ON s.id = t.strand_id
     WHERE t.mix_id = ? AND t.start_ms = ? ORDER BY s.name, t.end_ms`,
  );
  return (mix, startMs) => {
    const mixId = session.names.findMix(mix);
    if (mixId === null) return [];
    return select.all(mixId, startMs).map((row) => toTally(mix, mixId, row));
  };
}

/** Goes from window to window, so that the other strands' rows are never read. */
function strandSelector(session: Session): StrandSelected {
  const toTally = tallyReader(session);
  const select = session.db.prepare<[string, number, number, number, number], Row>(
    `SELECT ? AS strand, t.start_ms, t.end_ms, t.counts
     FROM windows w CROSS JOIN tallies t
       ON t.mix_id = w.mix_id AND t.start_ms = w.start_ms AND t.end_ms = w.end_ms
     WHERE t.strand_id = ? AND w.mix_id = ? AND w.start_ms >= ? AND w.start_ms < ?
     ORDER BY w.start_ms, w.end_ms`,
  );
  return (mix, strand, fromMs, toMs) => {
    const mixId = session.names.findMix(mix);
    const strandId = mixId === null ? null : session.names.findStrand(mixId, strand);
    if (mixId === null || strandId === null) return [];
    const rows = select.all(strand, strandId, mixId, fromMs, toMs);
    return rows.map((row) => toTally(mix, mixId, row));
  };
}

/** Starts of a mix's windows after `afterMs`, at most a page of them. */
type StartsAfter = (mix: string, afterMs: number, toMs: number) => readonly number[];

function startsSelector({ db, names }: Session): StartsAfter {
  const select = db
    .prepare<[number, number, number, number], number>(
      `SELECT DISTINCT start_ms FROM windows
       WHERE mix_id = ? AND start_ms > ? AND start_ms < ? ORDER BY start_ms LIMIT ?`,
    )
    .pluck();
  return (mix, afterMs, toMs) => {
    const mixId = names.findMix(mix);
    return mixId === null ? [] : select.all(mixId, afterMs, toMs, PAGE);
  };
}

function stream(session: Session): (query: TallyQuery) => AsyncGenerator<Tally> {
  const startsAfter = startsSelector(session);
  const ofWindow = windowSelector(session);
  const ofStrand = strandSelector(session);
  return async function* ({ mix, strand, fromMs, toMs }) {
    const endMs = toMs ?? Number.MAX_SAFE_INTEGER;
    let afterMs = (fromMs ?? Number.MIN_SAFE_INTEGER + 1) - 1;
    for (;;) {
      const starts = await session.read('read tallies', () => startsAfter(mix, afterMs, endMs));
      const [first, last] = [starts[0], starts.at(-1)];
      if (first === undefined || last === undefined) return;
      // Of one strand the whole page at once; of all strands a window at a time.
      const reads =
        strand === undefined
          ? starts.map((startMs) => () => ofWindow(mix, startMs))
          : [() => ofStrand(mix, strand, first, last + 1)];
      for (const readSome of reads) {
        const tallies = await session.read('read tallies', readSome);
        for (const tally of tallies) if (tally.window.endMs <= endMs) yield tally;
      }
      afterMs = last;
    }
  };
}

export function tallyMethods(
  session: Session,
): Pick<Store, 'windowTallies' | 'tallies' | 'strandTallies' | 'nextWindow'> {
  const ofWindow = windowSelector(session);
  const ofStrand = strandSelector(session);
  const next = session.db.prepare<[number, number], Window>(
    `SELECT start_ms AS startMs, end_ms AS endMs FROM windows
     WHERE mix_id = ? AND start_ms >= ? AND on_time = 1 ORDER BY start_ms, end_ms LIMIT 1`,
  );
  return {
    windowTallies: (mix, startMs) => session.read('read tallies', () => ofWindow(mix, startMs)),
    tallies: stream(session),
    strandTallies: (mix, strand, fromMs, toMs) =>
      session.read('read tallies', () => ofStrand(mix, strand, fromMs, toMs)),
    nextWindow: (mix, fromMs) =>
      session.read('find the next window', () => {
        const mixId = session.names.findMix(mix);
        return mixId === null ? null : (next.get(mixId, fromMs) ?? null);
      }),
  };
}
