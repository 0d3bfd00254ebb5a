import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { binomialLogCdf } from '../../src/stats/binomialLogCdf.js';
import { binomialLogSf } from '../../src/stats/binomialLogSf.js';
import { chiSquaredUpperQuantile } from '../../src/stats/chiSquaredUpperQuantile.js';
import { cohensW } from '../../src/stats/cohensW.js';
import { hypergeometricLogSf } from '../../src/stats/hypergeometricLogSf.js';
import { noncentralChiSquaredLogSf } from '../../src/stats/noncentralChiSquaredLogSf.js';
import { requiredNoncentrality } from '../../src/stats/requiredNoncentrality.js';

// more-planning.json: each example with its source, where it was read, and a recomputation in R
// 4.2.2 (`computed`, `computed_with`). Printed values are held to their digits.
type Values = Readonly<Record<string, unknown>>;
interface Check {
  readonly id: string;
  readonly inputs: Values;
  readonly expected_printed?: Values;
  readonly computed: Values;
}

const { checks } = JSON.parse(
  readFileSync(new URL('./more-planning.json', import.meta.url), 'utf8'),
) as unknown as { readonly checks: readonly Check[] };

function check(id: string): Check {
  const found = checks.find((c) => c.id === id);
  if (found === undefined) throw new Error(`more-planning.json has no example ${id}`);
  return found;
}

/** Half a unit of the last digit that was printed. */
function expectPrinted(value: number, printed: unknown): void {
  const text = String(printed);
  const half = 0.5 * 10 ** -(text.split('.')[1]?.length ?? 0);
  expect(Math.abs(value - Number(text))).toBeLessThanOrEqual(half * (1 + 1e-9));
}

/** Relative; R prints 15 digits, but a root or quantile of R's may hold fewer. */
function expectClose(value: number, exact: unknown, bound: number): void {
  expect(Math.abs(value / Number(exact) - 1)).toBeLessThanOrEqual(bound);
}

describe('published tails and powers', () => {
  it('fisher-tea: the chance of three cups or more', () => {
    const { expected_printed: printed = {}, computed } = check('fisher-tea');
    const p = Math.exp(hypergeometricLogSf({ total: 8, marked: 4, drawn: 4, k: 3 }));
    expectPrinted(p, printed['p_greater']);
    expectClose(p, computed['p_greater'], 3e-15);
  });

  it('conover-binom: at each exact limit one tail holds 2.5 %', () => {
    // Clopper & Pearson's definition of the limits (from memory); R's own root is good to 1e-9.
    const { inputs, computed } = check('conover-binom');
    const [n, k] = [Number(inputs['trials']), Number(inputs['successes'])];
    expectClose(Math.exp(binomialLogSf({ n, p: Number(computed['ci_lo']), k })), 0.025, 1e-9);
    expectClose(Math.exp(binomialLogCdf({ n, p: Number(computed['ci_hi']), k })), 0.025, 1e-9);
  });

  it('cohen-7.1-gof: effect size, power at 100 and size for a power of .8', () => {
    const { inputs, expected_printed: printed = {}, computed } = check('cohen-7.1-gof');
    // Printed to 15 digits, the alternative sums to 1 within rounding.
    const w = cohensW(inputs['alt'] as number[], inputs['null'] as number[]);
    expectPrinted(w, printed['w']);
    const logPower = noncentralChiSquaredLogSf(chiSquaredUpperQuantile(0.05, 3), 3, 100 * w * w);
    expectPrinted(Math.exp(logPower), printed['power_N100']);
    expectClose(Math.exp(logPower), computed['power_N100'], 1e-13);
    const lambda = requiredNoncentrality({ df1: 3, df2: Infinity, alpha: 0.05, power: 0.8 });
    expectPrinted(lambda / (w * w), printed['N_80']);
    expectClose(lambda / (w * w), computed['N_80'], 1e-10);
  });

  it('cohen-1992-table2: sizes for a power of .8 at three effects', () => {
    const { inputs, computed } = check('cohen-1992-table2');
    const effects = inputs['w'] as number[];
    const sizes = (inputs['df'] as number[]).flatMap((df1) => {
      const lambda = requiredNoncentrality({ df1, df2: Infinity, alpha: 0.05, power: 0.8 });
      return effects.map((w) => lambda / (w * w));
    });
    const exact = computed['N_unrounded'] as number[];
    expect(sizes.length).toBe(18);
    sizes.forEach((size, index) => {
      expectClose(size, exact[index], 1e-10);
    });
  });

  it('noncentral-lambda-80: noncentralities for 1 to 6 degrees of freedom', () => {
    const { inputs, computed } = check('noncentral-lambda-80');
    const exact = computed['lambda'] as number[];
    (inputs['df'] as number[]).forEach((df1, index) => {
      const lambda = requiredNoncentrality({ df1, df2: Infinity, alpha: 0.05, power: 0.8 });
      expectClose(lambda, exact[index], 1e-10);
    });
    expect(exact.length).toBe(6);
  });

  it('minimum-effect-rmsea: power against a null that is not zero', () => {
    const { inputs, computed } = check('minimum-effect-rmsea');
    const [eps0, eps1] = [Number(inputs['eps0']), Number(inputs['eps1'])];
    const critical = Number(computed['crit_df10_N200']);
    const tail = noncentralChiSquaredLogSf(critical, 10, 199 * 10 * eps0 ** 2);
    expectClose(Math.exp(tail), 0.05, 1e-9);
    const power = (df: number, n: number): boolean => {
      const [null0, shifted] = [(n - 1) * df * eps0 ** 2, (n - 1) * df * eps1 ** 2];
      let [lo, hi] = [0, 10 * (df + null0)];
      for (let step = 0; step < 60; step += 1) {
        const x = (lo + hi) / 2;
        if (noncentralChiSquaredLogSf(x, df, null0) > Math.log(0.05)) lo = x;
        else hi = x;
      }
      return noncentralChiSquaredLogSf(hi, df, shifted) >= Math.log(0.8);
    };
    (inputs['df'] as number[]).forEach((df, index) => {
      const least = (computed['minN_close_fit'] as number[])[index] ?? 0;
      expect([power(df, least - 1), power(df, least)]).toEqual([false, true]);
    });
  });
});
