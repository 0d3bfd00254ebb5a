import { describe, expect, it } from 'vitest';

import { type BudgetShare } from '../../../src/alert/budget.js';
import { decideFamily } from '../../../src/alert/decideFamily.js';

/** Budget and cadence that make the level .0005. */
const LEVEL = 0.0005;
const share: BudgetShare = {
  budget: '',
  perWeek: 2,
  roundsPerWeek: new Map([
    ['m', 3000],
    ['n', 3000],
  ]),
  equalCadence: true,
};
const tests = (...ps: readonly number[]) => ps.map((p) => ({ mix: 'm', logP: Math.log(p) }));
const alone = { elsewhere: 0, active: 0 };

describe('a family of equal cadence', () => {
  it('is decided by Benjamini and Hochberg at the level of one round', () => {
    // Sorted: .0001 <= .0005/4, .0002 <= 2(.0005)/4, .0004 > 3(.0005)/4, .9: two pass.
    const { decisions, note } = decideFamily(share, tests(0.0002, 0.9, 0.0001, 0.0004), alone);
    expect(decisions.map(({ passes }) => passes)).toEqual([true, false, true, false]);
    expect(note).toEqual({ budget: '', expected: 4, tested: 4, level: LEVEL, spent: LEVEL });
  });

  it('a larger p that passes takes the smaller ones with it', () => {
    // .0002 > .0005/2 is false: .00025; and .00049 <= .0005, so both pass (step up).
    const { decisions } = decideFamily(share, tests(0.00049, 0.0003), alone);
    expect(decisions.map(({ passes }) => passes)).toEqual([true, true]);
  });

  it('thresholds are what a test had to reach: the step it passed, or the next one', () => {
    const { decisions } = decideFamily(share, tests(0.0001, 0.9, 0.8, 0.7), alone);
    expect(decisions.map(({ logThreshold }) => Math.exp(logThreshold))).toEqual([
      expect.closeTo(LEVEL / 4, 12),
      expect.closeTo((2 * LEVEL) / 4, 12),
      expect.closeTo((2 * LEVEL) / 4, 12),
      expect.closeTo((2 * LEVEL) / 4, 12),
    ]);
  });

  it('a batch that is half of the round has half of the level', () => {
    const p = 0.0003;
    expect(decideFamily(share, tests(p), alone).decisions[0]?.passes).toBe(true);
    const half = decideFamily(share, tests(p), { elsewhere: 1, active: 0 });
    expect(half.decisions[0]?.passes).toBe(false);
    expect(half.note).toMatchObject({ expected: 2, tested: 1, level: LEVEL / 2 });
  });

  it('batches of a round spend no more than its level together', () => {
    const sizes = [3, 2, 5];
    const spent = sizes.map((size) => {
      const elsewhere = 10 - size;
      return decideFamily(share, tests(...new Array<number>(size).fill(0.5)), {
        elsewhere,
        active: 0,
      }).note.spent;
    });
    expect(spent.reduce((a, b) => a + b)).toBeCloseTo(LEVEL, 12);
  });

  it('without a test nothing is spent', () => {
    expect(decideFamily(share, [], alone)).toEqual({
      decisions: [],
      note: { budget: '', expected: 0, tested: 0, level: LEVEL, spent: 0 },
    });
    const waiting = decideFamily(share, [], { elsewhere: 3, active: 3 });
    expect(waiting.note).toMatchObject({ expected: 3, tested: 0, level: 0, spent: 0 });
  });

  it('a p of zero passes', () => {
    const { decisions } = decideFamily(share, [{ mix: 'm', logP: -Infinity }], alone);
    expect(decisions[0]?.passes).toBe(true);
  });
});

describe('a family of unequal cadence', () => {
  const unequal: BudgetShare = {
    budget: 'b',
    perWeek: 1,
    roundsPerWeek: new Map([
      ['fast', 10_080],
      ['slow', 1008],
      ['weekly', 1],
    ]),
    equalCadence: false,
  };

  it('gives each test its own level over all strands alive', () => {
    const ps = [
      { mix: 'fast', logP: -99 },
      { mix: 'slow', logP: -99 },
      { mix: 'weekly', logP: -99 },
    ];
    const { decisions, note } = decideFamily(unequal, ps, { elsewhere: 9, active: 6 });
    const thresholds = decisions.map(({ logThreshold }) => Math.exp(logThreshold));
    expect(thresholds).toEqual([
      expect.closeTo(0.75 / 10_080 / 6, 15),
      expect.closeTo(0.75 / 1008 / 6, 15),
      expect.closeTo(0.001 / 6, 15),
    ]);
    expect(note.spent).toBeCloseTo(
      thresholds.reduce((a, b) => a + b),
      15,
    );
    expect(note).toMatchObject({ budget: 'b', expected: 6, tested: 3 });
  });

  it('passes at the threshold itself and not above it', () => {
    const logThreshold = Math.log(0.75 / 1008 / 2);
    const at = decideFamily(unequal, [{ mix: 'slow', logP: logThreshold }], {
      elsewhere: 0,
      active: 2,
    });
    expect(at.decisions[0]?.passes).toBe(true);
    const above = decideFamily(unequal, [{ mix: 'slow', logP: logThreshold + 1e-9 }], {
      elsewhere: 0,
      active: 2,
    });
    expect(above.decisions[0]?.passes).toBe(false);
  });

  it('never allows for fewer strands than it tests', () => {
    const ps = [
      { mix: 'slow', logP: 0 },
      { mix: 'slow', logP: 0 },
    ];
    expect(decideFamily(unequal, ps, { elsewhere: 0, active: 0 }).note.expected).toBe(2);
  });
});
