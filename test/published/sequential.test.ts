import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { absenceEvidence } from '../../src/stats/absenceEvidence.js';
import { betaBinomialLogRatio } from '../../src/stats/betaBinomialLogRatio.js';
import { creepAlternatives } from '../../src/stats/creepAlternatives.js';
import { multiWindowG2 } from '../../src/stats/multiWindowG2.js';
import { returnBounds } from '../../src/stats/returnBounds.js';
import { SHIRYAEV_ROBERTS_START, shiryaevRoberts } from '../../src/stats/shiryaevRoberts.js';
import { wander } from '../../src/stats/wander.js';

// sequential.json is made by sequential.py in this folder (mpmath 1.3.0, 50 digits; scipy 1.17.1).
interface Path {
  readonly shares: number[];
  readonly rho: number;
  readonly weight: number | null;
  readonly z: number;
  readonly least: number[];
  readonly wander: [number, number] | null;
  readonly alternatives: [number, number, number, number, number][];
  readonly counts: number[][];
  readonly logD: number[];
  readonly leading: number[];
}
interface Wandering {
  readonly windows: number[][];
  readonly v: number;
  readonly phiBaseline: number;
  readonly phiSuccessive: number;
  readonly rhoBaseline: number;
  readonly rhoSuccessive: number;
}
interface Bounds {
  readonly raise: [number, number, number];
  readonly since: [number, number, number];
  readonly weight: number | null;
  readonly df2: number;
  readonly t: number;
  readonly remainder: number;
  readonly distance: number;
  readonly allowed: number;
}
interface Cases {
  readonly ratios: [number, number, number, number, number, number][];
  readonly paths: Path[];
  readonly multiWindow: {
    readonly shares: number[];
    readonly weight: number;
    readonly rho: number;
    readonly df2: number;
    readonly windows: number[][];
    readonly tests: [number, number, number, number][];
  };
  readonly wander: Wandering[];
  readonly evidences: [number, number[], number][];
  readonly bounds: Bounds[];
}

function read(name: string): unknown {
  return JSON.parse(readFileSync(new URL(name, import.meta.url), 'utf8'));
}
const cases = read('./sequential.json') as Cases;

/** Relative where the value is large, absolute where it is small. */
function expectNear(value: number, exact: number, error: number): void {
  expect(Math.abs(value - exact)).toBeLessThanOrEqual(error * Math.max(1, Math.abs(exact)));
}

describe('betaBinomialLogRatio against outside values', () => {
  it('sprt-nist: the binomial ratio gives the lines of a sequential plan, to their digits', () => {
    interface Plan {
      readonly inputs: { p1: number; p2: number; alpha: number; beta: number };
      readonly recalled: Readonly<Record<'h1' | 'h2' | 's', string>>;
      readonly computed: Readonly<Record<'h1' | 'h2' | 's', number>>;
    }
    const [plan] = (read('./more-sequential.json') as { readonly checks: [Plan] }).checks;
    const { p1: p0, p2: p1, alpha, beta } = plan.inputs;
    const ratio = (count: number): number =>
      betaBinomialLogRatio({ count, events: 1, p0, p1, rho: 0 });
    // A plan's line: after n items with y bad ones the ratio is k (y - s n).
    const k = ratio(1) - ratio(0);
    const found = {
      h1: Math.log((1 - alpha) / beta) / k,
      h2: Math.log((1 - beta) / alpha) / k,
      s: -ratio(0) / k,
    };
    for (const name of ['h1', 'h2', 's'] as const) {
      expectNear(found[name], plan.computed[name], 1e-14);
      const decimals = plan.recalled[name].split('.')[1]?.length ?? 0;
      expect(found[name].toFixed(decimals)).toBe(plan.recalled[name]);
    }
  });

  it('any rho, from none to .5, and up to a million events: within 1e-14 an event', () => {
    for (const [count, events, p0, p1, rho, exact] of cases.ratios) {
      const error = Math.abs(betaBinomialLogRatio({ count, events, p0, p1, rho }) - exact);
      expect(error).toBeLessThanOrEqual(1e-14 * events);
    }
  });
});

describe('shiryaevRoberts against R_j themselves', () => {
  it.each(cases.paths.map((path, i) => [i, path] as const))(
    'path %i: alternatives, log D and the leading one at every window',
    (_, path) => {
      const alternatives = creepAlternatives({
        shares: path.shares,
        weight: path.weight ?? Infinity,
        windows: path.z === 2 ? 23 : 24,
        leastGuards: path.least,
        wander:
          path.wander === null
            ? null
            : { rhoBaseline: path.wander[0], rhoSuccessive: path.wander[1] },
      });
      expect(alternatives).toHaveLength(path.alternatives.length);
      path.alternatives.forEach(([category, sign, size, p0, p1], j) => {
        expect(alternatives[j]).toMatchObject({ category, sign, size });
        expectNear(alternatives[j]?.p0 ?? NaN, p0, 1e-15);
        expectNear(alternatives[j]?.p1 ?? NaN, p1, 1e-15);
      });
      let state = SHIRYAEV_ROBERTS_START;
      path.counts.forEach((counts, t) => {
        const step = shiryaevRoberts({ state, alternatives, counts, rho: path.rho });
        expectNear(step.logD, path.logD[t] ?? NaN, 1e-12);
        expect(step.leading).toBe(path.leading[t]);
        state = step.state;
      });
    },
  );
});

describe('the other sequential statistics against a second implementation', () => {
  it('multiWindowG2: weight, deviance and tail of each length', () => {
    const { tests, ...input } = cases.multiWindow;
    const found = multiWindowG2({ ...input, runLength: 1e4 });
    expect(found.map((test) => test.length)).toEqual(tests.map(([length]) => length));
    tests.forEach(([, weight, g, logP], i) => {
      expectNear(found[i]?.weightNow ?? NaN, weight, 1e-14);
      expectNear(found[i]?.g ?? NaN, g, 1e-12);
      expectNear(found[i]?.logP ?? NaN, logP, 1e-12);
    });
  });

  it.each(cases.wander.map((known, i) => [i, known] as const))('wander %i', (_, known) => {
    const found = wander(known.windows);
    expect(found).not.toHaveProperty('tooSparse');
    for (const name of ['v', 'phiBaseline', 'phiSuccessive'] as const) {
      expectNear(
        name in found ? Number(found[name as keyof typeof found]) : NaN,
        known[name],
        1e-12,
      );
    }
    for (const name of ['rhoBaseline', 'rhoSuccessive'] as const) {
      const rho = name in found ? Number(found[name as keyof typeof found]) : NaN;
      expect(Math.abs(rho - known[name])).toBeLessThan(1e-14);
    }
  });

  it('absenceEvidence: from bursts to no more than chance', () => {
    for (const [shape, means, exact] of cases.evidences) {
      expectNear(absenceEvidence(means, shape), exact, 1e-14);
    }
  });

  it('returnBounds: both bounds, of rises and falls, sampled and declared', () => {
    for (const known of cases.bounds) {
      const side = ([share, weight, reference]: [number, number, number]) => {
        return { share, weight, reference };
      };
      const found = returnBounds({
        raise: side(known.raise),
        since: side(known.since),
        weightReference: known.weight ?? Infinity,
        df2: known.df2,
      });
      for (const name of ['t', 'remainder', 'distance', 'allowed'] as const) {
        expectNear(found[name], known[name], 1e-13);
      }
    }
  });
});
