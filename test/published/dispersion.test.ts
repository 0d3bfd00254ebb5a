import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { dispersionOfSlots } from '../../src/stats/dispersionOfSlots.js';
import { dispersionOfSuccessive } from '../../src/stats/dispersionOfSuccessive.js';
import { estimateDispersion } from '../../src/stats/estimateDispersion.js';

// dispersion.json is made by dispersion.py in this folder (numpy and scipy 1.17.1).
interface Case {
  readonly windows: number[][];
  readonly rho: number;
  readonly df2: number;
  readonly dropped: number;
}
interface Cases {
  readonly unequal: Case;
  readonly slots: { readonly slots: number[][][]; readonly rho: number; readonly df2: number };
  readonly successive: Case;
  readonly successiveUnequal: Case;
}

const cases = JSON.parse(
  readFileSync(new URL('./dispersion.json', import.meta.url), 'utf8'),
) as unknown as Cases;

const successive = (windows: number[][]): { before: number[]; after: number[] }[] =>
  windows.slice(1).map((after, i) => ({ before: windows[i] ?? [], after }));

describe('dispersion against a second implementation', () => {
  it('windows of unequal size: weights and rho alternate twice', () => {
    const found = estimateDispersion(cases.unequal.windows);
    expect(found.rho).toBeCloseTo(cases.unequal.rho, 11);
    expect(found.df2).toBe(cases.unequal.df2);
  });

  it('slots: one rho, each slot around its own shares', () => {
    const found = dispersionOfSlots(cases.slots.slots);
    expect(found.rho).toBeCloseTo(cases.slots.rho, 11);
    expect(found.df2).toBe(cases.slots.df2);
  });

  it.each(['successive', 'successiveUnequal'] as const)(
    '%s pairs with a step are trimmed',
    (name) => {
      const { windows, rho, df2, dropped } = cases[name];
      expect(dropped).toBeGreaterThan(0);
      const found = dispersionOfSuccessive(successive(windows));
      expect(found.rho).toBeCloseTo(rho, 11);
      expect(found.df2).toBeCloseTo(df2, 10);
      expect(found.pairs).toBe(windows.length - 1);
    },
  );
});
