import { describe, expect, it } from 'vitest';

import { cochranMantelHaenszel } from '../../../src/stats/cochranMantelHaenszel.js';
import { g2Partition } from '../../../src/stats/g2Partition.js';
import { generalisedQuadratic } from '../../../src/stats/generalisedQuadratic.js';
import { kitagawa } from '../../../src/stats/kitagawa.js';
import { linearByLinear } from '../../../src/stats/linearByLinear.js';
import { pearsonChiSquared } from '../../../src/stats/pearsonChiSquared.js';

// Specification, section 7.2 (counts of its simulation 7b, seed 2024): three regions whose mixes
// stay as they are while traffic goes from 60/30/10 to 30/30/40.
const BEFORE = [
  [8336, 1800, 930, 604, 227],
  [3016, 1607, 614, 585, 286],
  [578, 608, 312, 288, 209],
];
const AFTER = [
  [441, 69, 57, 36, 20],
  [298, 146, 53, 59, 18],
  [224, 254, 120, 120, 85],
];
const REGIONS = BEFORE.map((before, s) => [before, AFTER[s] ?? []]);

describe('cochranMantelHaenszel', () => {
  it('the worked example: nothing moved inside the regions', () => {
    const result = cochranMantelHaenszel(REGIONS);
    // Specification, 7.2; R 4.2.2 mantelhaen.test: 2.080965, df 4, .72087019.
    expect(result.statistic).toBeCloseTo(2.080965, 6);
    expect(result.df).toBe(4);
    expect(result.p).toBeCloseTo(0.72087019, 8);
  });

  it('one split is Pearson times (T - 1)/T', () => {
    const table = REGIONS[2] ?? [];
    const { statistic } = pearsonChiSquared(table);
    const total = table.flat().reduce((a, b) => a + b, 0);
    const result = cochranMantelHaenszel([table]);
    expect(result.statistic).toBeCloseTo((statistic * (total - 1)) / total, 9);
    expect(result.df).toBe(4);
  });

  it('one split with both scores is the linear trend', () => {
    const table = REGIONS[1] ?? [];
    const scores = { rows: [1, 2], columns: [1, 2, 3, 4, 5] };
    const { statistic, logP } = linearByLinear({ table });
    const result = cochranMantelHaenszel([table], scores);
    expect(result.statistic).toBeCloseTo(statistic, 11);
    expect(result.logP).toBeCloseTo(logP, 11);
    expect(result.df).toBe(1);
  });

  it('a 2 x 2 x 2 table by hand', () => {
    const splits = [
      [
        [3, 1],
        [1, 3],
      ],
      [
        [2, 2],
        [1, 3],
      ],
    ];
    // U = (3 - 2) + (2 - 1.5); V = 4^4/(8^2 7) + 4 4 3 5/(8^2 7).
    const expected = 1.5 ** 2 / (256 / 448 + 240 / 448);
    expect(cochranMantelHaenszel(splits).statistic).toBeCloseTo(expected, 13);
  });

  it('empty categories, and splits seen on one side only, change nothing', () => {
    const wider = REGIONS.map((table) => table.map((row) => [0, ...row, 0]));
    const lone = [
      [0, 0, 0, 0, 0, 0, 0],
      [0, 5, 6, 7, 0, 0, 0],
    ];
    const single = [
      [0, 1, 0, 0, 0, 0, 0],
      [0, 0, 0, 0, 0, 0, 0],
    ];
    const result = cochranMantelHaenszel([lone, ...wider, single]);
    expect(result.statistic).toBeCloseTo(2.080965, 6);
    expect(result.df).toBe(4);
  });

  it('categories that two splits do not share give a singular V and its rank', () => {
    const splits = [
      [
        [8, 2, 0, 0],
        [5, 5, 0, 0],
      ],
      [
        [0, 0, 6, 4],
        [0, 0, 3, 7],
      ],
    ];
    const result = cochranMantelHaenszel(splits);
    const parts = splits.map((table) => cochranMantelHaenszel([table]));
    expect(result.df).toBe(2);
    expect(parts.map((part) => part.df)).toEqual([1, 1]);
    const added = parts.reduce((total, part) => total + part.statistic, 0);
    expect(result.statistic).toBeCloseTo(added, 12);
  });

  it('proportional rows in every split fit perfectly; no split to test gives p 1', () => {
    const even = [
      [10, 20, 30],
      [1, 2, 3],
    ];
    const result = cochranMantelHaenszel([even, even]);
    expect(result.statistic).toBeCloseTo(0, 12);
    expect(result.df).toBe(2);
    const empty = [
      [0, 0],
      [3, 4],
    ];
    expect(cochranMantelHaenszel([empty])).toEqual({ statistic: 0, df: 0, p: 1, logP: 0 });
    const equal = { rows: [0.1, 0.1] };
    expect(cochranMantelHaenszel([even], equal)).toMatchObject({ df: 0, p: 1 });
  });

  it.each([
    [[], {}, 'splits: must hold a table, got none'],
    [
      [
        [[1, 2]],
        [
          [1, 2],
          [3, 4],
        ],
      ],
      {},
      'splits[1]: must have 1 cells, got 2',
    ],
    [[[[1, 2]], [[1, 2, 3]]], {}, 'splits[1][0]: must have 2 cells, got 3'],
    [[[[1, -2]]], {}, 'splits[0][0][1]: must be a finite number >= 0, got -2'],
    [[[[1, 2]]], { columns: [1] }, 'scores.columns: must have 2 cells, got 1'],
    [[[[1, 2]]], { rows: [Infinity] }, 'scores.rows[0]: must be a finite number, got Infinity'],
  ])('%j with %j is refused', (splits, scores, message) => {
    expect(() => cochranMantelHaenszel(splits, scores)).toThrow(new RangeError(message));
  });

  it('a table of too many contrasts is refused', () => {
    const table = Array.from({ length: 34 }, () => new Array<number>(34).fill(1));
    const message = 'splits: must have at most 1000 contrasts, got 1089';
    expect(() => cochranMantelHaenszel([table])).toThrow(new RangeError(message));
  });
});

describe('generalisedQuadratic', () => {
  it('of a diagonal matrix is the sum of squares over variances, zeros left out', () => {
    const matrix = [
      [4, 0, 0],
      [0, 0, 0],
      [0, 0, 1e-8],
    ];
    const { quadratic, rank } = generalisedQuadratic(matrix, [2, 0, 1e-4]);
    expect(quadratic).toBeCloseTo(2, 12);
    expect(rank).toBe(2);
  });

  it('a variable told twice counts once', () => {
    const matrix = [
      [4, 8],
      [8, 16],
    ];
    expect(generalisedQuadratic(matrix, [2, 4])).toEqual({ quadratic: 1, rank: 1 });
  });
});

describe('g2Partition', () => {
  it('the worked example: overall, joint, traffic and within', () => {
    const found = g2Partition(REGIONS);
    // Specification, 7.2 and simulation 7b: numpy and scipy.
    expect(found.overall.statistic).toBeCloseTo(112.4553, 4);
    expect(found.overall.df).toBe(4);
    expect(found.overall.p).toBeLessThan(2.25e-23);
    expect(found.overall.p).toBeGreaterThan(2.15e-23);
    expect(found.joint.statistic).toBeCloseTo(1199.9682, 4);
    expect(found.joint.df).toBe(14);
    expect(found.traffic.statistic).toBeCloseTo(1181.3774, 4);
    expect(found.traffic.df).toBe(2);
    expect(found.within.statistic).toBeCloseTo(18.5908, 4);
    expect(found.within.df).toBe(12);
    expect(found.within.p).toBeCloseTo(0.1, 2);
    [13.3064, 4.5171, 0.7673].forEach((g2, s) => {
      expect(found.splits[s]?.statistic).toBeCloseTo(g2, 4);
    });
  });

  it('a split absent on one side is all traffic', () => {
    const splits = [
      [
        [30, 20],
        [25, 25],
      ],
      [
        [0, 0],
        [10, 5],
      ],
    ];
    const found = g2Partition(splits);
    expect(found.splits[1]).toEqual({ statistic: 0, df: 0, p: 1, logP: 0 });
    const parts = found.traffic.statistic + found.within.statistic;
    expect(found.joint.statistic).toBeCloseTo(parts, 11);
    expect([found.joint.df, found.traffic.df, found.within.df]).toEqual([3, 1, 1]);
  });

  it('nothing moved: every part is 0', () => {
    const even = [
      [10, 20],
      [20, 40],
    ];
    const found = g2Partition([even, even]);
    for (const part of [found.overall, found.joint, found.traffic, found.within]) {
      expect(part.statistic).toBeCloseTo(0, 12);
      expect(part.p).toBeCloseTo(1, 12);
    }
  });

  it('no split is refused', () => {
    expect(() => g2Partition([])).toThrow(new RangeError('splits: must hold a table, got none'));
  });
});

describe('kitagawa', () => {
  it('the worked example: traffic explains the change', () => {
    const found = kitagawa({ before: BEFORE, after: AFTER });
    // Specification, 7.2 and simulation 7b, to its four decimals.
    const rounded = (values: readonly number[]): string[] => values.map((x) => x.toFixed(4));
    expect(rounded(found.delta)).toEqual(['-0.1150', '0.0337', '0.0222', '0.0336', '0.0254']);
    expect(rounded(found.between)).toEqual(['-0.1231', '0.0518', '0.0203', '0.0271', '0.0238']);
    expect(rounded(found.within)).toEqual(['0.0081', '-0.0181', '0.0019', '0.0065', '0.0016']);
  });

  it('delta is the difference of shares, and the splits add up to within', () => {
    const found = kitagawa({ before: BEFORE, after: AFTER });
    const share = (table: number[][], k: number): number =>
      table.reduce((s, row) => s + (row[k] ?? 0), 0) / table.flat().reduce((a, b) => a + b, 0);
    found.delta.forEach((value, k) => {
      expect(value).toBeCloseTo(share(AFTER, k) - share(BEFORE, k), 14);
      const parts = found.withinSplits.reduce((s, split) => s + (split[k] ?? 0), 0);
      expect(found.within[k]).toBeCloseTo(parts, 14);
    });
  });

  it('a split absent on one side, or on both, does nothing inside', () => {
    const before = [
      [30, 10],
      [0, 0],
      [0, 0],
    ];
    const after = [
      [30, 10],
      [5, 35],
      [0, 0],
    ];
    const found = kitagawa({ before, after });
    expect(found.within).toEqual([0, 0]);
    expect(found.withinSplits[1]).toEqual([0, 0]);
    // Closed form: 35/80 - 30/40.
    expect(found.delta[0]).toBeCloseTo(35 / 80 - 0.75, 14);
    expect(found.between).toEqual(found.delta);
  });

  it.each([
    [[[0, 0]], [[1, 2]], 'before: must hold an event, got none'],
    [[[1, 2]], [[0, 0]], 'after: must hold an event, got none'],
    [
      [[1, 2]],
      [
        [1, 2],
        [3, 4],
      ],
      'after: must have 1 cells, got 2',
    ],
    [[[1, 2]], [[1, 2, 3]], 'after[0]: must have 2 cells, got 3'],
    [[[1, -2]], [[1, 2]], 'before[0][1]: must be a finite number >= 0, got -2'],
  ])('%j against %j is refused', (before, after, message) => {
    expect(() => kitagawa({ before, after })).toThrow(new RangeError(message));
  });
});
