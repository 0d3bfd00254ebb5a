import { detectableShift } from '../../src/stats/detectableShift.js';
import { estimateDispersion } from '../../src/stats/estimateDispersion.js';
import { moved } from '../../src/stats/moved.js';
import { chance } from './chance.js';
import { rate } from './figures.js';
import type { Figure } from './figures.js';
import { besideReference, logPOf } from './judged.js';
import { drawWindow, drawWindows, shifted, skewedMix } from './mix.js';

const POWER = 0.8;
/** The category that rises, when there are so many. */
const RISING = 2;

interface Setting {
  readonly categories: number;
  readonly events: number;
  readonly windows: number;
  readonly rho: number;
  /** Simulated power in the design's table 8, at .05, .001, 1e-5. */
  readonly design: readonly string[];
}

const ALPHAS = [0.05, 0.001, 1e-5] as const;

const SETTINGS: readonly Setting[] = [
  { categories: 12, events: 2000, windows: 24, rho: 0, design: ['.768', '.762', '.757'] },
  { categories: 12, events: 2000, windows: 24, rho: 0.002, design: ['.789', '.786', '.786'] },
  { categories: 12, events: 20_000, windows: 24, rho: 0.002, design: ['.786', '.786', '.785'] },
  { categories: 12, events: 2000, windows: 8, rho: 0.002, design: ['.799', '.797', '.797'] },
  { categories: 12, events: 500, windows: 24, rho: 0.002, design: ['.783', '.783', '.777'] },
  { categories: 12, events: 200, windows: 24, rho: 0, design: ['.763', '.748', '.741'] },
  { categories: 4, events: 2000, windows: 24, rho: 0.002, design: ['.790', '.791', '.791'] },
  { categories: 30, events: 2000, windows: 96, rho: 0.002, design: ['.799', '.796', '.796'] },
  { categories: 2, events: 2000, windows: 24, rho: 0.0005, design: ['.793', '.795', '.796'] },
];

/** Planned power beside simulated power, of the test alone and of test and gate together. */
export function measurePlanning(run: { seed: number; repetitions: number }): Figure[] {
  return SETTINGS.flatMap((setting, i) =>
    ALPHAS.flatMap((alpha, j) => {
      const seed = run.seed + i * ALPHAS.length + j;
      return figuresOf(setting, { ...run, seed, alpha, design: setting.design[j] });
    }),
  );
}

interface PlanRun {
  readonly seed: number;
  readonly repetitions: number;
  readonly alpha: number;
  readonly design: string;
}

function figuresOf(setting: Setting, run: PlanRun): Figure[] {
  const { categories, events, windows, rho } = setting;
  const mix = skewedMix(categories);
  // With two categories the smaller one rises.
  const rising = Math.min(RISING, categories - 1);
  const plan = detectableShift({
    share: mix[rising],
    categories,
    baselineWindows: windows,
    rho,
    alpha: run.alpha,
    power: POWER,
    events,
    baselineEvents: events,
    tolerance: 0.01,
  });
  const name = `K ${categories} N ${events} B ${windows} rho ${rho} at ${run.alpha}`;
  const goal = { near: POWER, within: 0.06 };
  const single = simulate({ ...setting, mix, rising, points: plan.testPoints }, run);
  const both = simulate({ ...setting, mix, rising, points: plan.detectablePoints }, run);
  return [
    { what: `${name}: test`, ...single.test, goal, design: run.design },
    ...(plan.binds === 'test' ? [] : [{ what: `${name}: with gate`, ...both.alert, goal }]),
  ];
}

type Rate = ReturnType<typeof rate>;

function simulate(
  at: Setting & { mix: readonly number[]; rising: number; points: number | null },
  { seed, repetitions, alpha }: PlanRun,
): { test: Rate; alert: Rate } {
  if (at.points === null) throw new RangeError('points: the plan says that nothing can be found');
  const { events, rho } = at;
  const random = chance(seed, events);
  const after = shifted(at.mix, [at.rising], at.points / 100);
  let [test, alert] = [0, 0];
  for (let i = 0; i < repetitions; i += 1) {
    const past = estimateDispersion(
      drawWindows(random, { shares: at.mix, events, rho }, at.windows),
    );
    const now = drawWindow(random, { shares: after, events, rho });
    if (logPOf(now, past) > Math.log(alpha)) continue;
    test += 1;
    const { atLeast } = moved({ ...besideReference(now, past), pooledIndex: null });
    if (atLeast > 0.01) alert += 1;
  }
  return { test: rate(test, repetitions), alert: rate(alert, repetitions) };
}
