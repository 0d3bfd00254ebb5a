import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import type { BudgetShare } from '../../../src/alert/budget.js';
import { decideFamily } from '../../../src/alert/decideFamily.js';
import { hasReturned } from '../../../src/alert/returned.js';
import type { Alarm } from '../../../src/terms/recipe.js';

const seeded = { seed: 7417, numRuns: 300 };
const share: BudgetShare = {
  budget: '',
  perWeek: 1,
  roundsPerWeek: new Map([
    ['m', 1008],
    ['n', 1008],
  ]),
  equalCadence: true,
};
const logP = fc.double({ min: -20, max: 0, noNaN: true });
const family = fc.array(fc.record({ mix: fc.constantFrom('m', 'n'), logP }), {
  minLength: 1,
  maxLength: 30,
});
const size = fc.record({ elsewhere: fc.nat(30), active: fc.nat(60) });

describe('the decision of a family', () => {
  it('does not depend on the order of its tests', () => {
    fc.assert(
      fc.property(family, size, (tests, sizes) => {
        const backwards = decideFamily(share, [...tests].reverse(), sizes);
        const { decisions, note } = decideFamily(share, tests, sizes);
        expect([...backwards.decisions].reverse()).toEqual(decisions);
        expect(backwards.note).toEqual(note);
      }),
      seeded,
    );
  });

  it('passes exactly the tests at or under their own threshold', () => {
    fc.assert(
      fc.property(family, size, fc.boolean(), (tests, sizes, equalCadence) => {
        const { decisions } = decideFamily({ ...share, equalCadence }, tests, sizes);
        decisions.forEach(({ passes, logThreshold }, at) => {
          expect(passes).toBe((tests[at]?.logP ?? 0) <= logThreshold);
        });
      }),
      seeded,
    );
  });

  it('contains every rejection of Bonferroni', () => {
    fc.assert(
      fc.property(family, (tests) => {
        const { decisions } = decideFamily(share, tests, { elsewhere: 0, active: 0 });
        const bonferroni = Math.log(0.75 / 1008 / tests.length);
        decisions.forEach(({ passes }, at) => {
          if ((tests[at]?.logP ?? 0) <= bonferroni) expect(passes).toBe(true);
        });
      }),
      seeded,
    );
  });

  it('stronger evidence for one test never takes a pass from another', () => {
    fc.assert(
      fc.property(family, size, fc.nat(29), (tests, sizes, pick) => {
        const at = pick % tests.length;
        const stronger = tests.map((test, i) => (i === at ? { ...test, logP: -25 } : test));
        const before = decideFamily(share, tests, sizes).decisions;
        const after = decideFamily(share, stronger, sizes).decisions;
        before.forEach(({ passes }, i) => {
          if (passes) expect(after[i]?.passes).toBe(true);
        });
      }),
      seeded,
    );
  });

  it('never spends more than its level, and a part of a round no more than its part', () => {
    fc.assert(
      fc.property(family, size, (tests, sizes) => {
        const { note } = decideFamily(share, tests, sizes);
        const part = tests.length / (tests.length + sizes.elsewhere);
        expect(note.spent).toBeCloseTo((0.75 / 1008) * part, 15);
      }),
      seeded,
    );
  });
});

describe('a return', () => {
  const alarm: Alarm = {
    alertId: 'a',
    startMs: 0,
    endMs: 1,
    sinceEarliestMs: 0,
    recipe: { step: 0, fromMs: 0, toMs: 0, excluded: [] },
    carriers: { categories: ['bad'], named: ['ok', 'bad'], unnamed: false, before: 0.1, now: 0.2 },
    weightNow: 1000,
    weightReference: 40_000,
    rho: 0.001,
    df2: 200,
    tolerance: 0.01,
  };
  const bad = fc.integer({ min: 0, max: 300 });
  const run = (list: readonly number[]) =>
    list.map((n) => new Map(Object.entries({ ok: 1000 - n, bad: n })));

  it('that is shown stays shown when every window has fewer of the carriers', () => {
    fc.assert(
      fc.property(fc.array(bad, { minLength: 3, maxLength: 24 }), fc.nat(50), (list, fewer) => {
        if (!hasReturned(alarm, run(list))) return;
        expect(hasReturned(alarm, run(list.map((n) => Math.max(0, n - fewer))))).toBe(true);
      }),
      seeded,
    );
  });

  it('does not depend on the order of windows within one length', () => {
    fc.assert(
      fc.property(fc.array(bad, { minLength: 3, maxLength: 3 }), (list) => {
        expect(hasReturned(alarm, run([...list].reverse()))).toBe(hasReturned(alarm, run(list)));
      }),
      seeded,
    );
  });
});
