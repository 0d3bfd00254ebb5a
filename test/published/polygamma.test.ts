import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { digamma } from '../../src/stats/digamma.js';
import { inverseTrigamma } from '../../src/stats/inverseTrigamma.js';
import { trigamma } from '../../src/stats/trigamma.js';

// polygamma.json holds 40-digit values made by polygamma.py in this folder (mpmath 1.3.0).
interface Row {
  readonly x: number;
  readonly value: string;
}
const rows = JSON.parse(
  readFileSync(new URL('./polygamma.json', import.meta.url), 'utf8'),
) as unknown as Readonly<Record<'digamma' | 'trigamma' | 'inverseTrigamma', readonly Row[]>>;

/** Largest error, relative to the larger of |truth| and `floor`; NaN counts as infinite. */
function worstError(list: readonly Row[], floor: number, ours: (x: number) => number): number {
  return list.reduce((worst, { x, value }) => {
    const exact = Number(value);
    const error = Math.abs(ours(x) - exact) / Math.max(floor, Math.abs(exact));
    return Math.max(worst, Number.isNaN(error) ? Infinity : error);
  }, 0);
}

describe('polygamma functions', () => {
  it('take their closed values at 1 and 1/2', () => {
    // Abramowitz & Stegun 6.3.2, 6.3.3 and 6.4.2, 6.4.4, from memory: Euler's constant, log 2, pi.
    const euler = 0.5772156649015329;
    expect(digamma(1)).toBeCloseTo(-euler, 15);
    expect(digamma(0.5)).toBeCloseTo(-euler - 2 * Math.LN2, 14);
    expect(trigamma(1)).toBeCloseTo(Math.PI ** 2 / 6, 14);
    expect(trigamma(0.5)).toBeCloseTo(Math.PI ** 2 / 2, 14);
    expect(inverseTrigamma(Math.PI ** 2 / 6)).toBeCloseTo(1, 14);
  });

  it('stay within the bounds their docstrings state', () => {
    expect([rows.digamma.length, rows.trigamma.length, rows.inverseTrigamma.length]).toEqual([
      41, 41, 46,
    ]);
    expect(worstError(rows.digamma, 1, digamma)).toBeLessThan(2e-15);
    expect(worstError(rows.trigamma, 0, trigamma)).toBeLessThan(1e-15);
    expect(worstError(rows.inverseTrigamma, 0, inverseTrigamma)).toBeLessThan(2e-15);
  });

  it('would have been caught with the recurrence stopped early', () => {
    // The asymptotic series alone, from 1 on instead of from 15.
    const early = (x: number): number => Math.log(x) - 0.5 / x - 1 / (12 * x * x);
    const body = rows.digamma.filter((row) => row.x >= 1);
    expect(worstError(body, 1, early)).toBeGreaterThan(1e-3);
  });

  it('go to infinity where a double ends, and not to NaN', () => {
    expect(digamma(1e-310)).toBe(-Infinity);
    expect(trigamma(1e-160)).toBe(Infinity);
    expect(inverseTrigamma(1e-310)).toBe(Infinity);
    expect(inverseTrigamma(Number.MAX_VALUE)).toBeGreaterThan(0);
  });

  it.each([
    ['digamma', digamma, 'x'],
    ['trigamma', trigamma, 'x'],
    ['inverseTrigamma', inverseTrigamma, 'y'],
  ] as const)('%s refuses what is not positive and finite', (_, f, name) => {
    for (const value of [0, -1, NaN, Infinity]) {
      expect(() => f(value)).toThrow(
        new RangeError(`${name}: must be a positive finite number, got ${value}`),
      );
    }
  });
});
