import { describe, expect, it } from 'vitest';

import { detectableShift } from '../../../src/stats/detectableShift.js';
import { dispersionFloor } from '../../../src/stats/dispersionFloor.js';
import { eventsNeeded } from '../../../src/stats/eventsNeeded.js';
import { gatePower } from '../../../src/stats/gatePower.js';

/** The worked plan of the specification, section 8. */
const plan = {
  share: 0.1074,
  categories: 12,
  baselineWindows: 24,
  rho: 0.002,
  alpha: 1e-3,
  power: 0.8,
};
const shift = { ...plan, events: 2000, baselineEvents: 2000, tolerance: 0 };

describe('detectableShift', () => {
  it('gives the worked plan of the specification, section 8', () => {
    const found = detectableShift(shift);
    expect(found.lambda).toBeCloseTo(32.514188, 6);
    expect(found.w).toBeCloseTo(0.290927, 6);
    expect(found.guessPoints).toBeCloseTo(9.01, 2);
    expect(found.detectablePoints).toBeCloseTo(10.05, 2);
    expect(found).toMatchObject({ binds: 'test', gatePoints: 0, gatePower: 1 });
    expect(found.testPower).toBeCloseTo(0.8, 12);
  });

  it('gives the table of the design simulations, part 8', () => {
    // [K, N, B, rho, alpha, lambda, first guess, exact]; made there with scipy.
    const rows = [
      [12, 2000, 24, 0, 0.05, 17.46, 2.95, 3.07],
      [12, 2000, 24, 0.002, 1e-5, 48.24, 10.97, 12.49],
      [12, 20_000, 24, 0.002, 1e-3, 32.51, 8.16, 9.02],
      [12, 2000, 8, 0.002, 1e-5, 58.47, 12.55, 14.68],
      [12, 200, 24, 0, 1e-5, 48.24, 15.52, 18.42],
    ] as const;
    for (const [categories, n, baselineWindows, rho, alpha, lambda, guess, exact] of rows) {
      const volume = { events: n, baselineEvents: n };
      const found = detectableShift({
        ...shift,
        ...volume,
        categories,
        baselineWindows,
        rho,
        alpha,
      });
      expect(found.lambda).toBeCloseTo(lambda, 2);
      expect(found.guessPoints).toBeCloseTo(guess, 2);
      expect(found.detectablePoints).toBeCloseTo(exact, 2);
    }
  });

  it('a tolerance that asks for more than the test binds', () => {
    const volume = { events: 200_000, baselineEvents: 200_000, rho: 0 };
    const found = detectableShift({ ...shift, ...volume, tolerance: 0.05 });
    expect(found.binds).toBe('tolerance');
    expect(found.detectablePoints).toBe(found.gatePoints);
    expect(found.gatePoints).toBeGreaterThan(5);
    expect(found.gatePower).toBeCloseTo(0.8, 10);
    expect(found.testPower).toBeGreaterThan(0.99);
  });

  it('a tolerance that asks for less leaves the test to bind, and says its own power', () => {
    const found = detectableShift({ ...shift, tolerance: 0.001 });
    expect(found.binds).toBe('test');
    expect(found.gatePoints).toBeGreaterThan(0);
    expect(found.gatePoints).toBeLessThan(found.testPoints ?? 0);
    expect(found.gatePower).toBeGreaterThan(0.8);
  });

  it('a window too small for any rise gives null and names what fails', () => {
    const none = { detectablePoints: null, testPower: null, gatePower: null };
    const tiny = { events: 1, baselineEvents: 1 };
    const found = detectableShift({ ...shift, ...tiny });
    expect(found).toMatchObject({ ...none, testPoints: null, binds: 'test' });
    const wide = detectableShift({ ...shift, tolerance: 0.95 });
    expect(wide).toMatchObject({ ...none, gatePoints: null, binds: 'tolerance' });
    expect(wide.testPoints).toBeCloseTo(10.05, 2);
  });

  it('arguments without a meaning are refused by name and value', () => {
    const refuse = (change: Partial<typeof shift>, message: string): void => {
      expect(() => detectableShift({ ...shift, ...change })).toThrow(new RangeError(message));
    };
    refuse({ share: 0 }, 'share: must lie strictly between 0 and 1, got 0');
    refuse({ categories: 1 }, 'categories: must be an integer from 2 to 1000000, got 1');
    refuse({ baselineWindows: 1 }, 'baselineWindows: must be an integer from 2 to 1000000, got 1');
    refuse({ rho: -0.1 }, 'rho: must lie between 0 and 1, got -0.1');
    refuse({ alpha: 1 }, 'alpha: must lie strictly between 0 and 1, got 1');
    refuse({ power: 1e-4 }, 'power: must exceed alpha, which is 0.001, got 0.0001');
    refuse({ events: 0 }, 'events: must be an integer from 1 to 10000000000, got 0');
    refuse(
      { baselineEvents: 2.5 },
      'baselineEvents: must be an integer from 1 to 10000000000, got 2.5',
    );
    refuse({ tolerance: 2 }, 'tolerance: must lie between 0 and 1, got 2');
  });
});

describe('gatePower', () => {
  const at = (n: number, rho: number, points: number): number => {
    const weightNow = n / (1 + (n - 1) * rho);
    return gatePower({
      share: 0.1074,
      delta: points / 100,
      weightNow,
      weightReference: 24 * weightNow,
      categories: 12,
      df2: 253,
      tolerance: 0.02,
    });
  };

  it('comes within .06 of the design simulations, and never promises more', () => {
    // Part 3, one category up, a = .05, column "Scheffe": [N, rho, points, simulated].
    for (const [n, rho, points, simulated] of [
      [2000, 0, 2, 0.0005],
      [2000, 0, 3, 0.0097],
      [2000, 0, 4, 0.1047],
      [2000, 0, 6, 0.8457],
      [20_000, 0, 3, 0.5123],
      [20_000, 0, 4, 0.9998],
      [20_000, 0.002, 6, 0.1332],
      [20_000, 0.002, 10, 0.8295],
      [200_000, 0.0005, 6, 0.8548],
    ] as const) {
      expect(at(n, rho, points)).toBeLessThanOrEqual(simulated + 0.001);
      expect(at(n, rho, points)).toBeGreaterThan(simulated - 0.06);
    }
  });

  it('a rise within the tolerance does not pass', () => {
    expect([at(2000, 0, 0), at(2000, 0, 2)]).toEqual([0, 0]);
  });

  it('a rise to a share of 1 against a declared one has no scatter left', () => {
    const certain = { share: 0.5, delta: 0.5, weightReference: Infinity, df2: Infinity };
    const rest = { categories: 2, tolerance: 0.01 };
    expect(gatePower({ ...certain, ...rest, weightNow: 100 })).toBe(1);
    expect(gatePower({ ...certain, ...rest, weightNow: 2 })).toBe(0);
  });

  it('arguments without a meaning are refused by name and value', () => {
    const point = {
      share: 0.4,
      delta: 0.1,
      weightNow: 10,
      weightReference: 10,
      categories: 3,
      df2: 20,
      tolerance: 0.01,
    };
    const refuse = (change: Partial<typeof point>, message: string): void => {
      expect(() => gatePower({ ...point, ...change })).toThrow(new RangeError(message));
    };
    refuse({ share: 1 }, 'share: must lie strictly between 0 and 1, got 1');
    refuse({ delta: -0.1 }, 'delta: must lie between 0 and 1, got -0.1');
    refuse({ delta: 0.7 }, 'delta: must leave a share of at most 1, got 0.7');
    refuse({ weightNow: 0 }, 'weightNow: must be a positive finite number, got 0');
    refuse({ weightReference: 0 }, 'weightReference: must be a positive number or Infinity, got 0');
    refuse({ categories: 1 }, 'categories: must be an integer from 2 to 9007199254740991, got 1');
    refuse({ df2: 0 }, 'df2: must be a positive number or Infinity, got 0');
    refuse({ tolerance: NaN }, 'tolerance: must lie between 0 and 1, got NaN');
  });
});

describe('eventsNeeded', () => {
  it('is the detectable shift the other way round', () => {
    for (const [n, rho, tolerance] of [
      [2000, 0.002, 0],
      [700, 0, 0],
      [5000, 0.0005, 0.03],
      [400, 0.01, 0.01],
    ] as const) {
      const volume = { events: n, baselineEvents: n, rho, tolerance };
      const shown = detectableShift({ ...shift, ...volume });
      const points = shown.detectablePoints ?? 0;
      const found = eventsNeeded({ ...plan, rho, tolerance, points });
      expect(found.eventsNeeded).toBe(n);
      expect(found.binds).toBe(shown.binds);
    }
  });

  it('by the first guess it gives back the volume that the guess was made from', () => {
    const points = detectableShift(shift).guessPoints;
    expect(eventsNeeded({ ...plan, points, tolerance: 0 }).guessEvents).toBe(2000);
    // The guess is too small a shift for that volume: the true number is larger.
    expect(eventsNeeded({ ...plan, points, tolerance: 0 }).eventsNeeded).toBeGreaterThan(2000);
  });

  it('a rise under the floor of the dispersion is not seen at any volume', () => {
    const { exactPoints } = dispersionFloor(plan);
    const under = eventsNeeded({ ...plan, tolerance: 0, points: (exactPoints ?? 0) * 0.999 });
    expect(under).toMatchObject({ eventsNeeded: null, testEvents: null, binds: 'test' });
    const over = eventsNeeded({ ...plan, tolerance: 0, points: (exactPoints ?? 0) * 1.001 });
    expect(over.eventsNeeded).toBeGreaterThan(100_000);
  });

  it('a rise within the tolerance passes the gate at no volume', () => {
    const found = eventsNeeded({ ...plan, rho: 0, tolerance: 0.03, points: 3 });
    expect(found).toMatchObject({ eventsNeeded: null, gateEvents: null, binds: 'tolerance' });
    expect(found.testEvents).toBeGreaterThan(1000);
  });

  it('many categories make the gate dear, not impossible', () => {
    const wide = { ...plan, categories: 5000, rho: 0, tolerance: 0.01, points: 3 };
    const found = eventsNeeded(wide);
    expect(found.binds).toBe('tolerance');
    expect(found.gateEvents).toBeGreaterThan(found.testEvents ?? 0);
  });

  it('a rise that is not one is refused by name and value', () => {
    expect(() => eventsNeeded({ ...plan, tolerance: 0, points: 0 })).toThrow(
      new RangeError('points: must lie above 0 and at most at 89.26, got 0'),
    );
    expect(() => eventsNeeded({ ...plan, tolerance: 0, points: 90 })).toThrow(
      new RangeError('points: must lie above 0 and at most at 89.26, got 90'),
    );
    expect(() => eventsNeeded({ ...plan, tolerance: -1, points: 3 })).toThrow(
      new RangeError('tolerance: must lie between 0 and 1, got -1'),
    );
  });
});

describe('dispersionFloor', () => {
  it('gives w and points of the specification, section 8', () => {
    // The specification prints 8.1 points for "p = .107"; its share is the .1074 of the example.
    const floor = dispersionFloor(plan);
    expect(floor.w).toBeCloseTo(0.26, 3);
    expect(floor.floorPoints).toBeCloseTo(8.1, 1);
  });

  it('exactly, it is what ever larger windows come down to', () => {
    const { exactPoints, floorPoints } = dispersionFloor(plan);
    const endless = { events: 1e10, baselineEvents: 1e10 };
    const { detectablePoints } = detectableShift({ ...shift, ...endless });
    expect(detectablePoints).toBeCloseTo(exactPoints ?? 0, 5);
    expect(exactPoints).toBeGreaterThan(floorPoints);
  });

  it('without dispersion there is no floor', () => {
    expect(dispersionFloor({ ...plan, rho: 0 })).toEqual({ w: 0, floorPoints: 0, exactPoints: 0 });
  });

  it('scatter that hides every rise gives null', () => {
    expect(dispersionFloor({ ...plan, rho: 1 }).exactPoints).toBeNull();
  });

  it('a share out of range is refused', () => {
    expect(() => dispersionFloor({ ...plan, share: 1 })).toThrow(
      new RangeError('share: must lie strictly between 0 and 1, got 1'),
    );
  });
});
