import type { Tally } from '../../terms/tally.js';
import type { CountBatch } from '../store.js';
import { wellFormed } from './names.js';
import type { Session } from './session.js';

/** The strand that has every event of its mix, each once: totals are taken from it alone. */
const WHOLE = 'all';
const REST = '(rest)';
/** Categories of a mix that have a total of their own; bounds the labels of a metric. */
const MAX_CATEGORY_TOTALS = 64;

interface MixSum {
  events: number;
  late: number;
  readonly categories: Map<string, number>;
}

function sumByMix(tallies: readonly Tally[]): Map<string, MixSum> {
  const sums = new Map<string, MixSum>();
  for (const tally of tallies) {
    if (tally.strand !== WHOLE) continue;
    const sum: MixSum = sums.get(tally.mix) ?? { events: 0, late: 0, categories: new Map() };
    sums.set(tally.mix, sum);
    for (const [name, { onTime, late }] of tally.counts) {
      if (onTime + late === 0) continue;
      const category = wellFormed(name);
      sum.events += onTime + late;
      sum.late += late;
      sum.categories.set(category, (sum.categories.get(category) ?? 0) + onTime + late);
    }
  }
  return sums;
}

/** Puts what is over the limit together in `(rest)`; categories that have a total keep it. */
function withinLimit(
  added: ReadonlyMap<string, number>,
  kept: ReadonlySet<string>,
): Map<string, number> {
  const result = new Map<string, number>();
  let own = kept.size - (kept.has(REST) ? 1 : 0);
  for (const category of [...added.keys()].sort((a, b) => (a < b ? -1 : 1))) {
    const isNew = category !== REST && !kept.has(category);
    const target = isNew && own >= MAX_CATEGORY_TOTALS ? REST : category;
    if (isNew && target !== REST) own += 1;
    result.set(target, (result.get(target) ?? 0) + (added.get(category) ?? 0));
  }
  return result;
}

/** Sums since the store was made, added to in the transaction of the counts themselves. */
export function totalsWriter({ db, names }: Session): {
  addBatch(batch: CountBatch, counted: readonly Tally[]): void;
} {
  const addMix = db.prepare<[number, number, number]>(
    'UPDATE mixes SET events = events + ?, late = late + ? WHERE id = ?',
  );
  const selectKept = db
    .prepare<[number], string>('SELECT category FROM category_totals WHERE mix_id = ?')
    .pluck();
  const addCategory = db.prepare<[number, string, number]>(
    `INSERT INTO category_totals (mix_id, category, count) VALUES (?, ?, ?)
     ON CONFLICT DO UPDATE SET count = count + excluded.count`,
  );
  const addAccepted = db.prepare<[string, number]>(
    `INSERT INTO accepted_totals (collector, count) VALUES (?, ?)
     ON CONFLICT DO UPDATE SET count = count + excluded.count`,
  );
  const addRejected = db.prepare<[string, string, number]>(
    `INSERT INTO rejected_totals (collector, reason, count) VALUES (?, ?, ?)
     ON CONFLICT DO UPDATE SET count = count + excluded.count`,
  );
  return {
    addBatch(batch, counted) {
      for (const [mix, sum] of sumByMix(counted)) {
        const mixId = names.mixId(mix);
        addMix.run(sum.events, sum.late, mixId);
        const added = withinLimit(sum.categories, new Set(selectKept.all(mixId)));
        for (const [category, count] of added) addCategory.run(mixId, category, count);
      }
      for (const row of batch.accepted) addAccepted.run(row.collector, row.count);
      for (const row of batch.rejected) addRejected.run(row.collector, row.reason, row.count);
    },
  };
}
