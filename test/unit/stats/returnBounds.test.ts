import { describe, expect, it } from 'vitest';

import { returnBounds } from '../../../src/stats/returnBounds.js';

// Check values of the specification (section 10); their t comes from a quantile good to 11 digits.
const CHECKED = {
  raise: { share: 0.207, weight: 2000, reference: 0.107 },
  since: { share: 0.11, weight: 6000, reference: 0.107 },
  weightReference: 48_000,
  df2: 253,
};
const since = (share: number): typeof CHECKED => {
  return { ...CHECKED, since: { ...CHECKED.since, share } };
};

describe('returnBounds', () => {
  it('a share back at .11 is under a third of the shift: check values', () => {
    const found = returnBounds(CHECKED);
    expect(found.t).toBeCloseTo(3.122756151714228, 9);
    expect(found.remainder).toBeCloseTo(0.01775915711709175, 11);
    expect(found.distance).toBeCloseTo(0.016235814627441857, 11);
    expect(found.allowed).toBeCloseTo(0.1 / 3, 14);
    expect(found.remainder).toBeLessThan(found.allowed);
  });

  it('a share still at .13 is not: check value', () => {
    const found = returnBounds(since(0.13));
    expect(found.remainder).toBeCloseTo(0.03785995347720624, 11);
    expect(found.remainder).toBeGreaterThan(found.allowed);
  });

  it('declared shares: no error of theirs, and an infinite df2 has the normal quantile', () => {
    const found = returnBounds({ ...CHECKED, weightReference: Infinity, df2: Infinity });
    const p = 0.107 * 0.893;
    // Normal quantile at .999: 3.090232306167813 (from memory).
    const z = 3.090232306167813;
    expect(found.t).toBeCloseTo(z, 12);
    expect(found.remainder).toBeCloseTo(0.003 + z * Math.sqrt(p / 6000 + p / 18_000), 12);
    expect(found.distance).toBeCloseTo(0.003 + z * Math.sqrt(p / 6000), 12);
  });

  it('a fall is the mirror of a rise', () => {
    const mirror = <T extends { share: number; reference: number }>(side: T): T => {
      return { ...side, share: 1 - side.share, reference: 1 - side.reference };
    };
    const rise = returnBounds(since(0.13));
    const { raise, since: later } = since(0.13);
    const fall = returnBounds({ ...CHECKED, raise: mirror(raise), since: mirror(later) });
    expect(fall.remainder).toBeCloseTo(rise.remainder, 14);
    expect(fall.distance).toBeCloseTo(rise.distance, 14);
    expect(fall.allowed).toBeCloseTo(rise.allowed, 14);
  });

  it('past the reference on the other side nothing is left, whatever the noise allows', () => {
    expect(returnBounds(since(0.05)).remainder).toBeLessThan(0);
    expect(returnBounds(since(0.05)).distance).toBeLessThan(0);
  });

  it('each yardstick of peers has its own reference', () => {
    const peers = { ...CHECKED, since: { ...CHECKED.since, share: 0.2, reference: 0.19 } };
    const found = returnBounds(peers);
    expect(found.distance - 0.01).toBeLessThan(0.02);
    expect(found.allowed).toBeCloseTo(0.1 / 3, 14);
  });

  it('back at a declared share of 0 there is nothing left, and no noise either', () => {
    const found = returnBounds({
      raise: { share: 0.01, weight: 100, reference: 0 },
      since: { share: 0, weight: 300, reference: 0 },
      weightReference: Infinity,
      df2: 60,
    });
    expect(found.distance).toBe(0);
    expect(found.remainder).toBe(0);
  });

  it('what is no share, weight or df2 is refused by name and value', () => {
    const refused = (part: object): (() => unknown) => {
      return () => returnBounds({ ...CHECKED, ...part });
    };
    expect(refused({ raise: { ...CHECKED.raise, share: 2 } })).toThrow(
      'raise.share: must lie between 0 and 1, got 2',
    );
    expect(refused({ raise: { ...CHECKED.raise, weight: 0 } })).toThrow(
      'raise.weight: must be a positive finite number, got 0',
    );
    expect(refused({ since: { ...CHECKED.since, reference: -1 } })).toThrow(
      'since.reference: must lie between 0 and 1, got -1',
    );
    expect(refused({ weightReference: 0 })).toThrow(
      'weightReference: must be a positive number or Infinity, got 0',
    );
    expect(refused({ df2: NaN })).toThrow('df2: must be a positive number or Infinity, got NaN');
  });
});
