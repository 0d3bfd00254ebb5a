import { describe, expect, it } from 'vitest';

import { dispersionOfPeers } from '../../../src/stats/dispersionOfPeers.js';
import { dispersionOfSlots } from '../../../src/stats/dispersionOfSlots.js';
import { peelPeers } from '../../../src/stats/peelPeers.js';
import { peersBaseline } from '../../../src/stats/peersBaseline.js';
import { peersReference } from '../../../src/stats/peersReference.js';
import { quasiLikelihoodF } from '../../../src/stats/quasiLikelihoodF.js';
import { sumsOfOthers } from '../../../src/stats/sumsOfOthers.js';

const range = (message: string): RangeError => new RangeError(message);

// Check of section 1.4e (numpy, scipy and mpmath): K 3, S 4, rho .001, nu2 96, strand 4 judged.
const NOW = [
  [52, 18, 30],
  [47, 22, 31],
  [55, 17, 28],
  [40, 35, 25],
];
const EARLIER = [
  [60, 20, 20],
  [30, 40, 30],
  [50, 30, 20],
  [45, 25, 30],
];
const LATER = [
  [110, 50, 40],
  [55, 85, 60],
  [28, 12, 10],
  [50, 20, 30],
];
const PAST = [EARLIER, LATER];
const RHO = 0.001;

const judged = (shares: readonly number[], weight: number): { g: number; p: number; w: number } => {
  const test = quasiLikelihoodF({ now: NOW[3] ?? [], shares, weight, rho: RHO, df2: 96 });
  return { g: test.g, p: Math.exp(test.logP), w: test.weightNow };
};

describe('peersReference', () => {
  it('form 1: the others pooled', () => {
    const {
      shares = [],
      weight = NaN,
      spread,
    } = peersReference({ now: NOW, rho: RHO, baseline: null })[3] ?? {};
    expect(weight).toBeCloseTo(272.975432211101, 11);
    expect(spread).toBeNull();
    [154, 57, 89].forEach((count, k) => {
      expect(shares[k]).toBeCloseTo(count / 300, 14);
    });
    const { g, p, w } = judged(shares, weight);
    expect(w).toBeCloseTo(90.99181073703367, 12);
    expect(g).toBeCloseTo(9.346530785394219, 12);
    expect(p).toBeCloseTo(0.011567719547145264, 14);
  });

  it('form 2: its own usual shares with the change its peers show', () => {
    const baseline = peersBaseline(PAST);
    const found = peersReference({ now: NOW, rho: RHO, baseline })[3];
    const { shares = [], weight = NaN, spread } = found ?? {};
    [0.50492202, 0.13299821, 0.36207977].forEach((share, k) => {
      expect(shares[k]).toBeCloseTo(share, 8);
    });
    expect(spread).toBeCloseTo(0.9511445941199714, 13);
    const own = baseline.scatter[3];
    expect(1 / ((own?.fixed ?? NaN) + RHO * (own?.perRho ?? NaN))).toBeCloseTo(
      177.55699284361705,
      11,
    );
    expect(weight).toBeCloseTo(91.72655924628081, 11);
    const { g, p } = judged(shares, weight);
    expect(g).toBeCloseTo(12.23830069027639, 11);
    expect(p).toBeCloseTo(0.0031530644591594753, 14);
  });

  it('a change of all alike drops out of form 2', () => {
    // Every strand doubles the odds of its first bin. Peers that are usually alike show exactly
    // that change; what is left is half a count of rounding in 10,000 and 1/2 of smoothing.
    const alike = [3000, 4000, 3000];
    const usual = [alike, alike, alike, [5000, 2500, 2500]];
    const now = usual.map(([a = 0, b = 0, c = 0]) => {
      const whole = 10_000 + a;
      return [2 * a, b, c].map((x) => Math.round((10_000 * x) / whole));
    });
    const baseline = peersBaseline([usual, usual]);
    const reference = peersReference({ now, rho: 0, baseline })[3];
    const own = now[3] ?? [];
    own.forEach((x, k) => {
      expect(Math.abs((reference?.shares[k] ?? NaN) - x / 10_000)).toBeLessThan(2e-4);
    });
    // The twin: against its own past alone it has moved by 1/6: from 1/2 to 2/3.
    expect((own[0] ?? 0) / 10_000 - 0.5).toBeCloseTo(1 / 6, 4);
  });

  it('strands that are all the same are each other exactly', () => {
    const now = NOW.map(() => [40, 35, 25]);
    const baseline = peersBaseline([now, now, now]);
    for (const known of [null, baseline]) {
      for (const reference of peersReference({ now, rho: 0.01, baseline: known })) {
        const shares = reference?.shares ?? [];
        expect(shares[0]).toBeCloseTo(0.4, 2);
        expect(shares.reduce((a, b) => a + b, 0)).toBeCloseTo(1, 14);
      }
    }
  });

  it('a silent strand is neither judged nor a peer, and needs nobody to be', () => {
    const silent = [...NOW.slice(0, 3), [0, 0, 0]];
    const found = peersReference({ now: silent, rho: RHO, baseline: null });
    const three = peersReference({ now: NOW.slice(0, 3), rho: RHO, baseline: null });
    expect(found).toEqual([...three, null]);
    const alone = [
      [5, 5],
      [0, 0],
    ];
    expect(peersReference({ now: alone, rho: 0, baseline: null })).toEqual([null, null]);
  });

  it('a bin that no peer has keeps a share in form 2 and none in form 1', () => {
    const now = [
      [50, 50, 0],
      [60, 40, 0],
      [50, 40, 10],
    ];
    const past = [
      [90, 10, 0],
      [80, 20, 0],
      [70, 20, 10],
    ];
    const baseline = peersBaseline([past, past]);
    expect(peersReference({ now, rho: 0, baseline: null })[2]?.shares[2]).toBe(0);
    expect(peersReference({ now, rho: 0, baseline })[2]?.shares[2]).toBeGreaterThan(0);
  });

  it('refuses what it cannot use', () => {
    const baseline = peersBaseline(PAST);
    const refer = (part: object) => () => peersReference({ now: NOW, rho: RHO, baseline, ...part });
    expect(refer({ now: [] })).toThrow(range('now: must have a row, got none'));
    expect(refer({ now: [[3], [4]] })).toThrow(range('now: must have at least 2 bins, got 1'));
    expect(refer({ now: NOW.slice(1) })).toThrow(
      range('baseline.shares: must have 3 cells, got 4'),
    );
    expect(refer({ now: NOW.map(() => [1, 1]) })).toThrow(
      range('baseline.shares[0]: must have 2 cells, got 3'),
    );
    expect(refer({ rho: 2 })).toThrow(range('rho: must lie between 0 and 1, got 2'));
    expect(refer({ baseline: peersBaseline([[[0, 0, 0]]]) })).toThrow(
      range('baseline: must hold a window, got none'),
    );
  });
});

describe('peersBaseline', () => {
  it('only windows that all strands have in common count', () => {
    const gap = [...EARLIER.slice(0, 3), [0, 0, 0]];
    expect(peersBaseline([gap, ...PAST])).toEqual(peersBaseline(PAST));
    expect(peersBaseline([gap])).toEqual({ windows: 0, shares: [], scatter: [] });
  });

  it('refuses what is no series of windows', () => {
    expect(() => peersBaseline([])).toThrow(range('windows: must hold at least one, got none'));
    expect(() => peersBaseline([EARLIER, LATER.slice(1)])).toThrow(
      range('windows[1]: must be 4 x 3 as the first, got 3 x 3'),
    );
    expect(() => peersBaseline([[[1, -1]]])).toThrow(
      range('windows[0][0][1]: must be a finite number >= 0, got -1'),
    );
  });
});

describe('sumsOfOthers', () => {
  it('leaves out each row in turn, and nothing stays nothing', () => {
    const rows = [
      [0.1, 1],
      [0.2, 0],
      [0.7, 0],
    ];
    const [first = [], ...others] = sumsOfOthers(rows);
    expect(first[1]).toBe(0);
    expect(first[0]).toBeCloseTo(0.9, 15);
    expect(others.map((row) => row[1])).toEqual([1, 1]);
    expect(sumsOfOthers([])).toEqual([]);
    expect(sumsOfOthers([[3]])).toEqual([[0]]);
  });
});

describe('dispersionOfPeers', () => {
  const window = [
    [70, 20, 30],
    [30, 52, 38],
    [66, 32, 22],
    [40, 30, 35],
  ];
  const eight = Array.from({ length: 8 }, () => window);

  it('form 1 takes each window as a slot, on sum (S - 2)(K - 1) degrees of freedom', () => {
    const found = dispersionOfPeers({ windows: eight, baseline: null });
    expect(found.rho).toBe(dispersionOfSlots(eight).rho);
    expect(found).toMatchObject({ df2: 8 * 2 * 2, windows: 8, ready: true });
    expect(found.rho).toBeGreaterThan(0.01);
  });

  it('lasting differences between strands are no scatter in form 2', () => {
    const baseline = peersBaseline(eight);
    const found = dispersionOfPeers({ windows: eight, baseline });
    expect(found).toEqual({ rho: 0, df2: 32, windows: 8, ready: true });
  });

  it('a silent strand and a window of two strands count for nothing', () => {
    const two = window.map((row, s) => (s < 2 ? row : [0, 0, 0]));
    const three = window.map((row, s) => (s < 3 ? row : [0, 0, 0]));
    const found = dispersionOfPeers({ windows: [two, three], baseline: null });
    expect(found).toMatchObject({ df2: 2, windows: 1, ready: false });
    expect(found.rho).toBe(dispersionOfSlots([three]).rho);
    const none = { rho: 0, df2: 0, windows: 0, ready: false };
    expect(dispersionOfPeers({ windows: [two], baseline: null })).toEqual(none);
    expect(dispersionOfPeers({ windows: [], baseline: null })).toEqual(none);
  });

  it('eight windows of two bins and three strands are too few: 8 degrees of freedom', () => {
    const narrow = eight.map((rows) => rows.slice(0, 3).map(([a = 0, b = 0]) => [a, b]));
    const found = dispersionOfPeers({ windows: narrow, baseline: null });
    expect(found).toMatchObject({ df2: 8, windows: 8, ready: false });
  });

  it('refuses ragged windows', () => {
    expect(() => dispersionOfPeers({ windows: [[[1, 2], [1]]], baseline: null })).toThrow(
      range('windows[0][1]: must have 2 cells, got 1'),
    );
  });
});

describe('peelPeers', () => {
  const still = [500, 300, 200];
  const gone = [300, 500, 200];
  const strands = (...moved: number[]): number[][] =>
    Array.from({ length: 6 }, (_, s) => (moved.includes(s) ? gone : still));
  const peel = (now: number[][], part: object = {}): ReturnType<typeof peelPeers> =>
    peelPeers({
      now,
      rho: 0.0005,
      df2: 96,
      baseline: null,
      open: [],
      logThreshold: Math.log(1e-3),
      ...part,
    });

  it('nothing moved: nobody is blamed and p is 1', () => {
    const found = peel(strands());
    expect(found).toMatchObject({ blamed: [], divided: false, stopped: 'none passes' });
    expect(found.remaining).toEqual([0, 1, 2, 3, 4, 5]);
    found.tests.forEach((test) => {
      expect(test?.logP).toBeCloseTo(0, 10);
    });
  });

  it('two moved: both are blamed and no peer that they pulled along', () => {
    const found = peel(strands(1, 4));
    expect([...found.blamed].sort()).toEqual([1, 4]);
    expect(found).toMatchObject({ divided: false, stopped: 'none passes' });
    expect(found.remaining).toEqual([0, 2, 3, 5]);
    // The twin: judged once, with all as peers, the others would have passed as well.
    const once = peersReference({ now: strands(1, 4), rho: 0.0005, baseline: null })[0];
    const { shares = [], weight = NaN } = once ?? {};
    const test = quasiLikelihoodF({ now: still, shares, weight, rho: 0.0005, df2: 96 });
    expect(test.logP).toBeLessThan(Math.log(1e-3));
    expect(found.tests[0]?.logP).toBeCloseTo(0, 10);
    expect(found.tests[4]?.logP).toBeLessThan(Math.log(1e-3));
  });

  it('half against half: the strands have divided', () => {
    const found = peel(strands(3, 4, 5));
    expect(found.blamed.length).toBeGreaterThan(2);
    expect(found.divided).toBe(true);
  });

  it('a third and no more is not divided', () => {
    expect(peel(strands(3, 4)).divided).toBe(false);
    expect(peel(strands(3, 4)).blamed).toHaveLength(2);
  });

  it('equal p-values are blamed in the order of strands', () => {
    expect(peel(strands(2, 5)).blamed).toEqual([2, 5]);
  });

  it('a strand with an open alert is out from the start', () => {
    const found = peel(strands(0, 1), { open: [0] });
    expect(found.blamed).toEqual([1]);
    expect(found.tests[0]).toBeNull();
    expect(found.remaining).toEqual([2, 3, 4, 5]);
  });

  it('stops when fewer than half would remain, whatever they show', () => {
    // S 6: judged with 6, 5, 4 and 3 peers at most, hence four blamed at most.
    const apart = Array.from({ length: 6 }, (_, s) => [100 + 150 * s, 1000 - 150 * s, 200]);
    const found = peel(apart);
    expect(found).toMatchObject({ stopped: 'too few', divided: true });
    expect(found.blamed).toHaveLength(4);
    const open = peel(strands(5), { open: [0, 1, 2, 3] });
    expect(open).toMatchObject({ blamed: [], remaining: [4, 5], stopped: 'too few' });
  });

  it('three strands have no majority and are not judged', () => {
    const found = peel(strands(1).slice(0, 3));
    expect(found).toMatchObject({ blamed: [], stopped: 'too few', tests: [null, null, null] });
    const silent = peel([...strands(1).slice(0, 3), [0, 0, 0]]);
    expect(silent).toMatchObject({ blamed: [], remaining: [0, 1, 2], stopped: 'too few' });
  });

  it('with a baseline it judges against what each strand usually is', () => {
    const usual = [still, gone, [200, 300, 500], [400, 400, 200]];
    const baseline = peersBaseline(Array.from({ length: 8 }, () => usual));
    const calm = peel(usual, { baseline });
    expect(calm).toMatchObject({ blamed: [], stopped: 'none passes' });
    // The twin: strands this unlike are told apart at once without one.
    expect(peel(usual).blamed.length).toBeGreaterThan(1);
    const moved = [still, gone, [200, 300, 500], [600, 200, 200]];
    expect(peel(moved, { baseline }).blamed).toEqual([3]);
  });

  it('refuses what it cannot use', () => {
    expect(() => peel([])).toThrow(range('now: must have a row, got none'));
    expect(() => peel(strands(), { open: [6] })).toThrow(
      range('open[0]: must be an integer from 0 to 5, got 6'),
    );
    expect(() => peel(strands(), { logThreshold: 1 })).toThrow(
      range('logThreshold: must be <= 0, got 1'),
    );
    expect(() => peel(strands(), { df2: 0 })).toThrow(
      range('df2: must be a positive number or Infinity, got 0'),
    );
  });
});
