import { describe, expect, it } from 'vitest';

import {
  adjustTail,
  EMPTY_TAIL,
  joinTails,
  observeTail,
  tailCalibration,
} from '../../../src/stats/tailCalibration.js';
import type { TailHistory } from '../../../src/stats/tailCalibration.js';

const LOG_20 = Math.log(20);
const range = (message: string): RangeError => new RangeError(message);

/** The expected order statistics of n values whose tail is `theta` times that of honest ones. */
const exponential = (n: number, theta: number): TailHistory => ({
  evidence: Array.from({ length: n }, (_, i) => -theta * Math.log((i + 0.5) / n)),
});

describe('tailCalibration', () => {
  it('two values in the tail: theta is their mean excess over the 95 % quantile', () => {
    // 21 values: position .95 x 20 = 19, the 20th smallest; one above it.
    const evidence = [...Array.from({ length: 20 }, (_, i) => i / 10), 9];
    const found = tailCalibration({ evidence }, { minimum: 21 });
    expect(found.theta).toBeCloseTo(9 - 1.9, 12);
    expect(found).toMatchObject({ size: 21, ready: true, threshold: LOG_20 });
    const wider = tailCalibration({ evidence: [...evidence, 10] }, { minimum: 1 });
    // 22 values: position 19.95, between 1.9 and 9.
    expect(wider.theta).toBe(Math.max(1, (9 + 10) / 2 - (1.9 + 0.95 * 7.1)));
  });

  it('honest p-values leave theta near 1 and p as it is', () => {
    const history = exponential(1000, 1);
    const { theta, ready, threshold } = tailCalibration(history);
    expect(ready).toBe(true);
    expect(theta).toBeLessThan(1.02);
    expect(threshold).toBeCloseTo(LOG_20, 1);
    expect(adjustTail(history, -14)).toBeLessThan(-13.5);
  });

  it('a tail twice too heavy is halved beyond its quantile', () => {
    const history = exponential(1000, 2);
    const { theta, threshold } = tailCalibration(history);
    expect(theta).toBeGreaterThan(1.9);
    expect(theta).toBeLessThan(2.1);
    expect(threshold).toBeCloseTo(2 * LOG_20, 1);
    expect(adjustTail(history, -20)).toBeCloseTo(-(LOG_20 + (20 - threshold) / theta), 12);
    expect(adjustTail(history, -4)).toBe(-LOG_20);
    expect(adjustTail(history, -2.9)).toBe(-2.9);
  });

  it('under 200 windows nothing is adjusted, and that is said', () => {
    const short = exponential(199, 3);
    const young = { size: 199, ready: false, theta: 1, threshold: LOG_20 };
    expect(tailCalibration(short)).toEqual(young);
    expect(adjustTail(short, -30)).toBe(-30);
    const full = observeTail(short, -1);
    expect(tailCalibration(full)).toMatchObject({ size: 200, ready: true });
    expect(adjustTail(full, -30)).toBeGreaterThan(-30);
    expect(tailCalibration(short, { minimum: 50 }).theta).toBeGreaterThan(2);
    expect(adjustTail(short, -30, { minimum: 50 })).toBeGreaterThan(-30);
  });

  it('short histories of several strands together may be enough', () => {
    const joined = joinTails([exponential(120, 3), exponential(80, 3), EMPTY_TAIL]);
    expect(tailCalibration(joined)).toMatchObject({ size: 200, ready: true });
    expect(joinTails([])).toEqual(EMPTY_TAIL);
  });

  it('windows that are all alike have no tail: theta 1', () => {
    const history = { evidence: Array.from({ length: 300 }, () => 5) };
    expect(tailCalibration(history)).toMatchObject({ theta: 1, threshold: 5 });
    expect(adjustTail(history, -5)).toBe(-LOG_20);
    expect(adjustTail(history, -7)).toBeCloseTo(-(LOG_20 + 2), 12);
  });

  it('the order of the windows does not matter', () => {
    const { evidence } = exponential(400, 1.5);
    const turned = { evidence: [...evidence].reverse() };
    expect(tailCalibration(turned)).toEqual(tailCalibration({ evidence }));
  });

  it('an impossible event stays impossible', () => {
    expect(adjustTail(exponential(400, 5), -Infinity)).toBe(-Infinity);
    expect(adjustTail(EMPTY_TAIL, -Infinity)).toBe(-Infinity);
  });
});

describe('observeTail', () => {
  it('appends to a new history and leaves the old one alone', () => {
    const one = observeTail(EMPTY_TAIL, -2);
    const two = observeTail(one, 0);
    expect([EMPTY_TAIL.evidence, one.evidence, two.evidence]).toEqual([[], [2], [2, 0]]);
  });

  it('keeps the last 1000', () => {
    let history = EMPTY_TAIL;
    for (let i = 0; i < 1003; i += 1) history = observeTail(history, -i);
    expect(history.evidence).toHaveLength(1000);
    expect([history.evidence[0], history.evidence[999]]).toEqual([3, 1002]);
    expect(observeTail(joinTails([history, history]), -1).evidence).toHaveLength(1000);
  });

  it('survives being written down and read back', () => {
    const history = observeTail(exponential(250, 2), -3.25);
    const back = JSON.parse(JSON.stringify(history)) as TailHistory;
    expect(adjustTail(back, -17)).toBe(adjustTail(history, -17));
  });

  it('refuses what is no p-value of a window in control', () => {
    const observe = (logP: number) => () => observeTail(EMPTY_TAIL, logP);
    expect(observe(0.5)).toThrow(range('logP: must be <= 0, got 0.5'));
    expect(observe(NaN)).toThrow(range('logP: must be <= 0, got NaN'));
    expect(observe(-Infinity)).toThrow(range('logP: must be finite, got -Infinity'));
    expect(() => adjustTail(EMPTY_TAIL, 1)).toThrow(range('logP: must be <= 0, got 1'));
    expect(() => tailCalibration(EMPTY_TAIL, { minimum: 0 })).toThrow(
      range('minimum: must be an integer from 1 to 9007199254740991, got 0'),
    );
  });
});
