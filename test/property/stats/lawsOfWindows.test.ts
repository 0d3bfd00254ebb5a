import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { boxEpsilon } from '../../../src/stats/boxEpsilon.js';
import { dispersionOfSlots } from '../../../src/stats/dispersionOfSlots.js';
import { dispersionOfSuccessive } from '../../../src/stats/dispersionOfSuccessive.js';
import { estimateDispersion } from '../../../src/stats/estimateDispersion.js';
import { moderatedT } from '../../../src/stats/moderatedT.js';
import { squeezeVariances } from '../../../src/stats/squeezeVariances.js';
import { wander } from '../../../src/stats/wander.js';
import {
  arrange,
  expectAtMost,
  expectLogP,
  expectSame,
  halve,
  orderOf,
  pick,
  RUNS,
  windowsOf,
} from './arbitraries.js';

type Windows = readonly (readonly number[])[];
const widthOf = (windows: Windows): number => windows[0]?.length ?? 0;
const reorder = (windows: Windows, order: readonly number[]): number[][] =>
  windows.map((row) => arrange(row, order));
const pairsOf = (windows: Windows): { before: readonly number[]; after: readonly number[] }[] =>
  windows.slice(1).map((after, i) => ({ before: windows[i] ?? [], after }));

describe('dispersion of any windows', () => {
  it('estimateDispersion and dispersionOfSlots: neither order nor empty windows matter', () => {
    fc.assert(
      fc.property(windowsOf, pick, (windows, seed) => {
        const found = estimateDispersion(windows);
        expect(found.rho).toBeGreaterThanOrEqual(0);
        expect(found.rho).toBeLessThan(1);
        const mixed = reorder(
          arrange(windows, orderOf(windows.length, seed)),
          orderOf(widthOf(windows), seed),
        );
        const other = estimateDispersion([...mixed, mixed[0]?.map(() => 0) ?? []]);
        expectSame(other.rho, found.rho, 1e-9);
        expectSame(other.weight, found.weight, 1e-7);
        expect(other.df2).toBe(found.df2);
        expectSame(dispersionOfSlots([mixed]).rho, found.rho, 1e-9);
      }),
      RUNS,
    );
  });

  it('estimateDispersion: a category in two equal halves never shows more scatter', () => {
    fc.assert(
      fc.property(windowsOf, pick, (windows, seed) => {
        const halved = estimateDispersion(windows.map((row) => halve(row, seed)));
        expectAtMost(halved.rho, estimateDispersion(windows).rho);
      }),
      RUNS,
    );
  });

  it('dispersionOfSuccessive and wander: time may run backwards, bins in any order', () => {
    fc.assert(
      fc.property(windowsOf, pick, (windows, seed) => {
        const back = reorder([...windows].reverse(), orderOf(widthOf(windows), seed));
        const forth = dispersionOfSuccessive(pairsOf(windows));
        const other = dispersionOfSuccessive(pairsOf(back));
        expect(other.df2).toBe(forth.df2);
        expectSame(other.rho, forth.rho, 1e-9);
        const one = wander(windows);
        const two = wander(back);
        if ('tooSparse' in one || 'tooSparse' in two) throw new Error('every window has events');
        expectSame(two.v, one.v, 1e-9);
        expectSame(two.rhoSuccessive, one.rhoSuccessive, 1e-9);
        expect(one.v).toBeGreaterThanOrEqual(0);
        expect(two.wanders).toBe(one.wanders);
      }),
      RUNS,
    );
  });

  it('boxEpsilon: between 1/(K-1) and 1, whatever the order of windows and bins', () => {
    fc.assert(
      fc.property(windowsOf, pick, (windows, seed) => {
        const rho = 0.004;
        const { epsilon } = boxEpsilon({ windows, rho });
        expect(epsilon).toBeLessThanOrEqual(1);
        expectAtMost(1 / (widthOf(windows) - 1), epsilon);
        const mixed = arrange(windows, orderOf(windows.length, seed));
        const order = orderOf(widthOf(windows), seed);
        expectSame(boxEpsilon({ windows: reorder(mixed, order), rho }).epsilon, epsilon, 1e-7);
      }),
      RUNS,
    );
  });

  it('moderatedT: each bin keeps its t, whatever the order of windows and bins', () => {
    fc.assert(
      fc.property(windowsOf, pick, ([now = [], ...windows], seed) => {
        const found = moderatedT({ now, windows, rho: 0.004 });
        const order = orderOf(now.length, seed);
        const other = moderatedT({
          now: arrange(now, order),
          windows: reorder(arrange(windows, orderOf(windows.length, seed)), order),
          rho: 0.004,
        });
        expect(other.bins).toHaveLength(found.bins.length);
        for (const bin of other.bins) {
          const same = found.bins.find(({ index }) => index === order[bin.index]);
          expectLogP(bin.logP);
          expectSame(bin.t, same?.t ?? NaN, 1e-7);
          expectSame(bin.logP, same?.logP ?? NaN, 1e-6);
        }
      }),
      RUNS,
    );
  });

  it('squeezeVariances: keep their order, and lie between their own and the common value', () => {
    const variances = fc.array(fc.double({ min: 0.01, max: 50, noNaN: true }), {
      minLength: 1,
      maxLength: 9,
    });
    fc.assert(
      fc.property(variances, (values) => {
        const { squeezed, priorVariance } = squeezeVariances({ variances: values, df: 11 });
        squeezed.forEach((value, k) => {
          const own = values[k] ?? NaN;
          const common = priorVariance ?? own;
          expectAtMost(Math.min(own, common), value);
          expectAtMost(value, Math.max(own, common));
        });
      }),
      RUNS,
    );
  });
});
