import { describe, expect, it } from 'vitest';

import { multiWindowG2 } from '../../../src/stats/multiWindowG2.js';
import { quasiLikelihoodF } from '../../../src/stats/quasiLikelihoodF.js';

const SHARES = [0.5, 0.3, 0.2];
const window = [52, 30, 18];
const times = (row: readonly number[], n: number): (readonly number[])[] =>
  new Array<readonly number[]>(n).fill(row);
const input = { shares: SHARES, weight: 2400, rho: 0, df2: 46, runLength: 1e4 };

describe('multiWindowG2', () => {
  it('at rho 0 each length is the test of its counts added up', () => {
    const windows = [...times([50, 30, 20], 50), ...times(window, 14)];
    const found = multiWindowG2({ ...input, windows });
    expect(found.map((test) => test.length)).toEqual([4, 16, 64]);
    const sums = [
      [208, 120, 72],
      [828, 480, 292],
      [3228, 1920, 1252],
    ];
    sums.forEach((now, i) => {
      const { g, f, logP, weightNow } = quasiLikelihoodF({ ...input, now });
      expect(found[i]).toMatchObject({ df1: 2, df2: 46, weightNow });
      expect(found[i]?.g).toBeCloseTo(g, 9);
      expect(found[i]?.f).toBeCloseTo(f, 9);
      expect(found[i]?.logP).toBeCloseTo(logP, 9);
    });
  });

  it('with clustering the weights of the windows add up, not their events', () => {
    const [test] = multiWindowG2({ ...input, windows: times(window, 4), rho: 0.01 });
    // Four windows of 100: 4 x 100/(1 + 99 x .01).
    expect(test?.weightNow).toBeCloseTo(400 / 1.99, 12);
    expect(test?.now[0]).toBeCloseTo(0.52, 14);
  });

  it('each length spends a third of the budget, a pooled test counting for its windows', () => {
    // 200 strands, 1008 windows a week, .2 a week: .2/3/(200 x 1008/length) = length/(3 x 1008000).
    const found = multiWindowG2({ ...input, windows: times(window, 64), runLength: 1_008_000 });
    for (const { length, logLevel } of found) {
      expect(logLevel).toBeCloseTo(Math.log(0.2 / 3 / ((200 * 1008) / length)), 12);
    }
    const [short] = multiWindowG2({ ...input, windows: times(window, 4), runLength: 1 });
    expect(short?.logLevel).toBe(0);
  });

  it('windows that never reach a length, or hold no event, give no test', () => {
    expect(multiWindowG2({ ...input, windows: times(window, 3) })).toEqual([]);
    expect(multiWindowG2({ ...input, windows: times([0, 0, 0], 4) })).toEqual([]);
    const quiet = [...times(window, 12), ...times([0, 0, 0], 4)];
    expect(multiWindowG2({ ...input, windows: quiet }).map((test) => test.length)).toEqual([16]);
  });

  it('windows that fit the reference perfectly give G 0 and p 1', () => {
    const [test] = multiWindowG2({ ...input, windows: times([50, 30, 20], 4) });
    expect(test?.g).toBeCloseTo(0, 12);
    expect(test?.logP).toBeCloseTo(0, 8);
  });

  it('a category that neither side has adds nothing; one declared impossible is certain', () => {
    const wide = { ...input, shares: [...SHARES, 0], windows: times([...window, 0], 4) };
    const narrow = multiWindowG2({ ...input, windows: times(window, 4) });
    expect(multiWindowG2(wide)[0]?.g).toBeCloseTo(narrow[0]?.g ?? NaN, 12);
    const impossible = { ...wide, weight: Infinity, windows: times([...window, 1], 4) };
    expect(multiWindowG2(impossible)[0]).toMatchObject({ g: Infinity, logP: -Infinity });
  });

  it('a shift too small for four windows shows in sixty-four', () => {
    const found = multiWindowG2({ ...input, weight: 48_000, windows: times([55, 28, 17], 64) });
    expect(found.map((test) => test.logP <= test.logLevel)).toEqual([false, false, true]);
  });

  it('what cannot be tested is refused by name and value', () => {
    const refused = (part: object): (() => unknown) => {
      return () => multiWindowG2({ ...input, windows: [window], ...part });
    };
    expect(refused({ windows: [] })).toThrow('windows: must have a row, got none');
    expect(refused({ windows: [window, [1]] })).toThrow('windows[1]: must have 3 cells, got 1');
    expect(refused({ windows: [[1, 2]] })).toThrow('shares: must have 2 cells, got 3');
    expect(refused({ windows: [[1]], shares: [1] })).toThrow(
      'shares: must have at least 2 bins, got 1',
    );
    expect(refused({ shares: [0.5, 0.3, 0.1] })).toThrow('shares: must sum to 1, got 0.9');
    expect(refused({ weight: 0 })).toThrow('weight: must be a positive number or Infinity, got 0');
    expect(refused({ rho: -1 })).toThrow('rho: must lie between 0 and 1, got -1');
    expect(refused({ df2: 0 })).toThrow('df2: must be a positive number or Infinity, got 0');
    expect(refused({ runLength: 0 })).toThrow('runLength: must be a positive finite number, got 0');
  });
});
