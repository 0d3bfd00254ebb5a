import { sinceWhen } from '../../src/alert/since.js';
import { estimateDispersion } from '../../src/stats/estimateDispersion.js';
import type { Dispersion } from '../../src/stats/estimateDispersion.js';
import { pairDeviance } from '../../src/stats/pairDeviance.js';
import { designWeight } from '../../src/stats/designWeight.js';
import { chance } from './chance.js';
import type { Chance } from './chance.js';
import { rate } from './figures.js';
import type { Figure } from './figures.js';
import { drawWindows, shifted, skewedMix } from './mix.js';

const MIX = skewedMix(12);
const EVENTS = 500;
const LENGTH = 60;
const MINUTE_MS = 60_000;
/** Half the deviance of the windows since a split, over phi, that counts as an alarm. */
const ALARM = 21.1;

interface SinceCase {
  readonly rho: number;
  readonly by: number;
  /** Windows after the change, the last of the 60. */
  readonly after: number;
  /** The design's share detected, and its coverage with the baseline counted in. */
  readonly detected: number;
  readonly design: string;
}

/** The design's table 6, the cases that were detected at least 40 % of the time. */
const CASES: readonly SinceCase[] = [
  { rho: 0, by: 0.02, after: 30, detected: 0.69, design: '.93' },
  { rho: 0, by: 0.05, after: 3, detected: 0.51, design: '.97' },
  { rho: 0, by: 0.05, after: 10, detected: 1, design: '.99' },
  { rho: 0, by: 0.1, after: 3, detected: 1, design: '1.00' },
  { rho: 0.002, by: 0.05, after: 10, detected: 0.92, design: '.96' },
  { rho: 0.002, by: 0.05, after: 30, detected: 1, design: '.97' },
  { rho: 0.002, by: 0.1, after: 3, detected: 0.96, design: '.99' },
  { rho: 0.002, by: 0.1, after: 10, detected: 1, design: '1.00' },
];

/** How often the span `earliest` to `latest` holds the true start, given an alarm. */
export function measureSince(run: { seed: number; repetitions: number }): Figure[] {
  return CASES.flatMap((one, at) => {
    const { found, covered } = tryCase(one, { ...run, seed: run.seed + at });
    const name = `+${one.by * 100} points, rho ${one.rho}, ${one.after} windows after`;
    const shown = rate(found, run.repetitions);
    // The design's share comes from about a thousand runs of its own.
    const within = 3 * Math.sqrt(shown.error ** 2 + 0.015 ** 2);
    return [
      {
        what: `${name}: covered`,
        ...rate(covered, found),
        goal: { atLeast: 0.9 },
        design: one.design,
      },
      {
        what: `${name}: detected`,
        ...shown,
        goal: { near: one.detected, within },
        design: String(one.detected),
      },
    ];
  });
}

function tryCase(
  one: SinceCase,
  { seed, repetitions }: { seed: number; repetitions: number },
): { found: number; covered: number } {
  const random = chance(seed, EVENTS);
  let [found, covered] = [0, 0];
  for (let i = 0; i < repetitions; i += 1) {
    const { past, windows } = drawSeries(random, one);
    if (!isAlarm(past, windows)) continue;
    found += 1;
    const since = sinceWhen({
      windows: windows.map((counts, at) => ({ window: minute(at), counts, inReference: false })),
      shares: past.shares,
      weight: past.weight,
      rho: past.rho,
    });
    const startMs = (LENGTH - one.after) * MINUTE_MS;
    if (since.earliestMs <= startMs && startMs <= since.latestMs) covered += 1;
  }
  return { found, covered };
}

function minute(at: number): { startMs: number; endMs: number } {
  return { startMs: at * MINUTE_MS, endMs: (at + 1) * MINUTE_MS };
}

function drawSeries(
  random: Chance,
  { rho, by, after }: SinceCase,
): { past: Dispersion; windows: number[][] } {
  const calm = { shares: MIX, events: EVENTS, rho };
  const moved = { ...calm, shares: shifted(MIX, [2], by) };
  const past = estimateDispersion(drawWindows(random, calm, 24));
  const windows = drawWindows(random, calm, LENGTH - after);
  return { past, windows: [...windows, ...drawWindows(random, moved, after)] };
}

/** Whether the last 1, 2 .. 60 windows, pooled, differ enough from all that came before them. */
function isAlarm(past: Dispersion, windows: readonly (readonly number[])[]): boolean {
  const w = designWeight(EVENTS, past.rho);
  const sums = MIX.map(() => 0);
  const before = past.shares.map((share, k) => {
    const events = windows.reduce((total, counts) => total + counts[k], 0);
    return share * past.weight + (events * w) / EVENTS;
  });
  for (let length = 1; length <= windows.length; length += 1) {
    windows[windows.length - length].forEach((count, k) => {
      sums[k] += (count * w) / EVENTS;
      before[k] -= (count * w) / EVENTS;
    });
    const [weightNow, weightReference] = [total(sums), total(before)];
    const g = pairDeviance({
      now: sums.map((x) => x / weightNow),
      weightNow,
      reference: before.map((x) => Math.max(0, x) / weightReference),
      weightReference,
    });
    if (g / 2 >= ALARM) return true;
  }
  return false;
}

function total(values: readonly number[]): number {
  return values.reduce((a, b) => a + b, 0);
}
