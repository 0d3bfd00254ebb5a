import { describe, it } from 'vitest';

import { report } from './full.js';
import { levelGrid, measureLevel } from './level.js';

describe('level of the quasi-likelihood F test, plain and with Box epsilon', () => {
  it.each([
    { rho: 0, seed: 100 },
    { rho: 0.0005, seed: 109 },
  ])('windows that scatter by rho $rho: it stays within the goals', ({ rho, seed }) => {
    report('Level, K = 12, two million tests a line', () =>
      levelGrid([rho]).flatMap((cell, at) =>
        measureLevel(cell, { seed: seed + at, baselines: 2000, each: 1000 }),
      ),
    );
  });
});
