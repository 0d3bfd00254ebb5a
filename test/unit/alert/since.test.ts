import { describe, expect, it } from 'vitest';

import { sinceWhen } from '../../../src/alert/since.js';
import { MINUTE, T0 } from '../judge/samples.js';

const calm = [900, 100];
const shifted = [800, 200];

function windows(counts: readonly (readonly number[])[], inReference = 0) {
  return counts.map((one, at) => ({
    window: { startMs: T0 + at * MINUTE, endMs: T0 + (at + 1) * MINUTE },
    counts: one,
    inReference: at < inReference,
  }));
}

const reference = { shares: [0.9, 0.1], weight: 40_000, rho: 0 };
const minute = (at: number) => T0 + at * MINUTE;

describe('since when', () => {
  it('a clear shift in the last window began with it', () => {
    const found = sinceWhen({ windows: windows([calm, calm, calm, shifted]), ...reference });
    expect(found).toEqual({
      estimateMs: minute(3),
      earliestMs: minute(3),
      latestMs: minute(3),
    });
  });

  it('a shift that had gone unnoticed began where the mix changed', () => {
    const found = sinceWhen({ windows: windows([calm, calm, shifted, shifted]), ...reference });
    expect(found.estimateMs).toBe(minute(2));
  });

  it('a small shift has a wider set of likely starts, around its estimate', () => {
    const small = [885, 115];
    const found = sinceWhen({
      windows: windows([calm, calm, small, small, small, small, small]),
      ...reference,
    });
    expect(found.earliestMs).toBeLessThan(found.latestMs);
    expect(found.estimateMs).toBeGreaterThanOrEqual(found.earliestMs);
    expect(found.estimateMs).toBeLessThanOrEqual(found.latestMs);
  });

  it('dispersion widens it', () => {
    const counts = [calm, calm, calm, [860, 140], [860, 140]];
    const tight = sinceWhen({ windows: windows(counts), ...reference });
    const wide = sinceWhen({ windows: windows(counts), ...reference, rho: 0.02 });
    expect(wide.latestMs - wide.earliestMs).toBeGreaterThan(tight.latestMs - tight.earliestMs);
  });

  it('a window that is part of the reference does not count twice', () => {
    // The whole reference is the first three windows: without them it is empty, and the split
    // rests on the windows alone.
    const own = { shares: [0.9, 0.1], weight: 3000, rho: 0 };
    const counts = [calm, calm, calm, shifted];
    const once = sinceWhen({ windows: windows(counts, 3), ...own });
    const alone = sinceWhen({ windows: windows(counts), shares: [0.9, 0.1], weight: 0, rho: 0 });
    expect(once).toEqual(alone);
  });

  it('declared shares weigh more than any window', () => {
    const found = sinceWhen({
      windows: windows([calm, shifted, shifted]),
      shares: [0.9, 0.1],
      weight: Infinity,
      rho: 0,
    });
    expect(found.estimateMs).toBe(minute(1));
  });

  it('a single window is its own start', () => {
    const found = sinceWhen({ windows: windows([shifted]), ...reference });
    expect(found).toEqual({ estimateMs: T0, earliestMs: T0, latestMs: T0 });
  });
});
