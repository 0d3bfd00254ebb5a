import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import { describe, expect, it } from 'vitest';

import { dispersionOfPeers } from '../../../src/stats/dispersionOfPeers.js';
import { moderatedT } from '../../../src/stats/moderatedT.js';
import { peersBaseline } from '../../../src/stats/peersBaseline.js';
import { peersReference } from '../../../src/stats/peersReference.js';
import { quasiLikelihoodF } from '../../../src/stats/quasiLikelihoodF.js';
import { rareCategoryTail } from '../../../src/stats/rareCategoryTail.js';

const SHARES = [0.4, 0.3, 0.2, 0.1];
const LOG_LEVEL = Math.log(0.05);

/** Draws of n events from fixed shares, one after the other from one seed. */
function drawer(seed: number): (n: number, shares?: readonly number[]) => number[] {
  const random = xoroshiro128plus(seed);
  return (n, shares = SHARES) => {
    const counts = shares.map(() => 0);
    for (let event = 0; event < n; event += 1) {
      let [left, k] = [uniformFloat64(random), 0];
      while (k < shares.length - 1 && left >= (shares[k] ?? 0)) {
        left -= shares[k] ?? 0;
        k += 1;
      }
      counts[k] = (counts[k] ?? 0) + 1;
    }
    return counts;
  };
}

/** Upper limit of a rejection rate of 5 % in `trials`, five standard errors wide. */
const atMost = (trials: number): number => 0.05 + 5 * Math.sqrt((0.05 * 0.95) / trials);

describe('levels when nothing has changed (seeded, 5 standard errors)', () => {
  it('moderated t errs in no more than 5 %, and not in far fewer', () => {
    const draw = drawer(301);
    let [rejected, tests] = [0, 0];
    for (let run = 0; run < 800; run += 1) {
      const windows = Array.from({ length: 16 }, () => draw(300));
      const { bins } = moderatedT({ now: draw(300), windows, rho: 0 });
      tests += bins.length;
      rejected += bins.filter((bin) => bin.logP <= LOG_LEVEL).length;
    }
    expect(tests).toBe(3200);
    // Bins of one window depend on each other: the windows are the trials.
    expect(rejected / tests).toBeLessThan(atMost(800));
    // Variances under 1 are raised to 1, which costs some of the level and never adds.
    expect(rejected / tests).toBeGreaterThan(0.02);
  });

  it('rare tails err in no more than 5 %, also for a category never seen', () => {
    const draw = drawer(302);
    const rare = [0.99, 0.008, 0.002];
    const rejected = [0, 0];
    const runs = 1500;
    for (let run = 0; run < runs; run += 1) {
      const past = draw(1500, rare);
      const now = draw(100, rare);
      [1, 2].forEach((k, at) => {
        const share = (past[k] ?? 0) / 1500;
        const input = { count: now[k] ?? 0, events: 100, share, weight: 1500, rho: 0 };
        if (rareCategoryTail({ ...input, sides: 'both' }).logP <= LOG_LEVEL) {
          rejected[at] = (rejected[at] ?? 0) + 1;
        }
      });
    }
    for (const count of rejected) expect(count / runs).toBeLessThan(atMost(runs));
  });

  it('peers with a baseline err in no more than 5 %, though strands differ lastingly', () => {
    const draw = drawer(303);
    const mixes = [SHARES, [0.3, 0.3, 0.25, 0.15], [0.35, 0.35, 0.2, 0.1], [0.45, 0.25, 0.2, 0.1]];
    const window = (): number[][] => mixes.map((mix) => draw(150, mix));
    const trials = 400;
    let rejected = 0;
    for (let run = 0; run < trials; run += 1) {
      const baseline = peersBaseline(Array.from({ length: 12 }, window));
      const { rho, df2 } = dispersionOfPeers({
        windows: Array.from({ length: 8 }, window),
        baseline,
      });
      const now = window();
      const { shares = [], weight = NaN } = peersReference({ now, rho, baseline })[3] ?? {};
      const test = quasiLikelihoodF({ now: now[3] ?? [], shares, weight, rho, df2 });
      if (test.logP <= LOG_LEVEL) rejected += 1;
    }
    expect(rejected / trials).toBeLessThan(atMost(trials));
    expect(rejected).toBeGreaterThan(0);
  });
});
