import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { boxEpsilon } from '../../../src/stats/boxEpsilon.js';
import { combineLenses } from '../../../src/stats/combineLenses.js';
import { inverseTrigamma } from '../../../src/stats/inverseTrigamma.js';
import { moderatedT } from '../../../src/stats/moderatedT.js';
import { peersBaseline } from '../../../src/stats/peersBaseline.js';
import { peersReference } from '../../../src/stats/peersReference.js';
import { rareCategoryTail } from '../../../src/stats/rareCategoryTail.js';
import { adjustTail } from '../../../src/stats/tailCalibration.js';
import { trigamma } from '../../../src/stats/trigamma.js';

const RUNS = { seed: 11, numRuns: 150 };

const counts = (width: number): fc.Arbitrary<number[]> =>
  fc.array(fc.integer({ min: 0, max: 300 }), { minLength: width, maxLength: width });
const windowsOf = fc
  .tuple(fc.integer({ min: 8, max: 14 }), fc.integer({ min: 3, max: 6 }))
  .chain(([b, k]) => fc.array(counts(k), { minLength: b, maxLength: b }))
  .filter((windows) => windows.filter((w) => w.some((x) => x > 0)).length >= 8);
const rhos = fc.double({ min: 0, max: 0.05, noNaN: true });
const turned = (rows: readonly (readonly number[])[]): number[][] =>
  [...rows].reverse().map((row) => [...row].reverse());

describe('lenses on any table', () => {
  it('Box epsilon stays in its range, whatever the order of windows and bins', () => {
    fc.assert(
      fc.property(windowsOf, rhos, (windows, rho) => {
        const { epsilon } = boxEpsilon({ windows, rho });
        const bins = windows[0]?.length ?? 0;
        expect(epsilon).toBeGreaterThanOrEqual(1 / (bins - 1));
        expect(epsilon).toBeLessThanOrEqual(1);
        expect(boxEpsilon({ windows: turned(windows), rho }).epsilon).toBeCloseTo(epsilon, 9);
      }),
      RUNS,
    );
  });

  it('moderated t does not depend on the order of windows and bins', () => {
    fc.assert(
      fc.property(windowsOf, rhos, (windows, rho) => {
        const now = (windows[0] ?? []).map((x, k) => x + 30 + 5 * k);
        const found = moderatedT({ now, windows, rho });
        const [other = []] = turned([now]);
        const mirrored = moderatedT({ now: other, windows: turned(windows), rho });
        const back = [...mirrored.bins].reverse();
        expect(back).toHaveLength(found.bins.length);
        found.bins.forEach((bin, at) => {
          expect(bin.squeezed).toBeGreaterThanOrEqual(1);
          expect(bin.logP).toBeLessThanOrEqual(0);
          expect(back[at]?.t).toBeCloseTo(bin.t, 8);
        });
      }),
      RUNS,
    );
  });

  it('peers: shares sum to 1, weights are positive, strands may come in any order', () => {
    const tables = fc
      .tuple(fc.integer({ min: 2, max: 7 }), fc.integer({ min: 2, max: 5 }))
      .chain(([s, k]) =>
        fc.array(fc.array(counts(k), { minLength: s, maxLength: s }), {
          minLength: 2,
          maxLength: 4,
        }),
      );
    fc.assert(
      fc.property(tables, rhos, ([now = [], ...past], rho) => {
        const baseline = peersBaseline(past);
        for (const known of baseline.windows > 0 ? [null, baseline] : [null]) {
          const found = peersReference({ now, rho, baseline: known });
          const other = peersReference({
            now: turned(now),
            rho,
            baseline: known === null ? null : peersBaseline(past.map(turned)),
          });
          found.forEach((reference, s) => {
            const twin = other[now.length - 1 - s] ?? null;
            expect(twin === null).toBe(reference === null);
            if (reference === null) return;
            expect(reference.shares.reduce((a, b) => a + b, 0)).toBeCloseTo(1, 12);
            expect(reference.weight).toBeGreaterThan(0);
            expect((twin?.weight ?? NaN) / reference.weight).toBeCloseTo(1, 9);
          });
        }
      }),
      RUNS,
    );
  });

  it('rare tails: the two share the count, and more events are never less evidence', () => {
    const point = fc.record({
      count: fc.integer({ min: 0, max: 29 }),
      share: fc.double({ min: 0, max: 0.4, noNaN: true }),
      weight: fc.double({ min: 1, max: 1e5, noNaN: true }),
      rho: fc.double({ min: 0, max: 0.3, noNaN: true }),
    });
    fc.assert(
      fc.property(point, (at) => {
        const tail = (count: number): ReturnType<typeof rareCategoryTail> =>
          rareCategoryTail({ ...at, count, events: 30, sides: 'upper' });
        const [here, next] = [tail(at.count), tail(at.count + 1)];
        expect(Math.exp(here.logLower) + Math.exp(next.logUpper)).toBeCloseTo(1, 10);
        expect(next.logP).toBeLessThanOrEqual(here.logP);
      }),
      RUNS,
    );
  });
});

describe('small pieces at any point', () => {
  const logP = fc.double({ min: -700, max: 0, noNaN: true });

  it('the inverse of trigamma undoes it', () => {
    const wide = fc.double({ min: -12, max: 12, noNaN: true }).map((e) => 10 ** e);
    fc.assert(
      fc.property(wide, (x) => {
        expect(inverseTrigamma(trigamma(x)) / x).toBeCloseTo(1, 12);
      }),
      RUNS,
    );
  });

  it('combining never strengthens the best lens', () => {
    fc.assert(
      fc.property(logP, fc.array(logP, { maxLength: 9 }), (omnibus, categories) => {
        const combined = combineLenses({ omnibus, categories }).logP ?? 1;
        expect(combined).toBeGreaterThanOrEqual(Math.min(omnibus, ...categories));
        expect(combined).toBeLessThanOrEqual(0);
      }),
      RUNS,
    );
  });

  it('calibration only weakens evidence, and keeps its order', () => {
    const history = fc.array(fc.double({ min: 0, max: 60, noNaN: true }), {
      minLength: 200,
      maxLength: 260,
    });
    fc.assert(
      fc.property(history, logP, logP, (evidence, a, b) => {
        const [low, high] = [Math.min(a, b), Math.max(a, b)].map((p) =>
          adjustTail({ evidence }, p),
        );
        expect(low).toBeGreaterThanOrEqual(Math.min(a, b));
        expect(high).toBeLessThanOrEqual(0);
        expect(low).toBeLessThanOrEqual(high ?? NaN);
      }),
      RUNS,
    );
  });
});
