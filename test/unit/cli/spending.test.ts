import { describe, expect, it } from 'vitest';

import { Spending } from '../../../src/cli/spending.js';
import type { Batch } from '../../../src/terms/round.js';
import { configOf, mixOf } from '../schedule/scene.js';

const HOUR = 3_600_000;
const WEEK = 168 * HOUR;

function batch(endMs: number, spent: number, number = 0): Batch {
  const family = { budget: '', expected: 1, tested: 1, level: spent, spent };
  return { endMs, number, mixes: ['outcomes'], families: [family] };
}

/** Spending over stored batches; two false alarms a week are accepted. */
function loaded(stored: readonly Batch[]): Promise<Spending> {
  const judged = stored.map(({ endMs }): [string, number] => ['outcomes', endMs]);
  return Spending.load(configOf([mixOf()], { falseAlarms: { perWeek: 2 } }), {
    judgedTo: () => Promise.resolve(new Map(judged)),
    async *batches(fromMs = 0) {
      yield* stored.filter(({ endMs }) => endMs >= fromMs);
    },
  });
}

describe('what the rounds of a week have spent', () => {
  it('is unknown before the first round', async () => {
    expect((await loaded([])).ratio()).toBeNull();
  });

  it('sums stored and new batches over what is accepted', async () => {
    const spending = await loaded([batch(HOUR, 0.1)]);
    spending.add(batch(2 * HOUR, 0.2));
    spending.add(batch(2 * HOUR, 0.1, 1));
    expect(spending.ratio()).toBeCloseTo(0.2, 12);
  });

  it('leaves out what is more than a week before the last round, in any order', async () => {
    const spending = await loaded([batch(0, 0.5), batch(HOUR, 0.1)]);
    spending.add(batch(WEEK + HOUR, 0.3));
    spending.add(batch(HOUR / 2, 0.7));
    expect(spending.ratio()).toBeCloseTo(0.2, 12);
  });
});
