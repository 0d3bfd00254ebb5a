import { estimateDispersion } from '../../src/stats/estimateDispersion.js';
import type { Dispersion } from '../../src/stats/estimateDispersion.js';
import { lensTwoGate } from '../../src/stats/lensTwoGate.js';
import { moderatedT } from '../../src/stats/moderatedT.js';
import { moved } from '../../src/stats/moved.js';
import { rareCategoryTail } from '../../src/stats/rareCategoryTail.js';
import { chance } from './chance.js';
import { rate } from './figures.js';
import type { Figure } from './figures.js';
import { besideReference } from './judged.js';
import { drawWindow, drawWindows, shifted, skewedMix, transferred } from './mix.js';

const MIX = skewedMix(12);
/** Share of events that may move, and exactly what does move here. */
const TOLERANCE = 0.02;
/** Level of a page, shared by two lenses and, in the second, by the categories. */
const LEVEL = 0.001;
const LOG_CATEGORY_LEVEL = Math.log(LEVEL / (2 * MIX.length));

const SHAPES = [
  { name: '3rd up', shares: shifted(MIX, [2], TOLERANCE) },
  { name: '12th up', shares: shifted(MIX, [11], TOLERANCE) },
  { name: '2nd to 3rd', shares: transferred(MIX, 1, 2, TOLERANCE) },
  { name: '12th to 11th', shares: transferred(MIX, 11, 10, TOLERANCE) },
  { name: 'all a little', shares: alternating() },
] as const;

const SIZES = [
  { events: 500, rho: 0 },
  { events: 2000, rho: 0 },
  { events: 2000, rho: 0.002 },
  { events: 20_000, rho: 0 },
  { events: 20_000, rho: 0.002 },
] as const;

/** Every other category gives and takes, in proportion to its share; the distance is exact. */
function alternating(): number[] {
  const sums = [0, 0];
  MIX.forEach((share, k) => (sums[k % 2] += share));
  return MIX.map((share, k) => share * (1 + ((k % 2 === 0 ? 1 : -1) * TOLERANCE) / sums[k % 2]));
}

/** At a shift of exactly the tolerance: the gate of lens 1, of lens 2, and the upper bound. */
export function measureGate(run: { seed: number; repetitions: number }): Figure[] {
  return SHAPES.flatMap((shape, i) =>
    SIZES.flatMap((size, j) => {
      const seed = run.seed + i * SIZES.length + j;
      const found = atTheTolerance(shape.shares, { ...size, repetitions: run.repetitions, seed });
      const name = `${shape.name}, N ${size.events} rho ${size.rho}`;
      const trials = run.repetitions;
      // One category moved by itself in the first two shapes alone.
      const own = i > 1 ? [] : [lensTwo(name, found.own, trials), page(name, found.page, trials)];
      return [
        {
          what: `${name}: gate passes`,
          ...rate(found.passes, trials),
          goal: { atMost: 0.05 },
          design: '<= .005',
        },
        {
          what: `${name}: at most holds`,
          ...rate(found.covered, trials),
          goal: { atLeast: 0.945 },
          design: '.945-1.0',
        },
        ...own,
      ];
    }),
  );
}

function lensTwo(name: string, hits: number, trials: number): Figure {
  return { what: `${name}: gate of lens 2`, ...rate(hits, trials), goal: { atMost: 0.05 } };
}

function page(name: string, hits: number, trials: number): Figure {
  const what = `${name}: lens 2, p <= ${LEVEL} and gate`;
  return { what, ...rate(hits, trials), goal: { atMost: 0.05 } };
}

/** log p of lens 2 on one category: moderated t, or the predictive tail where few are expected. */
function categoryLogP(
  now: readonly number[],
  windows: readonly (readonly number[])[],
  { past, index }: { past: Dispersion; index: number },
): number {
  const bin = moderatedT({ now, windows, rho: past.rho }).bins.find((b) => b.index === index);
  if (bin !== undefined) return bin.logP;
  const { shares, weight, rho } = past;
  const events = now.reduce((a, b) => a + b, 0);
  const sides = 'both';
  return rareCategoryTail({ count: now[index], events, share: shares[index], weight, rho, sides })
    .logP;
}

function atTheTolerance(
  shares: readonly number[],
  run: { events: number; rho: number; seed: number; repetitions: number },
): { passes: number; covered: number; own: number; page: number } {
  const { events, rho } = run;
  const random = chance(run.seed, events);
  // The category that rises by the tolerance, for lens 2; the last of equals.
  const risen = shares.reduce((b, s, k) => (s - MIX[k] > shares[b] - MIX[b] ? k : b), 0);
  let [passes, covered, own, page] = [0, 0, 0, 0];
  for (let i = 0; i < run.repetitions; i += 1) {
    const windows = drawWindows(random, { shares: MIX, events, rho }, 24);
    const past = estimateDispersion(windows);
    const now = drawWindow(random, { shares, events, rho });
    const judged = besideReference(now, past);
    const { atLeast, atMost } = moved({ ...judged, pooledIndex: null });
    if (atLeast > TOLERANCE) passes += 1;
    if (atMost >= TOLERANCE) covered += 1;
    const single = lensTwoGate({
      count: now[risen],
      events,
      weightNow: judged.weightNow,
      share: past.shares[risen],
      weightReference: past.weight,
      tolerance: TOLERANCE,
      own: TOLERANCE,
    });
    if (!single.passes) continue;
    own += 1;
    if (categoryLogP(now, windows, { past, index: risen }) <= LOG_CATEGORY_LEVEL) page += 1;
  }
  return { passes, covered, own, page };
}
