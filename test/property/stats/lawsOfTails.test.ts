import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { adjustLogPs } from '../../../src/stats/adjustLogPs.js';
import { benjaminiHochberg } from '../../../src/stats/benjaminiHochberg.js';
import { benjaminiYekutieli } from '../../../src/stats/benjaminiYekutieli.js';
import { betaBinomialLogCdf } from '../../../src/stats/betaBinomialLogCdf.js';
import { betaBinomialLogSf } from '../../../src/stats/betaBinomialLogSf.js';
import { binomialLogCdf } from '../../../src/stats/binomialLogCdf.js';
import { binomialLogSf } from '../../../src/stats/binomialLogSf.js';
import { chiSquaredLogCdf } from '../../../src/stats/chiSquaredLogCdf.js';
import { chiSquaredLogSf } from '../../../src/stats/chiSquaredLogSf.js';
import { combineLenses } from '../../../src/stats/combineLenses.js';
import { fLogSf } from '../../../src/stats/fLogSf.js';
import { holm } from '../../../src/stats/holm.js';
import { hypergeometricLogCdf } from '../../../src/stats/hypergeometricLogCdf.js';
import { hypergeometricLogSf } from '../../../src/stats/hypergeometricLogSf.js';
import { lordPlusPlus, lordStart } from '../../../src/stats/lordPlusPlus.js';
import { minimumEffectTest } from '../../../src/stats/minimumEffectTest.js';
import { noncentralChiSquaredLogSf } from '../../../src/stats/noncentralChiSquaredLogSf.js';
import { noncentralFLogSf } from '../../../src/stats/noncentralFLogSf.js';
import { rareCategoryTail } from '../../../src/stats/rareCategoryTail.js';
import { adjustTail, EMPTY_TAIL, observeTail } from '../../../src/stats/tailCalibration.js';
import { weightedBonferroni } from '../../../src/stats/weightedBonferroni.js';
import {
  arrange,
  expectAtMost,
  expectLogP,
  expectSame,
  orderOf,
  pick,
  RUNS,
} from './arbitraries.js';

const logPs = fc.array(fc.double({ min: -40, max: 0, noNaN: true }), { maxLength: 25 });
const level = 0.05;

describe('corrections of any family', () => {
  it.each(['holm', 'benjamini-hochberg', 'benjamini-yekutieli'] as const)(
    '%s: adjusted p is never below raw p, keeps its order, and is at most 1',
    (method) => {
      fc.assert(
        fc.property(logPs, pick, (family, seed) => {
          const adjusted = adjustLogPs(family, method);
          adjusted.forEach((logP, i) => {
            expectLogP(logP);
            expectAtMost(family[i] ?? NaN, logP);
          });
          const order = orderOf(family.length, seed);
          const mixed = adjustLogPs(arrange(family, order), method);
          arrange(adjusted, order).forEach((logP, i) => expectSame(mixed[i] ?? NaN, logP, 1e-13));
          family.forEach((logP, i) => {
            family.forEach((other, j) => {
              if (logP <= other) expectAtMost(adjusted[i] ?? NaN, adjusted[j] ?? NaN);
            });
          });
        }),
        RUNS,
      );
    },
  );

  it.each([
    ['holm', holm],
    ['benjamini-hochberg', benjaminiHochberg],
    ['benjamini-yekutieli', benjaminiYekutieli],
  ] as const)('%s: rejects where the adjusted p is at most the level', (method, rejects) => {
    fc.assert(
      fc.property(logPs, (family) => {
        const adjusted = adjustLogPs(family, method);
        rejects(family, level).forEach((isRejected, i) => {
          const distance = (adjusted[i] ?? NaN) - Math.log(level);
          if (Math.abs(distance) > 1e-12) expect(isRejected).toBe(distance < 0);
        });
      }),
      RUNS,
    );
  });

  it('what a stricter procedure rejects the looser one rejects too', () => {
    fc.assert(
      fc.property(logPs, (family) => {
        const bonferroni = weightedBonferroni(family, { weights: family.map(() => 2), level });
        const holms = holm(family, level);
        const bh = benjaminiHochberg(family, level);
        const by = benjaminiYekutieli(family, level);
        family.forEach((_, i) => {
          if (bonferroni[i]) expect(holms[i]).toBe(true);
          if (holms[i] || by[i]) expect(bh[i]).toBe(true);
        });
      }),
      RUNS,
    );
  });

  it('lordPlusPlus: levels lie in (0, level], and smaller p-values never discover less', () => {
    fc.assert(
      fc.property(logPs, (family) => {
        const run = (shift: number): number => {
          let state = lordStart();
          for (const logP of family) {
            const step = lordPlusPlus(state, { logP: logP - shift, level });
            expectAtMost(step.logThreshold, Math.log(level));
            expect(step.logThreshold).toBeGreaterThan(-Infinity);
            state = step.state;
          }
          return state.discoveries.length;
        };
        expect(run(1)).toBeGreaterThanOrEqual(run(0));
      }),
      RUNS,
    );
  });

  it('combineLenses: never below the smallest p it was given, never above 1', () => {
    const omnibus = fc.option(fc.double({ min: -40, max: 0, noNaN: true }));
    fc.assert(
      fc.property(omnibus, logPs, (first, categories) => {
        const { logP, categoryLogP } = combineLenses({ omnibus: first, categories });
        const given = [...categories, ...(first === null ? [] : [first])];
        expect(logP === null).toBe(given.length === 0);
        if (logP === null) return;
        expectLogP(logP);
        expectAtMost(Math.min(...given), logP);
        if (categoryLogP !== null) expectAtMost(Math.min(...categories), categoryLogP);
      }),
      RUNS,
    );
  });

  it('adjustTail: only ever weakens, and keeps the order of what it is given', () => {
    const one = fc.double({ min: -200, max: 0, noNaN: true });
    const history = fc.array(fc.double({ min: -25, max: 0, noNaN: true }), {
      minLength: 20,
      maxLength: 60,
    });
    fc.assert(
      fc.property(history, one, one, (past, a, b) => {
        const tail = past.reduce(observeTail, EMPTY_TAIL);
        const options = { minimum: 20 };
        expectAtMost(a, adjustTail(tail, a, options));
        const [low, high] = [Math.min(a, b), Math.max(a, b)];
        expectAtMost(adjustTail(tail, low, options), adjustTail(tail, high, options));
      }),
      RUNS,
    );
  });
});

describe('discrete tails', () => {
  const n = fc.integer({ min: 0, max: 400 });
  const share = fc.double({ min: 0, max: 1, noNaN: true });
  const shape = fc.double({ min: 0.05, max: 500, noNaN: true });

  it('P(Y >= k) and P(Y <= k-1) share the whole; a larger k never has the larger tail', () => {
    fc.assert(
      fc.property(n, share, share, share, shape, shape, (size, part, p, q, alpha, beta) => {
        const k = Math.round(size * part);
        const urn = { total: size, marked: Math.round(size * p), drawn: Math.round(size * q) };
        const sides: [(k: number) => number, (k: number) => number][] = [
          [
            (at) => binomialLogSf({ n: size, p, k: at }),
            (at) => binomialLogCdf({ n: size, p, k: at }),
          ],
          [
            (at) => betaBinomialLogSf({ n: size, alpha, beta, k: at }),
            (at) => betaBinomialLogCdf({ n: size, alpha, beta, k: at }),
          ],
          [
            (at) => hypergeometricLogSf({ ...urn, k: at }),
            (at) => hypergeometricLogCdf({ ...urn, k: at }),
          ],
        ];
        for (const [upper, lower] of sides) {
          expectLogP(upper(k));
          expectSame(Math.exp(upper(k)) + Math.exp(lower(k - 1)), 1, 1e-10);
          expectAtMost(upper(k + 1), upper(k));
          expectAtMost(lower(k - 1), lower(k));
        }
      }),
      RUNS,
    );
  });

  it('rareCategoryTail: p lies in (0, 1], and one more event above the middle lowers it', () => {
    const weight = fc.double({ min: 1, max: 1e6, noNaN: true });
    const rho = fc.double({ min: 0, max: 0.2, noNaN: true });
    fc.assert(
      fc.property(
        n,
        share,
        fc.double({ min: 0, max: 0.2, noNaN: true }),
        weight,
        rho,
        (...drawn) => {
          const [size, part, p, w, r] = drawn;
          const events = size + 2;
          const count = Math.round(size * part);
          const input = { events, share: p, weight: w, rho: r };
          const both = rareCategoryTail({ ...input, count, sides: 'both' });
          const upper = rareCategoryTail({ ...input, count, sides: 'upper' });
          const more = rareCategoryTail({ ...input, count: count + 1, sides: 'upper' });
          expectLogP(both.logP);
          expectAtMost(more.logP, upper.logP);
          expectAtMost(both.logP, upper.logP + Math.LN2);
        },
      ),
      RUNS,
    );
  });
});

describe('noncentral tails', () => {
  const df = fc.double({ min: 0.5, max: 200, noNaN: true });
  const x = fc.double({ min: 0.01, max: 300, noNaN: true });
  const lambda = fc.double({ min: 0, max: 100, noNaN: true });
  const runs = { ...RUNS, numRuns: 80 };

  it('grow with lambda, fall with the statistic, and are central at lambda 0', () => {
    fc.assert(
      fc.property(x, df, df, lambda, fc.double({ min: 0.1, max: 9, noNaN: true }), (...drawn) => {
        const [at, a, b, l, more] = drawn;
        const chi = (point: number, by: number): number => noncentralChiSquaredLogSf(point, a, by);
        const f = (point: number, by: number): number => noncentralFLogSf(point, a, b, by);
        for (const tail of [chi, f]) {
          expectLogP(tail(at, l));
          expectAtMost(tail(at, l), tail(at, l + more));
          expectAtMost(tail(at + more, l), tail(at, l));
        }
        expectSame(chi(at, 0), chiSquaredLogSf(at, a));
        expectSame(f(at, 0), fLogSf(at, a, b));
        const whole = Math.exp(chiSquaredLogSf(at, a)) + Math.exp(chiSquaredLogCdf(at, a));
        expectSame(whole, 1, 1e-12);
      }),
      runs,
    );
  });

  it('minimumEffectTest: a larger effect allowed never gives the smaller p', () => {
    const w = fc.double({ min: 0, max: 0.5, noNaN: true });
    fc.assert(
      fc.property(x, df, w, w, (statistic, degrees, one, more) => {
        const p = (effect: number): number =>
          minimumEffectTest({ statistic, df: degrees, events: 400, w: effect }).logP;
        expectAtMost(p(one), p(one + more));
        expectSame(p(0), chiSquaredLogSf(statistic, degrees));
      }),
      runs,
    );
  });
});
