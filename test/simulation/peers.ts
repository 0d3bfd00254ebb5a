import { dispersionOfPeers } from '../../src/stats/dispersionOfPeers.js';
import { peersBaseline } from '../../src/stats/peersBaseline.js';
import { peersReference } from '../../src/stats/peersReference.js';
import { quasiLikelihoodF } from '../../src/stats/quasiLikelihoodF.js';
import { wander } from '../../src/stats/wander.js';
import { chance } from './chance.js';
import type { Chance } from './chance.js';
import { overClusters, rate } from './figures.js';
import type { Figure } from './figures.js';
import { LEVELS } from './level.js';
import { drawWindow, drawWindows, skewedMix } from './mix.js';

const MIX = skewedMix(12);
const EVENTS = 2000;
const RHO = 0.002;
/** Windows of the baseline, and how many give the dispersion. */
const BASELINE = 96;
const HISTORY = 24;
/** Log-normal spread of what each window does to the shares of all strands alike. */
const SEASON = 0.1;

interface PeersCase {
  /** 1: the others pooled; 2: the strand's own baseline, with the others' change. */
  readonly form: 1 | 2;
  readonly strands: number;
  /** Log-normal spread of the strands' own shares around the mix. */
  readonly unlike: number;
  /** Whether the windows that give the dispersion are in the baseline or come after it. */
  readonly history: 'inside' | 'after';
}

const CASES: readonly PeersCase[] = [
  { form: 1, strands: 4, unlike: 0, history: 'after' },
  { form: 1, strands: 20, unlike: 0, history: 'after' },
  { form: 2, strands: 4, unlike: 0.1, history: 'after' },
  { form: 2, strands: 8, unlike: 0.3, history: 'after' },
  { form: 2, strands: 20, unlike: 0.3, history: 'after' },
  // Windows that helped to make the baseline lie too close to it: the dispersion comes out small.
  { form: 2, strands: 20, unlike: 0.3, history: 'inside' },
];

interface PeersRun {
  readonly seed: number;
  /** Baselines drawn, and strands' windows judged against each. */
  readonly baselines: number;
  readonly each: number;
}

/** How often a strand is called shifted against its peers while nothing but a season moves. */
export function measurePeers(run: PeersRun): Figure[] {
  return CASES.flatMap((one, at) => {
    const random = chance(run.seed + at, EVENTS);
    const rounds = Math.ceil(run.each / one.strands);
    const hits = Array.from({ length: run.baselines }, () => judgeRounds(random, one, rounds));
    return LEVELS.map(({ nominal, goal }, level) => ({
      what: `${nameOf(one)}: ${nominal}`,
      ...overClusters(
        hits.map((row) => row[level]),
        rounds * one.strands,
      ),
      goal: { atMost: goal },
      design: one.form === 2 && nominal === 1e-5 ? '5e-6; 7e-5 with 4 quite unlike' : '',
    }));
  });
}

function nameOf({ form, strands, unlike, history }: PeersCase): string {
  const rest = form === 1 ? '' : `, unlike ${unlike}, rho from windows ${history}`;
  return `form ${form}, ${strands} strands${rest}`;
}

function judgeRounds(random: Chance, one: PeersCase, rounds: number): number[] {
  const own = Array.from({ length: one.strands }, () => scattered(random, MIX, one.unlike));
  const round = (): number[][] => drawRound(random, own);
  const past = Array.from({ length: BASELINE }, round);
  const baseline = one.form === 1 ? null : peersBaseline(past);
  const recent =
    one.history === 'inside' ? past.slice(-HISTORY) : Array.from({ length: HISTORY }, round);
  const { rho, df2 } = dispersionOfPeers({ windows: recent, baseline });
  const hits = LEVELS.map(() => 0);
  for (let r = 0; r < rounds; r += 1) {
    const now = round();
    peersReference({ now, rho, baseline }).forEach((reference, s) => {
      if (reference === null) return;
      const { shares, weight } = reference;
      const { logP } = quasiLikelihoodF({ now: now[s], shares, weight, rho, df2 });
      LEVELS.forEach(({ nominal }, level) => {
        if (logP <= Math.log(nominal)) hits[level] += 1;
      });
    });
  }
  return hits;
}

/** One window of every strand; the season multiplies all of them by the same factors. */
function drawRound(random: Chance, own: readonly (readonly number[])[]): number[][] {
  const season = scattered(random, MIX, SEASON).map((share, k) => share / MIX[k]);
  return own.map((shares) => {
    const moved = normalised(shares.map((share, k) => share * season[k]));
    return drawWindow(random, { shares: moved, events: EVENTS, rho: RHO });
  });
}

function scattered(random: Chance, shares: readonly number[], spread: number): number[] {
  return normalised(shares.map((share) => share * Math.exp(spread * random.normal())));
}

function normalised(shares: readonly number[]): number[] {
  const total = shares.reduce((a, b) => a + b, 0);
  return shares.map((share) => share / total);
}

/** How often independent windows are said to wander. */
export function measureWander(run: { seed: number; repetitions: number }): Figure[] {
  const settings = [0, RHO].flatMap((rho) => [24, 96].map((windows) => ({ rho, windows })));
  return settings.map(({ rho, windows }, at) => {
    const random = chance(run.seed + at, EVENTS);
    let flags = 0;
    for (let i = 0; i < run.repetitions; i += 1) {
      const found = wander(drawWindows(random, { shares: MIX, events: EVENTS, rho }, windows));
      if ('wanders' in found && found.wanders) flags += 1;
    }
    const what = `wander falsely flagged, rho ${rho}, B ${windows}`;
    return { what, ...rate(flags, run.repetitions), goal: { atMost: 0.005 }, design: '0-.005' };
  });
}
