import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { compose } from '../../../src/stats/compose.js';
import { makeTableBounds } from '../../../src/stats/tableBounds.js';

const LOG_FACTORIAL = Float64Array.from({ length: 60 }, () => 0);
for (let n = 1; n < LOG_FACTORIAL.length; n += 1) {
  LOG_FACTORIAL[n] = (LOG_FACTORIAL[n - 1] ?? 0) + Math.log(n);
}
const lf = (n: number): number => LOG_FACTORIAL[n] ?? NaN;

/** log weight of every table with these margins, column after column. */
function weights(rows: readonly number[], columns: readonly number[]): number[] {
  const [first, ...rest] = columns;
  if (first === undefined) return [0];
  const found: number[] = [];
  compose(
    rows,
    first,
    (_, x) => lf(x),
    (cells, logs) => {
      const left = rows.map((row, i) => row - (cells[i] ?? 0));
      for (const later of weights(left, rest)) found.push(lf(first) - logs + later);
      return true;
    },
  );
  return found;
}

describe('makeTableBounds', () => {
  it('no table weighs more than most or less than least, and all of them are the whole', () => {
    const cells = fc.array(fc.integer({ min: 0, max: 4 }), { minLength: 9, maxLength: 9 });
    fc.assert(
      fc.property(cells, (x) => {
        const at = (i: number, k: number): number => x[3 * i + k] ?? 0;
        const rows = [0, 1, 2].map((i) => at(i, 0) + at(i, 1) + at(i, 2));
        const columns = [0, 1, 2].map((k) => at(0, k) + at(1, k) + at(2, k)).filter((c) => c > 0);
        fc.pre(columns.length > 0);
        const all = weights(rows, columns);
        const { most, least, whole } = makeTableBounds(columns, LOG_FACTORIAL)(rows);
        expect(most).toBeGreaterThanOrEqual(Math.max(...all) - 1e-11);
        expect(least).toBeLessThanOrEqual(Math.min(...all) + 1e-11);
        const total = all.reduce((sum, log) => sum + Math.exp(log), 0);
        expect(whole).toBeCloseTo(Math.log(total), 10);
      }),
      { seed: 9_041, numRuns: 150 },
    );
  });

  it('whole expectations reach the bound: it is the table of those expectations', () => {
    const { most } = makeTableBounds([6, 6, 6], LOG_FACTORIAL)([6, 12]);
    // Closed form: each column 2 and 4 of 6.
    expect(most).toBeCloseTo(3 * (lf(6) - lf(2) - lf(4)), 11);
  });
});

describe('compose', () => {
  it('lists every way in order, and none without room', () => {
    const seen: string[] = [];
    const visit = (cells: readonly number[], value: number): boolean => {
      seen.push(`${cells.join('')}:${value}`);
      return true;
    };
    expect(compose([1, 2, 1], 2, (i, x) => i * x, visit)).toBe(true);
    expect(seen).toEqual(['011:3', '020:2', '101:2', '110:1']);
    seen.length = 0;
    expect(compose([1, 1], 3, () => 0, visit)).toBe(true);
    expect(seen).toEqual([]);
  });

  it('stops when the visitor says so', () => {
    let visits = 0;
    const stopped = compose(
      [5, 5],
      5,
      () => 0,
      () => {
        visits += 1;
        return visits < 3;
      },
    );
    expect(stopped).toBe(false);
    expect(visits).toBe(3);
  });
});
