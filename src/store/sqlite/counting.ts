import type { Tally } from '../../terms/tally.js';
import type { Store } from '../store.js';
import { checkCountBatch } from './checks.js';
import { wellFormed, type CategoryBook, type Names } from './names.js';
import { addEntries, packCounts, unpackCounts, type Entry } from './pack.js';
import { partitionRows } from './partitions.js';
import type { Session } from './session.js';
import { totalsWriter } from './totalsWriter.js';

type Place = [mixId: number, startMs: number, endMs: number, strandId: number];

function hasEvents(tally: Tally): boolean {
  for (const { onTime, late } of tally.counts.values()) if (onTime + late > 0) return true;
  return false;
}

/** Rows that are neighbours in the table are written one after the other. */
function byPlace(a: Tally, b: Tally): number {
  if (a.mix !== b.mix) return a.mix < b.mix ? -1 : 1;
  if (a.window.startMs !== b.window.startMs) return a.window.startMs - b.window.startMs;
  if (a.window.endMs !== b.window.endMs) return a.window.endMs - b.window.endMs;
  if (a.strand === b.strand) return 0;
  return a.strand < b.strand ? -1 : 1;
}

/** The tally's counts by category id, in rising order; null when a category has no id yet. */
function toEntries(tally: Tally, book: CategoryBook): Entry[] | null {
  const entries: Entry[] = [];
  let lastId = -1;
  let sorted = true;
  for (const [category, { onTime, late }] of tally.counts) {
    if (onTime + late === 0) continue;
    const id = book.idOf.get(category) ?? book.idOf.get(wellFormed(category));
    if (id === undefined) return null;
    sorted &&= id > lastId;
    lastId = id;
    entries.push({ id, onTime, late });
  }
  return sorted ? entries : entries.sort((a, b) => a.id - b.id);
}

function newCategories(tallies: readonly Tally[], book: CategoryBook): string[] {
  const found = new Set<string>();
  for (const { counts } of tallies) {
    for (const [category, { onTime, late }] of counts) {
      if (onTime + late > 0 && !book.idOf.has(category)) found.add(wellFormed(category));
    }
  }
  return [...found].sort((a, b) => (a < b ? -1 : 1));
}

/** Gives ids to all new categories of a mix in the batch, in their own order. */
function nameCategories(names: Names, mixId: number, tallies: readonly Tally[]): CategoryBook {
  // Another process may have added some since they were last loaded.
  names.addCategories(mixId, newCategories(tallies, names.categories(mixId, 'reload')));
  return names.categories(mixId);
}

/** The counts of every tally by category id; tallies are in order of place. */
function batchEntries(names: Names, tallies: readonly Tally[]): readonly Entry[][] {
  return tallies.map((tally) => {
    const mixId = names.mixId(tally.mix);
    const known = toEntries(tally, names.categories(mixId));
    if (known !== null) return known;
    const ofMix = tallies.filter((other) => other.mix === tally.mix);
    const named = toEntries(tally, nameCategories(names, mixId, ofMix));
    if (named === null) throw new Error('a category has no id although it was just given one');
    return named;
  });
}

/** Adds to the packed counts of one strand's window: reads, adds and writes them back. */
function tallyAdder({ db }: Session): (place: Place, added: readonly Entry[]) => void {
  const key = 'mix_id = ? AND start_ms = ? AND end_ms = ? AND strand_id = ?';
  const select = db.prepare<Place, Buffer>(`SELECT counts FROM tallies WHERE ${key}`).pluck();
  const insert = db.prepare<[...Place, Uint8Array]>(
    'INSERT INTO tallies (mix_id, start_ms, end_ms, strand_id, counts) VALUES (?, ?, ?, ?, ?)',
  );
  const update = db.prepare<[Uint8Array, ...Place]>(`UPDATE tallies SET counts = ? WHERE ${key}`);
  return (place, added) => {
    const stored = select.get(...place);
    const sum = addEntries(stored === undefined ? [] : unpackCounts(stored), added);
    if (stored === undefined) insert.run(...place, packCounts(sum));
    else update.run(packCounts(sum), ...place);
  };
}

type WindowPlace = readonly [mixId: number, startMs: number, endMs: number];

/** Notes that a window has tallies, and whether any has an event on time. */
function windowNoter({ db }: Session): (place: WindowPlace, onTime: boolean) => void {
  const note = db.prepare<[number, number, number, number]>(
    `INSERT INTO windows (mix_id, start_ms, end_ms, on_time) VALUES (?, ?, ?, ?)
     ON CONFLICT DO UPDATE SET on_time = 1 WHERE excluded.on_time > on_time`,
  );
  // A batch has many strands of one window after the other: what says nothing new is left out.
  let last: WindowPlace = [-1, 0, 0];
  let lastOnTime = false;
  return (place, onTime) => {
    const same = place.every((part, i) => part === last[i]);
    if (same && (lastOnTime || !onTime)) return;
    note.run(...place, onTime ? 1 : 0);
    [last, lastOnTime] = [place, onTime];
  };
}

function tallyWriter(session: Session): (tallies: readonly Tally[]) => void {
  const { names } = session;
  const add = tallyAdder(session);
  return (tallies) => {
    const noteWindow = windowNoter(session);
    const entries = batchEntries(names, tallies);
    tallies.forEach(({ mix, strand, window: { startMs, endMs } }, i) => {
      const added = entries[i] ?? [];
      const mixId = names.mixId(mix);
      const onTime = added.some((entry) => entry.onTime > 0);
      noteWindow([mixId, startMs, endMs], onTime);
      add([mixId, startMs, endMs, names.strandId(mixId, strand)], added);
    });
  };
}

export function countingMethods(session: Session): Pick<Store, 'commitCounts' | 'partitions'> {
  const addTallies = tallyWriter(session);
  const totals = totalsWriter(session);
  const partitions = partitionRows(session);
  return {
    commitCounts: (batch) =>
      session.write('commit counts', () => {
        checkCountBatch(batch);
        const counted = batch.tallies.filter(hasEvents).sort(byPlace);
        addTallies(counted);
        batch.partitions.forEach(partitions.replace);
        totals.addBatch(batch, counted);
      }),
    partitions: (collector) =>
      session.read('read the partitions', () => partitions.ofCollector(collector)),
  };
}
