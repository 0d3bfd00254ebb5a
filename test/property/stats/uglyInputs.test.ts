import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { absence } from '../../../src/stats/absence.js';
import { absenceEvidence } from '../../../src/stats/absenceEvidence.js';
import { absenceShape } from '../../../src/stats/absenceShape.js';
import { adjustedResiduals } from '../../../src/stats/adjustedResiduals.js';
import { boxEpsilon } from '../../../src/stats/boxEpsilon.js';
import { boxQuasiLikelihoodF } from '../../../src/stats/boxQuasiLikelihoodF.js';
import { changePoint } from '../../../src/stats/changePoint.js';
import { cochranMantelHaenszel } from '../../../src/stats/cochranMantelHaenszel.js';
import { cohensW } from '../../../src/stats/cohensW.js';
import { creepAlternatives } from '../../../src/stats/creepAlternatives.js';
import { dispersionOfPeers } from '../../../src/stats/dispersionOfPeers.js';
import { dispersionOfSlots } from '../../../src/stats/dispersionOfSlots.js';
import { dispersionOfSuccessive } from '../../../src/stats/dispersionOfSuccessive.js';
import { estimateDispersion } from '../../../src/stats/estimateDispersion.js';
import { exactMultinomial } from '../../../src/stats/exactMultinomial.js';
import { exactTable } from '../../../src/stats/exactTable.js';
import { exactTableRxC } from '../../../src/stats/exactTableRxC.js';
import { g2Partition } from '../../../src/stats/g2Partition.js';
import { goodnessOfFit } from '../../../src/stats/goodnessOfFit.js';
import { kitagawa } from '../../../src/stats/kitagawa.js';
import { lensTwoGate } from '../../../src/stats/lensTwoGate.js';
import { likelihoodRatio } from '../../../src/stats/likelihoodRatio.js';
import { linearByLinear } from '../../../src/stats/linearByLinear.js';
import { minimumEffectTest } from '../../../src/stats/minimumEffectTest.js';
import { moderatedT } from '../../../src/stats/moderatedT.js';
import { moved } from '../../../src/stats/moved.js';
import { multiWindowG2 } from '../../../src/stats/multiWindowG2.js';
import { newcombe } from '../../../src/stats/newcombe.js';
import { newcombeLowerBound } from '../../../src/stats/newcombeLowerBound.js';
import { pearsonChiSquared } from '../../../src/stats/pearsonChiSquared.js';
import { peel } from '../../../src/stats/peel.js';
import { peelPeers } from '../../../src/stats/peelPeers.js';
import { peersBaseline } from '../../../src/stats/peersBaseline.js';
import { peersReference } from '../../../src/stats/peersReference.js';
import { poolByMargins } from '../../../src/stats/poolByMargins.js';
import { poolDeclared } from '../../../src/stats/poolDeclared.js';
import { quasiLikelihoodF } from '../../../src/stats/quasiLikelihoodF.js';
import { rareCategoryTail } from '../../../src/stats/rareCategoryTail.js';
import { returnBounds } from '../../../src/stats/returnBounds.js';
import { SHIRYAEV_ROBERTS_START, shiryaevRoberts } from '../../../src/stats/shiryaevRoberts.js';
import { simultaneousIntervals } from '../../../src/stats/simultaneousIntervals.js';
import { squeezeVariances } from '../../../src/stats/squeezeVariances.js';
import { wander } from '../../../src/stats/wander.js';
import { expectFinitePs, sharesOf } from './arbitraries.js';

/** What hardly ever arrives and must not break anything: nothing, one, a billion, one category. */
const uglyCount = fc.oneof(
  { weight: 4, arbitrary: fc.constantFrom(0, 0, 1, 2, 1e9) },
  { weight: 1, arbitrary: fc.integer({ min: 0, max: 40 }) },
);
const ugly = fc
  .tuple(
    fc.integer({ min: 1, max: 4 }),
    fc.integer({ min: 1, max: 9 }),
    fc.constantFrom(0, 1e-12, 0.002, 0.5, 0.999),
    fc.constantFrom(1e-9, 1, 800, 1e12, Infinity),
    fc.constantFrom(0.5, 20, 1e6, Infinity),
  )
  .chain(([k, b, rho, weight, df2]) => {
    const row = fc.array(uglyCount, { minLength: k, maxLength: k });
    const rows = fc.array(row, { minLength: b + 1, maxLength: b + 1 });
    return rows.map(([now = [], ...windows]) => ({ now, windows, rho, weight, df2 }));
  });
interface Ugly {
  readonly now: number[];
  readonly windows: number[][];
  readonly rho: number;
  readonly weight: number;
  readonly df2: number;
}

const first = ({ windows }: Ugly): number[] => windows[0] ?? [];
const sharesOfFirst = (input: Ugly): number[] => sharesOf(first(input));
const table = (input: Ugly): number[][] => [input.now, ...input.windows];
const pair = (input: Ugly): Parameters<typeof peel>[0] => {
  const reference = sharesOfFirst(input);
  const weightNow = Math.min(input.weight, 1e9);
  const weightReference = input.weight;
  return { now: sharesOf(input.now), weightNow, reference, weightReference, df2: input.df2 };
};
const splits = (input: Ugly): number[][][] => input.windows.map((row) => [input.now, row]);
const sides = (input: Ugly): Parameters<typeof newcombeLowerBound>[0] => {
  const { now, reference, weightNow, weightReference } = pair(input);
  const [after, before] = [now[0] ?? 0, reference[0] ?? 0];
  return { after, before, nAfter: weightNow, nBefore: weightReference };
};
const successive = ({ windows }: Ugly): Parameters<typeof dispersionOfSuccessive>[0] =>
  windows.slice(1).map((after, i) => ({ before: windows[i] ?? [], after }));
const peers = (input: Ugly): Parameters<typeof peelPeers>[0] => {
  const { windows: now, rho, df2 } = input;
  return { now, rho, df2, baseline: null, open: [], logThreshold: -1 };
};

function followed(input: Ugly): unknown {
  const { windows, weight, rho } = input;
  const shares = sharesOfFirst(input);
  const leastGuards = shares.map(() => 0.01);
  const anchor = { shares, weight, windows: 8, leastGuards, wander: null };
  const alternatives = creepAlternatives(anchor);
  let state = SHIRYAEV_ROBERTS_START;
  return windows.map((counts) => {
    const step = shiryaevRoberts({ state, alternatives, counts, rho });
    state = step.state;
    return [step.logD, ...state.logR];
  });
}

const STATISTICS: [string, (input: Ugly) => unknown][] = [
  ['pearsonChiSquared', (u) => pearsonChiSquared(table(u))],
  ['likelihoodRatio', (u) => likelihoodRatio(table(u))],
  ['linearByLinear', (u) => linearByLinear({ table: table(u) })],
  ['adjustedResiduals', (u) => adjustedResiduals(table(u))],
  ['exactTable', (u) => exactTable({ table: [u.now, first(u)], maxWork: 1e4 })],
  ['exactTableRxC', (u) => exactTableRxC({ table: table(u).slice(0, 3), maxWork: 1e4 })],
  ['cochranMantelHaenszel', (u) => cochranMantelHaenszel(splits(u))],
  ['g2Partition', (u) => g2Partition(splits(u))],
  ['kitagawa', (u) => kitagawa({ before: u.windows, after: u.windows.map(() => u.now) })],
  ['goodnessOfFit', (u) => goodnessOfFit(u.now, sharesOfFirst(u))],
  [
    'exactMultinomial',
    (u) =>
      exactMultinomial({
        counts: u.now,
        shares: sharesOfFirst(u),
        maxWork: 1e4,
        order: 'pearson',
      }),
  ],
  ['simultaneousIntervals', (u) => simultaneousIntervals(u.now, { level: 0.95 })],
  ['poolByMargins', (u) => poolByMargins({ now: u.now, reference: first(u) })],
  ['poolDeclared', (u) => poolDeclared({ counts: u.now, shares: sharesOfFirst(u) })],
  ['cohensW', (u) => cohensW(sharesOf(u.now), sharesOfFirst(u))],
  ['moved', (u) => moved({ ...pair(u), pooledIndex: 0 })],
  ['peel', (u) => peel(pair(u))],
  ['newcombe', (u) => newcombe({ ...sides(u), level: 0.95 })],
  ['newcombeLowerBound', (u) => newcombeLowerBound(sides(u))],
  ['quasiLikelihoodF', (u) => quasiLikelihoodF({ ...u, shares: sharesOfFirst(u) })],
  [
    'boxQuasiLikelihoodF',
    (u) => boxQuasiLikelihoodF({ ...u, shares: sharesOfFirst(u), epsilon: 0.5 }),
  ],
  ['boxEpsilon', (u) => boxEpsilon(u)],
  ['estimateDispersion', (u) => estimateDispersion(u.windows)],
  ['dispersionOfSlots', (u) => dispersionOfSlots([u.windows, [u.now]])],
  ['dispersionOfSuccessive', (u) => dispersionOfSuccessive(successive(u))],
  ['wander', (u) => wander(u.windows)],
  ['moderatedT', (u) => moderatedT({ ...u, minExpected: 0.5 })],
  ['squeezeVariances', (u) => squeezeVariances({ variances: u.now, df: 7 })],
  [
    'rareCategoryTail',
    (u) =>
      rareCategoryTail({
        count: Math.min(u.now[0] ?? 0, 5000),
        events: Math.min(u.now[0] ?? 0, 5000) + 7,
        share: sharesOfFirst(u)[0] ?? 0,
        weight: u.weight,
        rho: u.rho,
        sides: 'both',
      }),
  ],
  [
    'lensTwoGate',
    (u) =>
      lensTwoGate({
        count: u.now[0] ?? 0,
        events: (u.now[0] ?? 0) + 1,
        weightNow: 5,
        share: sharesOfFirst(u)[0] ?? 0,
        weightReference: u.weight,
        tolerance: 0.01,
        own: null,
      }),
  ],
  ['changePoint', (u) => changePoint({ baseline: u.now, windows: u.windows, phi: 1 })],
  ['multiWindowG2', (u) => multiWindowG2({ ...u, shares: sharesOf(u.now), runLength: 1e6 })],
  ['shiryaevRoberts', followed],
  [
    'returnBounds',
    (u) => {
      const { now, reference, weightNow: weight, weightReference, df2 } = pair(u);
      const [q, p] = [now[0] ?? 0, reference[0] ?? 0];
      const side = { share: q, weight, reference: p };
      return returnBounds({ raise: side, since: { ...side, share: p }, weightReference, df2 });
    },
  ],
  [
    'absenceShape and absenceEvidence',
    (u) => {
      const days = u.now.map(() => 14);
      const shape = absenceShape({ means: u.now, variances: first(u), days });
      return absence({ evidence: absenceEvidence(u.now, shape), earlier: u.now });
    },
  ],
  ['peersBaseline', (u) => peersBaseline([u.windows, u.windows.map(() => u.now)])],
  ['peersReference', (u) => peersReference(peers(u))],
  ['peelPeers', (u) => peelPeers(peers(u))],
  [
    'peers with a baseline',
    (u) => {
      const baseline = peersBaseline([u.windows.map(() => u.now)]);
      const { rho } = dispersionOfPeers({ windows: [u.windows], baseline });
      return [rho, peelPeers({ ...peers(u), baseline, rho })];
    },
  ],
  [
    'minimumEffectTest',
    (u) => minimumEffectTest({ statistic: u.now[0] ?? 0, df: 3, events: first(u)[0] ?? 0, w: 0.1 }),
  ],
];

describe('ugly inputs: zeros, one category, empty rows, a billion events', () => {
  it.each(STATISTICS)('%s: no number is NaN, p lies in [0, 1], a refusal has words', (_, run) => {
    let answered = 0;
    fc.assert(
      fc.property(ugly, (input) => {
        let result: unknown;
        try {
          result = run(input);
        } catch (error) {
          if (!(error instanceof RangeError)) throw error;
          expect(error.message).toMatch(/^[A-Za-z0-9.[\] ]+: \S/);
          return;
        }
        answered += 1;
        expectFinitePs(result);
      }),
      { seed: 99, numRuns: 120 },
    );
    // Refusing everything would be easy.
    expect(answered).toBeGreaterThan(10);
  });
});
