import { describe, expect, it } from 'vitest';

import { poolByMargins } from '../../../src/stats/poolByMargins.js';
import { poolDeclared } from '../../../src/stats/poolDeclared.js';

describe('poolByMargins', () => {
  it('when every category expects five, each keeps its own bin', () => {
    const pooled = poolByMargins({ now: [50, 30, 20], reference: [500, 300, 200] });
    expect(pooled).toEqual({ bins: [[0], [1], [2]], pooled: [] });
  });

  it('rare categories share the last bin when together they expect five', () => {
    // N = M = 100: E is half of each total.
    const pooled = poolByMargins({ now: [4, 60, 3, 33], reference: [4, 60, 3, 33] });
    expect(pooled).toEqual({ bins: [[1], [3], [0, 2]], pooled: [0, 2] });
  });

  it('rare categories that stay under five take in the smallest kept one', () => {
    const pooled = poolByMargins({ now: [60, 1, 19, 20], reference: [60, 1, 19, 20] });
    expect(pooled).toEqual({ bins: [[0], [3], [1, 2]], pooled: [1, 2] });
  });

  it('of equally small kept ones the first is taken', () => {
    const pooled = poolByMargins({ now: [20, 20, 1, 59], reference: [20, 20, 1, 59] });
    expect(pooled.bins).toEqual([[1], [3], [0, 2]]);
  });

  it('exactly five is enough', () => {
    expect(poolByMargins({ now: [5, 95], reference: [5, 95] }).bins).toEqual([[0], [1]]);
    expect(poolByMargins({ now: [4, 96], reference: [5, 95] }).bins).toEqual([[0, 1]]);
  });

  it('the smaller sample sets the expectation', () => {
    // N = 20, M = 2000: the 200 events of the last category are 1.98 expected among 20.
    const pooled = poolByMargins({ now: [10, 8, 2], reference: [1000, 802, 198] });
    expect(pooled.bins).toEqual([[0], [1, 2]]);
  });

  it('only totals decide: moving events between the rows changes nothing', () => {
    const one = poolByMargins({ now: [50, 3, 47], reference: [50, 7, 43] });
    const other = poolByMargins({ now: [50, 7, 43], reference: [50, 3, 47] });
    expect(one).toEqual(other);
  });

  it('empty categories join the rare ones, and alone they belong to no bin', () => {
    const joined = poolByMargins({ now: [50, 0, 4, 46], reference: [50, 0, 8, 42] });
    expect(joined.bins).toEqual([[0], [2], [3]]);
    const rare = poolByMargins({ now: [90, 0, 4, 6], reference: [90, 0, 4, 6] });
    expect(rare.bins).toEqual([[0], [1, 2, 3]]);
    expect(rare.pooled).toEqual([1, 2, 3]);
  });

  it('without events on one side there is one bin, nothing to test', () => {
    expect(poolByMargins({ now: [0, 0], reference: [5, 9] }).bins).toEqual([[0, 1]]);
    expect(poolByMargins({ now: [], reference: [] }).bins).toEqual([]);
  });

  it('ordered: the smallest joins its smaller neighbour until all expect five', () => {
    const counts = [30, 3, 10, 40, 2, 15];
    const pooled = poolByMargins({ now: counts, reference: counts, ordered: true });
    expect(pooled.bins).toEqual([[0], [1, 2], [3], [4, 5]]);
    expect(pooled.pooled).toEqual([1, 2, 4, 5]);
  });

  it('ordered: with too few events all end in one bin', () => {
    const pooled = poolByMargins({ now: [1, 1, 1], reference: [1, 1, 1], ordered: true });
    expect(pooled.bins).toEqual([[0, 1, 2]]);
  });

  it('unequal lengths and negative cells are refused', () => {
    expect(() => poolByMargins({ now: [1], reference: [1, 2] })).toThrow(
      'reference: must have 1 cells, got 2',
    );
    expect(() => poolByMargins({ now: [-1], reference: [1] })).toThrow(
      'now[0]: must be a finite number >= 0, got -1',
    );
  });
});

describe('poolDeclared', () => {
  it('a bin expects N times its share', () => {
    const pooled = poolDeclared({ counts: [92, 7, 1, 0], shares: [0.9, 0.06, 0.03, 0.01] });
    // Expected 90, 6, 3, 1: the last two reach 4 and take in the 6.
    expect(pooled).toEqual({ bins: [[0], [1, 2, 3]], pooled: [1, 2, 3] });
  });

  it('the counts themselves do not matter, only their total', () => {
    const shares = [0.6, 0.3, 0.07, 0.03];
    const one = poolDeclared({ counts: [60, 30, 7, 3], shares });
    expect(poolDeclared({ counts: [3, 7, 30, 60], shares })).toEqual(one);
    expect(one.bins).toEqual([[0], [1], [2, 3]]);
  });

  it('shares that do not sum to one are refused', () => {
    expect(() => poolDeclared({ counts: [1, 2], shares: [0.5, 0.6] })).toThrow(
      'shares: must sum to 1, got 1.1',
    );
  });
});
