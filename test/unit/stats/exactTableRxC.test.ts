import { describe, expect, it } from 'vitest';

import { exactTable } from '../../../src/stats/exactTable.js';
import { exactTableRxC } from '../../../src/stats/exactTableRxC.js';

const maxWork = 1_000_000;
const TABLE = [
  [4, 1, 0, 3, 2],
  [0, 5, 1, 2, 7],
  [3, 3, 9, 0, 1],
];

const pOf = (result: object): number => ('p' in result ? Number(result.p) : NaN);
const transpose = (table: number[][]): number[][] =>
  (table[0] ?? []).map((_, k) => table.map((row) => row[k] ?? 0));

describe('exactTableRxC', () => {
  it('a diagonal table has as many equals as orders of its columns', () => {
    const table = [
      [4, 0, 0],
      [0, 4, 0],
      [0, 0, 4],
    ];
    // Closed form: 3! tables of probability (4!)^3 / 12!; none is less probable.
    expect(pOf(exactTableRxC({ table, maxWork })) / (6 / 34_650)).toBeCloseTo(1, 12);
  });

  it('a table as even as can be has p 1', () => {
    const table = [
      [5, 5, 5],
      [5, 5, 5],
      [5, 5, 5],
      [5, 5, 5],
    ];
    expect(pOf(exactTableRxC({ table, maxWork }))).toBeCloseTo(1, 12);
  });

  it('two rows, or two columns, give what exactTable gives', () => {
    const table = TABLE.slice(0, 2);
    const expected = exactTable({ table, maxWork });
    expect(exactTableRxC({ table, maxWork })).toEqual(expected);
    expect(exactTableRxC({ table: transpose(table), maxWork })).toEqual(expected);
  });

  it('a third row without events changes nothing of two rows', () => {
    const table = [...TABLE.slice(0, 2), [0, 0, 0, 0, 0]];
    const expected = exactTable({ table: TABLE.slice(0, 2), maxWork });
    expect(exactTableRxC({ table, maxWork })).toEqual(expected);
  });

  it('a p below the smallest number still has its logarithm', () => {
    const table = [
      [600, 0, 0],
      [0, 1, 0],
      [0, 0, 600],
    ];
    const result = exactTableRxC({ table, maxWork });
    const logP = 'logP' in result ? result.logP : NaN;
    const logFactorial = (n: number): number =>
      Array.from({ length: n }, (_, i) => Math.log(i + 1)).reduce((a, b) => a + b, 0);
    // Closed form: the table and the one with the outer rows exchanged, 600!^2 / 1201! each.
    expect(logP).toBeCloseTo(Math.LN2 + 2 * logFactorial(600) - logFactorial(1201), 8);
    expect(pOf(result)).toBe(0);
  });

  it('transposing, permuting and empty rows and columns change nothing', () => {
    const p = pOf(exactTableRxC({ table: TABLE, maxWork }));
    const turned = [...TABLE].reverse().map((row) => [...row].reverse());
    const padded = [...TABLE.map((row) => [0, ...row]), [0, 0, 0, 0, 0, 0]];
    expect(p).toBeGreaterThan(0);
    for (const table of [transpose(TABLE), turned, padded]) {
      expect(pOf(exactTableRxC({ table, maxWork })) / p).toBeCloseTo(1, 11);
    }
  });

  it('with fewer than two rows or columns, or without events, p is 1', () => {
    const nothing = { p: 1, logP: 0 };
    expect(exactTableRxC({ table: [[1, 2, 3]], maxWork })).toEqual(nothing);
    expect(exactTableRxC({ table: [[1], [2], [3]], maxWork })).toEqual(nothing);
    const empty = [
      [0, 0],
      [0, 0],
    ];
    expect(exactTableRxC({ table: empty, maxWork })).toEqual(nothing);
  });

  it('what needs more steps than allowed is said to be too large', () => {
    expect(exactTableRxC({ table: TABLE, maxWork: 10 })).toEqual({ tooLarge: true, work: 42 });
    const inside = exactTableRxC({ table: TABLE, maxWork: 500 });
    expect(inside).toMatchObject({ tooLarge: true });
    expect('work' in inside ? inside.work : 0).toBeGreaterThan(500);
    const closing = [
      [2, 40, 40],
      [2, 40, 39],
      [1, 40, 41],
      [1, 40, 40],
    ];
    expect(exactTableRxC({ table: closing, maxWork: 4000 })).toMatchObject({ tooLarge: true });
  });

  it.each([
    [[[1, 2], [3]], maxWork, 'table[1]: must have 2 cells, got 1'],
    [[], maxWork, 'table: must have a row, got none'],
    [[[1, -2]], maxWork, 'table[0][1]: must be a finite number >= 0, got -2'],
    [[[1, 0.5]], maxWork, 'table[0][1]: must be an integer from 0 to 9007199254740991, got 0.5'],
    [[[1, 2]], 0.5, 'maxWork: must be an integer from 0 to 9007199254740991, got 0.5'],
  ])('%j with %d steps is refused', (table, work, message) => {
    const refused = (): unknown => exactTableRxC({ table, maxWork: work });
    expect(refused).toThrow(new RangeError(message));
  });
});
