import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';
import { describe, expect, it } from 'vitest';

import { calendarOf } from '../../../src/clock/calendar.js';
import { judgeWindow } from '../../../src/judge/judgeWindow.js';
import { materialFor } from '../../../src/judge/material.js';
import type { Counts } from '../../../src/terms/tally.js';
import { MINUTE, T0, windowsOf } from '../../unit/judge/samples.js';
import { mixOf } from '../../unit/schedule/scene.js';

/** Shares in thousandths, of a mix with rare categories that pooling has to gather. */
const THOUSANDTHS = { ok: 600, slow: 200, bad: 120, odd: 50, rare: 20, rarer: 10 };
const TABLE = Object.entries(THOUSANDTHS).flatMap(([name, n]) => new Array<string>(n).fill(name));
const EVENTS = 300;
const WINDOWS = 24;
const TRIALS = 4000;

const mix = mixOf();
const calendar = calendarOf(mix.window, 'UTC');
const window = calendar.windowAt(T0 + WINDOWS * MINUTE);

/**
 * A window whose events go together by rho: every event copies an earlier one with probability
 * n / (a + n), a = 1/rho - 1 (the urn of Eggenberger and Polya 1923, from memory, whose draws are
 * Dirichlet-multinomial).
 */
function draw(random: RandomGenerator, rho: number): Counts {
  const a = rho === 0 ? Infinity : 1 / rho - 1;
  const events: string[] = [];
  const counts = new Map<string, number>();
  for (let n = 0; n < EVENTS; n++) {
    const copies = n > 0 && uniformFloat64(random) < n / (a + n);
    const from = copies ? events : TABLE;
    const event = from[Math.floor(uniformFloat64(random) * from.length)] ?? 'ok';
    events.push(event);
    counts.set(event, (counts.get(event) ?? 0) + 1);
  }
  return counts;
}

interface Trial {
  readonly logP: number;
  /** log p of the same window when events are taken to be independent. */
  readonly naive: number;
  readonly overTolerance: boolean;
}

/** A fresh baseline and one window of the same mix, through the whole path of judging. */
function trial(random: RandomGenerator, rho: number): Trial {
  const past = windowsOf(Array.from({ length: WINDOWS }, () => draw(random, rho)));
  const counts = draw(random, rho);
  const material = materialFor(mix, calendar, window, past);
  const bins = material.bins(counts);
  const reference = material.reference(bins);
  if ('learning' in reference) throw new Error(reference.learning);
  const { before, declared } = material;
  const input = { counts, before, declared, bins, tolerance: mix.tolerance };
  const { evidence, overTolerance } = judgeWindow({ ...input, reference });
  const independent = { ...reference, rho: 0, weight: WINDOWS * EVENTS, df2: Infinity };
  const naive = judgeWindow({ ...input, reference: independent }).evidence.logP;
  return { logP: evidence.logP, naive, overTolerance };
}

function trials(seed: number, rho: number, length = TRIALS): Trial[] {
  const random = xoroshiro128plus(seed);
  return Array.from({ length }, () => trial(random, rho));
}

const share = (list: readonly Trial[], holds: (one: Trial) => boolean): number =>
  list.filter(holds).length / list.length;

/** Standard error of a share of .05 is .0034, of .001 .0005. */
const NEAR_05 = 4 * 0.0034;

describe.each([
  { rho: 0, seed: 1101 },
  { rho: 0.002, seed: 1102 },
])('windows of an unmoved mix, rho $rho', ({ rho, seed }) => {
  const found = trials(seed, rho);

  it('are called different at .05 about one time in twenty', () => {
    const level = share(found, ({ logP }) => logP <= Math.log(0.05));
    expect(level).toBeLessThan(0.05 + NEAR_05);
    // The floor of rho at 0 errs to the safe side where nothing goes together.
    expect(level).toBeGreaterThan(0.02);
  });

  it('are called different at .001 about one time in a thousand', () => {
    // The design found the level within a factor 3.2 down to 1e-5; twice .001 and four standard
    // errors of that (.0007) are allowed here.
    expect(share(found, ({ logP }) => logP <= Math.log(0.001))).toBeLessThan(0.002 + 4 * 0.0007);
  });

  it('hardly ever pass the gate of one percent', () => {
    // The lower bound is a 95 % statement about any move at all, so five in a hundred at most.
    expect(share(found, ({ overTolerance }) => overTolerance)).toBeLessThan(0.05 + NEAR_05);
  });
});

describe('the same check', () => {
  it('fails where dispersion is not allowed for', () => {
    const level = share(trials(1103, 0.002, 1000), ({ naive }) => naive <= Math.log(0.05));
    // The design effect is 1 + 299 x .002 = 1.6; standard error of .2 in 1,000 trials: .013.
    expect(level).toBeGreaterThan(0.15);
  });
});
