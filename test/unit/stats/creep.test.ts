import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { describe, expect, it } from 'vitest';

import { betaBinomialLogRatio } from '../../../src/stats/betaBinomialLogRatio.js';
import { creepAlternatives } from '../../../src/stats/creepAlternatives.js';
import { creepThreshold } from '../../../src/stats/creepThreshold.js';
import { log1pexp } from '../../../src/stats/log1pexp.js';
import { logGamma } from '../../../src/stats/logGamma.js';
import { SHIRYAEV_ROBERTS_START, shiryaevRoberts } from '../../../src/stats/shiryaevRoberts.js';
import type { ShiryaevRobertsState } from '../../../src/stats/shiryaevRoberts.js';

/** The one alternative of the specification's check values (section 5). */
const CHECKED = { category: 0, sign: 1, size: 0.04, p0: 0.1075, p1: 0.1475 } as const;
const ratio = (count: number, rho: number): number =>
  betaBinomialLogRatio({ count, events: 500, p0: 0.1075, p1: 0.1475, rho });

describe('betaBinomialLogRatio', () => {
  it('rho 0 is the binomial ratio, by its formula', () => {
    const byHand = 70 * Math.log(0.1475 / 0.1075) + 430 * Math.log(0.8525 / 0.8925);
    expect(ratio(70, 0)).toBeCloseTo(byHand, 13);
  });

  it('one event is the ratio of the shares, whatever rho is', () => {
    const one = { count: 1, events: 1, p0: 0.2, p1: 0.3 };
    for (const rho of [0, 1e-9, 0.1, 0.99]) {
      expect(betaBinomialLogRatio({ ...one, rho })).toBeCloseTo(Math.log(1.5), 13);
    }
  });

  it('70 of 500 gives the check values of the specification, binomial and rho .002', () => {
    // Section 5, made with scipy.
    expect(ratio(70, 0)).toBeCloseTo(2.42669204, 8);
    expect(ratio(70, 0.002)).toBeCloseTo(1.23462024, 8);
  });

  it('under p0 the ratio itself has mean 1, as a likelihood ratio must', () => {
    const [events, p0, p1, rho] = [40, 0.2, 0.32, 0.05];
    const a = (1 - rho) / rho;
    const logMass = (y: number): number =>
      logGamma(events + 1) -
      logGamma(y + 1) -
      logGamma(events - y + 1) +
      logGamma(y + a * p0) -
      logGamma(a * p0) +
      logGamma(events - y + a * (1 - p0)) -
      logGamma(a * (1 - p0)) +
      logGamma(a) -
      logGamma(a + events);
    let mean = 0;
    for (let count = 0; count <= events; count += 1) {
      mean += Math.exp(logMass(count) + betaBinomialLogRatio({ count, events, p0, p1, rho }));
    }
    expect(mean).toBeCloseTo(1, 12);
  });

  it('a rho too small to matter joins the binomial without a seam', () => {
    // At 20,000 events rho = 1e-7 still says something: no cut to the binomial may hide it.
    const many = { count: 2400, events: 20_000, p0: 0.1075, p1: 0.1475 };
    const at = (rho: number): number => betaBinomialLogRatio({ ...many, rho });
    expect(at(1e-14)).toBeCloseTo(at(0), 5);
    expect(at(1e-320)).toBe(at(0));
    expect(at(1e-7) - at(0.9999e-7)).toBeCloseTo(0, 3);
    expect(Math.abs(at(1e-7) - at(0))).toBeGreaterThan(0.01);
  });

  it('no events say nothing, and equal shares say nothing', () => {
    expect(betaBinomialLogRatio({ count: 0, events: 0, p0: 0.1, p1: 0.2, rho: 0.1 })).toBe(0);
    expect(betaBinomialLogRatio({ count: 3, events: 9, p0: 0.1, p1: 0.1, rho: 0.1 })).toBe(0);
  });

  it('what is no count, share or correlation is refused by name and value', () => {
    const fine = { count: 3, events: 9, p0: 0.1, p1: 0.2, rho: 0.1 };
    const refused = (part: object): (() => unknown) => {
      return () => betaBinomialLogRatio({ ...fine, ...part });
    };
    expect(refused({ p0: 0 })).toThrow('p0: must lie strictly between 0 and 1, got 0');
    expect(refused({ p1: 1 })).toThrow('p1: must lie strictly between 0 and 1, got 1');
    expect(refused({ count: 10 })).toThrow('count: must lie between 0 and 9, got 10');
    expect(refused({ events: Infinity })).toThrow(
      'events: must be a finite number >= 0, got Infinity',
    );
    expect(refused({ rho: 1 })).toThrow('rho: must lie in [0, 1), got 1');
  });
});

describe('creepAlternatives', () => {
  const anchor = {
    shares: [0.75, 0.25],
    weight: 1200,
    windows: 24,
    leastGuards: [0, 0],
    wander: null,
  };
  const first = (input: Parameters<typeof creepAlternatives>[0]): number =>
    (creepAlternatives(input)[0]?.p0 ?? NaN) - (input.shares[0] ?? NaN);
  const se = Math.sqrt((0.75 * 0.25) / 1200);

  it('five sizes up and five down for each category, each outside its guard', () => {
    const found = creepAlternatives(anchor);
    expect(found).toHaveLength(20);
    expect(found.map((way) => way.sign).slice(0, 10)).toEqual([1, 1, 1, 1, 1, -1, -1, -1, -1, -1]);
    expect(found[0]).toEqual({
      category: 0,
      sign: 1,
      size: 0.01,
      p0: 0.75 + 1.5 * se,
      p1: 0.75 + 1.5 * se + 0.01,
    });
    expect(found[9]?.p1).toBeCloseTo(0.75 - 1.5 * se - 0.16, 14);
  });

  it('an anchor of under 24 windows is guarded by 2 standard errors instead of 1.5', () => {
    expect(first(anchor)).toBeCloseTo(1.5 * se, 14);
    expect(first({ ...anchor, windows: 23 })).toBeCloseTo(2 * se, 14);
  });

  it('declared shares have no error of their own; the larger least guard holds', () => {
    expect(first({ ...anchor, weight: Infinity })).toBe(0);
    expect(first({ ...anchor, weight: Infinity, leastGuards: [0.01, 0.005] })).toBeCloseTo(
      0.01,
      14,
    );
  });

  it('a wandering anchor widens the guard by the check value of the specification', () => {
    // Section 5: rho_b .0034, rho_s 0, p .25: .12624381172952598.
    const wander = { rhoBaseline: 0.0034, rhoSuccessive: 0 };
    const guard = first({ ...anchor, shares: [0.25, 0.75], wander });
    expect(guard).toBeCloseTo(0.12624381172952598, 14);
    expect(first({ ...anchor, wander: { rhoBaseline: 0.001, rhoSuccessive: 0.002 } })).toBeCloseTo(
      1.5 * se,
      14,
    );
  });

  it('a fall is not looked for where it would take 95 % of the share', () => {
    const small = { ...anchor, shares: [0.98, 0.02], weight: Infinity };
    const falls = creepAlternatives(small).filter((way) => way.category === 1 && way.sign < 0);
    expect(falls.map((way) => way.size)).toEqual([0.01]);
  });

  it('a rise ends half way to 1 and a fall at a fiftieth, where the size would go too far', () => {
    const found = creepAlternatives({ ...anchor, shares: [0.9, 0.1], weight: 40 });
    const guard = 1.5 * Math.sqrt(0.09 / 40);
    expect(found.find((way) => way.size === 0.16)?.p1).toBeCloseTo((1 + 0.9 + guard) / 2, 14);
    const fall = found.findLast((way) => way.category === 1);
    expect(fall).toMatchObject({ sign: -1, size: 0.08 });
    expect(fall?.p1).toBeCloseTo(0.02 * (0.1 - guard), 14);
  });

  it('a category never seen can rise from one in a million', () => {
    const found = creepAlternatives({ ...anchor, shares: [1, 0] });
    expect(found.filter((way) => way.category === 1).map((way) => way.p0)).toEqual(
      new Array(5).fill(1e-6),
    );
  });

  it('a share whose guard reaches past .999 has no rise, so standing still is no creep', () => {
    const shares = [0.9995, 0.0005];
    const input = { ...anchor, shares, weight: Infinity, leastGuards: [0.01, 0.01] };
    const found = creepAlternatives(input);
    expect(found.filter((way) => way.category === 0 && way.sign > 0)).toEqual([]);
    expect(found.filter((way) => way.category === 1 && way.sign < 0)).toEqual([]);
    const counts = [19_990, 10];
    expect(run(found, counts, 50)).toBeLessThan(Math.log(1000));
    // The twin: with p0 cut to .999, on the wrong side of the share, the same windows alarm.
    const cut = { category: 0, sign: 1, size: 0.01, p0: 0.999, p1: 0.9995 } as const;
    expect(run([...found, cut], counts, 50)).toBeGreaterThan(Math.log(1000));
  });

  it('what is no anchor is refused by name and value', () => {
    const refused = (part: object): (() => unknown) => {
      return () => creepAlternatives({ ...anchor, ...part });
    };
    expect(refused({ shares: [0.5, 0.4] })).toThrow('shares: must sum to 1, got 0.9');
    expect(refused({ weight: 0 })).toThrow('weight: must be a positive number or Infinity, got 0');
    expect(refused({ windows: -1 })).toThrow(
      `windows: must be an integer from 0 to ${Number.MAX_SAFE_INTEGER}, got -1`,
    );
    expect(refused({ leastGuards: [0] })).toThrow('leastGuards: must have 2 cells, got 1');
    expect(refused({ leastGuards: [0, 2] })).toThrow(
      'leastGuards[1]: must lie between 0 and 1, got 2',
    );
    expect(refused({ wander: { rhoBaseline: NaN, rhoSuccessive: 0 } })).toThrow(
      'wander: must hold finite numbers, got NaN, 0',
    );
  });
});

/** log D after the same window many times. */
function run(
  alternatives: Parameters<typeof shiryaevRoberts>[0]['alternatives'],
  counts: readonly number[],
  times: number,
): number {
  let state = SHIRYAEV_ROBERTS_START;
  let logD = -Infinity;
  for (let t = 0; t < times; t += 1) {
    ({ state, logD } = shiryaevRoberts({ state, alternatives, counts, rho: 0 }));
  }
  return logD;
}

describe('shiryaevRoberts', () => {
  it('70, 61 and 75 of 500 give the three check values of the specification', () => {
    // Section 5, rho .002, one alternative, made with scipy.
    let state: ShiryaevRobertsState = SHIRYAEV_ROBERTS_START;
    const ds = [70, 61, 75].map((count) => {
      const counts = [count, 500 - count];
      const step = shiryaevRoberts({ state, alternatives: [CHECKED], counts, rho: 0.002 });
      state = step.state;
      return Math.exp(step.logD);
    });
    expect(ds[0]).toBeCloseTo(3.43707301, 8);
    expect(ds[1]).toBeCloseTo(3.05856364, 8);
    expect(ds[2]).toBeCloseTo(32.73552883, 8);
  });

  it('a state that went through JSON goes on as if it had not', () => {
    const input = { alternatives: [CHECKED], counts: [70, 430], rho: 0.002 };
    const one = shiryaevRoberts({ ...input, state: SHIRYAEV_ROBERTS_START });
    const thawed = (state: ShiryaevRobertsState): ShiryaevRobertsState =>
      JSON.parse(JSON.stringify(state)) as ShiryaevRobertsState;
    expect(shiryaevRoberts({ ...input, state: thawed(SHIRYAEV_ROBERTS_START) })).toEqual(one);
    expect(shiryaevRoberts({ ...input, state: thawed(one.state) })).toEqual(
      shiryaevRoberts({ ...input, state: one.state }),
    );
  });

  it('a window without events changes nothing, at the start and later', () => {
    const input = { alternatives: [CHECKED], rho: 0.002 };
    const empty = shiryaevRoberts({ ...input, counts: [0, 0], state: SHIRYAEV_ROBERTS_START });
    expect(empty).toEqual({ state: { logR: [] }, logD: -Infinity, leading: null });
    const one = shiryaevRoberts({ ...input, counts: [70, 430], state: empty.state });
    expect(shiryaevRoberts({ ...input, counts: [0, 0], state: one.state })).toEqual(one);
  });

  it('without an alternative nothing can be found', () => {
    const step = shiryaevRoberts({
      state: SHIRYAEV_ROBERTS_START,
      alternatives: [],
      counts: [5, 5],
      rho: 0,
    });
    expect(step).toEqual({ state: { logR: [] }, logD: -Infinity, leading: null });
  });

  it('one window adds at most 60, however large it is, and many never overflow', () => {
    const input = { alternatives: [CHECKED], counts: [1e9, 0], rho: 0 };
    const one = shiryaevRoberts({ ...input, state: SHIRYAEV_ROBERTS_START });
    expect(one.logD).toBe(60);
    expect(run([CHECKED], [1e9, 0], 100)).toBe(6000);
    // Against it: R is kept from sinking for good, (1 + R) e^-60.
    expect(run([CHECKED], [0, 1e9], 100)).toBe(-60);
  });

  it('the leading alternative tells which category creeps, which way', () => {
    const alternatives = creepAlternatives({
      shares: [0.6, 0.3, 0.1],
      weight: 5e4,
      windows: 96,
      leastGuards: [0.01, 0.01, 0.01],
      wander: null,
    });
    let state: ShiryaevRobertsState = SHIRYAEV_ROBERTS_START;
    let leading: number | null = null;
    for (let t = 0; t < 20; t += 1) {
      const counts = [600, 270, 130];
      ({ state, leading } = shiryaevRoberts({ state, alternatives, counts, rho: 0.0005 }));
    }
    expect(alternatives[leading ?? -1]).toMatchObject({ category: 2, sign: 1 });
  });

  it('inside the guard the mean run until D >= c is at least c', () => {
    // The share lies at one edge of the guard. 300 seeded runs of c = 40: the mean run has a
    // standard error of some 40/sqrt(300) = 2.3; the bound may be missed by three of them.
    const c = 40;
    const alternatives = creepAlternatives({
      shares: [0.69, 0.31],
      weight: Infinity,
      windows: 96,
      leastGuards: [0.01, 0.01],
      wander: null,
    });
    const random = xoroshiro128plus(11);
    let total = 0;
    for (let repeat = 0; repeat < 300; repeat += 1) {
      let state: ShiryaevRobertsState = SHIRYAEV_ROBERTS_START;
      let logD = -Infinity;
      for (let t = 0; t < 100 * c && logD < Math.log(c); t += 1) {
        let first = 0;
        for (let i = 0; i < 60; i += 1) first += uniformFloat64(random) < 0.7 ? 1 : 0;
        const counts = [first, 60 - first];
        ({ state, logD } = shiryaevRoberts({ state, alternatives, counts, rho: 0 }));
        total += 1;
      }
    }
    expect(total / 300).toBeGreaterThan(c - 7);
    // Runs are cut off at 100 c; were they so as a rule, nothing would have been measured.
    expect(total / 300).toBeLessThan(50 * c);
  });

  it('counts, and a state, that do not fit are refused by name and value', () => {
    const fine = { state: SHIRYAEV_ROBERTS_START, alternatives: [CHECKED], counts: [1, 2], rho: 0 };
    const refused = (part: object): (() => unknown) => {
      return () => shiryaevRoberts({ ...fine, ...part });
    };
    expect(refused({ counts: [1, -2] })).toThrow('counts[1]: must be a finite number >= 0, got -2');
    expect(refused({ alternatives: [{ ...CHECKED, category: 2 }] })).toThrow(
      'counts: must reach to category 2, got 2',
    );
    expect(refused({ state: { logR: [1, 2] } })).toThrow('state.logR: must have 1 cells, got 2');
    expect(refused({ state: { logR: [NaN] } })).toThrow(
      'state.logR[0]: must be a number below Infinity, got NaN',
    );
    expect(refused({ rho: -1 })).toThrow('rho: must lie in [0, 1), got -1');
  });
});

describe('creepThreshold', () => {
  const input = { strands: 200, windowsPerWeek: 1008, falseAlarmsPerWeek: 1 };

  it('200 strands of ten-minute windows on a budget of 1 a week want a run of a million', () => {
    // Section 5: .2 a week gives c = 1.0e6.
    expect(creepThreshold(input)).toBe(1_008_000);
  });

  it('a generous budget is no licence: never under 1,000', () => {
    expect(creepThreshold({ strands: 1, windowsPerWeek: 1, falseAlarmsPerWeek: 50 })).toBe(1000);
  });

  it('what is not positive is refused by name and value', () => {
    expect(() => creepThreshold({ ...input, strands: 0 })).toThrow(
      'strands: must be a positive finite number, got 0',
    );
    expect(() => creepThreshold({ ...input, windowsPerWeek: -1 })).toThrow(
      'windowsPerWeek: must be a positive finite number, got -1',
    );
    expect(() => creepThreshold({ ...input, falseAlarmsPerWeek: NaN })).toThrow(
      'falseAlarmsPerWeek: must be a positive finite number, got NaN',
    );
  });
});

describe('log1pexp', () => {
  it('neither end overflows or loses itself', () => {
    expect(log1pexp(-Infinity)).toBe(0);
    expect(log1pexp(0)).toBeCloseTo(Math.LN2, 15);
    expect(log1pexp(800)).toBe(800);
    expect(log1pexp(-40)).toBeCloseTo(Math.exp(-40), 30);
    expect(log1pexp(2)).toBeCloseTo(Math.log(1 + Math.exp(2)), 14);
  });
});
