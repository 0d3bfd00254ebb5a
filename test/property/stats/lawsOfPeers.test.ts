import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { dispersionOfPeers } from '../../../src/stats/dispersionOfPeers.js';
import { peelPeers } from '../../../src/stats/peelPeers.js';
import { peersBaseline } from '../../../src/stats/peersBaseline.js';
import type { PeersBaseline } from '../../../src/stats/peersBaseline.js';
import { peersReference } from '../../../src/stats/peersReference.js';
import { arrange, countsOf, expectLogP, expectSame, orderOf, pick, RUNS } from './arbitraries.js';

type Window = readonly (readonly number[])[];

/** Windows of S strands by K bins, every strand with events: the last one is judged. */
const windowsOf = fc
  .tuple(fc.integer({ min: 3, max: 6 }), fc.integer({ min: 2, max: 4 }))
  .chain(([strands, bins]) => {
    const row = countsOf(bins, 120).filter((counts) => counts.some((x) => x > 0));
    const window = fc.array(row, { minLength: strands, maxLength: strands });
    return fc.array(window, { minLength: 5, maxLength: 7 });
  });

const cases = fc.tuple(windowsOf, pick, fc.boolean()).map(([windows, seed, withBaseline]) => {
  const strands = orderOf(windows[0]?.length ?? 0, seed);
  const bins = orderOf(windows[0]?.[0]?.length ?? 0, seed);
  const turn = (window: Window): number[][] =>
    arrange(window, strands).map((row) => arrange(row, bins));
  const describeAll = (all: readonly Window[]): { past: Window[]; now: Window } => {
    return { past: all.slice(0, -1), now: all[all.length - 1] ?? [] };
  };
  const [forth, turned] = [describeAll(windows), describeAll(windows.map(turn))];
  const baselineOf = (past: readonly Window[]): PeersBaseline | null =>
    withBaseline ? peersBaseline(past.slice(0, 3)) : null;
  return {
    strands,
    bins,
    forth: { ...forth, baseline: baselineOf(forth.past) },
    turned: { ...turned, baseline: baselineOf(turned.past) },
  };
});

describe('peers in any order of strands and bins', () => {
  it('peersReference: each strand keeps its reference', () => {
    fc.assert(
      fc.property(cases, ({ strands, bins, forth, turned }) => {
        const one = peersReference({ ...forth, rho: 0.003 });
        const two = peersReference({ ...turned, rho: 0.003 });
        arrange(one, strands).forEach((reference, s) => {
          expectSame(two[s]?.weight ?? NaN, reference?.weight ?? NaN, 1e-9);
          arrange(reference?.shares ?? [], bins).forEach((share, k) =>
            expectSame(two[s]?.shares[k] ?? NaN, share, 1e-9),
          );
        });
      }),
      RUNS,
    );
  });

  it('dispersionOfPeers: rho and its degrees of freedom stay', () => {
    fc.assert(
      fc.property(cases, ({ forth, turned }) => {
        const one = dispersionOfPeers({ windows: forth.past, baseline: forth.baseline });
        const two = dispersionOfPeers({ windows: turned.past, baseline: turned.baseline });
        expectSame(two.rho, one.rho, 1e-8);
        expect(two.df2).toBe(one.df2);
      }),
      { ...RUNS, numRuns: 40 },
    );
  });

  it('peelPeers: the same strands are blamed, one after the other', () => {
    fc.assert(
      fc.property(cases, ({ strands, forth, turned }) => {
        const input = { rho: 0.01, df2: 60, open: [], logThreshold: Math.log(0.01) };
        const one = peelPeers({ ...input, now: forth.now, baseline: forth.baseline });
        const two = peelPeers({ ...input, now: turned.now, baseline: turned.baseline });
        expect(two.blamed.map((s) => strands[s])).toEqual(one.blamed);
        expect(two.divided).toBe(one.divided);
        arrange(one.tests, strands).forEach((test, s) => {
          expect(two.tests[s] === null).toBe(test === null);
          if (test !== null) expectLogP(test.logP);
          if (test !== null) expectSame(two.tests[s]?.logP ?? NaN, test.logP, 1e-8);
        });
      }),
      RUNS,
    );
  });
});
