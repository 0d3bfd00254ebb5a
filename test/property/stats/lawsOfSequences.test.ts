import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { absence } from '../../../src/stats/absence.js';
import { absenceEvidence } from '../../../src/stats/absenceEvidence.js';
import { absenceShape } from '../../../src/stats/absenceShape.js';
import { betaBinomialLogRatio } from '../../../src/stats/betaBinomialLogRatio.js';
import { changePoint } from '../../../src/stats/changePoint.js';
import { creepAlternatives } from '../../../src/stats/creepAlternatives.js';
import { multiWindowG2 } from '../../../src/stats/multiWindowG2.js';
import { returnBounds } from '../../../src/stats/returnBounds.js';
import { SHIRYAEV_ROBERTS_START, shiryaevRoberts } from '../../../src/stats/shiryaevRoberts.js';
import {
  arrange,
  expectAtMost,
  expectLogP,
  expectSame,
  halve,
  merge,
  orderOf,
  pick,
  RUNS,
  sharesOf,
  windowsOf,
} from './arbitraries.js';

type Windows = readonly (readonly number[])[];
const reorder = (windows: Windows, order: readonly number[]): number[][] =>
  windows.map((row) => arrange(row, order));
const fraction = fc.double({ min: 0.01, max: 0.99, noNaN: true });

describe('sequences of any windows', () => {
  it('changePoint: order and halves of categories do not matter, nor a common scale', () => {
    fc.assert(
      fc.property(windowsOf, pick, ([baseline = [], ...windows], seed) => {
        const found = changePoint({ baseline, windows, phi: 1 });
        expect(found.earliest).toBeLessThanOrEqual(found.estimate);
        expect(found.estimate).toBeLessThanOrEqual(found.latest);
        const order = orderOf(baseline.length, seed);
        const changed = [
          (row: readonly number[]) => arrange(row, order),
          (row: readonly number[]) => halve(row, seed),
        ];
        for (const by of changed) {
          const input = { baseline: by(baseline), windows: windows.map(by), phi: 1 };
          expect(changePoint(input)).toEqual(found);
        }
        const twice = (row: readonly number[]): number[] => row.map((x) => 2 * x);
        const scaled = { baseline: twice(baseline), windows: windows.map(twice), phi: 2 };
        expect(changePoint(scaled)).toEqual(found);
      }),
      RUNS,
    );
  });

  it('multiWindowG2: neither the order of pooled windows nor of bins matters; merging', () => {
    fc.assert(
      fc.property(windowsOf, pick, ([reference = [], ...windows], seed) => {
        const shares = sharesOf(reference);
        const input = { weight: 3000, rho: 0.002, df2: 70, runLength: 1000 };
        const last = windows.slice(-4);
        const [found] = multiWindowG2({ ...input, shares, windows: last });
        const order = orderOf(shares.length, seed);
        const [mixed] = multiWindowG2({
          ...input,
          shares: arrange(shares, order),
          windows: reorder(arrange(last, orderOf(4, seed)), order),
        });
        expectLogP(found?.logP ?? NaN);
        expectSame(mixed?.g ?? NaN, found?.g ?? 0, 1e-8);
        expectSame(mixed?.logP ?? NaN, found?.logP ?? 0, 1e-8);
        if (shares.length < 3) return;
        const [merged] = multiWindowG2({
          ...input,
          shares: merge(shares, seed),
          windows: last.map((row) => merge(row, seed)),
        });
        expectAtMost(merged?.g ?? NaN, found?.g ?? 0);
      }),
      RUNS,
    );
  });

  it('shiryaevRoberts: log D does not depend on the order of categories', () => {
    fc.assert(
      fc.property(windowsOf, pick, ([reference = [], ...windows], seed) => {
        const run = (order: readonly number[]): number => {
          const shares = arrange(sharesOf(reference), order);
          const leastGuards = shares.map(() => 0.01);
          const anchor = { weight: 2000, windows: 30, leastGuards, wander: null };
          const alternatives = creepAlternatives({ shares, ...anchor });
          let state = SHIRYAEV_ROBERTS_START;
          let logD = -Infinity;
          for (const row of windows) {
            const counts = arrange(row, order);
            ({ state, logD } = shiryaevRoberts({ state, alternatives, counts, rho: 0.01 }));
          }
          return logD;
        };
        const logD = run(reference.map((_, k) => k));
        expect(logD).not.toBeNaN();
        expectSame(run(orderOf(reference.length, seed)), logD, 1e-9);
      }),
      RUNS,
    );
  });

  it('creepAlternatives: p0 lies outside the guard, p1 beyond p0, whatever the guard is', () => {
    fc.assert(
      fc.property(windowsOf, fraction, ([reference = []], guard) => {
        const shares = sharesOf(reference);
        const anchor = { shares, weight: 900, windows: 30, wander: null };
        const narrow = creepAlternatives({ ...anchor, leastGuards: shares.map(() => 0) });
        const wide = creepAlternatives({ ...anchor, leastGuards: shares.map(() => guard) });
        const away = (way: (typeof narrow)[number]): number =>
          way.sign * (way.p0 - (shares[way.category] ?? NaN));
        for (const way of [...narrow, ...wide]) {
          const size = way.sign * (way.p1 - way.p0);
          if (!(size > 0 && size <= way.size + 1e-12)) expect(way).toBeNull();
        }
        expect(narrow.every((way) => away(way) >= 0)).toBe(true);
        expect(wide.every((way) => away(way) >= guard - 1e-12)).toBe(true);
        expect(wide.length).toBeLessThanOrEqual(narrow.length);
      }),
      RUNS,
    );
  });

  it('betaBinomialLogRatio: turns over with its hypotheses, and with what is counted', () => {
    const events = fc.nat({ max: 3000 });
    const rhos = fc.double({ min: 0, max: 0.9, noNaN: true });
    fc.assert(
      fc.property(events, fraction, fraction, fraction, rhos, (n, part, p0, p1, rho) => {
        const count = Math.round(n * part);
        const one = betaBinomialLogRatio({ count, events: n, p0, p1, rho });
        const swapped = betaBinomialLogRatio({ count, events: n, p0: p1, p1: p0, rho });
        expectSame(swapped, -one, 1e-9);
        const others = { count: n - count, events: n, p0: 1 - p0, p1: 1 - p1, rho };
        expectSame(betaBinomialLogRatio(others), one, 1e-9);
      }),
      RUNS,
    );
  });
});

describe('absence and return', () => {
  const means = fc.array(fc.double({ min: 0, max: 50, noNaN: true }), { maxLength: 12 });

  it('absenceEvidence: a longer run says more; bursts say less', () => {
    fc.assert(
      fc.property(means, fraction, fraction, (run, k, step) => {
        const evidence = absenceEvidence(run, k);
        expectAtMost(evidence, absenceEvidence([...run, 3], k));
        expectAtMost(evidence, absenceEvidence(run, k + step));
        expectAtMost(absenceEvidence(run, k + step), absenceEvidence(run, Infinity));
        expectSame(absenceEvidence([...run].reverse(), k), evidence);
      }),
      RUNS,
    );
  });

  it('absenceShape: more variance beyond chance never makes a strand steadier', () => {
    fc.assert(
      fc.property(means, fraction, (values, extra) => {
        const days = values.map(() => 14);
        const shape = (by: number): number =>
          absenceShape({ means: values, variances: values.map((m) => m * (1 + by)), days });
        expectAtMost(shape(2 * extra), shape(extra));
      }),
      RUNS,
    );
  });

  it('absence: never strengthens evidence, and keeps its order', () => {
    const values = fc.array(fc.double({ min: 0, max: 30, noNaN: true }), { maxLength: 9 });
    const one = fc.double({ min: 0, max: 60, noNaN: true });
    fc.assert(
      fc.property(values, one, one, (earlier, a, b) => {
        const low = absence({ evidence: Math.min(a, b), earlier });
        const high = absence({ evidence: Math.max(a, b), earlier });
        expectAtMost(low.adjusted, high.adjusted);
        expectAtMost(high.adjusted, Math.max(a, b));
        expect(high.theta).toBeGreaterThanOrEqual(1);
      }),
      RUNS,
    );
  });

  it('returnBounds: more events bring both bounds down, a mirrored shift changes nothing', () => {
    fc.assert(
      fc.property(fraction, fraction, fraction, (first, later, reference) => {
        // Without a first distance there is no side to have moved to.
        fc.pre(Math.abs(first - reference) > 1e-6);
        const bounds = (scale: number, flip: boolean): ReturnType<typeof returnBounds> => {
          const side = (share: number): { share: number; weight: number; reference: number } => {
            const turned = flip ? 1 - share : share;
            return {
              share: turned,
              weight: 300 * scale,
              reference: flip ? 1 - reference : reference,
            };
          };
          const sides = { raise: side(first), since: side(later) };
          return returnBounds({ ...sides, weightReference: 5000 * scale, df2: 60 });
        };
        const found = bounds(1, false);
        expectAtMost(bounds(4, false).remainder, found.remainder);
        expectAtMost(bounds(4, false).distance, found.distance);
        expectSame(bounds(1, true).remainder, found.remainder);
        expectSame(bounds(1, true).distance, found.distance);
      }),
      RUNS,
    );
  });
});
