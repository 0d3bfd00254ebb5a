import { describe, expect, it } from 'vitest';

import { binCounts, binsByMargins, binsByShares, binsKey } from '../../../src/judge/bins.js';
import { countsOf, lettered, times } from './samples.js';

const nominal = { ordered: null, categoriesJudged: 64, pooling: true };

describe('bins of a table of two samples', () => {
  it('keep a category with five events expected on the smaller side, and pool the others', () => {
    // E = 100 t / 1100: 55 events in all expect 5.0 and stay, 54 expect 4.9 and do not.
    const now = countsOf({ ok: 91, edge: 5, under: 4 });
    const before = countsOf({ ok: 900, edge: 50, under: 50 });
    const found = binsByMargins(now, before, nominal);
    // What is left expects 4.9 by itself, under 5: the smallest kept bin joins it.
    expect(found.names).toEqual(['ok', '(pooled)']);
    expect(found.members).toEqual([['ok'], ['edge', 'under']]);
    expect(found.pooled).toEqual(['edge', 'under']);
    expect(found.pooledIndex).toBe(1);
  });

  it('pool several rare ones without touching a kept bin once they expect five together', () => {
    const now = countsOf({ ok: 88, edge: 6, r1: 3, r2: 3 });
    const before = countsOf({ ok: 880, edge: 60, r1: 30, r2: 30 });
    const found = binsByMargins(now, before, nominal);
    expect(found.names).toEqual(['edge', 'ok', '(pooled)']);
    expect(found.pooled).toEqual(['r1', 'r2']);
  });

  it('depend on the margins alone: which side the events are on changes nothing', () => {
    const one = binsByMargins(lettered([90, 10, 0]), lettered([80, 14, 6]), nominal);
    const other = binsByMargins(lettered([80, 14, 6]), lettered([90, 10, 0]), nominal);
    expect(other).toEqual(one);
  });

  it('do not depend on the order in which categories arrive', () => {
    const before = countsOf({ b: 50, a: 30, c: 2, d: 3 });
    const reversed = new Map([...before].reverse());
    expect(binsByMargins(lettered([30, 50]), reversed, nominal)).toEqual(
      binsByMargins(lettered([30, 50]), before, nominal),
    );
  });

  it('beyond the cap sum the smallest categories in (rest), ties by code point', () => {
    const options = { ...nominal, categoriesJudged: 3 };
    const before = countsOf({ d: 100, c: 100, b: 100, a: 500 });
    const found = binsByMargins(before, before, options);
    expect(found.names).toEqual(['(rest)', 'a', 'b']);
    expect(binCounts(before, found)).toEqual([200, 500, 100]);
  });

  it('more than 64 categories are 63 and (rest), and what is stored as (rest) is in it', () => {
    const numbers = Object.fromEntries(times(80, 0).map((_, at) => [`c${String(at + 10)}`, 100]));
    const many = countsOf({ ...numbers, '(rest)': 7 });
    const found = binsByMargins(many, many, nominal);
    expect(found.names).toHaveLength(64);
    expect(found.names[0]).toBe('(rest)');
    expect(binCounts(many, found)[0]).toBe(17 * 100 + 7);
    expect(binCounts(many, found).reduce((a, b) => a + b)).toBe(8007);
  });

  it('exactly at the cap nothing is summed', () => {
    const numbers = Object.fromEntries(times(64, 0).map((_, at) => [`c${String(at + 10)}`, 100]));
    const found = binsByMargins(countsOf(numbers), countsOf(numbers), nominal);
    expect(found.names).not.toContain('(rest)');
  });

  it('of an ordered mix join neighbours only, in the declared order', () => {
    const options = { ...nominal, ordered: ['low', 'mid', 'high', 'top'] };
    const now = countsOf({ top: 40, high: 2, mid: 3, low: 55 });
    const found = binsByMargins(now, now, options);
    expect(found.names).toEqual(['low', 'mid + high', 'top']);
    expect(found.pooledIndex).toBeNull();
    expect(binCounts(now, found)).toEqual([55, 5, 40]);
  });

  it('of an ordered mix, what the declaration does not name follows by code point', () => {
    const options = { ...nominal, ordered: ['low', 'high'] };
    const now = countsOf({ zz: 20, aa: 20, high: 20, low: 20 });
    expect(binsByMargins(now, now, options).names).toEqual(['low', 'high', 'aa', 'zz']);
  });

  it('without pooling every category seen has its own', () => {
    const options = { ...nominal, pooling: false };
    const found = binsByMargins(countsOf({ a: 1, b: 0 }), countsOf({ a: 9, c: 1 }), options);
    expect(found.names).toEqual(['a', 'c']);
    expect(found.pooledIndex).toBeNull();
  });
});

describe('bins of declared shares', () => {
  const shares = new Map([
    ['ok', 0.9],
    ['bad', 0.06],
    ['(rest)', 0.04],
  ]);

  it('keep a category that expects five events of the window', () => {
    expect(binsByShares(countsOf({ ok: 125 }), shares, nominal).names).toEqual([
      '(rest)',
      'bad',
      'ok',
    ]);
    expect(binsByShares(countsOf({ ok: 124 }), shares, nominal).names).toEqual(['ok', '(pooled)']);
  });

  it('count what no share was declared for as (rest), also where that is pooled', () => {
    const now = countsOf({ ok: 100, strange: 15, odd: 10 });
    expect(binCounts(now, binsByShares(now, shares, nominal))).toEqual([25, 0, 100]);
    const few = countsOf({ ok: 50, strange: 15 });
    expect(binCounts(few, binsByShares(few, shares, nominal))).toEqual([50, 15]);
  });
});

describe('the counts of a window outside the table', () => {
  it('go to (rest), else to (pooled), else nowhere', () => {
    const other = countsOf({ a: 1, unknown: 5 });
    const base = { pooled: [], pooledIndex: null };
    const rest = { ...base, names: ['(rest)', 'a'], members: [['(rest)'], ['a']] };
    expect(binCounts(other, rest)).toEqual([5, 1]);
    const pooled = { names: ['a', '(pooled)'], members: [['a'], ['b', 'c']], pooled: ['b', 'c'] };
    expect(binCounts(other, { ...pooled, pooledIndex: 1 })).toEqual([1, 5]);
    expect(binCounts(other, { ...base, names: ['a'], members: [['a']] })).toEqual([1]);
  });

  it('the key of bins tells different ways of gathering apart', () => {
    const one = binsByMargins(lettered([50, 50, 50]), lettered([50, 50, 50]), nominal);
    const two = binsByMargins(lettered([50, 50, 1]), lettered([50, 50, 1]), nominal);
    expect(binsKey(one)).not.toBe(binsKey(two));
  });
});
