import { describe, expect, it } from 'vitest';

import { budgetShares, expectedFalseAlarms, familyLevel } from '../../../src/alert/budget.js';

const mix = (name: string, roundsPerWeek: number, perWeek: number | null = null) => ({
  name,
  roundsPerWeek,
  falseAlarms: perWeek === null ? null : { perWeek },
});

describe('the level of a family', () => {
  it('is three quarters of the budget over the rounds of a week', () => {
    // methods 4.1: budget 1, ten-minute windows, T = 1008.
    expect(familyLevel(1, 1008)).toBe(0.75 / 1008);
    expect(familyLevel(4, 10_080)).toBe(3 / 10_080);
  });

  it('never exceeds one in a thousand, however generous the budget', () => {
    // A lone weekly strand would otherwise be tested at .75.
    expect(familyLevel(1, 1)).toBe(0.001);
    expect(familyLevel(1, 749)).toBe(0.001);
    expect(familyLevel(1, 751)).toBeLessThan(0.001);
    expect(familyLevel(1000, 1008)).toBe(0.001);
  });
});

describe('shares of the budget', () => {
  it('mixes without one of their own share the general one', () => {
    const shares = budgetShares([mix('a', 1008), mix('b', 1008)], { perWeek: 2 });
    expect(shares).toHaveLength(1);
    expect(shares[0]).toMatchObject({ budget: '', perWeek: 2, equalCadence: true });
    expect([...(shares[0]?.roundsPerWeek ?? [])]).toEqual([
      ['a', 1008],
      ['b', 1008],
    ]);
  });

  it('unequal cadences are told, also where one mix has a budget of its own', () => {
    const mixes = [mix('a', 1008), mix('own', 7, 3), mix('b', 168)];
    const shares = budgetShares(mixes, { perWeek: 1 });
    expect(shares.map(({ budget, equalCadence }) => [budget, equalCadence])).toEqual([
      ['', false],
      ['own', true],
    ]);
    expect(shares[1]?.perWeek).toBe(3);
  });

  it('there is no general share where every mix has its own', () => {
    const shares = budgetShares([mix('a', 7, 1), mix('b', 7, 1)], { perWeek: 1 });
    expect(shares.map(({ budget }) => budget)).toEqual(['a', 'b']);
  });
});

describe('the false alarms to expect', () => {
  it('are three quarters of the budget where the ceiling does not bind', () => {
    const shares = budgetShares([mix('a', 1008), mix('b', 1008)], { perWeek: 1 });
    expect(expectedFalseAlarms(shares)).toBeCloseTo(0.75, 12);
    const unequal = budgetShares([mix('a', 1008), mix('b', 2016)], { perWeek: 1 });
    expect(expectedFalseAlarms(unequal)).toBeCloseTo(0.75, 12);
  });

  it('are what the ceiling leaves for a lone weekly mix', () => {
    expect(expectedFalseAlarms(budgetShares([mix('a', 1)], { perWeek: 1 }))).toBe(0.001);
  });

  it('add up over separate budgets', () => {
    const shares = budgetShares([mix('a', 1008), mix('b', 10_080, 2)], { perWeek: 1 });
    expect(expectedFalseAlarms(shares)).toBeCloseTo(0.75 + 1.5, 12);
  });
});
