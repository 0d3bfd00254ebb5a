import { boxEpsilon } from '../../src/stats/boxEpsilon.js';
import { estimateDispersion } from '../../src/stats/estimateDispersion.js';
import { fUpperQuantile } from '../../src/stats/fUpperQuantile.js';
import { quasiLikelihoodF } from '../../src/stats/quasiLikelihoodF.js';
import { chance } from './chance.js';
import { DESIGN_LEVELS } from './designLevels.js';
import { overClusters } from './figures.js';
import type { Figure } from './figures.js';
import { drawWindow, drawWindows, skewedMix } from './mix.js';

export interface LevelCell {
  readonly rho: number;
  readonly events: number;
  /** B, windows of the baseline. */
  readonly windows: number;
}

/** Nominal levels, each with its goal: the issue's own figures. */
export const LEVELS = [
  { nominal: 0.05, goal: 0.055 },
  { nominal: 0.001, goal: 1.5e-3 },
  { nominal: 1e-5, goal: 4e-5 },
] as const;

/** The grid of the design's table 1a, K = 12. */
export function levelGrid(rhos: readonly number[]): LevelCell[] {
  return rhos.flatMap((rho) =>
    [200, 2000, 20_000].flatMap((events) =>
      [8, 24, 96].map((windows) => ({ rho, events, windows })),
    ),
  );
}

interface LevelRun {
  readonly seed: number;
  /** Baselines drawn, and windows judged against each. */
  readonly baselines: number;
  readonly each: number;
}

/**
 * How often a window of an unchanged mix is called shifted, for both forms of the test. The
 * standard error is that between baselines: windows that share one are not independent.
 */
export function measureLevel(cell: LevelCell, run: LevelRun): Figure[] {
  const random = chance(run.seed, cell.events);
  const source = { shares: skewedMix(12), events: cell.events, rho: cell.rho };
  const hits = Array.from({ length: run.baselines }, () => {
    const past = drawWindows(random, source, cell.windows);
    return judgeAgainst(past, run.each, () => drawWindow(random, source));
  });
  const name = `rho ${cell.rho} N ${cell.events} B ${cell.windows}`;
  const design = DESIGN_LEVELS[`${cell.rho} ${cell.events} ${cell.windows}`];
  return (['plain', 'box'] as const).flatMap((form) =>
    LEVELS.map(({ nominal, goal }, at) => ({
      what: `${name} ${form} ${nominal}`,
      ...overClusters(
        hits.map((row) => row[form][at]),
        run.each,
      ),
      goal: { atMost: goal },
      design: design[form][at],
    })),
  );
}

function judgeAgainst(
  past: readonly (readonly number[])[],
  each: number,
  next: () => number[],
): { plain: number[]; box: number[] } {
  const { rho, shares, weight, df2 } = estimateDispersion(past);
  const { epsilon } = boxEpsilon({ windows: past, rho });
  const df1 = shares.length - 1;
  // The tail is monotone, so holding F against critical values is holding p against levels.
  const critical = LEVELS.map(({ nominal }) =>
    fUpperQuantile(nominal, epsilon * df1, epsilon * df2),
  );
  const logLevels = LEVELS.map(({ nominal }) => Math.log(nominal));
  const plain = LEVELS.map(() => 0);
  const box = LEVELS.map(() => 0);
  for (let i = 0; i < each; i += 1) {
    const { f, logP } = quasiLikelihoodF({ now: next(), shares, weight, rho, df2 });
    LEVELS.forEach((_, at) => {
      if (logP <= logLevels[at]) plain[at] += 1;
      if (f >= critical[at]) box[at] += 1;
    });
  }
  return { plain, box };
}
