import { describe, expect, it } from 'vitest';

import { retryDelayMs } from '../../../src/send/backoff.js';

const almostOne = 1 - Number.EPSILON;

describe('the wait before a retry', () => {
  it('doubles from 5 s and stops at 15 min when the jitter is at its upper end', () => {
    const delays = [0, 1, 2, 7, 8, 1000].map((failures) => retryDelayMs(failures, almostOne));
    // 5 s times 2^n: 5, 10, 20, 640; then 1,280 s and beyond are over the cap of 900 s.
    expect(delays).toEqual([5_000, 10_000, 20_000, 640_000, 900_000, 900_000]);
  });

  it('is half as long when the jitter is at its lower end', () => {
    expect([0, 1, 8].map((failures) => retryDelayMs(failures, 0))).toEqual([2_500, 5_000, 450_000]);
  });
});
