import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { adjustedResiduals } from '../../src/stats/adjustedResiduals.js';
import { adjustLogPs } from '../../src/stats/adjustLogPs.js';
import type { Adjustment } from '../../src/stats/adjustLogPs.js';
import { benjaminiYekutieli } from '../../src/stats/benjaminiYekutieli.js';
import { cochranMantelHaenszel } from '../../src/stats/cochranMantelHaenszel.js';
import { exactMultinomial } from '../../src/stats/exactMultinomial.js';
import { exactTableRxC } from '../../src/stats/exactTableRxC.js';
import { holm } from '../../src/stats/holm.js';
import { linearByLinear } from '../../src/stats/linearByLinear.js';
import { lordPlusPlus, lordStart } from '../../src/stats/lordPlusPlus.js';
import { minimumEffectTest } from '../../src/stats/minimumEffectTest.js';
import { monteCarloTable } from '../../src/stats/monteCarloTable.js';
import { weightedBonferroni } from '../../src/stats/weightedBonferroni.js';

// more-tables.json and published.json: each example with its source, where it was read, and a
// recomputation in R 4.2.2 or SciPy 1.17.1. Printed values are held to their digits.
type Values = Readonly<Record<string, unknown>>;
interface Check {
  readonly id: string;
  readonly inputs: Values;
  readonly expected_printed?: Values;
  readonly computed: Values;
}

const checks = ['./published.json', './more-tables.json'].flatMap((name) => {
  const file = readFileSync(new URL(name, import.meta.url), 'utf8');
  return (JSON.parse(file) as unknown as { readonly checks: readonly Check[] }).checks;
});

function check(id: string): { inputs: Values; printed: Values; computed: Values } {
  const found = checks.find((c) => c.id === id);
  if (found === undefined) throw new Error(`no published example ${id}`);
  return { ...found, printed: found.expected_printed ?? {} };
}

const rowsOf = (id: string): number[][] => check(id).inputs['rows'] as number[][];

/** Half a unit of the last digit that was printed. */
function expectPrinted(value: number, printed: unknown): void {
  const text = String(printed);
  const [digits = '', exponent = '0'] = text.split('e');
  const decimals = digits.split('.')[1]?.length ?? 0;
  const half = 0.5 * 10 ** (Number(exponent) - decimals);
  expect(Math.abs(value - Number(text))).toBeLessThanOrEqual(half * (1 + 1e-9));
}

/** R's 15 digits, or the relative error given. */
function expectComputed(value: number, computed: unknown, error = 2e-13): void {
  const exact = Number(computed);
  expect(Math.abs(value - exact)).toBeLessThanOrEqual(error * Math.max(1, Math.abs(exact)));
}

const pOf = (result: object): number => ('p' in result ? Number(result.p) : NaN);

describe('exact tests, published', () => {
  const MENDEL = { counts: [315, 108, 101, 32], shares: [9 / 16, 3 / 16, 3 / 16, 1 / 16] };

  it.each([
    ['likelihood-ratio', 'p_exact_llr'],
    ['probability', 'p_exact_prob'],
    ['pearson', 'p_exact_chisq'],
  ] as const)(
    'mendel-peas by %s: the printed p, in under a hundredth of its tables',
    (order, key) => {
      const { printed, computed, inputs } = check('mendel-peas');
      expect(inputs).toEqual({ observed: MENDEL.counts, ratio: [9, 3, 3, 1] });
      const result = exactMultinomial({ ...MENDEL, order, maxWork: 289_567 });
      expectPrinted(pOf(result), printed[key]);
      // Ten digits were recomputed.
      expectComputed(pOf(result), computed[key], 1e-10);
    },
  );

  it('engels-peas6: within four standard errors of the printed Monte Carlo p', () => {
    const { inputs, computed } = check('engels-peas6');
    const ratio = inputs['ratio'] as number[];
    const counts = inputs['observed'] as number[];
    const shares = ratio.map((r) => r / 16);
    const input = { counts, shares, maxWork: 20_000_000, order: 'likelihood-ratio' } as const;
    const p = pOf(exactMultinomial(input));
    // 0.01495 with standard error 0.0003838 (read); 0.015195 with 0.000193 (recomputed).
    expect(Math.abs(p - 0.01495)).toBeLessThan(4 * 0.0003838);
    const again = Number(computed['mc_p_4e5']);
    expect(Math.abs(p - again)).toBeLessThan(4 * Number(computed['mc_se']));
  });

  it('conover-binom: two bins by probability are the two-sided binomial test', () => {
    const { printed, computed } = check('conover-binom');
    const input = { counts: [682, 243], shares: [0.75, 0.25], maxWork: 10_000 };
    const p = pOf(exactMultinomial({ ...input, order: 'probability' }));
    expectPrinted(p, printed['p']);
    expectComputed(p, computed['p'], 1e-12);
  });

  it('fisher-job-4x4: the printed p of a 4 x 4 table', () => {
    const { printed, computed } = check('fisher-job-4x4');
    const p = pOf(exactTableRxC({ table: rowsOf('fisher-job-4x4'), maxWork: 1_000_000 }));
    expectPrinted(p, printed['p_exact']);
    expectComputed(p, computed['p_exact'], 1e-11);
  });

  it('haireye: when no sample reaches the table, p is one in the samples and one', () => {
    const table = rowsOf('haireye');
    const result = monteCarloTable({ table, samples: 2000, exceedances: 20, seed: 3 });
    expectPrinted(result.p, check('haireye').printed['mc_p_floor_B2000']);
    expect(result).toMatchObject({ exceeding: 0, samples: 2000, stoppedEarly: false });
  });
});

describe('ordered categories and residuals, published', () => {
  it.each([
    ['cochran-1954', [3, 2, 1, 0, -1]],
    ['armitage-1955', undefined],
  ])('%s: the printed trend, whose variance is that of a large sample', (id, rowScores) => {
    const { printed, computed } = check(id);
    const input = { table: rowsOf(id), ...(rowScores && { rowScores }) };
    const result = linearByLinear({ ...input, variance: 'large-sample' });
    expectPrinted(result.statistic, printed['trend_X2']);
    expectComputed(result.statistic, computed['trend_X2']);
    if (id !== 'cochran-1954') return;
    expectPrinted(result.p, printed['trend_p']);
    expectComputed(result.p, computed['trend_p']);
  });

  it('agresti-2007-party: the printed residuals, and their opposites in the other row', () => {
    const { printed, computed } = check('agresti-2007-party');
    const [first = [], second = []] = adjustedResiduals(rowsOf('agresti-2007-party'));
    (printed['stdres_row1'] as string[]).forEach((text, k) => {
      expectPrinted(first[k] ?? NaN, text);
      expectComputed(first[k] ?? NaN, (computed['stdres_row1'] as number[])[k]);
      expectPrinted(-(second[k] ?? NaN), text);
    });
  });

  it('minimum-effect-rmsea: at the recomputed critical value, p is the level', () => {
    // Close fit: n = N - 1 = 199, lambda = n df eps0^2, so w = eps0 sqrt(df).
    const { computed } = check('minimum-effect-rmsea');
    const statistic = Number(computed['crit_df10_N200']);
    const w = 0.05 * Math.sqrt(10);
    const result = minimumEffectTest({ statistic, df: 10, events: 199, w });
    expect(result.lambda).toBeCloseTo(4.975, 12);
    expect(result.p).toBeCloseTo(0.05, 12);
  });
});

describe('cmh-jobsat-generalised', () => {
  const { inputs, printed, computed } = check('cmh-jobsat-generalised');
  const cells = inputs['array_4x4x2_column_major'] as number[];
  const splits = [0, 1].map((s) =>
    [0, 1, 2, 3].map((i) => [0, 1, 2, 3].map((k) => cells[16 * s + 4 * k + i] ?? NaN)),
  );
  const rows = inputs['scores_income'] as number[];
  const columns = inputs['scores_satisfaction'] as number[];

  it.each([
    ['general association', {}, 'general', 'general_df', 'general_p'],
    ['mean scores', { columns }, 'row_mean_scores_L2', 'row_mean_df', 'row_mean_p'],
    ['linear trend', { rows, columns }, 'linear_M2', '1', 'linear_p'],
  ])('%s: the printed statistic and p', (_, scores, statistic, df, p) => {
    const result = cochranMantelHaenszel(splits, scores);
    expectPrinted(result.statistic, printed[statistic]);
    expectComputed(result.statistic, computed[statistic], 1e-12);
    expect(result.df).toBe(Number(computed[df] ?? 1));
    expectPrinted(result.p, printed[p]);
    expectComputed(result.p, computed[p], 1e-12);
  });

  it('equally spaced scores: the printed Z, squared', () => {
    const spaced = [1, 2, 3, 4];
    const result = cochranMantelHaenszel(splits, { rows: spaced, columns: spaced });
    expectPrinted(Math.sqrt(result.statistic), printed['linear_Z_equally_spaced']);
    expectPrinted(result.p, printed['linear_p_equally_spaced']);
  });
});

describe('corrections, published', () => {
  const neuhaus = check('bh-1995');
  const logPs = (neuhaus.inputs['p'] as number[]).map(Math.log);

  it.each([
    ['benjamini-hochberg', 'bh_adjusted'],
    ['benjamini-yekutieli', 'by_adjusted'],
    ['holm', 'holm_adjusted'],
  ] as const)('bh-1995: adjusted by %s', (method, key) => {
    const adjusted = adjustLogPs(logPs, method).map(Math.exp);
    (neuhaus.computed[key] as number[]).forEach((p, i) => expectComputed(adjusted[i] ?? NaN, p));
    const printed = (neuhaus.printed[key] ?? []) as string[];
    expect(printed).toHaveLength(key === 'bh_adjusted' ? 15 : 0);
    printed.forEach((text, i) => expectPrinted(adjusted[i] ?? NaN, text));
  });

  it('bh-1995: rejected at 5 %', () => {
    const count = (decisions: boolean[]): number => decisions.filter((isYes) => isYes).length;
    expect(count(holm(logPs, 0.05))).toBe(neuhaus.computed['rejected_Holm']);
    expect(count(benjaminiYekutieli(logPs, 0.05))).toBe(neuhaus.computed['rejected_BY']);
    const equal = { weights: logPs.map(() => 1), level: 0.05 };
    const byBonferroni = count(weightedBonferroni(logPs, equal));
    expect(byBonferroni).toBe(Number(neuhaus.printed['rejected_Bonferroni']));
  });

  it('scipy-bh4: unsorted p-values keep their order', () => {
    const { inputs, printed } = check('scipy-bh4');
    const unsorted = (inputs['p'] as number[]).map(Math.log);
    const method: Adjustment = 'benjamini-hochberg';
    const adjusted = adjustLogPs(unsorted, method).map(Math.exp);
    (printed['bh'] as string[]).forEach((text, i) => expectPrinted(adjusted[i] ?? NaN, text));
  });

  it('online-lordpp: every printed level and decision', () => {
    const { inputs, printed, computed } = check('online-lordpp');
    let state = lordStart();
    (inputs['p'] as number[]).forEach((p, i) => {
      const step = lordPlusPlus(state, { logP: Math.log(p), level: 0.05 });
      const level = Math.exp(step.logThreshold);
      expectPrinted(level, (printed['alphai'] as string[])[i]);
      expectComputed(level, (computed['alphai'] as number[])[i]);
      expect(Number(step.isDiscovery)).toBe(Number((printed['R'] as string[])[i]));
      ({ state } = step);
    });
    expect(state).toEqual({ tests: 15, discoveries: [1, 6, 10] });
  });
});
