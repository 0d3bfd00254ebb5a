import { describe, expect, it } from 'vitest';

import { exactMultinomial } from '../../../src/stats/exactMultinomial.js';

const ORDERS = ['probability', 'pearson', 'likelihood-ratio'] as const;
const FAIR = [1 / 3, 1 / 3, 1 / 3];
const maxWork = 1_000_000;

const pOf = (result: object): number => ('p' in result ? Number(result.p) : NaN);

describe('exactMultinomial', () => {
  it.each(ORDERS)('by %s: all events in one of K equal bins has p K^(1 - n)', (order) => {
    // Closed form: K outcomes of probability K^-n are the farthest.
    const result = exactMultinomial({ counts: [0, 9, 0], shares: FAIR, maxWork, order });
    expect(pOf(result) / 3 ** -8).toBeCloseTo(1, 12);
  });

  it.each(ORDERS)('by %s: two bins of equal share are the symmetric binomial test', (order) => {
    // Closed form: 2 (1 + 10 + 45) / 2^10.
    const result = exactMultinomial({ counts: [8, 2], shares: [0.5, 0.5], maxWork, order });
    expect(pOf(result)).toBeCloseTo(112 / 1024, 14);
  });

  it.each(ORDERS)('by %s: counts that fit perfectly give p 1', (order) => {
    const counts = [30, 20, 50];
    const result = exactMultinomial({ counts, shares: [0.3, 0.2, 0.5], maxWork, order });
    expect(pOf(result)).toBeCloseTo(1, 12);
  });

  it('a p far below the smallest number still has its logarithm', () => {
    // Closed form: only the outcome itself is as improbable: .001^200.
    const input = { counts: [200, 0], shares: [0.001, 0.999], maxWork } as const;
    const result = exactMultinomial({ ...input, order: 'probability' });
    const logP = 'logP' in result ? result.logP : NaN;
    expect(pOf(result)).toBe(0);
    expect(logP / (200 * Math.log(0.001))).toBeCloseTo(1, 12);
  });

  it('permuting the categories changes not a digit', () => {
    const one = { counts: [9, 2, 4, 1, 7], shares: [0.2, 0.2, 0.3, 0.1, 0.2] };
    const other = { counts: [1, 7, 4, 9, 2], shares: [0.1, 0.2, 0.3, 0.2, 0.2] };
    for (const order of ORDERS) {
      const p = pOf(exactMultinomial({ ...one, maxWork, order }));
      expect(p).toBeGreaterThan(0);
      expect(pOf(exactMultinomial({ ...other, maxWork, order }))).toBe(p);
    }
  });

  it('the larger the distance, the smaller p, down to ties that share one p', () => {
    const shares = [0.25, 0.25, 0.5];
    const of = (counts: number[]): number =>
      pOf(exactMultinomial({ counts, shares, maxWork, order: 'pearson' }));
    expect(of([9, 2, 9])).toBe(of([2, 9, 9]));
    expect(of([10, 1, 9])).toBeLessThan(of([9, 2, 9]));
  });

  it('a share of 0 with events is impossible and names its category', () => {
    const input = { counts: [3, 1, 0, 2], shares: [0.5, 0, 0, 0.5], maxWork } as const;
    expect(exactMultinomial({ ...input, order: 'pearson' })).toEqual({
      impossible: [1],
      p: 0,
      logP: -Infinity,
    });
  });

  it('a share of 0 without events counts for nothing', () => {
    const without = exactMultinomial({
      counts: [8, 2],
      shares: [0.5, 0.5],
      maxWork,
      order: 'pearson',
    });
    const shares = [0.5, 0, 0.5];
    const result = exactMultinomial({ counts: [8, 0, 2], shares, maxWork, order: 'pearson' });
    expect(result).toEqual(without);
  });

  it('without events, or with one category, p is 1', () => {
    const nothing = { p: 1, logP: 0 };
    const order = 'probability' as const;
    expect(exactMultinomial({ counts: [0, 0, 0], shares: FAIR, maxWork, order })).toEqual(nothing);
    expect(exactMultinomial({ counts: [7], shares: [1], maxWork, order })).toEqual(nothing);
    const ofOne = { counts: [0, 7], shares: [0, 1], maxWork, order };
    expect(exactMultinomial(ofOne)).toEqual(nothing);
  });

  it('what needs more steps than allowed is said to be too large, before and while working', () => {
    const input = { counts: [30, 30, 40], shares: FAIR, order: 'pearson' } as const;
    expect(exactMultinomial({ ...input, maxWork: 302 })).toEqual({ tooLarge: true, work: 303 });
    expect(exactMultinomial({ ...input, maxWork: 303 })).toMatchObject({ tooLarge: true });
    expect(exactMultinomial({ ...input, maxWork: 100_000 })).toHaveProperty('p');
  });

  it('a closing that outgrows the steps allowed is too large as well', () => {
    const input = { counts: [60, 40], shares: [0.5, 0.5], order: 'pearson' } as const;
    const result = exactMultinomial({ ...input, maxWork: 202 });
    expect(result).toEqual({ tooLarge: true, work: 202 + 203 });
    expect(exactMultinomial({ ...input, maxWork: 405 })).toHaveProperty('p');
  });

  it.each([
    [{ counts: [1, -1] }, 'counts[1]: must be an integer from 0 to 9007199254740991, got -1'],
    [{ counts: [1.5, 1] }, 'counts[0]: must be an integer from 0 to 9007199254740991, got 1.5'],
    [{ counts: [1, 2, 3] }, 'shares: must have 3 cells, got 2'],
    [{ shares: [0.5, 0.6] }, 'shares: must sum to 1, got 1.1'],
    [{ shares: [1.5, -0.5] }, 'shares[0]: must lie between 0 and 1, got 1.5'],
    [{ maxWork: -1 }, 'maxWork: must be an integer from 0 to 9007199254740991, got -1'],
  ])('%j is refused', (part, message) => {
    const good = { counts: [1, 2], shares: [0.5, 0.5], maxWork, order: 'pearson' } as const;
    expect(() => exactMultinomial({ ...good, ...part })).toThrow(new RangeError(message));
  });
});
