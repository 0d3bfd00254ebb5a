import { describe, expect, it } from 'vitest';

import { dispersionOfSlots } from '../../../src/stats/dispersionOfSlots.js';
import { dispersionOfSuccessive } from '../../../src/stats/dispersionOfSuccessive.js';
import { estimateDispersion } from '../../../src/stats/estimateDispersion.js';
import { moved } from '../../../src/stats/moved.js';
import { quasiLikelihoodF } from '../../../src/stats/quasiLikelihoodF.js';

// Check values of the method's specification (section 1.8), made with scipy and R 4.2.2.
const WINDOWS = [
  [52, 18, 12, 9, 6, 3],
  [47, 22, 13, 8, 7, 3],
  [55, 17, 10, 10, 5, 3],
  [44, 21, 15, 9, 6, 5],
  [50, 20, 11, 8, 8, 3],
  [61, 14, 9, 8, 5, 3],
  [46, 23, 12, 11, 5, 3],
  [49, 19, 14, 9, 6, 3],
];
const SPREAD = WINDOWS.map((window, b) => {
  if (b === 1) return [70, 10, 5, 6, 6, 3];
  return b === 4 ? [30, 35, 16, 10, 6, 3] : window;
});

const share = (counts: number[]): number[] => {
  const total = counts.reduce((a, b) => a + b, 0);
  return counts.map((x) => x / total);
};

describe('estimateDispersion and quasiLikelihoodF', () => {
  it('windows that scatter less than chance give rho 0 and check A', () => {
    const found = estimateDispersion(WINDOWS);
    expect([found.rho, found.weight, found.df2]).toEqual([0, 800, 35]);
    const now = [36, 24, 13, 14, 9, 4];
    const test = quasiLikelihoodF({ now, ...found });
    expect(test.g).toBeCloseTo(8.538155, 6);
    expect(test.f).toBeCloseTo(1.707631, 6);
    expect(Math.exp(test.logP)).toBeCloseTo(0.15865575, 8);
    // Section 3: .2346031104627834, from a t quantile good to 10 digits.
    const amount = moved({
      now: share(now),
      weightNow: test.weightNow,
      reference: found.shares,
      weightReference: found.weight,
      df2: found.df2,
      pooledIndex: null,
    });
    expect(amount.atMost).toBeCloseTo(0.2346031104627834, 9);
  });

  it('windows that scatter more give the rho, weights and test of check B', () => {
    const found = estimateDispersion(SPREAD);
    expect(found.rho).toBeCloseTo(0.00445617, 8);
    expect(found.weight).toBeCloseTo(555.10821, 5);
    const now = [72, 48, 26, 28, 18, 8];
    const test = quasiLikelihoodF({ now, ...found });
    expect(test.weightNow).toBeCloseTo(106.00087, 5);
    expect(test.g).toBeCloseTo(9.003517, 6);
    expect(test.f).toBeCloseTo(1.800703, 6);
    expect(Math.exp(test.logP)).toBeCloseTo(0.13828825, 8);
    // Section 3: .23829469170665193, made there from weights rounded to five places.
    const amount = moved({
      now: share(now),
      weightNow: test.weightNow,
      reference: found.shares,
      weightReference: found.weight,
      df2: found.df2,
      pooledIndex: null,
    });
    expect(Math.abs(amount.atMost - 0.23829469170665193)).toBeLessThan(3e-9);
  });

  it('a window without events is ignored and keeps its place with weight 0', () => {
    const empty = [0, 0, 0, 0, 0, 0];
    const found = estimateDispersion([...SPREAD.slice(0, 3), empty, ...SPREAD.slice(3)]);
    const without = estimateDispersion(SPREAD);
    expect([found.rho, found.df2]).toEqual([without.rho, without.df2]);
    expect(found.weights[3]).toBe(0);
    expect(found.weights).toHaveLength(9);
  });

  it('a single window has no dispersion to show: rho 0 on 0 degrees of freedom', () => {
    const found = estimateDispersion([[5, 3]]);
    expect([found.rho, found.df2, found.weight]).toEqual([0, 0, 8]);
  });

  it('4,100 windows of 64 bins are done within a second', () => {
    const many = Array.from({ length: 4100 }, (_, b) =>
      Array.from(
        { length: 64 },
        (__, k) => ((b * 7919 + k * 104_729) % 97) + (k === 0 ? b % 50 : 0),
      ),
    );
    const before = performance.now();
    expect(estimateDispersion(many).rho).toBeGreaterThan(0);
    expect(performance.now() - before).toBeLessThan(1000);
  });

  it('with rho 0 and an infinite df2 the test is the likelihood ratio of the two rows', () => {
    // R: G2 of this table is 1.3867137 (specification, section 2.2).
    const before = [520, 180, 120, 90, 60, 30];
    const test = quasiLikelihoodF({
      now: [48, 22, 11, 9, 6, 4],
      shares: share(before),
      weight: 1000,
      rho: 0,
      df2: Infinity,
    });
    expect(test.g).toBeCloseTo(1.3867137, 7);
  });

  it('an event that was declared impossible gives logP -Infinity', () => {
    const input = { now: [5, 1], shares: [1, 0], weight: Infinity, rho: 0, df2: Infinity };
    expect(quasiLikelihoodF(input)).toMatchObject({ g: Infinity, logP: -Infinity });
    expect(quasiLikelihoodF({ ...input, now: [6, 0] })).toMatchObject({ g: 0, logP: 0 });
  });

  it('what cannot be tested is refused by name and value', () => {
    const fine = { now: [5, 1], shares: [0.5, 0.5], weight: 10, rho: 0, df2: 5 };
    const refused = (part: object): (() => unknown) => {
      return () => quasiLikelihoodF({ ...fine, ...part });
    };
    expect(refused({ now: [0, 0] })).toThrow('now: must hold at least one event, got 0');
    expect(refused({ now: [5, -1] })).toThrow('now[1]: must be a finite number >= 0, got -1');
    expect(refused({ shares: [0.5, 0.4] })).toThrow('shares: must sum to 1, got 0.9');
    expect(refused({ shares: [1] })).toThrow('shares: must have 2 cells, got 1');
    expect(refused({ rho: 2 })).toThrow('rho: must lie between 0 and 1, got 2');
    expect(() => estimateDispersion([])).toThrow('windows: must have a row, got none');
    expect(() => estimateDispersion([[1, 2], [1]])).toThrow('windows[1]: must have 2 cells, got 1');
  });
});

describe('dispersionOfSuccessive', () => {
  it('equal sizes: rho is the mean of the pair statistics over its expectation', () => {
    // Two pairs of 100 events; by hand from G2 of each 2 x 2 table: phi = mean G, rho = (phi-1)/99.
    const pair = { before: [50, 50], after: [65, 35] };
    const log = (x: number, e: number): number => x * Math.log(x / e);
    const g = 2 * (log(50, 57.5) + log(50, 42.5) + log(65, 57.5) + log(35, 42.5));
    const found = dispersionOfSuccessive([pair, { before: pair.after, after: pair.before }]);
    expect(found.rho).toBeCloseTo((g - 1) / 99, 12);
    expect(found.df2).toBeCloseTo(8 / 5, 12);
    expect(found.pairs).toBe(2);
  });

  it('a pair with an empty side is ignored; without any, nothing is known', () => {
    const none = dispersionOfSuccessive([{ before: [0, 0], after: [3, 4] }]);
    expect(none).toEqual({ rho: 0, df2: 0, pairs: 0 });
  });
});

describe('dispersionOfSlots', () => {
  it('one slot is the same as its windows alone', () => {
    const found = dispersionOfSlots([SPREAD, [[3, 1, 1, 1, 1, 1]], []]);
    expect(found.rho).toBeCloseTo(estimateDispersion(SPREAD).rho, 14);
    expect(found.df2).toBe(35);
  });
});
