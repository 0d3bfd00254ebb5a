import type { VerdictName } from '../../terms/verdict.js';
import type { Store, Totals } from '../store.js';
import type { Session } from './session.js';

interface CategoryRow {
  mix: string;
  category: string;
  count: number;
}
type DeliveryTotal = Totals['deliveries'][number];

/** Every list in code-point order of its names. */
export function totalsMethods({ db, read }: Session): Pick<Store, 'totals'> {
  const accepted = db.prepare<[], { collector: string; count: number }>(
    'SELECT collector, count FROM accepted_totals ORDER BY collector',
  );
  const rejected = db.prepare<[], Totals['rejected'][number]>(
    'SELECT collector, reason, count FROM rejected_totals ORDER BY collector, reason',
  );
  const mixes = db.prepare<[], { name: string; events: number; late: number }>(
    'SELECT name, events, late FROM mixes ORDER BY name',
  );
  const categories = db.prepare<[], CategoryRow>(
    `SELECT m.name AS mix, t.category, t.count
     FROM category_totals t JOIN mixes m ON m.id = t.mix_id ORDER BY m.name, t.category`,
  );
  const verdicts = db.prepare<[], { mix: string; verdict: VerdictName; count: number }>(
    `SELECT m.name AS mix, t.verdict, t.count
     FROM verdict_totals t JOIN mixes m ON m.id = t.mix_id ORDER BY m.name, t.verdict`,
  );
  const deliveries = db.prepare<[], DeliveryTotal>(
    'SELECT sender, outcome, count FROM delivery_totals ORDER BY sender, outcome',
  );

  function readMixes(): Totals['mixes'] {
    const result = new Map(
      mixes.all().map(({ name, events, late }) => {
        return [name, { events, late, categories: new Map<string, number>() }];
      }),
    );
    for (const { mix, category, count } of categories.all()) {
      result.get(mix)?.categories.set(category, count);
    }
    return result;
  }

  // One transaction, so that the sums are of one instant also while another process writes.
  const readAll = db.transaction((): Totals => ({
    accepted: new Map(accepted.all().map((row) => [row.collector, row.count])),
    rejected: rejected.all(),
    mixes: readMixes(),
    verdicts: verdicts.all(),
    deliveries: deliveries.all(),
  }));
  return { totals: () => read('read the totals', () => readAll()) };
}
