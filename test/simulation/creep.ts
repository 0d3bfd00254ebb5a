import { creepAlternatives } from '../../src/stats/creepAlternatives.js';
import type { CreepAlternative } from '../../src/stats/creepAlternatives.js';
import { estimateDispersion } from '../../src/stats/estimateDispersion.js';
import { shiryaevRoberts, SHIRYAEV_ROBERTS_START } from '../../src/stats/shiryaevRoberts.js';
import type { ShiryaevRobertsState } from '../../src/stats/shiryaevRoberts.js';
import { chance } from './chance.js';
import type { Chance } from './chance.js';
import { mean, rate } from './figures.js';
import type { Figure, Goal } from './figures.js';
import { drawWindow, drawWindows, shifted, skewedMix } from './mix.js';

const MIX = skewedMix(12);
const EVENTS = 500;
/** Windows wanted between false alarms. */
const RUN = 1e4;
const LOG_THRESHOLD = Math.log(RUN);
/** Windows of an unchanged mix in which a false alarm is looked for. */
const CALM = 1500;
/** Windows before a shift begins, and after which waiting for it ends. */
const WARM_UP = 100;
const MOST_DELAY = 300;

/** What a detector is set up with; W and B infinite when the truth itself is known. */
interface Anchor {
  readonly shares: readonly number[];
  readonly weight: number;
  readonly windows: number;
  readonly rho: number;
}

interface CreepRun {
  readonly seed: number;
  /** Streams a false-alarm figure, and a delay figure. */
  readonly calm: number;
  readonly shifts: number;
}

/** False alarms in 1500 windows, and the delay of shifts of the third category. */
export function measureCreep(run: CreepRun): Figure[] {
  return [...falseAlarms(run), ...delays(run)];
}

/**
 * With the truth known, E[D after n windows] <= n bounds the chance of an alarm by n/c = .15
 * (Markov on a submartingale's maximum). With it estimated only the design's figures are there.
 */
function falseAlarms(run: CreepRun): Figure[] {
  const known: Goal = { atMost: CALM / RUN };
  const settings = [
    { rho: 0, windows: Infinity, goal: known, design: '' },
    { rho: 0.002, windows: Infinity, goal: known, design: '' },
    { rho: 0.01, windows: Infinity, goal: known, design: '' },
    { rho: 0.002, windows: 96, goal: known, design: '.010 and .044' },
    { rho: 0.002, windows: 24, goal: { atMost: 0.1725 }, design: '.1725' },
  ];
  return settings.map(({ rho, windows, goal, design }, at) => {
    const random = chance(run.seed + at, EVENTS);
    let alarms = 0;
    for (let stream = 0; stream < run.calm; stream += 1) {
      if (alarmsWithin(random, anchorOf(random, rho, windows), rho)) alarms += 1;
    }
    const what = `${name(rho, windows)}: false alarm within ${CALM} windows`;
    return { what, ...rate(alarms, run.calm), goal, design };
  });
}

/** Delays of the design's last table (z = 1.5, fresh seeds); ours may be no longer. */
function delays(run: CreepRun): Figure[] {
  const settings = [
    { windows: 96, by: 0.02, design: 34.8 },
    { windows: 96, by: 0.05, design: 6.3 },
    { windows: 96, by: 0.1, design: 2.1 },
    { windows: 24, by: 0.05, design: 7.2 },
    { windows: 24, by: 0.1, design: 2.2 },
  ];
  return settings.map(({ windows, by, design }, at) => {
    const random = chance(run.seed + 50 + at, EVENTS);
    const waits = Array.from({ length: run.shifts }, () =>
      delay(random, anchorOf(random, 0.002, windows), by),
    );
    const found = mean(waits);
    return {
      what: `${name(0.002, windows)}: windows until +${by * 100} points is found`,
      ...found,
      // The design's mean comes from 400 streams of the same spread.
      goal: { near: design, within: 3 * found.error * Math.sqrt(1 + run.shifts / 400) },
      design: String(design),
    };
  });
}

function name(rho: number, windows: number): string {
  return `rho ${rho}, ${windows === Infinity ? 'known' : `B ${windows}`}`;
}

function anchorOf(random: Chance, rho: number, windows: number): Anchor {
  if (windows === Infinity) return { shares: MIX, weight: Infinity, windows: 1e6, rho };
  const past = drawWindows(random, { shares: MIX, events: EVENTS, rho }, windows);
  return { ...estimateDispersion(past), windows };
}

function alternativesOf({ shares, weight, windows }: Anchor): CreepAlternative[] {
  const leastGuards = shares.map(() => 0);
  return creepAlternatives({ shares, weight, windows, leastGuards, wander: null });
}

function alarmsWithin(random: Chance, anchor: Anchor, rho: number): boolean {
  const alternatives = alternativesOf(anchor);
  let state: ShiryaevRobertsState = SHIRYAEV_ROBERTS_START;
  for (let window = 0; window < CALM; window += 1) {
    const counts = drawWindow(random, { shares: MIX, events: EVENTS, rho });
    const step = shiryaevRoberts({ state, alternatives, counts, rho: anchor.rho });
    if (step.logD >= LOG_THRESHOLD) return true;
    state = step.state;
  }
  return false;
}

/** An alarm before the shift starts the detector anew. */
function delay(random: Chance, anchor: Anchor, by: number): number {
  const alternatives = alternativesOf(anchor);
  const calm = { shares: MIX, events: EVENTS, rho: 0.002 };
  const moved = { ...calm, shares: shifted(MIX, [2], by) };
  let state: ShiryaevRobertsState = SHIRYAEV_ROBERTS_START;
  for (let window = 1 - WARM_UP; window <= MOST_DELAY; window += 1) {
    const counts = drawWindow(random, window > 0 ? moved : calm);
    const step = shiryaevRoberts({ state, alternatives, counts, rho: anchor.rho });
    const isAlarm = step.logD >= LOG_THRESHOLD;
    if (isAlarm && window > 0) return window;
    state = isAlarm ? SHIRYAEV_ROBERTS_START : step.state;
  }
  return MOST_DELAY;
}
