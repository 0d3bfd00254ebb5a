import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { describe, expect, it } from 'vitest';

import { drawTable } from '../../../src/stats/drawTable.js';
import { exactTableRxC } from '../../../src/stats/exactTableRxC.js';
import { logGamma } from '../../../src/stats/logGamma.js';
import { monteCarloTable } from '../../../src/stats/monteCarloTable.js';

const TABLE = [
  [4, 1, 0, 3, 2],
  [0, 5, 1, 2, 7],
  [3, 3, 9, 0, 1],
];
const EVEN = [
  [10, 20, 30],
  [20, 40, 60],
];
const good = { table: TABLE, samples: 5000, exceedances: 20, seed: 11 };

describe('monteCarloTable', () => {
  it('a table that fits perfectly stops after h samples with p 1', () => {
    const result = monteCarloTable({ ...good, table: EVEN });
    expect(result).toEqual({ p: 1, logP: 0, samples: 20, exceeding: 20, stoppedEarly: true });
  });

  it('when nothing stops it, p is the same as without asking it to stop', () => {
    const table = EVEN.map((row) => [0, ...row, 1]);
    const never = monteCarloTable({ table, samples: 5000, exceedances: 5001, seed: 11 });
    expect(monteCarloTable({ table, samples: 5000, seed: 11 })).toEqual(never);
    expect(never).toMatchObject({ samples: 5000, stoppedEarly: false });
    expect(never.p).toBe((never.exceeding + 1) / 5001);
  });

  it('stopped early, p is exceedances over samples', () => {
    const table = [
      [12, 7],
      [5, 7],
    ];
    const result = monteCarloTable({ ...good, table, exceedances: 400 });
    expect(result.stoppedEarly).toBe(true);
    expect(result.p).toBe(400 / result.samples);
    // .28830810401251: exact limit by R 4.2.2 (published.json, r-2x2-yates); five standard errors.
    const error = 0.28830810401251 * Math.sqrt((1 - 0.28830810401251) / 400);
    expect(Math.abs(result.p - 0.28830810401251)).toBeLessThan(5 * error);
  });

  it('a table nothing reaches has p one in the samples and one, never 0', () => {
    const table = [
      [40, 0, 0],
      [0, 40, 0],
      [0, 0, 40],
    ];
    const result = monteCarloTable({ ...good, table, samples: 999 });
    expect(result).toMatchObject({ p: 0.001, samples: 999, exceeding: 0, stoppedEarly: false });
    expect(result.logP).toBe(Math.log(0.001));
  });

  it('the same seed gives the same result, another seed another', () => {
    const one = monteCarloTable({ ...good, exceedances: 5 });
    expect(monteCarloTable({ ...good, exceedances: 5 })).toEqual(one);
    const table = [
      [12, 7],
      [5, 7],
    ];
    const [a, b] = [1, 2].map((seed) => monteCarloTable({ ...good, table, seed }).samples);
    expect(a).not.toBe(b);
  });

  it('with one row, or no events, p is 1 and nothing is drawn', () => {
    const nothing = { p: 1, logP: 0, samples: 0, exceeding: 0, stoppedEarly: true };
    expect(monteCarloTable({ ...good, table: [[3, 4]] })).toEqual(nothing);
    expect(monteCarloTable({ ...good, table: [[3], [0], [4]] })).toEqual(nothing);
    expect(monteCarloTable({ ...good, table: [[0, 0]] })).toEqual(nothing);
  });

  it.each([
    [{ samples: 0 }, 'samples: must be an integer from 1 to 10000000, got 0'],
    [{ exceedances: 0 }, 'exceedances: must be an integer from 1 to 10000000, got 0'],
    [{ seed: -1 }, 'seed: must be an integer from 0 to 4294967295, got -1'],
    [{ table: [] }, 'table: must have a row, got none'],
    [{ table: [[0.5]] }, 'table[0][0]: must be an integer from 0 to 9007199254740991, got 0.5'],
  ])('%j is refused', (part, message) => {
    const refused = (): unknown => monteCarloTable({ ...good, ...part });
    expect(refused).toThrow(new RangeError(message));
  });
});

describe('drawTable', () => {
  it('keeps both margins, and draws each table as often as its probability says', () => {
    const random = xoroshiro128plus(5);
    const margins = { rows: [2, 2, 1], columns: [3, 2] };
    const logFactorial = (n: number): number => logGamma(n + 1);
    const seen = new Map<string, number>();
    for (let i = 0; i < 20_000; i += 1) {
      const table = drawTable(random, margins, logFactorial);
      expect(table.map((row) => row.reduce((a, b) => a + b, 0))).toEqual(margins.rows);
      const key = JSON.stringify(table);
      seen.set(key, (seen.get(key) ?? 0) + 1);
    }
    // Closed form: prod R! prod C! / (5! prod x!); all five tables with these margins.
    const expected: Record<string, number> = {
      '[[2,0],[1,1],[0,1]]': 0.2,
      '[[1,1],[2,0],[0,1]]': 0.2,
      '[[1,1],[1,1],[1,0]]': 0.4,
      '[[2,0],[0,2],[1,0]]': 0.1,
      '[[0,2],[2,0],[1,0]]': 0.1,
    };
    expect([...seen.keys()].sort()).toEqual(Object.keys(expected).sort());
    for (const [key, p] of Object.entries(expected)) {
      const error = Math.sqrt((p * (1 - p)) / 20_000);
      expect(Math.abs((seen.get(key) ?? 0) / 20_000 - p)).toBeLessThan(5 * error);
    }
  });

  it('agrees with the exact test where both orders agree: the one farthest table', () => {
    const table = [
      [3, 0, 0],
      [0, 3, 0],
      [0, 0, 3],
    ];
    const exact = exactTableRxC({ table, maxWork: 10_000 });
    const p = 'p' in exact ? exact.p : NaN;
    // Closed form: 3! (3!)^3 / 9!.
    expect(p).toBeCloseTo(6 / 1680, 13);
    const input = { table, samples: 50_000, exceedances: 50_000, seed: 8 };
    const sampled = monteCarloTable(input);
    expect(Math.abs(sampled.p - p)).toBeLessThan(5 * Math.sqrt(p / 50_000));
  });
});
