import { describe, expect, it } from 'vitest';

import { weigh, type WeighInput } from '../../../src/judge/weigh.js';
import { CHECK_BASELINE, countsOf, lettered, windowsOf } from './samples.js';

function input(changed: Partial<WeighInput>): WeighInput {
  return {
    before: lettered([520, 180, 120, 90, 60, 30]),
    after: lettered([48, 22, 11, 9, 6, 4]),
    windows: null,
    declared: false,
    ordered: null,
    pooling: true,
    test: 'auto',
    ...changed,
  };
}

describe('two samples weighed by hand', () => {
  it('are a table, unpooled with the values of R', () => {
    const found = weigh(input({ pooling: false }));
    // R 4.2.2 chisq.test(rbind(c(48,22,11,9,6,4), c(520,180,120,90,60,30))), from the design.
    expect(found.method).toBe('pearson');
    expect(found.statistic).toBeCloseTo(1.4442229, 7);
    expect(found.df).toBe(5);
    expect(found.p).toBeCloseTo(0.91941533, 8);
    expect(found.g2.statistic).toBeCloseTo(1.3867137, 7);
    expect(found.table.rows).toEqual(['before', 'after']);
  });

  it('pool what expects fewer than five events', () => {
    const found = weigh(input({}));
    // f expects 100 x 34 / 1100 = 3.1 and takes in the smallest kept, e.
    expect(found.pooled).toEqual(['e', 'f']);
    expect(found.df).toBe(4);
  });

  it('the first as declared shares is a goodness of fit, with the values of R', () => {
    const shares = lettered([50, 20, 12, 9, 6, 3]);
    const found = weigh(input({ before: shares, declared: true, pooling: false }));
    // R 4.2.2 chisq.test(c(48,22,11,9,6,4), p = c(.5,.2,.12,.09,.06,.03)), from the design.
    expect(found.method).toBe('goodness-of-fit');
    expect(found.statistic).toBeCloseTo(0.69666667, 8);
    expect(found.p).toBeCloseTo(0.98315112, 8);
    expect(found.table.rows).toEqual(['after']);
  });

  it('declared shares of any scale are the same shares', () => {
    const one = weigh(input({ before: lettered([0.7, 0.2, 0.1]), declared: true }));
    const ten = weigh(input({ before: lettered([7, 2, 1]), declared: true }));
    expect(ten.p).toBeCloseTo(one.p, 12);
  });

  it('an exact p has the value of R', () => {
    const found = weigh(
      input({ before: lettered([10, 2, 4, 1]), after: lettered([3, 1, 0, 5]), test: 'exact' }),
    );
    // R 4.2.2 fisher.test(rbind(c(3,1,0,5), c(10,2,4,1)))$p.value, from the design.
    expect(found.method).toBe('exact');
    expect(found.p).toBeCloseTo(0.029249012, 9);
    expect(found).toMatchObject({ statistic: null, df: null });
  });

  it('an exact p against declared shares is that printed for peas', () => {
    const peas = lettered([315, 108, 101, 32]);
    const found = weigh(
      input({ before: lettered([9, 3, 3, 1]), after: peas, declared: true, test: 'exact' }),
    );
    // mendel-peas in published.json: 28,956,759 ways to fall, p by chi-squared order .9272.
    expect(found.method).toBe('exact');
    expect(found.p).toBeCloseTo(0.9272, 4);
  });

  it('an exact p against declared shares that is too much work is refused', () => {
    const many = lettered(Array.from({ length: 30 }, (_, k) => 100_000 + k));
    const asked = input({ before: many, after: many, declared: true, test: 'exact' });
    expect(() => weigh(asked)).toThrow(
      new RangeError('too many events for an exact p against shares; leave --exact out'),
    );
  });

  it('ordered categories have a trend, others none', () => {
    const two = { before: countsOf({ a: 30, b: 10 }), after: countsOf({ a: 20, b: 20 }) };
    const found = weigh(input({ ...two, ordered: ['a', 'b'] }));
    // Closed form: with two categories the trend is X2 (n - 1) / n.
    expect(found.trend?.df).toBe(1);
    expect(found.trend?.statistic).toBeCloseTo((found.pearson.statistic * 79) / 80, 12);
    expect(weigh(input(two)).trend).toBeUndefined();
  });

  it('where pooling leaves one bin the p is exact without being asked for', () => {
    const found = weigh(
      input({ before: countsOf({ a: 8, b: 1 }), after: countsOf({ a: 1, b: 8 }) }),
    );
    expect(found.method).toBe('exact');
    // Of 9 + 9 events: two tables of 81 ways and two of one, out of C(18, 9) = 48,620.
    expect(found.p).toBeCloseTo(164 / 48_620, 12);
    expect(found.table.categories).toEqual(['a', 'b']);
  });

  it('a sampled p repeats with its seed and is never 0', () => {
    const sampled = { before: countsOf({ a: 900 }), after: countsOf({ b: 900 }) };
    const test = { samples: 199, seed: 5 };
    const found = weigh(input({ ...sampled, test }));
    expect(found.method).toBe('monte-carlo');
    // (b + 1)/(m + 1) with no exceedance.
    expect(found.p).toBe(1 / 200);
    expect(weigh(input({ ...sampled, test }))).toEqual(found);
  });

  it('windows of the first give the dispersion', () => {
    const rows = CHECK_BASELINE.map(lettered);
    const before = lettered([404, 154, 96, 72, 48, 26]);
    const after = lettered([36, 24, 13, 14, 9, 4]);
    const found = weigh(input({ before, windows: windowsOf(rows), after }));
    expect(found.method).toBe('g2-f');
    expect(found.rho).toBe(0);
    // (B - 1)(K - 1) with the bins that pooling leaves.
    expect(found.df2).toBe(7 * (found.df ?? 0));
    expect(found.pooled).toContain('f');
  });

  it('too few windows are refused with what to do', () => {
    const rows = CHECK_BASELINE.slice(0, 7).map(lettered);
    expect(() => weigh(input({ windows: windowsOf(rows) }))).toThrow(
      'the windows of BEFORE are too few to learn how much they vary: 7 of 8 windows in the ' +
        'baseline so far; give a shorter --window or more history, or leave --window out',
    );
  });

  it('an empty side is refused by its name', () => {
    expect(() => weigh(input({ after: new Map() }))).toThrow('the after sample holds no events');
    expect(() => weigh(input({ before: countsOf({ a: 0 }) }))).toThrow(
      'the before sample holds no events',
    );
  });

  it('one category on both sides has not moved', () => {
    const found = weigh(input({ before: countsOf({ a: 50 }), after: countsOf({ a: 20 }) }));
    expect(found.p).toBe(1);
    expect(found.moved).toMatchObject({ estimate: 0, atLeast: 0 });
  });

  it('ordered categories join their neighbours', () => {
    const before = countsOf({ low: 500, mid: 10, high: 490 });
    const after = countsOf({ low: 45, mid: 1, high: 54 });
    const found = weigh(input({ before, after, ordered: ['low', 'mid', 'high'] }));
    expect(found.table.categories).toEqual(['low', 'mid + high']);
  });
});
