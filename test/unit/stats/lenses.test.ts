import { describe, expect, it } from 'vitest';

import { boxEpsilon } from '../../../src/stats/boxEpsilon.js';
import { boxQuasiLikelihoodF } from '../../../src/stats/boxQuasiLikelihoodF.js';
import { combineLenses } from '../../../src/stats/combineLenses.js';
import { estimateDispersion } from '../../../src/stats/estimateDispersion.js';
import { lensTwoGate } from '../../../src/stats/lensTwoGate.js';
import { quasiLikelihoodF } from '../../../src/stats/quasiLikelihoodF.js';
import { rareCategoryTail } from '../../../src/stats/rareCategoryTail.js';

// Check values A and B of the specification (section 1.8), made with scipy.
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

const range = (message: string): RangeError => new RangeError(message);

describe('boxEpsilon and boxQuasiLikelihoodF', () => {
  it('one direction that carries all the spread leaves 1/(K-1)', () => {
    // Every window moves between the same two mixes: S has rank 1, tr(S^2) = (tr S)^2, so that
    // T1/T2 = 1 + small and, with T1 <= T2 (K-1) times that, the clip holds it at 1/(K-1).
    const windows = Array.from({ length: 40 }, (_, b) =>
      b % 2 === 0 ? [400, 300, 300] : [300, 400, 300],
    );
    const { epsilon, trace, traceOfSquare } = boxEpsilon({ windows, rho: 0 });
    expect(traceOfSquare).toBeCloseTo(trace * trace, 8);
    // (1 - 2/((n-1)(n+2)/n ...)): by hand with n = 39, T2 = n^2/((n-1)(n+2)) (1 - 1/n) t^2.
    const n = 39;
    const t2 = ((n * n) / ((n - 1) * (n + 2))) * (1 - 1 / n);
    expect(epsilon).toBeCloseTo(Math.max(0.5, (1 - (2 * t2) / n) / (2 * t2)), 8);
    expect(epsilon).toBe(0.5);
  });

  it('check A: epsilon, traces and p', () => {
    const found = estimateDispersion(WINDOWS);
    const box = boxEpsilon({ windows: WINDOWS, rho: found.rho });
    expect(box).toMatchObject({ withheld: null, windows: 8 });
    expect(box.epsilon).toBeCloseTo(0.463725, 6);
    expect(box.trace).toBeCloseTo(1.71907, 6);
    expect(box.traceOfSquare).toBeCloseTo(1.672681, 6);
    const now = [36, 24, 13, 14, 9, 4];
    const test = boxQuasiLikelihoodF({ now, ...found, epsilon: box.epsilon });
    expect(Math.exp(test.logP)).toBeCloseTo(0.21031548, 8);
    expect(test.df1).toBeCloseTo(5 * box.epsilon, 14);
    expect(test.df2).toBeCloseTo(35 * box.epsilon, 13);
  });

  it('check B: epsilon and p with windows that scatter', () => {
    const found = estimateDispersion(SPREAD);
    const { epsilon } = boxEpsilon({ windows: SPREAD, rho: found.rho });
    expect(epsilon).toBeCloseTo(0.250097, 6);
    const now = [72, 48, 26, 28, 18, 8];
    const test = boxQuasiLikelihoodF({ now, ...found, epsilon });
    expect(Math.exp(test.logP)).toBeCloseTo(0.21784072, 8);
  });

  it('epsilon 1 is the plain test', () => {
    const found = estimateDispersion(SPREAD);
    const input = { now: [72, 48, 26, 28, 18, 8], ...found };
    expect(boxQuasiLikelihoodF({ ...input, epsilon: 1 })).toEqual(quasiLikelihoodF(input));
  });

  it('a bin that no window fills, and a window without events, do no harm', () => {
    const wider = [...WINDOWS.map((window) => [...window, 0]), [0, 0, 0, 0, 0, 0, 0]];
    const { epsilon, windows } = boxEpsilon({ windows: wider, rho: 0 });
    expect(windows).toBe(8);
    expect(epsilon).toBeGreaterThan(1 / 6);
    expect(epsilon).toBeLessThan(1);
  });

  it('what is too little to estimate from gives 1 and says why', () => {
    const same = WINDOWS.map(() => [52, 18, 12]);
    const few = boxEpsilon({ windows: WINDOWS.slice(0, 7), rho: 0 });
    const narrow = boxEpsilon({ windows: WINDOWS.map(([a = 0, b = 0]) => [a, b]), rho: 0 });
    expect(few).toMatchObject({ epsilon: 1, withheld: 'few windows', windows: 7 });
    expect(narrow).toMatchObject({ epsilon: 1, withheld: 'few bins' });
    expect(boxEpsilon({ windows: same, rho: 0 })).toMatchObject({
      epsilon: 1,
      withheld: 'no spread',
    });
    expect(boxEpsilon({ windows: [[0, 0, 0]], rho: 0 })).toMatchObject({ windows: 0, trace: 0 });
  });

  it('refuses what it cannot use', () => {
    const box =
      (windows: number[][], rho = 0) =>
      () =>
        boxEpsilon({ windows, rho });
    expect(box([])).toThrow(range('windows: must have a row, got none'));
    expect(box([[1, 2], [1]])).toThrow(range('windows[1]: must have 2 cells, got 1'));
    expect(box([[1, -2]])).toThrow(range('windows[0][1]: must be a finite number >= 0, got -2'));
    expect(box([[1, 2]], 1.5)).toThrow(range('rho: must lie between 0 and 1, got 1.5'));
    const input = { now: [5, 5], shares: [0.5, 0.5], weight: 9, rho: 0, df2: 9 };
    for (const epsilon of [0, 1.1, NaN]) {
      expect(() => boxQuasiLikelihoodF({ ...input, epsilon })).toThrow(
        range(`epsilon: must be > 0 and at most 1, got ${epsilon}`),
      );
    }
  });
});

describe('rareCategoryTail', () => {
  const tail = { events: 100, weight: 2400 / (1 + 99 * 0.002), rho: 0.002 };

  it('a flat prior makes every count equally likely', () => {
    // Declared share 1/2 and rho 1/3: Beta(1, 1), P(Y >= y) = (N + 1 - y)/(N + 1).
    const input = { events: 9, share: 0.5, weight: Infinity, rho: 1 / 3 };
    const found = rareCategoryTail({ ...input, count: 8, sides: 'both' });
    expect(found.logUpper).toBeCloseTo(Math.log(0.2), 13);
    expect(found.logLower).toBeCloseTo(Math.log(0.9), 13);
    expect(found.logP).toBeCloseTo(Math.log(0.4), 13);
  });

  it('the check value of section 1.8 (scipy): P(Y >= 4), doubled or by itself', () => {
    const input = { ...tail, count: 4, share: 2 / 2400 };
    expect(input.weight).toBeCloseTo(2003.3389, 4);
    const both = rareCategoryTail({ ...input, sides: 'both' });
    const upper = rareCategoryTail({ ...input, sides: 'upper' });
    expect(both.share).toBeCloseTo(0.0010823764, 10);
    expect(both.correlation).toBeCloseTo(0.0024979198, 10);
    expect(Math.abs(Math.exp(upper.logP) / 3.6620949e-4 - 1)).toBeLessThan(2e-8);
    expect(both.logP).toBeCloseTo(upper.logP + Math.LN2, 13);
  });

  it('a category never seen expects half an event', () => {
    const found = rareCategoryTail({ ...tail, count: 3, share: 0, sides: 'upper' });
    expect(found.share).toBeCloseTo(0.5 / (tail.weight + 1), 15);
    // mpmath: test/published/lenses.py, its eighth rare tail.
    expect(found.logP).toBeCloseTo(-7.959563320707031, 12);
  });

  it('a category that vanished is seen from below, unless only rises are looked for', () => {
    const input = { ...tail, events: 300, weight: 40_000, rho: 0, count: 0, share: 0.05 };
    expect(rareCategoryTail({ ...input, sides: 'both' }).logP).toBeLessThan(-10);
    expect(rareCategoryTail({ ...input, sides: 'upper' }).logP).toBe(0);
  });

  it('a count right at its expectation has p = 1 and never more', () => {
    expect(rareCategoryTail({ ...tail, count: 5, share: 0.05, sides: 'both' }).logP).toBe(0);
  });

  it('a huge weight and no correlation come to the binomial', () => {
    const near = { count: 9, events: 100, share: 0.03, rho: 0, sides: 'upper' as const };
    // mpmath: the binomial masses added up; the beta-binomial ones by test/published/lenses.py.
    const limit = rareCategoryTail({ ...near, weight: Infinity }).logP;
    expect(limit).toBeCloseTo(-5.739606023835775, 12);
    expect(rareCategoryTail({ ...near, weight: 1e9 }).logP).toBeCloseTo(-5.73960537171611, 10);
    expect(rareCategoryTail({ ...near, weight: 1e18 }).logP).toBe(limit);
  });

  it('a tiny correlation still tells when there are many events', () => {
    const many = { count: 60, events: 20_000, share: 0.001, rho: 0, sides: 'upper' as const };
    const sampled = rareCategoryTail({ ...many, weight: 2e7 });
    // The twin: the binomial at the same share, rho_t being 5e-8, is off by a few per cent of p.
    const fixed = rareCategoryTail({ ...many, share: sampled.share, weight: Infinity });
    expect(sampled.correlation).toBeLessThan(1e-7);
    expect(sampled.logP - fixed.logP).toBeGreaterThan(0.03);
  });

  it('a declared share of 0 or 1 leaves nothing to chance', () => {
    const input = { events: 9, weight: Infinity, rho: 0.01, sides: 'both' as const };
    expect(rareCategoryTail({ ...input, count: 1, share: 0 }).logP).toBe(-Infinity);
    expect(rareCategoryTail({ ...input, count: 0, share: 0 }).logP).toBe(0);
    expect(rareCategoryTail({ ...input, count: 9, share: 1 }).logP).toBe(0);
    expect(rareCategoryTail({ ...input, count: 8, share: 1 }).logP).toBe(-Infinity);
  });

  it.each([
    [{ events: 0 }, 'events: must be an integer from 1 to 9007199254740991, got 0'],
    [{ count: 101 }, 'count: must be an integer from 0 to 100, got 101'],
    [{ count: 1.5 }, 'count: must be an integer from 0 to 100, got 1.5'],
    [{ share: 1.2 }, 'share: must lie between 0 and 1, got 1.2'],
    [{ weight: 0 }, 'weight: must be a positive number or Infinity, got 0'],
    [{ rho: 1 }, 'rho: must be >= 0 and under 1, got 1'],
  ])('refuses %o', (part, message) => {
    const fine = { ...tail, count: 4, share: 0.01, sides: 'both' as const };
    expect(() => rareCategoryTail({ ...fine, ...part })).toThrow(range(message));
  });
});

describe('combineLenses', () => {
  const log = Math.log;

  it('the smaller lens counts twice, the categories as many times as there are', () => {
    const found = combineLenses({ omnibus: log(0.02), categories: [log(0.3), log(0.001)] });
    expect(found).toMatchObject({ lens: 'category', category: 1 });
    expect(found.categoryLogP).toBeCloseTo(log(0.002), 13);
    expect(found.logP).toBeCloseTo(log(0.004), 13);
    const other = combineLenses({ omnibus: log(0.0005), categories: [log(0.3), log(0.001)] });
    expect(other).toMatchObject({ lens: 'omnibus', category: 1 });
    expect(other.logP).toBeCloseTo(log(0.001), 13);
  });

  it('nothing exceeds 1', () => {
    expect(combineLenses({ omnibus: log(0.9), categories: [log(0.7), log(0.8)] })).toEqual({
      logP: 0,
      lens: 'omnibus',
      categoryLogP: 0,
      category: 0,
    });
  });

  it('a lens that was not run leaves the other, still counted twice', () => {
    const single = combineLenses({ omnibus: null, categories: [log(0.001)] });
    expect(single.logP).toBeCloseTo(log(0.002), 13);
    expect(single.lens).toBe('category');
    const omnibus = combineLenses({ omnibus: log(0.001), categories: [] });
    expect(omnibus).toMatchObject({ lens: 'omnibus', categoryLogP: null, category: null });
    expect(omnibus.logP).toBeCloseTo(log(0.002), 13);
  });

  it('no lens at all is no test, and not p = 1', () => {
    const none = { logP: null, lens: null, categoryLogP: null, category: null };
    expect(combineLenses({ omnibus: null, categories: [] })).toEqual(none);
  });

  it('an impossible event stays impossible, and ties go to the first', () => {
    const found = combineLenses({ omnibus: -3, categories: [-Infinity, -Infinity] });
    expect(found).toMatchObject({ logP: -Infinity, lens: 'category', category: 0 });
  });

  it('refuses what is no log of a p-value', () => {
    expect(() => combineLenses({ omnibus: 0.1, categories: [] })).toThrow(
      range('omnibus: must be <= 0, got 0.1'),
    );
    expect(() => combineLenses({ omnibus: null, categories: [-1, NaN] })).toThrow(
      range('categories[1]: must be <= 0, got NaN'),
    );
  });
});

describe('lensTwoGate', () => {
  // Check of section 3 (scipy): 60 of 20,000 against 480 of 480,000.
  const checked = {
    count: 60,
    events: 20_000,
    weightNow: 20_000,
    share: 0.001,
    weightReference: 480_000,
    tolerance: 0.01,
    own: null,
  };
  const fresh = { ...checked, count: 12, events: 200, weightNow: 200, share: 0 };

  it('a rare category is held against half its former share', () => {
    const found = lensTwoGate(checked);
    expect(found.bound).toBeCloseTo(0.0014223539344973054, 12);
    expect(found).toMatchObject({ passes: true, tolerance: 0.0005, rule: 'changed' });
  });

  it('a tolerance of its own comes first, whichever way it points', () => {
    expect(lensTwoGate({ ...checked, own: 0.002 })).toMatchObject({ passes: false });
    expect(lensTwoGate({ ...checked, own: 0.001 })).toMatchObject({ passes: true });
    const zero = lensTwoGate({ ...checked, tolerance: 0, own: 0.002 });
    expect(zero).toMatchObject({ passes: false, rule: 'changed' });
  });

  it('a fall is measured the other way round', () => {
    const fallen = lensTwoGate({ ...checked, count: 2_000, share: 0.2 });
    expect(fallen).toMatchObject({ passes: true, tolerance: 0.01, rule: 'changed' });
    expect(fallen.bound).toBeGreaterThan(0.09);
    expect(fallen.bound).toBeLessThan(0.1);
    expect(lensTwoGate({ ...checked, count: 20, share: 0.001 }).passes).toBe(false);
  });

  it('a new category passes by its share or by 20 events', () => {
    // mpmath: test/published/lenses.py. Section 3 prints .03781443535504405, one digit of which
    // (the eleventh, 5 for 1) is not that of this limit at any z near 1.6448536.
    const found = lensTwoGate(fresh);
    expect(found.bound).toBeCloseTo(0.03781443531504405, 15);
    expect(found).toMatchObject({ passes: true, tolerance: 0.01, rule: 'new' });
    const large = { ...fresh, events: 100_000, weightNow: 100_000 };
    expect(lensTwoGate({ ...large, count: 19 }).passes).toBe(false);
    expect(lensTwoGate({ ...large, count: 20 }).passes).toBe(true);
    expect(lensTwoGate({ ...large, count: 20, own: 0.01 }).passes).toBe(false);
  });

  it('a tolerance of nothing is no gate', () => {
    const found = { passes: true, tolerance: 0, rule: 'none' };
    expect(lensTwoGate({ ...checked, count: 20, tolerance: 0 })).toMatchObject(found);
    expect(lensTwoGate({ ...fresh, count: 1, tolerance: 0 })).toMatchObject(found);
  });

  it.each([
    [{ events: 0 }, 'events: must be an integer from 1 to 9007199254740991, got 0'],
    [{ count: -1 }, 'count: must be an integer from 0 to 20000, got -1'],
    [{ weightNow: 0 }, 'weightNow: must be a positive finite number, got 0'],
    [{ share: -0.1 }, 'share: must lie between 0 and 1, got -0.1'],
    [{ weightReference: 0 }, 'weightReference: must be a positive number or Infinity, got 0'],
    [{ tolerance: 2 }, 'tolerance: must lie between 0 and 1, got 2'],
    [{ own: 2 }, 'own: must lie between 0 and 1, got 2'],
  ])('refuses %o', (part, message) => {
    expect(() => lensTwoGate({ ...checked, ...part })).toThrow(range(message));
  });
});
