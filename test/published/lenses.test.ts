import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { boxEpsilon } from '../../src/stats/boxEpsilon.js';
import { dispersionOfPeers } from '../../src/stats/dispersionOfPeers.js';
import { lensTwoGate } from '../../src/stats/lensTwoGate.js';
import { moderatedT } from '../../src/stats/moderatedT.js';
import { peersBaseline } from '../../src/stats/peersBaseline.js';
import { peersReference } from '../../src/stats/peersReference.js';
import { quasiLikelihoodF } from '../../src/stats/quasiLikelihoodF.js';
import { rareCategoryTail } from '../../src/stats/rareCategoryTail.js';

// lenses.json is made by lenses.py in this folder (mpmath 1.3.0, 50 digits).
interface Bin {
  readonly index: number;
  readonly ratio: string;
  readonly t: string;
  readonly logP: string;
}
interface Moderated {
  readonly windows: number[][];
  readonly now: number[];
  readonly rho: number;
  readonly priorDf: string;
  readonly priorVariance: string;
  readonly bins: readonly Bin[];
}
interface Held {
  readonly weightNow: string;
  readonly weight: string;
  readonly g: string;
  readonly logP: string;
  readonly shares: readonly string[];
}
interface Cases {
  readonly box: readonly {
    readonly windows: number[][];
    readonly rho: number;
    readonly epsilon: string;
    readonly trace: string;
    readonly traceOfSquare: string;
  }[];
  readonly moderated: Readonly<Record<'equal' | 'unequal', Moderated>>;
  readonly rare: readonly {
    readonly count: number;
    readonly events: number;
    readonly of: number;
    readonly weight: number;
    readonly rho: number;
    readonly share: string;
    readonly correlation: string;
    readonly upper: string;
    readonly lower: string;
  }[];
  readonly gate: readonly { readonly lower: string; readonly bound: string }[];
  readonly peers: {
    readonly now: number[][];
    readonly past: number[][][];
    readonly history: number[][][];
    readonly pooled: Held;
    readonly carried: Held & { readonly spread: string };
    readonly rho: string;
  };
}

const cases = JSON.parse(
  readFileSync(new URL('./lenses.json', import.meta.url), 'utf8'),
) as unknown as Cases;

function expectClose(value: number | undefined, exact: string, within = 1e-12): void {
  const truth = Number(exact);
  const error = Math.abs((value ?? NaN) - truth) / Math.max(1, Math.abs(truth));
  expect(error).toBeLessThan(within);
}

describe('lenses against a second implementation in 50 digits', () => {
  it.each(cases.box)('Box epsilon of windows with rho $rho', (row) => {
    const found = boxEpsilon(row);
    expect(found.withheld).toBeNull();
    expectClose(found.epsilon, row.epsilon, 1e-11);
    expectClose(found.trace, row.trace);
    expectClose(found.traceOfSquare, row.traceOfSquare);
  });

  it.each(['equal', 'unequal'] as const)('moderated t with %s windows', (form) => {
    const row = cases.moderated[form];
    const found = moderatedT(row);
    expectClose(found.priorDf, row.priorDf, 1e-10);
    expectClose(found.priorVariance ?? NaN, row.priorVariance, 1e-11);
    expect(found.bins.map((bin) => bin.index)).toEqual(row.bins.map((bin) => bin.index));
    row.bins.forEach((bin, at) => {
      expectClose(found.bins[at]?.ratio, bin.ratio, 1e-11);
      expectClose(found.bins[at]?.t, bin.t, 1e-11);
      expectClose(found.bins[at]?.logP, bin.logP, 1e-11);
    });
  });

  it('the two forms are not the same thing', () => {
    const { windows, now } = cases.moderated.equal;
    const { bins } = moderatedT({ windows, now: now.map((x) => 2 * x), rho: 0.0005 });
    expect(bins[0]?.ratio).not.toBeCloseTo(Number(cases.moderated.equal.bins[0]?.ratio), 3);
  });

  it.each(cases.rare)('rare tail of $count in $events', (row) => {
    const found = rareCategoryTail({ ...row, share: row.of, sides: 'both' });
    expectClose(found.share, row.share);
    expectClose(found.correlation, row.correlation);
    expectClose(found.logUpper, row.upper, 2e-11);
    expectClose(found.logLower, row.lower, 2e-11);
  });

  it('the file holds as many points as the docstrings say', () => {
    expect([cases.box.length, cases.rare.length, cases.gate.length]).toEqual([3, 10, 2]);
  });

  it('the gate of a changed and of a new category', () => {
    const [changed, fresh] = cases.gate;
    const input = { weightReference: 480_000, tolerance: 0.01, own: null };
    const risen = { ...input, count: 60, events: 20_000, weightNow: 20_000, share: 0.001 };
    const unseen = { ...input, count: 12, events: 200, weightNow: 200, share: 0 };
    expectClose(lensTwoGate(risen).bound, changed?.bound ?? 'none', 1e-15);
    expectClose(lensTwoGate(unseen).bound, fresh?.lower ?? 'none', 1e-15);
  });

  it('peers: both references, the test against each, and the rho of past windows', () => {
    const { now, past, history, pooled, carried, rho } = cases.peers;
    const baseline = peersBaseline(past);
    for (const [held, known] of [
      [pooled, null],
      [carried, baseline],
    ] as const) {
      const reference = peersReference({ now, rho: 0.001, baseline: known })[3];
      const { shares = [], weight = NaN } = reference ?? {};
      held.shares.forEach((share, k) => {
        expectClose(shares[k], share);
      });
      expectClose(weight, held.weight);
      const test = quasiLikelihoodF({ now: now[3] ?? [], shares, weight, rho: 0.001, df2: 96 });
      expectClose(test.weightNow, held.weightNow);
      expectClose(test.g, held.g);
      expectClose(test.logP, held.logP);
    }
    const spread = peersReference({ now, rho: 0.001, baseline })[3]?.spread;
    expectClose(spread ?? NaN, carried.spread);
    expectClose(dispersionOfPeers({ windows: history, baseline }).rho, rho);
  });
});
