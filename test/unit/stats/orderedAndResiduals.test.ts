import { describe, expect, it } from 'vitest';

import { adjustedResiduals } from '../../../src/stats/adjustedResiduals.js';
import { linearByLinear } from '../../../src/stats/linearByLinear.js';
import { minimumEffectTest } from '../../../src/stats/minimumEffectTest.js';
import { pearsonChiSquared } from '../../../src/stats/pearsonChiSquared.js';
import { simultaneousIntervals } from '../../../src/stats/simultaneousIntervals.js';

// Specification, section 2.2.
const TABLE = [
  [48, 22, 11, 9, 6, 4],
  [520, 180, 120, 90, 60, 30],
];
const NOTHING = { statistic: 0, df: 0, p: 1, logP: 0 };

describe('linearByLinear', () => {
  it('of a 2 x 2 table with n is the square of phi times n: Pearson', () => {
    const table = [
      [30, 10],
      [20, 40],
    ];
    const pearson = pearsonChiSquared(table);
    const large = linearByLinear({ table, variance: 'large-sample' });
    expect(large.statistic).toBeCloseTo(pearson.statistic, 12);
    expect(large.logP).toBeCloseTo(pearson.logP, 12);
    const exact = linearByLinear({ table });
    expect(exact.statistic).toBeCloseTo((pearson.statistic * 99) / 100, 12);
    expect(exact.statistic).toBeCloseTo(99 * exact.correlation ** 2, 12);
  });

  it('events along the diagonal correlate perfectly, against it by -1', () => {
    const table = [
      [5, 0, 0],
      [0, 5, 0],
      [0, 0, 5],
    ];
    const result = linearByLinear({ table });
    expect(result.correlation).toBeCloseTo(1, 14);
    // Closed form: (n - 1) r^2.
    expect(result.statistic).toBeCloseTo(14, 12);
    expect(linearByLinear({ table: [...table].reverse() }).z).toBeCloseTo(-Math.sqrt(14), 12);
  });

  it('rows of one mix have no trend', () => {
    const table = [
      [10, 20, 30],
      [1, 2, 3],
    ];
    const result = linearByLinear({ table });
    expect(result.statistic).toBeCloseTo(0, 12);
    expect(result).toMatchObject({ df: 1 });
    expect(result.p).toBeCloseTo(1, 6);
  });

  it('only the relative distances of scores matter', () => {
    const plain = linearByLinear({ table: TABLE, columnScores: [0, 1, 2, 4, 8, 16] });
    const scaled = linearByLinear({
      table: TABLE,
      rowScores: [-7, 13],
      columnScores: [5, 8, 11, 17, 29, 53],
    });
    expect(scaled.statistic).toBeCloseTo(plain.statistic, 12);
    expect(linearByLinear({ table: TABLE }).statistic).not.toBeCloseTo(plain.statistic, 3);
  });

  it('one filled row, one score, one event or none: nothing to test', () => {
    const nothing = { ...NOTHING, z: 0, correlation: 0 };
    expect(linearByLinear({ table: [[3, 4]] })).toEqual(nothing);
    expect(
      linearByLinear({
        table: [
          [3, 4],
          [0, 0],
        ],
      }),
    ).toEqual(nothing);
    expect(linearByLinear({ table: TABLE, rowScores: [0.1, 0.1] })).toEqual(nothing);
    expect(
      linearByLinear({
        table: [
          [1, 0],
          [0, 0],
        ],
      }),
    ).toEqual(nothing);
    expect(
      linearByLinear({
        table: [
          [0, 0],
          [0, 0],
        ],
      }),
    ).toEqual(nothing);
  });

  it.each([
    [{ rowScores: [1] }, 'rowScores: must have 2 cells, got 1'],
    [{ columnScores: [1, 2, 3, 4, 5, NaN] }, 'columnScores[5]: must be a finite number, got NaN'],
    [{ table: [] }, 'table: must have a row, got none'],
    [{ table: [[1], [-1]] }, 'table[1][0]: must be a finite number >= 0, got -1'],
  ])('%j is refused', (part, message) => {
    expect(() => linearByLinear({ table: TABLE, ...part })).toThrow(new RangeError(message));
  });
});

describe('adjustedResiduals', () => {
  it('of the 2 x 6 table are those of R, mirrored in the other row', () => {
    const [first = [], second = []] = adjustedResiduals(TABLE);
    // Specification, section 7.1, from R 4.2.2 (chisq.test()$stdres).
    const expected = [-0.76317889, 0.98501418, -0.29437356, 0, 0, 0.55090699];
    expected.forEach((value, k) => {
      expect(first[k]).toBeCloseTo(value, 8);
      expect(second[k]).toBeCloseTo(-value, 8);
    });
  });

  it('of a 2 x 2 table are all the root of Pearson in size', () => {
    const table = [
      [30, 10],
      [20, 40],
    ];
    const root = Math.sqrt(pearsonChiSquared(table).statistic);
    adjustedResiduals(table)
      .flat()
      .forEach((value) => {
        expect(Math.abs(value)).toBeCloseTo(root, 12);
      });
  });

  it('empty rows and columns, and one that holds every event, have 0', () => {
    const table = [
      [0, 3, 1],
      [0, 0, 0],
    ];
    expect(adjustedResiduals(table)).toEqual([
      [0, 0, 0],
      [0, 0, 0],
    ]);
    expect(adjustedResiduals([[0]])).toEqual([[0]]);
  });

  it('a ragged table is refused', () => {
    const message = 'table[1]: must have 2 cells, got 1';
    expect(() => adjustedResiduals([[1, 2], [3]])).toThrow(new RangeError(message));
  });
});

describe('minimumEffectTest', () => {
  const good = { statistic: 30, df: 5, events: 1000, w: 0.1 };

  it('against an effect of nothing is the ordinary test', () => {
    // R 4.2.2: chisq.test of the gender by party table (published.json, agresti-2007-party).
    const result = minimumEffectTest({ statistic: 30.0701490957547, df: 2, events: 2757, w: 0 });
    expect(result).toMatchObject({ statistic: 30.0701490957547, df: 2, lambda: 0 });
    expect(result.p / 2.95358918321176e-7).toBeCloseTo(1, 12);
  });

  it('the larger the effect allowed, the larger p', () => {
    const of = (w: number): number => minimumEffectTest({ ...good, w }).logP;
    expect([0, 0.05, 0.1, 0.2].map(of)).toEqual([0, 0.05, 0.1, 0.2].map(of).sort((a, b) => a - b));
    expect(of(0.2)).toBeGreaterThan(of(0));
  });

  it('a perfect fit has p 1, an impossible event p 0', () => {
    expect(minimumEffectTest({ ...good, statistic: 0 })).toMatchObject({ p: 1, logP: 0 });
    const never = { p: 0, logP: -Infinity };
    expect(minimumEffectTest({ ...good, statistic: Infinity })).toMatchObject(never);
  });

  it.each([
    [{ statistic: -1 }, 'statistic: must be >= 0, got -1'],
    [{ df: 0 }, 'df: must be a positive finite number, got 0'],
    [{ events: -5 }, 'events: must be a finite number >= 0, got -5'],
    [{ w: NaN }, 'w: must be a finite number >= 0, got NaN'],
  ])('%j is refused', (part, message) => {
    expect(() => minimumEffectTest({ ...good, ...part })).toThrow(new RangeError(message));
  });
});

describe('simultaneousIntervals', () => {
  it('of two categories are one interval and its mirror', () => {
    const [a, b] = simultaneousIntervals([30, 70], { level: 0.95 });
    expect(a?.share).toBe(0.3);
    expect(b?.lower).toBeCloseTo(1 - (a?.upper ?? NaN), 14);
    expect(b?.upper).toBeCloseTo(1 - (a?.lower ?? NaN), 14);
  });

  it('at no events in a category the upper limit is z^2/(n + z^2)', () => {
    const [none] = simultaneousIntervals([0, 50, 50], { level: 0.95 });
    // Normal critical value at .05/6, mpmath 1.3.0 (findroot on ncdf).
    const z2 = 2.3939797998185 ** 2;
    expect(none?.lower).toBe(0);
    expect(none?.upper).toBeCloseTo(z2 / (100 + z2), 9);
  });

  it('hold their shares, and narrow with events', () => {
    const [few] = simultaneousIntervals([3, 4, 5], { level: 0.9 });
    const [many] = simultaneousIntervals([300, 400, 500], { level: 0.9 });
    expect(few?.lower).toBeLessThan(many?.lower ?? NaN);
    expect(many?.lower).toBeLessThan(0.25);
    expect(many?.upper).toBeGreaterThan(0.25);
    expect(few?.upper).toBeGreaterThan(many?.upper ?? NaN);
  });

  it.each([
    [[0, 0], 0.95, 'counts: must hold an event, got none'],
    [[], 0.95, 'counts: must hold an event, got none'],
    [[1, -1], 0.95, 'counts[1]: must be a finite number >= 0, got -1'],
    [[1, 2], 1, 'level: must lie strictly between 0 and 1, got 1'],
  ])('%j at level %d is refused', (counts, level, message) => {
    expect(() => simultaneousIntervals(counts, { level })).toThrow(new RangeError(message));
  });
});
