import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';
import { describe, expect, it } from 'vitest';

import { changePoint } from '../../../src/stats/changePoint.js';

function drawWindow(random: RandomGenerator, events: number, shares: readonly number[]): number[] {
  const counts = shares.map(() => 0);
  for (let i = 0; i < events; i += 1) {
    let left = uniformFloat64(random);
    const k = shares.findIndex((share) => (left -= share) < 0);
    counts[k] = (counts[k] ?? 0) + 1;
  }
  return counts;
}

/** How often the confidence set holds the first changed window, and its mean size. */
function coverage(by: number, repeats: number): { readonly held: number; readonly size: number } {
  const random = xoroshiro128plus(606);
  const before = [0.3, 0.3, 0.2, 0.1, 0.1];
  const after = [0.3 + by, ...before.slice(1).map((p) => (p * (0.7 - by)) / 0.7)];
  let [held, size] = [0, 0];
  for (let repeat = 0; repeat < repeats; repeat += 1) {
    const start = 8 + (repeat % 20);
    const windows = Array.from({ length: 32 }, (_, t) =>
      drawWindow(random, 500, t < start ? before : after),
    );
    const baseline = drawWindow(random, 24 * 500, before);
    const { earliest, latest } = changePoint({ baseline, windows, phi: 1 });
    if (earliest <= start && start <= latest) held += 1;
    size += (latest - earliest + 1) / repeats;
  }
  return { held: held / repeats, size };
}

describe('changePoint', () => {
  it('of a change that is found at once, nine confidence sets in ten hold the first window', () => {
    // Section 6: coverage at least .91, mean size 1.0 to 3.3 windows for 5 to 10 points. That was
    // another mix, so the size is held loosely. 100 runs: standard error .029, 50 runs: .040.
    const five = coverage(0.05, 100);
    expect(five.held).toBeGreaterThan(0.91 - 2 * 0.029);
    expect(five.size).toBeLessThan(5);
    const ten = coverage(0.1, 50);
    expect(ten.held).toBeGreaterThan(0.91 - 2 * 0.04);
    expect(ten.size).toBeLessThan(five.size);
  });

  it('a change in the very first window, or the last, is found there', () => {
    const baseline = [5000, 5000];
    const [old, fresh] = [
      [50, 50],
      [80, 20],
    ];
    const all = changePoint({ baseline, windows: [fresh, fresh, fresh], phi: 1 });
    expect(all).toMatchObject({ estimate: 0, earliest: 0 });
    const last = changePoint({ baseline, windows: [old, old, old, fresh], phi: 1 });
    expect(last).toEqual({ estimate: 3, earliest: 3, latest: 3 });
  });

  it('windows that fit perfectly could have begun anywhere, and the latest is named', () => {
    const windows = new Array<number[]>(6).fill([30, 70]);
    const found = changePoint({ baseline: [300, 700], windows, phi: 1 });
    expect(found).toEqual({ estimate: 5, earliest: 0, latest: 5 });
  });

  it('a category that only the windows after the change have dates it', () => {
    const windows = [
      [50, 50, 0],
      [50, 50, 0],
      [40, 40, 20],
      [40, 40, 20],
    ];
    const found = changePoint({ baseline: [500, 500, 0], windows, phi: 1 });
    expect(found).toEqual({ estimate: 2, earliest: 2, latest: 2 });
  });

  it('without a baseline the windows before the change are all there is to hold against', () => {
    const windows = [
      [50, 50],
      [50, 50],
      [90, 10],
    ];
    const found = changePoint({ baseline: [0, 0], windows, phi: 1 });
    expect(found).toMatchObject({ estimate: 2 });
    const empty = changePoint({ baseline: [0, 0], windows: [[0, 0]], phi: 1 });
    expect(empty).toEqual({ estimate: 0, earliest: 0, latest: 0 });
  });

  it('a phi or a cell that cannot be is refused by name and value', () => {
    const fine = { baseline: [5, 5], windows: [[1, 2]], phi: 1 };
    expect(() => changePoint({ ...fine, phi: 0 })).toThrow(
      'phi: must be a positive finite number, got 0',
    );
    expect(() => changePoint({ ...fine, baseline: [5, -5] })).toThrow(
      'baseline[1]: must be a finite number >= 0, got -5',
    );
    expect(() => changePoint({ ...fine, windows: [[1, NaN]] })).toThrow(
      'windows[0][1]: must be a finite number >= 0, got NaN',
    );
  });
});
