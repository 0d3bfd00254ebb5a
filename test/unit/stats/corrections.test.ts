import { describe, expect, it } from 'vitest';

import { adjustLogPs } from '../../../src/stats/adjustLogPs.js';
import { benjaminiHochberg } from '../../../src/stats/benjaminiHochberg.js';
import { benjaminiYekutieli } from '../../../src/stats/benjaminiYekutieli.js';
import { harmonicNumber } from '../../../src/stats/harmonicNumber.js';
import { holm } from '../../../src/stats/holm.js';
import { lordLevel, lordPlusPlus, lordStart } from '../../../src/stats/lordPlusPlus.js';
import { weightedBonferroni } from '../../../src/stats/weightedBonferroni.js';

// Specification, section 4.5, from R 4.2.2's p.adjust; all of them again by scipy 1.17.1's
// false_discovery_control, and the second of BY, printed there with two digits exchanged, by hand:
// .032 (1 + 1/2 + ... + 1/8) = .032 x 761/280.
const PS = [0.001, 0.008, 0.039, 0.041, 0.042, 0.06, 0.074, 0.205];
const BH = [0.008, 0.032, 0.0672, 0.0672, 0.0672, 0.08, 0.08457143, 0.205];
const BY = [0.02174286, 0.08697143, 0.18264, 0.18264, 0.18264, 0.21742857, 0.22985306, 0.55716071];
const logPs = PS.map(Math.log);

describe('adjustLogPs', () => {
  it.each([
    ['benjamini-hochberg', BH],
    ['benjamini-yekutieli', BY],
    // By hand: .001 x 8, .008 x 7, .039 x 6, then the running maximum.
    ['holm', [0.008, 0.056, 0.234, 0.234, 0.234, 0.234, 0.234, 0.234]],
  ] as const)('%s gives the values of R, in any order', (method, expected) => {
    const adjusted = adjustLogPs(logPs, method).map(Math.exp);
    expected.forEach((p, i) => {
      expect(adjusted[i]).toBeCloseTo(p, 8);
    });
    const reversed = adjustLogPs([...logPs].reverse(), method).map(Math.exp);
    expect(reversed.reverse()).toEqual(adjusted);
  });

  it.each([
    ['benjamini-hochberg', benjaminiHochberg],
    ['benjamini-yekutieli', benjaminiYekutieli],
    ['holm', holm],
  ] as const)('%s: adjusted under the level is rejected, over it is not', (method, decide) => {
    const adjusted = adjustLogPs(logPs, method);
    for (const level of [0.01, 0.03, 0.05, 0.07, 0.1, 0.2, 0.3]) {
      const expected = adjusted.map((logP) => logP <= Math.log(level));
      expect(decide(logPs, level)).toEqual(expected);
    }
  });

  it('p of 0 and 1 stay, none gives none, and one test is not adjusted', () => {
    for (const method of ['holm', 'benjamini-hochberg', 'benjamini-yekutieli'] as const) {
      expect(adjustLogPs([-Infinity, 0], method)).toEqual([-Infinity, 0]);
      expect(adjustLogPs([], method)).toEqual([]);
      expect(adjustLogPs([-3], method)).toEqual([-3]);
      expect(adjustLogPs([-2000, -1], method)[0]).toBeLessThan(-1998);
    }
  });

  it('a logarithm above 0 is refused', () => {
    const message = 'logPs[1]: must be <= 0, got 0.5';
    expect(() => adjustLogPs([-1, 0.5], 'holm')).toThrow(new RangeError(message));
  });
});

describe('holm and benjaminiYekutieli', () => {
  it('Holm stops at the first that fails, though a later one would pass alone', () => {
    // Levels .05/3, .05/2, .05.
    expect(holm([0.01, 0.03, 0.04].map(Math.log), 0.05)).toEqual([true, false, false]);
    expect(holm([0.04, 0.02, 0.01].map(Math.log), 0.05)).toEqual([true, true, true]);
  });

  it('equal p-values share one decision', () => {
    expect(holm([0.02, 0.02, 0.02].map(Math.log), 0.05)).toEqual([false, false, false]);
    expect(holm([0.01, 0.02, 0.02].map(Math.log), 0.05)).toEqual([true, true, true]);
  });

  it('Benjamini-Yekutieli is Benjamini-Hochberg at the level over the harmonic number', () => {
    const level = 0.05 * harmonicNumber(8);
    expect(benjaminiYekutieli(logPs, level)).toEqual(benjaminiHochberg(logPs, 0.05));
    expect(benjaminiYekutieli(logPs, 0.05)).not.toEqual(benjaminiHochberg(logPs, 0.05));
  });

  it('no tests, no decisions', () => {
    expect(holm([], 0.05)).toEqual([]);
    expect(benjaminiYekutieli([], 0.05)).toEqual([]);
  });

  it.each([
    [[-1], 1.5, 'level: must lie between 0 and 1, got 1.5'],
    [[NaN], 0.05, 'logPs[0]: must be <= 0, got NaN'],
  ])('%j at %d is refused', (logs, level, message) => {
    expect(() => holm(logs, level)).toThrow(new RangeError(message));
    expect(() => benjaminiYekutieli(logs, level)).toThrow(new RangeError(message));
  });
});

describe('weightedBonferroni', () => {
  it('each test is held to its share of the level', () => {
    const options = { weights: [3, 1], level: 0.04 };
    expect(weightedBonferroni([0.03, 0.01].map(Math.log), options)).toEqual([true, true]);
    expect(weightedBonferroni([0.0301, 0.0101].map(Math.log), options)).toEqual([false, false]);
  });

  it('a weight of 0 rejects only p = 0', () => {
    const options = { weights: [0, 0, 1], level: 0.05 };
    expect(weightedBonferroni([-1000, -Infinity, -4], options)).toEqual([false, true, true]);
    expect(weightedBonferroni([], { weights: [], level: 0.05 })).toEqual([]);
  });

  it.each([
    [{ weights: [1] }, 'weights: must have 2 cells, got 1'],
    [{ weights: [1, -1] }, 'weights[1]: must be a finite number >= 0, got -1'],
    [{ weights: [0, 0] }, 'weights: must not all be 0'],
    [{ level: -1 }, 'level: must lie between 0 and 1, got -1'],
  ])('%j is refused', (part, message) => {
    const options = { weights: [1, 1], level: 0.05, ...part };
    expect(() => weightedBonferroni([-1, -2], options)).toThrow(new RangeError(message));
  });

  it('a logarithm above 0 is refused', () => {
    const options = { weights: [1], level: 0.05 };
    const message = 'logPs[0]: must be <= 0, got 1';
    expect(() => weightedBonferroni([1], options)).toThrow(new RangeError(message));
  });
});

describe('lordPlusPlus', () => {
  // Specification, section 4.5; they agree there with the R package onlineFDR 2.19.1.
  const STREAM = [
    1e-6, 0.3, 0.02, 0.8, 0.5, 0.001, 0.04, 0.9, 2e-4, 0.6, 0.7, 0.03, 0.2, 0.3, 0.4, 1e-5,
  ];
  const LEVELS = [
    0.00026758, 0.00246645, 0.00057328, 0.00048728, 0.00040591, 0.00034473, 0.00029866, 0.0002631,
    0.00023494, 0.00288797, 0.00077522, 0.00067314, 0.00057627, 0.00050197, 0.00044477, 0.00039962,
  ];
  const good = { level: 0.05, logP: -1 };

  it('the check values: every level, and discoveries at tests 1, 9 and 16', () => {
    let state = lordStart();
    STREAM.forEach((p, i) => {
      const step = lordPlusPlus(state, { level: 0.05, logP: Math.log(p) });
      expect(step.logThreshold).toBe(Math.log(lordLevel(state, { level: 0.05 })));
      expect(Math.exp(step.logThreshold)).toBeCloseTo(LEVELS[i] ?? NaN, 8);
      expect(step.isDiscovery).toBe([1, 9, 16].includes(i + 1));
      ({ state } = step);
    });
    expect(state).toEqual({ tests: 16, discoveries: [1, 9, 16] });
  });

  it('a state that went through JSON goes on as if nothing had happened', () => {
    const { state } = lordPlusPlus(lordStart(), { ...good, logP: -50 });
    const restored = JSON.parse(JSON.stringify(state)) as typeof state;
    expect(lordPlusPlus(restored, good)).toEqual(lordPlusPlus(state, good));
  });

  it('a step leaves the state before as it was', () => {
    const before = lordStart();
    lordPlusPlus(before, { ...good, logP: -50 });
    expect(before).toEqual({ tests: 0, discoveries: [] });
  });

  it('an epoch without discoveries never spends more than the wealth it began with', () => {
    let spent = 0;
    for (let tests = 0; tests < 10_000; tests += 1) {
      spent += lordLevel({ tests, discoveries: [] }, { level: 0.05, wealth: 0.02 });
    }
    expect(spent).toBeLessThan(0.02);
    // Closed form of the first level alone: w0 .07720838 log 2.
    expect(spent).toBeGreaterThan(0.02 * 0.07720838 * Math.LN2);
  });

  it.each([
    [{ level: 0 }, 'level: must lie strictly between 0 and 1, got 0'],
    [{ wealth: -0.1 }, 'wealth: must lie between 0 and 1, got -0.1'],
    [{ wealth: 0.06 }, 'wealth: must be at most the level 0.05, got 0.06'],
    [{ logP: 2 }, 'logPs[0]: must be <= 0, got 2'],
  ])('%j is refused', (part, message) => {
    expect(() => lordPlusPlus(lordStart(), { ...good, ...part })).toThrow(new RangeError(message));
  });

  it.each([
    [{ tests: -1, discoveries: [] }, 'tests: must be an integer from 0 to 1000000000, got -1'],
    [{ tests: 3, discoveries: [4] }, 'discoveries[0]: must be an integer from 1 to 3, got 4'],
    [{ tests: 3, discoveries: [2, 2] }, 'discoveries[1]: must be an integer from 3 to 3, got 2'],
  ])('the state %j is refused', (state, message) => {
    expect(() => lordPlusPlus(state, good)).toThrow(new RangeError(message));
  });

  it('an epoch of too many discoveries is refused', () => {
    const discoveries = Array.from({ length: 10_001 }, (_, i) => i + 1);
    const message = 'discoveries: an epoch holds at most 10000, got 10001; start a new one';
    const refused = (): unknown => lordPlusPlus({ tests: 20_000, discoveries }, good);
    expect(refused).toThrow(new RangeError(message));
  });
});
