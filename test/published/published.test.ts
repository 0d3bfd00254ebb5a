import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

import { exactTable } from '../../src/stats/exactTable.js';
import { goodnessOfFit } from '../../src/stats/goodnessOfFit.js';
import { likelihoodRatio } from '../../src/stats/likelihoodRatio.js';
import { monteCarloTable } from '../../src/stats/monteCarloTable.js';
import { pearsonChiSquared } from '../../src/stats/pearsonChiSquared.js';
import { peel } from '../../src/stats/peel.js';

// published.json: each example with its source, where it was read, and a recomputation in R
// 4.2.2 or SciPy 1.17.1 (`computed`, `computed_with`). Printed values are held to their digits.
type Values = Readonly<Record<string, unknown>>;
interface Check {
  readonly id: string;
  readonly inputs: Values;
  readonly expected_printed?: Values;
  readonly computed: Values;
}

const { checks } = JSON.parse(
  readFileSync(new URL('./published.json', import.meta.url), 'utf8'),
) as unknown as { readonly checks: readonly Check[] };

function check(id: string): Check {
  const found = checks.find((c) => c.id === id);
  if (found === undefined) throw new Error(`published.json has no example ${id}`);
  return found;
}

/** Half a unit of the last digit that was printed. */
function expectPrinted(value: number, printed: unknown): void {
  const text = String(printed);
  const [digits = '', exponent = '0'] = text.split('e');
  const decimals = digits.split('.')[1]?.length ?? 0;
  const half = 0.5 * 10 ** (Number(exponent) - decimals);
  expect(Math.abs(value - Number(text))).toBeLessThanOrEqual(half * (1 + 1e-9));
}

/** R's 15 digits. */
function expectComputed(value: number, computed: unknown): void {
  const exact = Number(computed);
  expect(Math.abs(value - exact)).toBeLessThanOrEqual(2e-13 * Math.max(1, Math.abs(exact)));
}

const rowsOf = (id: string): number[][] => check(id).inputs['rows'] as number[][];

describe('published tables', () => {
  it('agresti-2007-party: Pearson, expected counts and adjusted residuals', () => {
    const { expected_printed: printed = {}, computed } = check('agresti-2007-party');
    const rows = rowsOf('agresti-2007-party');
    const result = pearsonChiSquared(rows);
    expectPrinted(result.statistic, printed['statistic']);
    expectComputed(result.statistic, computed['statistic']);
    expectPrinted(result.df, printed['df']);
    expectPrinted(result.p, printed['p']);
    const [first = [], second = []] = rows;
    const [n, m] = [1557, 1200];
    const { residuals } = peel({
      now: first.map((x) => x / n),
      weightNow: n,
      reference: second.map((x) => x / m),
      weightReference: m,
      df2: Infinity,
    });
    const expected = printed['expected_row1'] as string[];
    const residualsPrinted = printed['stdres_row1'] as string[];
    expected.forEach((text, k) => expectPrinted(result.expected[0]?.[k] ?? NaN, text));
    residualsPrinted.forEach((text, k) => expectPrinted(residuals[k] ?? NaN, text));
  });

  it.each(['cochran-1954', 'armitage-1955', 'davis-1986', 'agresti-laryngeal'])(
    '%s: Pearson to the printed digits',
    (id) => {
      const { expected_printed: printed = {}, computed } = check(id);
      const result = pearsonChiSquared(rowsOf(id));
      expectPrinted(result.statistic, printed['X2']);
      expectComputed(result.statistic, computed['X2']);
    },
  );

  it('cochran-1954 and davis-1986: the printed p', () => {
    const cochran = pearsonChiSquared(rowsOf('cochran-1954'));
    expectPrinted(cochran.p, check('cochran-1954').expected_printed?.['p']);
    const davis = pearsonChiSquared(rowsOf('davis-1986'));
    expectPrinted(davis.p, check('davis-1986').expected_printed?.['p_asymptotic']);
  });

  it('r-2x2-yates: Pearson without correction, as recomputed there', () => {
    const { computed } = check('r-2x2-yates');
    const result = pearsonChiSquared(rowsOf('r-2x2-yates'));
    expectComputed(result.statistic, computed['statistic_uncorrected']);
    expectComputed(result.p, computed['p_uncorrected']);
  });

  it('r-2x2-yates: Monte Carlo comes to the exact conditional p', () => {
    const limit = Number(check('r-2x2-yates').computed['mc_limit_exact_conditional_p']);
    const samples = 100_000;
    const { p } = monteCarloTable({ table: rowsOf('r-2x2-yates'), samples, seed: 20 });
    // Five standard errors of a binomial share.
    expect(Math.abs(p - limit)).toBeLessThan(5 * Math.sqrt((limit * (1 - limit)) / samples));
  });

  it.each(['davis-1986', 'agresti-laryngeal'])('%s: exact p equals the printed Fisher p', (id) => {
    const { expected_printed: printed = {}, computed } = check(id);
    const result = exactTable({ table: rowsOf(id), maxWork: 10_000 });
    const p = 'p' in result ? result.p : NaN;
    expectPrinted(p, printed['fisher_p']);
    expectComputed(p, computed['fisher_p']);
  });

  it('armfold-repeated-g: heterogeneity is the G2 of the table, the parts are fits to 1:1', () => {
    const { computed } = check('armfold-repeated-g');
    const rows = rowsOf('armfold-repeated-g');
    const result = likelihoodRatio(rows);
    expectComputed(result.statistic, computed['heterogeneity_G']);
    expectComputed(result.df, computed['heterogeneity_df']);
    expectComputed(result.p, computed['heterogeneity_p']);
    const fits = rows.map((row) => goodnessOfFit(row, [0.5, 0.5]).g2.statistic);
    (computed['individual_G'] as number[]).forEach((g, i) => expectComputed(fits[i] ?? NaN, g));
  });

  it('clustered-rats: the naive test of survivors by group', () => {
    const { inputs, computed } = check('clustered-rats');
    const row = (name: string): number[] => {
      const group = inputs[name] as { readonly n: number[]; readonly y: number[] };
      const total = (values: number[]): number => values.reduce((a, b) => a + b, 0);
      return [total(group.y), total(group.n) - total(group.y)];
    };
    const result = pearsonChiSquared([row('ctrl'), row('treat')]);
    expectComputed(result.statistic, computed['naive_X2']);
    expectComputed(result.p, computed['naive_p']);
  });
});

describe('published goodness of fit', () => {
  it.each(['r-gof-equal', 'r-gof-unequal', 'r-gof-small-expected'])(
    '%s: to the printed digits',
    (id) => {
      const { inputs, expected_printed: printed = {}, computed } = check(id);
      const counts = inputs['observed'] as number[];
      const shares = (inputs['probabilities'] as number[] | undefined) ?? counts.map(() => 1 / 3);
      const { pearson } = goodnessOfFit(counts, shares);
      expectPrinted(pearson.statistic, printed['statistic']);
      expectPrinted(pearson.df, printed['df']);
      expectPrinted(pearson.p, printed['p']);
      expectComputed(pearson.statistic, computed['statistic']);
      expectComputed(pearson.p, computed['p']);
    },
  );

  it('mendel-peas: Pearson and G2 of 9:3:3:1', () => {
    const { inputs, computed } = check('mendel-peas');
    const shares = (inputs['ratio'] as number[]).map((r) => r / 16);
    const { pearson, g2 } = goodnessOfFit(inputs['observed'] as number[], shares);
    expectComputed(pearson.statistic, computed['X2']);
    expectComputed(pearson.p, computed['X2_p']);
    expectComputed(g2.statistic, computed['G2']);
  });

  it('engels-peas6: G2 comes near the exact p that simulation published', () => {
    const { inputs, computed } = check('engels-peas6');
    const shares = (inputs['ratio'] as number[]).map((r) => r / 16);
    const { g2 } = goodnessOfFit(inputs['observed'] as number[], shares);
    // 556 events, least expected count 35: chi-squared is within a few per cent of exact.
    expect(Math.abs(g2.p / Number(computed['mc_p_4e5']) - 1)).toBeLessThan(0.1);
  });
});
