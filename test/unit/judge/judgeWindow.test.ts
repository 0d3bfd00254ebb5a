import { describe, expect, it } from 'vitest';

import { binsByMargins, binsByShares } from '../../../src/judge/bins.js';
import { compareWindow, judgeWindow, type Tested } from '../../../src/judge/judgeWindow.js';
import { baselineReference, type Reference } from '../../../src/judge/reference.js';
import { CHECK_BASELINE, countsOf, lettered, times, windowsOf } from './samples.js';

const nominal = { ordered: null, categoriesJudged: 64, pooling: true };

function checkCase(rows: readonly (readonly number[])[], now: readonly number[]) {
  const counts = lettered(now);
  const before = lettered(now.map((_, k) => rows.reduce((sum, row) => sum + (row[k] ?? 0), 0)));
  const bins = binsByMargins(counts, before, { ...nominal, pooling: false });
  const reference = baselineReference(windowsOf(rows.map(lettered)), bins);
  if ('learning' in reference) throw new Error(reference.learning);
  return compareWindow({ counts, before, declared: false, bins, reference });
}

describe('a window against a baseline', () => {
  it('has the check values of the design, without dispersion', () => {
    const { comparison, weightNow } = checkCase(CHECK_BASELINE, [36, 24, 13, 14, 9, 4]);
    expect(comparison.statistic).toBeCloseTo(1.707631, 6);
    expect(comparison).toMatchObject({ df: 5, df2: 35, rho: 0, method: 'g2-f' });
    expect(comparison.p).toBeCloseTo(0.15865575, 8);
    expect(Math.exp(comparison.logP)).toBeCloseTo(0.15865575, 8);
    expect(weightNow).toBe(100);
    // The design's value was made with a critical value of t that is off in its tenth digit
    // (1.689572454 for 1.6895724577802655, scipy 1.17.1 t.isf(.05, 35)).
    expect(comparison.moved.atMost).toBeCloseTo(0.2346031104627834, 8);
  });

  it('has the check values of the design, with dispersion', () => {
    const rows = CHECK_BASELINE.map((row) => [...row]);
    rows[1] = [70, 10, 5, 6, 6, 3];
    rows[4] = [30, 35, 16, 10, 6, 3];
    const { comparison, weightNow } = checkCase(rows, [72, 48, 26, 28, 18, 8]);
    expect(weightNow).toBeCloseTo(106.00087, 5);
    expect(comparison.statistic).toBeCloseTo(1.800703, 6);
    expect(comparison.p).toBeCloseTo(0.13828825, 8);
    // The printed value of rho has eight digits; so has what depends on it.
    expect(comparison.moved.atMost).toBeCloseTo(0.23829469170665193, 7);
  });
});

/** 40 windows of 1,000 events like the first argument, against one of the second. */
function judged(
  usual: Readonly<Record<string, number>>,
  now: Readonly<Record<string, number>>,
  tolerance: { readonly moved: number; readonly each?: Readonly<Record<string, number>> },
): Tested {
  const windows = windowsOf(times(40, countsOf(usual)));
  const before = countsOf(
    Object.fromEntries(Object.entries(usual).map(([category, n]) => [category, 40 * n])),
  );
  const counts = countsOf(now);
  const bins = binsByMargins(counts, before, nominal);
  const reference = baselineReference(windows, bins);
  if ('learning' in reference) throw new Error(reference.learning);
  const each = new Map(Object.entries(tolerance.each ?? {}));
  const gate = { moved: tolerance.moved, each };
  return judgeWindow({ counts, before, declared: false, bins, reference, tolerance: gate });
}

const CALM = { ok: 900, bad: 80, odd: 20 };

describe('the tolerance as a gate', () => {
  it('lets a shift pass whose lower bound exceeds it; what rose carries it', () => {
    const found = judged(CALM, { ok: 800, bad: 180, odd: 20 }, { moved: 0.05 });
    expect(found).toMatchObject({ overTolerance: true, gateTolerance: 0.05 });
    expect(found.evidence.moved.atLeast).toBeGreaterThan(0.05);
    expect(found.carriers).toMatchObject({ categories: ['bad'], unnamed: false });
    expect(found.carriers.before).toBeCloseTo(0.08, 12);
    expect(found.carriers.now).toBeCloseTo(0.18, 12);
  });

  it('keeps back the same shift when more is tolerated, with the same p', () => {
    const strict = judged(CALM, { ok: 800, bad: 180, odd: 20 }, { moved: 0.05 });
    const lax = judged(CALM, { ok: 800, bad: 180, odd: 20 }, { moved: 0.2 });
    expect(lax.overTolerance).toBe(false);
    expect(lax.evidence.logP).toBe(strict.evidence.logP);
    expect(lax.evidence.tolerance).toBe(0.2);
  });

  it('of nothing is no gate', () => {
    const found = judged(CALM, { ok: 899, bad: 81, odd: 20 }, { moved: 0 });
    expect(found.evidence.moved.atLeast).toBe(0);
    expect(found.overTolerance).toBe(true);
    expect(found.carriers.categories).toEqual(['bad']);
    const gated = judged(CALM, { ok: 899, bad: 81, odd: 20 }, { moved: 0.001 });
    expect(gated.overTolerance).toBe(false);
  });

  it('of one category lets its own change pass, rise or fall', () => {
    const rise = judged(CALM, { ok: 870, bad: 80, odd: 50 }, { moved: 0.05, each: { odd: 0.01 } });
    expect(rise).toMatchObject({ overTolerance: true, gateTolerance: 0.01 });
    expect(rise.carriers).toMatchObject({ categories: ['odd'], now: 0.05 });
    const fall = judged(CALM, { ok: 950, bad: 30, odd: 20 }, { moved: 0.05, each: { bad: 0.02 } });
    expect(fall.overTolerance).toBe(true);
    expect(fall.carriers.now).toBeLessThan(fall.carriers.before);
  });

  it('of one category is measured by a lower bound, not by the change itself', () => {
    // +3 points seen; the bound (Newcombe 1998, one-sided 95 %, two Wilson limits) is near 2.
    const found = judged(
      CALM,
      { ok: 870, bad: 80, odd: 50 },
      { moved: 0.05, each: { odd: 0.025 } },
    );
    expect(found).toMatchObject({ overTolerance: false, gateTolerance: 0.05 });
  });

  it('of a category without a bin of its own is not looked at', () => {
    const found = judged(
      { ok: 960, bad: 36, dim: 2, odd: 2 },
      { ok: 950, bad: 36, dim: 2, odd: 12 },
      { moved: 0.05, each: { odd: 0.001 } },
    );
    expect(found.evidence.pooled).toEqual(['bad', 'dim', 'odd']);
    expect(found.overTolerance).toBe(false);
  });
});

describe('carriers', () => {
  it('that are pooled take in categories without a place of their own', () => {
    // Each new one expects under five events by the margins: they share a bin.
    const now = { ok: 820, bad: 80, n1: 40, n2: 60 };
    const found = judged({ ok: 917, bad: 80, n1: 1, n2: 2 }, now, { moved: 0.01 });
    expect(found.evidence.pooled).toEqual(['n1', 'n2']);
    expect(found.carriers).toMatchObject({ categories: ['n1', 'n2'], unnamed: true });
    const single = judged(CALM, { ok: 800, bad: 180, odd: 20 }, { moved: 0.01 });
    expect(single.carriers.unnamed).toBe(false);
  });
});

describe('evidence', () => {
  it('of declared shares has one row and no weight of a reference', () => {
    const shares = new Map([
      ['ok', 0.9],
      ['bad', 0.095],
      ['(rest)', 0.005],
    ]);
    const counts = countsOf({ ok: 850, bad: 95, strange: 55 });
    const bins = binsByShares(counts, shares, nominal);
    const reference: Reference = {
      shares: bins.members.map((m) => m.reduce((sum, c) => sum + (shares.get(c) ?? 0), 0)),
      weight: Infinity,
      rho: 0,
      df2: 40,
      note: {
        yardstick: 'declared',
        windows: null,
        events: null,
        fromMs: null,
        toMs: null,
        provisional: null,
      },
    };
    const tolerance = { moved: 0.01, each: new Map<string, number>() };
    const input = { counts, before: shares, declared: true, bins, reference, tolerance };
    const { evidence } = judgeWindow(input);
    expect(evidence.table.rows).toEqual(['after']);
    expect(evidence.weightReference).toBeNull();
    expect(evidence.moved.atLeast).toBeGreaterThan(0.01);
    expect(evidence).toMatchObject({ theta: 1, rawLogP: evidence.logP, threshold: null });
  });

  it('lists what a joint bin consists of, unlisted categories as (rest)', () => {
    const shares = new Map([
      ['ok', 0.99],
      ['bad', 0.006],
      ['(rest)', 0.004],
    ]);
    const counts = countsOf({ ok: 450, bad: 3, strange: 40, odd: 7 });
    const bins = binsByShares(counts, shares, nominal);
    const reference: Reference = {
      shares: [0.99, 0.01],
      weight: Infinity,
      rho: 0,
      df2: 40,
      note: {
        yardstick: 'declared',
        windows: null,
        events: null,
        fromMs: null,
        toMs: null,
        provisional: null,
      },
    };
    const { comparison } = compareWindow({
      counts,
      before: shares,
      declared: true,
      bins,
      reference,
    });
    const pooled = comparison.movers.find(({ category }) => category === '(pooled)');
    expect(pooled?.members).toEqual([
      { category: '(rest)', before: 0.004, after: 0.094 },
      { category: 'bad', before: 0.006, after: 0.006 },
    ]);
  });
});
