import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { describe, expect, it } from 'vitest';

import { likelihoodRatio } from '../../../src/stats/likelihoodRatio.js';
import { wander } from '../../../src/stats/wander.js';
import type { Wander } from '../../../src/stats/wander.js';

function found(windows: readonly (readonly number[])[]): Wander {
  const result = wander(windows);
  if ('tooSparse' in result) throw new Error('too sparse');
  return result;
}

/** Windows of two categories, each event drawn by a seeded generator. */
function draw(seed: number, sizes: readonly number[], share: (t: number) => number): number[][] {
  const random = xoroshiro128plus(seed);
  return sizes.map((size, t) => {
    let first = 0;
    for (let i = 0; i < size; i += 1) first += uniformFloat64(random) < share(t) ? 1 : 0;
    return [first, size - first];
  });
}

const slow = (t: number): number => 0.5 + 0.2 * Math.sin(t / 6);

describe('wander', () => {
  it('phi of the baseline is G2 over its degrees of freedom, phi of pairs their mean', () => {
    const windows = [
      [50, 50],
      [58, 42],
      [49, 51],
    ];
    const result = found(windows);
    const g = (rows: number[][]): number => likelihoodRatio(rows).statistic;
    expect(result.phiBaseline).toBeCloseTo(g(windows) / 2, 13);
    const pairs = [g(windows.slice(0, 2)), g(windows.slice(1))];
    expect(result.phiSuccessive).toBeCloseTo(((pairs[0] ?? 0) + (pairs[1] ?? 0)) / 2, 13);
    // Equal N: rho = (phi - 1)/(N - 1), not floored, and V the plain ratio.
    expect(result.rhoBaseline).toBeCloseTo((result.phiBaseline - 1) / 99, 14);
    expect(result.rhoSuccessive).toBeCloseTo((result.phiSuccessive - 1) / 99, 14);
    expect(result.v).toBeCloseTo(result.phiSuccessive / result.phiBaseline, 14);
    expect(result.sd).toBeCloseTo(1 / Math.sqrt(3), 14);
  });

  it('independent windows have V near 1 with the deviation that the specification gives', () => {
    // Section 5: white noise has mean 1, sd 1/sqrt(B(K-1)) = .125. Mean of 60: sd .016; trimming
    // lowers the mean a little.
    const values = Array.from({ length: 60 }, (_, seed) =>
      found(draw(seed, new Array<number>(64).fill(150), () => 0.3)),
    );
    const mean = values.reduce((total, { v }) => total + v, 0) / values.length;
    expect(Math.abs(mean - 1)).toBeLessThan(0.06);
    const variance = values.reduce((total, { v }) => total + (v - mean) ** 2, 0) / 59;
    expect(Math.sqrt(variance) / 0.125).toBeGreaterThan(0.7);
    expect(Math.sqrt(variance) / 0.125).toBeLessThan(1.4);
    expect(values.filter((value) => value.wanders).length).toBeLessThanOrEqual(1);
  });

  it('a share that swings slowly is flagged, and the same windows shuffled are not', () => {
    const windows = draw(3, new Array<number>(96).fill(300), slow);
    const result = found(windows);
    expect(result.wanders).toBe(true);
    expect(result.rhoBaseline).toBeGreaterThan(5 * Math.max(0, result.rhoSuccessive));
    const shuffled = windows.map((_, i) => windows[(i * 37) % 96] ?? []);
    expect(found(shuffled).wanders).toBe(false);
    expect(found(shuffled).phiBaseline).toBeCloseTo(result.phiBaseline, 9);
  });

  it('uneven traffic over clustered windows is no wander', () => {
    // Every window has a share of its own (rho some .04); sizes alternate 40 and 1,000. The plain
    // ratio of the two phi would be near .1, because small windows of a pair hold its phi down.
    const random = xoroshiro128plus(8);
    const shares = Array.from({ length: 96 }, () => 0.3 + 0.35 * uniformFloat64(random));
    const sizes = shares.map((_, t) => (t % 2 === 0 ? 40 : 1000));
    const result = found(draw(9, sizes, (t) => shares[t] ?? 0));
    expect(result.phiSuccessive / result.phiBaseline).toBeLessThan(1 - 3 * result.sd);
    expect(result.wanders).toBe(false);
  });

  it('one step is trimmed away; it does not hide among the pairs', () => {
    const windows = [
      ...draw(1, new Array<number>(40).fill(300), () => 0.3),
      ...draw(2, new Array<number>(40).fill(300), () => 0.6),
    ];
    const result = found(windows);
    expect(result.phiSuccessive).toBeLessThan(2);
    expect(result.phiBaseline).toBeGreaterThan(20);
    expect(result.wanders).toBe(true);
  });

  it('a window without events parts its neighbours', () => {
    const windows = [
      [50, 50],
      [55, 45],
      [0, 0],
      [10, 90],
      [12, 88],
    ];
    const result = found(windows);
    expect(result.sd).toBeCloseTo(1 / 2, 14);
    // Only the two real pairs: neither holds the step from 55 to 10.
    expect(result.phiSuccessive).toBeLessThan(1);
  });

  it('windows without any scatter have V 1', () => {
    const same = new Array<number[]>(5).fill([30, 70]);
    expect(found(same)).toMatchObject({ v: 1, phiBaseline: 0, phiSuccessive: 0, wanders: false });
  });

  it('a category that no window has, and windows of one event, leave numbers', () => {
    const thin = found([
      [1, 0, 0],
      [0, 1, 0],
      [1, 0, 0],
      [1, 0, 0],
    ]);
    for (const value of Object.values(thin)) expect(value).not.toBeNaN();
    expect([thin.rhoBaseline, thin.rhoSuccessive]).toEqual([0, 0]);
  });

  it('too few windows, pairs or bins say so', () => {
    expect(
      wander([
        [5, 5],
        [4, 6],
      ]),
    ).toEqual({ tooSparse: true, windows: 2, pairs: 1, bins: 2 });
    expect(
      wander([
        [5, 5],
        [0, 0],
        [4, 6],
        [0, 0],
        [5, 5],
      ]),
    ).toEqual({
      tooSparse: true,
      windows: 3,
      pairs: 0,
      bins: 2,
    });
    expect(wander([[5], [6], [7]])).toEqual({ tooSparse: true, windows: 3, pairs: 2, bins: 1 });
  });

  it('what is no run of windows is refused by name and value', () => {
    expect(() => wander([])).toThrow('windows: must have a row, got none');
    expect(() => wander([[1, 2], [1]])).toThrow('windows[1]: must have 2 cells, got 1');
    expect(() => wander([[1, -2]])).toThrow('windows[0][1]: must be a finite number >= 0, got -2');
  });
});
