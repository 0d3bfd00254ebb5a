import { describe, expect, it } from 'vitest';

import { benjaminiHochberg } from '../../../src/stats/benjaminiHochberg.js';
import { changePoint } from '../../../src/stats/changePoint.js';
import { moved } from '../../../src/stats/moved.js';
import { newcombe } from '../../../src/stats/newcombe.js';
import { peel } from '../../../src/stats/peel.js';
import { wilson } from '../../../src/stats/wilson.js';

const Z95 = 1.959963984540054; // scipy 1.17.1 norm.isf(.025)

describe('wilson and newcombe', () => {
  it('56 of 70 gives the limits of R', () => {
    // Specification, section 7.1: prop.test(56, 70, correct = FALSE).
    const { lower, upper } = wilson(0.8, 70, Z95);
    expect(lower).toBeCloseTo(0.69183356, 8);
    expect(upper).toBeCloseTo(0.87695261, 8);
  });

  it('rare shares give the limits of the specification, section 3', () => {
    const z = 1.6448536269514722;
    expect(wilson(60 / 20_000, 20_000, z).lower).toBeCloseTo(0.002427631356080752, 9);
    expect(wilson(480 / 480_000, 480_000, z).upper).toBeCloseTo(0.0010779045085266862, 9);
    expect(wilson(12 / 200, 200, z).lower).toBeCloseTo(0.03781443535504405, 9);
  });

  it('56 of 70 against 48 of 80 gives the interval of the specification', () => {
    const input = { after: 0.8, nAfter: 70, before: 0.6, nBefore: 80, level: 0.95 };
    const [lower, upper] = newcombe(input);
    expect(lower).toBeCloseTo(0.052431472, 9);
    expect(upper).toBeCloseTo(0.33387265, 8);
  });

  it('against a declared share only the window scatters', () => {
    const input = { after: 0.8, nAfter: 70, before: 0.6, nBefore: Infinity, level: 0.95 };
    const { lower, upper } = wilson(0.8, 70, Z95);
    const [lo, hi] = newcombe(input);
    expect(lo).toBeCloseTo(lower - 0.6, 12);
    expect(hi).toBeCloseTo(upper - 0.6, 12);
    expect(wilson(0.6, Infinity, Z95)).toEqual({ lower: 0.6, upper: 0.6 });
  });

  it('shares of 0 and 1 keep their limits inside', () => {
    expect(wilson(0, 10, Z95).lower).toBe(0);
    expect(wilson(1, 10, Z95).upper).toBe(1);
  });

  it('a share or level out of range is refused', () => {
    expect(() => wilson(1.1, 5, 1)).toThrow('share: must lie between 0 and 1, got 1.1');
    expect(() => wilson(0.1, 0, 1)).toThrow('n: must be a positive number or Infinity, got 0');
    const input = { after: 0.8, nAfter: 70, before: 0.6, nBefore: 80, level: 1 };
    expect(() => newcombe(input)).toThrow('level: must lie strictly between 0 and 1, got 1');
  });
});

describe('moved', () => {
  const sides = { weightNow: 5000, weightReference: 50_000, df2: 200, pooledIndex: null };

  it('equal shares have moved nothing, and at most what could hide', () => {
    const p = [0.5, 0.3, 0.2];
    const found = moved({ now: p, reference: p, ...sides });
    expect(found).toMatchObject({ estimate: 0, atLeast: 0, carriers: [] });
    // 1/2 t_.95,200 sqrt(1/5000 + 1/50000); t 1.6525081009108773 (scipy 1.17.1 t.isf).
    expect(found.atMost).toBeCloseTo(0.5 * 1.6525081009108773 * Math.sqrt(0.00022), 12);
  });

  it('a clear rise names the bins that carry it', () => {
    const found = moved({ now: [0.4, 0.35, 0.25], reference: [0.5, 0.3, 0.2], ...sides });
    expect(found.carriers).toEqual([1, 2]);
    expect(found.atLeast).toBeGreaterThan(0.07);
    expect(found.estimate).toBeCloseTo(0.1, 3);
    expect(found.atMost).toBeGreaterThan(0.1);
  });

  it('the prefix maximum is the maximum over all sets of bins', () => {
    const now = [0.31, 0.22, 0.2, 0.12, 0.15];
    const reference = [0.4, 0.2, 0.15, 0.15, 0.1];
    const found = moved({ now, reference, ...sides });
    // F_.05(4, 200) from scipy 1.17.1 (f.isf); brute force over the 30 proper sets.
    const v = 1 / 5000 + 1 / 50_000;
    let best = 0;
    for (let set = 1; set < 31; set += 1) {
      const inside = [0, 1, 2, 3, 4].filter((k) => (set >> k) % 2 === 1);
      const total = (values: number[]): number => inside.reduce((s, k) => s + (values[k] ?? 0), 0);
      const share = (total(now) + 10 * total(reference)) / 11;
      const scheffe = Math.sqrt(4 * 2.4167997269534753 * v * share * (1 - share));
      best = Math.max(best, total(now) - total(reference) - scheffe);
    }
    expect(found.atLeast).toBeCloseTo(best, 12);
    expect(found.carriers).toEqual([1, 2, 4]);
  });

  it('the smaller share of the pooled bin could have moved unseen', () => {
    const input = { now: [0.6, 0.4], reference: [0.7, 0.3], ...sides };
    const without = moved(input).atMost;
    expect(moved({ ...input, pooledIndex: 1 }).atMost).toBeCloseTo(without + 0.3, 12);
  });

  it('a share declared impossible counts in full, and bins empty on both sides not at all', () => {
    const input = { ...sides, weightReference: Infinity, df2: Infinity };
    const found = moved({ now: [0.9, 0, 0.1], reference: [1, 0, 0], ...input });
    expect(found.atLeast).toBeCloseTo(0.1, 12);
    expect(found.carriers).toEqual([2]);
  });

  it('input without a meaning is refused', () => {
    const fine = { now: [0.5, 0.5], reference: [0.5, 0.5], ...sides };
    expect(() => moved({ ...fine, df2: 0 })).toThrow(
      'df2: must be a positive number or Infinity, got 0',
    );
    expect(() => moved({ ...fine, pooledIndex: 2 })).toThrow(
      'pooledIndex: must be an integer from 0 to 1, got 2',
    );
  });
});

describe('peel', () => {
  const share = (counts: number[]): number[] => {
    const total = counts.reduce((a, b) => a + b, 0);
    return counts.map((x) => x / total);
  };

  it('gives the adjusted residuals of R and blames nobody in a steady table', () => {
    // Specification, section 7.1: chisq.test()$stdres, row 1.
    const expected = [-0.76317889, 0.98501418, -0.29437356, 0, 0, 0.55090699];
    const found = peel({
      now: share([48, 22, 11, 9, 6, 4]),
      weightNow: 100,
      reference: share([520, 180, 120, 90, 60, 30]),
      weightReference: 1000,
      df2: Infinity,
    });
    expected.forEach((r, k) => expect(found.residuals[k]).toBeCloseTo(r, 7));
    expect(found.blamed).toEqual([]);
  });

  it('when one category rises only that one is blamed, not those that shrink for it', () => {
    const before = [0.4, 0.3, 0.2, 0.1];
    const now = [0.36, 0.27, 0.18, 0.19];
    const input = { now, weightNow: 3000, reference: before, weightReference: 30_000, df2: 100 };
    const found = peel(input);
    expect(found.blamed).toEqual([{ index: 3, sign: 1 }]);
    expect(found.residuals.filter((r) => r < -2)).toHaveLength(3);
  });

  it('a transfer blames both sides', () => {
    const input = { weightNow: 5000, reference: [0.4, 0.3, 0.2, 0.1], df2: 100 };
    const now = [0.4, 0.2, 0.3, 0.1];
    const signs = peel({ ...input, now, weightReference: Infinity }).blamed;
    expect([...signs].sort((a, b) => a.index - b.index)).toEqual([
      { index: 1, sign: -1 },
      { index: 2, sign: 1 },
    ]);
  });

  it('of two bins the smaller one is blamed', () => {
    const input = { weightNow: 2000, weightReference: 2000, df2: Infinity };
    const found = peel({ now: [0.8, 0.2], reference: [0.9, 0.1], ...input });
    expect(found.blamed).toEqual([{ index: 1, sign: 1 }]);
    expect(found.residuals[0]).toBeCloseTo(-(found.residuals[1] ?? 0), 12);
  });

  it('an event that was declared impossible is blamed first', () => {
    const input = { weightNow: 100, weightReference: Infinity, df2: Infinity };
    const found = peel({ now: [0.6, 0.38, 0.02], reference: [0.6, 0.4, 0], ...input });
    expect(found.blamed).toEqual([{ index: 2, sign: 1 }]);
    expect(found.residuals[2]).toBe(Infinity);
  });
});

describe('benjaminiHochberg', () => {
  // Benjamini & Hochberg (1995) JRSS B 57:289-300, section 3.2: 4 of 15 at .05, as quoted by
  // SciPy 1.17.1's false_discovery_control.
  const PAPER = [
    0.0001, 0.0004, 0.0019, 0.0095, 0.0201, 0.0278, 0.0298, 0.0344, 0.0459, 0.324, 0.4262, 0.5719,
    0.6528, 0.759, 1,
  ];

  it('rejects the four of the 1995 example', () => {
    const rejected = benjaminiHochberg(PAPER.map(Math.log), 0.05);
    expect(rejected).toEqual(PAPER.map((_, i) => i < 4));
  });

  it('agrees with the adjusted values of R on both sides of each', () => {
    // Specification, section 4.5: p.adjust(., "BH").
    const ps = [0.001, 0.008, 0.039, 0.041, 0.042, 0.06, 0.074, 0.205];
    const adjusted = [0.008, 0.032, 0.0672, 0.0672, 0.0672, 0.08, 0.08457143, 0.205];
    for (const level of [0.007, 0.01, 0.033, 0.067, 0.068, 0.081, 0.1, 0.3]) {
      const rejected = benjaminiHochberg(ps.map(Math.log), level);
      expect(rejected).toEqual(adjusted.map((a) => a <= level));
    }
  });

  it('keeps the order given and treats tails far below a double', () => {
    expect(benjaminiHochberg([-1, -9000, -Infinity, -0.1], 1e-5)).toEqual([
      false,
      true,
      true,
      false,
    ]);
    expect(benjaminiHochberg([], 0.05)).toEqual([]);
    expect(benjaminiHochberg([-5, -9000], 0)).toEqual([false, false]);
  });

  it('a positive logarithm or a level over 1 is refused', () => {
    expect(() => benjaminiHochberg([0.1], 0.05)).toThrow('logPs[0]: must be <= 0, got 0.1');
    expect(() => benjaminiHochberg([-1], 2)).toThrow('level: must lie between 0 and 1, got 2');
  });
});

describe('changePoint', () => {
  const before = [50, 30, 20];
  const after = [30, 30, 40];
  const baseline = [5000, 3000, 2000];

  it('a clear change is dated to its first window', () => {
    const windows = [before, before, before, after, after];
    expect(changePoint({ baseline, windows, phi: 1 })).toMatchObject({ estimate: 3 });
  });

  it('the likely starts are those within 7 of twice the log-likelihood', () => {
    const windows = [before, before, [45, 30, 25], after, after];
    const found = changePoint({ baseline, windows, phi: 1 });
    const l = windows.map((_, s) => logLikelihood(baseline, windows, s));
    const best = Math.max(...l);
    const likely = l.flatMap((value, s) => (2 * (best - value) <= 7 ? [s] : []));
    expect(found).toEqual({
      estimate: l.indexOf(best),
      earliest: likely[0],
      latest: likely[likely.length - 1],
    });
  });

  it('a larger phi widens what is likely', () => {
    const windows = [before, before, before, after, after];
    const narrow = changePoint({ baseline, windows, phi: 1 });
    const wide = changePoint({ baseline, windows, phi: 10 });
    expect(wide.latest - wide.earliest).toBeGreaterThan(narrow.latest - narrow.earliest);
  });

  it('an empty window before the change makes a tie, which goes to the latest', () => {
    const windows = [before, before, [0, 0, 0], after, after];
    expect(changePoint({ baseline, windows, phi: 1 }).estimate).toBe(3);
  });

  it('a baseline a million times heavier does not drown the date', () => {
    const heavy = baseline.map((x) => x * 1e6);
    const windows = [before, before, before, after, after];
    expect(changePoint({ baseline: heavy, windows, phi: 1 }).estimate).toBe(3);
  });

  it('no windows, or another number of bins, is refused', () => {
    expect(() => changePoint({ baseline, windows: [], phi: 1 })).toThrow(
      'windows: must hold at least one, got none',
    );
    expect(() => changePoint({ baseline, windows: [[1]], phi: 1 })).toThrow(
      'windows[0]: must have 3 cells, got 1',
    );
  });
});

/** The formula as it is written down, without any care for rounding. */
function logLikelihood(baseline: number[], windows: number[][], split: number): number {
  const part = (rows: number[][]): number => {
    const counts = baseline.map((_, k) => rows.reduce((sum, row) => sum + (row[k] ?? 0), 0));
    const total = counts.reduce((a, b) => a + b, 0);
    return counts.reduce((sum, x) => (x > 0 ? sum + x * Math.log(x / total) : sum), 0);
  };
  return part([baseline, ...windows.slice(0, split)]) + part(windows.slice(split));
}
