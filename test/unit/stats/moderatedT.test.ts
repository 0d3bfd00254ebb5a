import { describe, expect, it } from 'vitest';

import { digamma } from '../../../src/stats/digamma.js';
import { moderatedT } from '../../../src/stats/moderatedT.js';
import { squeezeVariances } from '../../../src/stats/squeezeVariances.js';
import { tLogSf } from '../../../src/stats/tLogSf.js';

const range = (message: string): RangeError => new RangeError(message);

describe('squeezeVariances', () => {
  it('variances that are all the same become one, less the bias of a logarithm', () => {
    const found = squeezeVariances({ variances: [2, 2, 2], df: 7 });
    const one = 2 * Math.exp(Math.log(3.5) - digamma(3.5));
    expect(found.priorDf).toBe(Infinity);
    expect(found.priorVariance).toBeCloseTo(one, 13);
    found.squeezed.forEach((u) => {
      expect(u).toBeCloseTo(one, 13);
    });
  });

  it('the check values of section 1.8 (scipy)', () => {
    const variances = [1.2, 0.8, 1.9, 1.1, 0.6, 3.5];
    const found = squeezeVariances({ variances, df: 23 });
    expect(found.priorDf).toBeCloseTo(7.462415, 6);
    expect(found.priorVariance).toBeCloseTo(1.154736, 6);
    [1.188912, 0.8869, 1.717432, 1.113409, 0.735894, 2.925478].forEach((u, k) => {
      expect(found.squeezed[k]).toBeCloseTo(u, 6);
    });
  });

  it('fewer than three above 0 stay as they are', () => {
    const none = { priorDf: 0, priorVariance: null };
    expect(squeezeVariances({ variances: [], df: 5 })).toEqual({ ...none, squeezed: [] });
    expect(squeezeVariances({ variances: [3, 0, 4, 0], df: 5 })).toEqual({
      ...none,
      squeezed: [3, 0, 4, 0],
    });
  });

  it('a variance of 0 does not decide what the others have in common', () => {
    const variances = [1.2, 0.8, 1.9, 1.1, 0.6, 3.5];
    const alone = squeezeVariances({ variances, df: 23 });
    const found = squeezeVariances({ variances: [...variances, 0], df: 23 });
    expect(found.priorDf).toBe(alone.priorDf);
    expect(found.squeezed[6]).toBeCloseTo((7.462415 * 1.154736) / (7.462415 + 23), 6);
  });

  it('refuses what is no variance and no df', () => {
    expect(() => squeezeVariances({ variances: [1, -1], df: 5 })).toThrow(
      range('variances[1]: must be a finite number >= 0, got -1'),
    );
    expect(() => squeezeVariances({ variances: [1], df: 0 })).toThrow(
      range('df: must be a positive finite number, got 0'),
    );
  });
});

describe('moderatedT', () => {
  const windows = [
    [50, 50],
    [60, 40],
    [40, 60],
  ];

  it('two bins borrow nothing: a plain t on B - 1 degrees of freedom', () => {
    const found = moderatedT({ now: [75, 25], windows, rho: 0 });
    const f = (c: number): number => Math.sqrt((c + 0.375) / 100.75);
    const mean = (f(50) + f(60) + f(40)) / 3;
    const s2 = ((f(50) - mean) ** 2 + (f(60) - mean) ** 2 + (f(40) - mean) ** 2) / 2;
    expect(s2).toBeGreaterThan(0.5 / 400);
    const t = (f(75) - mean) / Math.sqrt(s2 * (4 / 3));
    expect(found).toMatchObject({ df: 2, priorDf: 0, priorVariance: null });
    expect(found.bins).toHaveLength(2);
    expect(found.bins[0]?.t).toBeCloseTo(t, 12);
    expect(found.bins[0]?.logP).toBeCloseTo(Math.LN2 + tLogSf(t, 2), 12);
    expect(found.bins[0]?.expected).toBeCloseTo(50, 12);
    expect(found.bins[1]?.t).toBeLessThan(0);
  });

  it('a bin that expects too few events is left to the rare tail', () => {
    const three = windows.map(([a = 0, b = 0]) => [a, b - 24, 24]);
    const at = (part: object): number[] =>
      moderatedT({ now: [50, 26, 24], windows: three, rho: 0, ...part }).bins.map((b) => b.index);
    expect(at({})).toEqual([0, 1]);
    expect(at({ minExpected: 24 })).toEqual([0, 1, 2]);
    expect(at({ minExpected: 60 })).toEqual([]);
  });

  it('windows that never vary count as if they varied by chance', () => {
    const same = windows.map(() => [50, 50]);
    const still = moderatedT({ now: [50, 50], windows: same, rho: 0 });
    expect(still.bins.map(({ ratio, squeezed, t, logP }) => [ratio, squeezed, t, logP])).toEqual([
      [0, 1, 0, 0],
      [0, 1, 0, 0],
    ]);
    const moved = moderatedT({ now: [65, 35], windows: same, rho: 0 }).bins[0];
    expect(moved?.t).toBeGreaterThan(2);
    expect(moved?.t).toBeLessThan(Infinity);
  });

  it('with equal windows rho changes nothing, for the variance holds it', () => {
    const now = [75, 25];
    const plain = moderatedT({ now, windows, rho: 0 });
    expect(moderatedT({ now, windows, rho: 0.3 })).toEqual(plain);
    // The twin: a window of another size leaves that form.
    const other = moderatedT({ now: [150, 50], windows, rho: 0.3 });
    expect(other.bins[0]?.ratio).not.toBeCloseTo(plain.bins[0]?.ratio ?? NaN, 3);
  });

  it('a bin with every event, an empty bin and an empty window are left out', () => {
    const found = moderatedT({
      now: [90, 10, 0],
      windows: [
        [100, 0, 0],
        [0, 0, 0],
        [80, 0, 0],
      ],
      rho: 0,
    });
    expect(found).toEqual({ bins: [], df: 0, priorDf: 0, priorVariance: null });
  });

  it('one window has no variance to go by', () => {
    const found = moderatedT({ now: [50, 50], windows: [[50, 50]], rho: 0 });
    expect(found).toEqual({ bins: [], df: 0, priorDf: 0, priorVariance: null });
  });

  it.each([
    [{ now: [0, 0] }, 'now: must hold at least one event, got 0'],
    [{ now: [5, -1] }, 'now[1]: must be a finite number >= 0, got -1'],
    [{ now: [5, 1, 1] }, 'windows[0]: must have 3 cells, got 2'],
    [{ windows: [] }, 'windows: must have a row, got none'],
    [{ windows: [[1, 2], [1]] }, 'windows[1]: must have 2 cells, got 1'],
    [{ rho: -1 }, 'rho: must lie between 0 and 1, got -1'],
    [{ minExpected: 0 }, 'minExpected: must be a positive finite number, got 0'],
  ])('refuses %o', (part, message) => {
    expect(() => moderatedT({ now: [50, 50], windows, rho: 0, ...part })).toThrow(range(message));
  });
});
