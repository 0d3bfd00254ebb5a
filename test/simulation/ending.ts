import { hasReturned } from '../../src/alert/returned.js';
import { estimateDispersion } from '../../src/stats/estimateDispersion.js';
import { moved } from '../../src/stats/moved.js';
import type { Alarm } from '../../src/terms/recipe.js';
import { chance } from './chance.js';
import type { Chance } from './chance.js';
import { mean, rate } from './figures.js';
import type { Figure } from './figures.js';
import { besideReference, logPOf } from './judged.js';
import { drawWindow, drawWindows, shifted, skewedMix } from './mix.js';

const MIX = skewedMix(12);
const NAMES = MIX.map((_, k) => String(k));
const TOLERANCE = 0.01;
/** Level at which a window raises: one false alarm a week among 200 mixes of 10 minutes. */
const LOG_LEVEL = Math.log(5e-6);
/** Windows in which a shift may be raised before the case is given up, and watched after. */
const MOST_WAIT = 400;
const WATCHED = 96;
/** The longest run of windows that the rule looks at. */
const LONGEST = 24;

interface EndCase {
  readonly events: number;
  readonly rho: number;
  readonly by: number;
}

const CASES: readonly EndCase[] = [
  { events: 500, rho: 0, by: 0.06 },
  { events: 500, rho: 0.002, by: 0.08 },
  { events: 2000, rho: 0, by: 0.03 },
  { events: 2000, rho: 0.002, by: 0.05 },
  { events: 2000, rho: 0.002, by: 0.1 },
  { events: 20_000, rho: 0.002, by: 0.05 },
  { events: 20_000, rho: 0.0005, by: 0.03 },
];

/** What becomes of an alert whose fault lasts, and of one whose fault was mended at once. */
export function measureEnding(run: { seed: number; repetitions: number }): Figure[] {
  return CASES.flatMap((one, at) => {
    const random = chance(run.seed + at, one.events);
    const lasting: boolean[] = [];
    const waits: number[] = [];
    for (let i = 0; i < run.repetitions; i += 1) {
      const alarm = raise(random, one);
      if (alarm === null) continue;
      lasting.push(endsAfter(random, alarm, { ...one }) !== null);
      waits.push(endsAfter(random, alarm, { ...one, by: 0 }) ?? Infinity);
    }
    return figuresOf(one, lasting, waits);
  });
}

function figuresOf(one: EndCase, lasting: readonly boolean[], waits: readonly number[]): Figure[] {
  const name = `N ${one.events} rho ${one.rho} +${one.by * 100} points`;
  const ended = lasting.filter(Boolean).length;
  const back = waits.filter((wait) => wait < Infinity);
  const sorted = [...waits].sort((a, b) => a - b);
  return [
    {
      what: `${name}: lasting, called returned`,
      ...rate(ended, lasting.length),
      goal: { atMost: 0.07 },
      design: '.00-.07',
    },
    {
      what: `${name}: mended, returned in ${WATCHED} windows`,
      ...rate(back.length, waits.length),
      goal: { atLeast: 1 },
      design: 'always',
    },
    {
      what: `${name}: windows until then, median`,
      measured: sorted[Math.floor(sorted.length / 2)] ?? Number.NaN,
      // That of the mean stands in: a median of whole windows has hardly any.
      error: mean(back).error,
      goal: { atMost: 3 },
      design: '3',
    },
  ];
}

/** Waits for the first window of a shifted mix that raises; null when none does. */
function raise(random: Chance, { events, rho, by }: EndCase): Alarm | null {
  const past = estimateDispersion(drawWindows(random, { shares: MIX, events, rho }, 24));
  const shares = shifted(MIX, [2], by);
  for (let wait = 0; wait < MOST_WAIT; wait += 1) {
    const counts = drawWindow(random, { shares, events, rho });
    if (logPOf(counts, past) > LOG_LEVEL) continue;
    const judged = besideReference(counts, past);
    const { atLeast, carriers } = moved({ ...judged, pooledIndex: null });
    if (atLeast <= TOLERANCE) continue;
    const inside = (values: readonly number[]): number =>
      carriers.reduce((sum, k) => sum + values[k], 0);
    return {
      alertId: 'a',
      startMs: 0,
      endMs: 1,
      sinceEarliestMs: 0,
      recipe: { fromMs: 0, toMs: 0, step: 0, excluded: [] },
      carriers: {
        categories: carriers.map((k) => NAMES[k]),
        named: NAMES,
        unnamed: false,
        before: inside(judged.reference),
        now: inside(judged.now),
      },
      weightNow: judged.weightNow,
      weightReference: judged.weightReference,
      rho: past.rho,
      df2: past.df2,
      tolerance: TOLERANCE,
    };
  }
  return null;
}

/** Number of windows after the raise at which the rule ends the alert; null within the watch. */
function endsAfter(random: Chance, alarm: Alarm, { events, rho, by }: EndCase): number | null {
  const shares = by === 0 ? MIX : shifted(MIX, [2], by);
  const after: Map<string, number>[] = [];
  for (let window = 1; window <= WATCHED; window += 1) {
    const counts = drawWindow(random, { shares, events, rho });
    after.push(new Map(counts.map((count, k) => [NAMES[k], count])));
    if (after.length > LONGEST) after.shift();
    if (hasReturned(alarm, after)) return window;
  }
  return null;
}
