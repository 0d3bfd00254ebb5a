import { exactMultinomial } from '../stats/exactMultinomial.js';
import { exactTable } from '../stats/exactTable.js';
import { linearByLinear } from '../stats/linearByLinear.js';
import { monteCarloTable } from '../stats/monteCarloTable.js';
import type { ChiSquaredResult, Comparison, Method } from '../terms/evidence.js';
import type { Counts } from '../terms/tally.js';
import { type Bins, binCounts, binsByMargins, binsByShares } from './bins.js';
import { type Description, describe, sharesOf, type Sides } from './compare.js';
import { compareWindow } from './judgeWindow.js';
import { total } from './counts.js';
import { baselineReference, type WindowCounts } from './reference.js';

export interface WeighInput {
  readonly before: Counts;
  /** The windows that `before` came in; their spread gives the dispersion. null: taken as one. */
  readonly windows: readonly WindowCounts[] | null;
  readonly after: Counts;
  /** `before` is fixed shares, not a sample. */
  readonly declared: boolean;
  readonly ordered: readonly string[] | null;
  readonly pooling: boolean;
  /** How p is found; `auto` takes an exact p only where pooling leaves nothing else. */
  readonly test: 'auto' | 'exact' | { readonly samples: number; readonly seed: number };
}

/** Columns of a table that an exact or sampled p may have; beyond it pooling is asked for. */
const MOST_COLUMNS = 10_000;
/** Steps that an exact p may take; about a second. */
const MOST_WORK = 1e6;
/** Tables drawn, and their seed, where an exact p is too much work and none was asked for. */
const FALLBACK = { samples: 99_999, seed: 1 };

/**
 * Compares two samples once, by hand. Two observed samples are a table, whichever is older;
 * only with `declared` is the first taken as fixed expectations.
 * @throws RangeError when a side holds no events, or the dispersion asked for cannot be learned.
 */
export function weigh(input: WeighInput): Comparison {
  for (const side of ['before', 'after'] as const) {
    if (total(input[side]) === 0) throw new RangeError(`the ${side} sample holds no events`);
  }
  if (input.declared) return againstShares(input);
  if (input.windows !== null) return withDispersion(input, input.windows);
  return asTable(input);
}

function againstShares(input: WeighInput): Comparison {
  const whole = total(input.before);
  const shares = new Map([...input.before].map(([category, n]) => [category, n / whole]));
  for (const category of input.after.keys()) if (!shares.has(category)) shares.set(category, 0);
  const options = optionsOf(input);
  const pooled = binsByShares(input.after, shares, options);
  const isExact = input.test === 'exact' || pooled.names.length < 2;
  const bins = isExact ? binsByShares(input.after, shares, { ...options, pooling: false }) : pooled;
  const now = binCounts(input.after, bins);
  const binShares = bins.members.map((bin) =>
    bin.reduce((sum, category) => sum + (shares.get(category) ?? 0), 0),
  );
  const { description } = describe({
    bins,
    now,
    before: null,
    shareOf: sharesOf(shares, input.after, bins),
    shares: binShares,
    weightNow: total(input.after),
    weightReference: Infinity,
    df2: Infinity,
  });
  const exact = isExact ? exactFit(description, now, binShares) : null;
  if (exact !== null) return exact;
  if (input.test === 'exact') {
    throw new RangeError('too many events for an exact p against shares; leave --exact out');
  }
  return chiSquared('goodness-of-fit', description);
}

/** p of the counts given the shares, over all ways the events could fall; null if too much work. */
function exactFit(
  found: Description,
  counts: readonly number[],
  shares: readonly number[],
): Comparison | null {
  const exact = exactMultinomial({ counts, shares, maxWork: MOST_WORK, order: 'pearson' });
  return 'p' in exact ? { method: 'exact', ...NO_STATISTIC, ...pOf(exact), ...found } : null;
}

function withDispersion(input: WeighInput, windows: readonly WindowCounts[]): Comparison {
  const bins = binsByMargins(input.after, input.before, optionsOf(input));
  if (bins.names.length < 2) return asTable(input);
  const reference = baselineReference(windows, bins);
  if ('learning' in reference) {
    throw new RangeError(
      `the windows of BEFORE are too few to learn how much they vary: ${reference.learning}; ` +
        'give a shorter --window or more history, or leave --window out',
    );
  }
  const { after: counts, before } = input;
  return compareWindow({ counts, before, declared: false, bins, reference }).comparison;
}

function asTable(input: WeighInput): Comparison {
  const options = optionsOf(input);
  const separate = binsByMargins(input.after, input.before, { ...options, pooling: false });
  const pooled = input.pooling ? binsByMargins(input.after, input.before, options) : separate;
  const wanted = input.test === 'auto' && pooled.names.length >= 2 ? null : input.test;
  const bins = wanted === null ? pooled : separate;
  const { description } = describe(plainSides(input, bins));
  const compared =
    wanted === null ? chiSquared('pearson', description) : conditional(description, wanted);
  if (input.ordered === null) return compared;
  return { ...compared, trend: trendOf(plainSides(input, separate)) };
}

function plainSides(input: WeighInput, bins: Bins): Sides {
  const before = binCounts(input.before, bins);
  const whole = before.reduce((a, b) => a + b, 0);
  return {
    bins,
    now: binCounts(input.after, bins),
    before,
    shareOf: sharesOf(input.before, input.after, bins),
    shares: before.map((n) => n / whole),
    weightNow: total(input.after),
    weightReference: whole,
    df2: Infinity,
  };
}

/** Whether the mix slid one way along its order: linear-by-linear association (Agresti 2002). */
function trendOf({ before, now }: Pick<Sides, 'before' | 'now'>): ChiSquaredResult {
  const { statistic, df, p, logP } = linearByLinear({ table: [before ?? [], now] });
  return { statistic, df, p, logP };
}

function chiSquared(method: Method, found: Description): Comparison {
  const { statistic, df, p, logP } = found.pearson;
  return { method, statistic, df, p, logP, ...found };
}

/** p given the margins: exact where that is little enough work, else by sampled tables. */
function conditional(found: Description, test: WeighInput['test']): Comparison {
  const table = found.table.observed;
  if (found.table.categories.length > MOST_COLUMNS) {
    throw new RangeError(`more than ${String(MOST_COLUMNS)} categories; use pooling`);
  }
  if (test === 'auto' || test === 'exact') {
    const exact = exactTable({ table, maxWork: MOST_WORK });
    if ('p' in exact) return { method: 'exact', ...NO_STATISTIC, ...pOf(exact), ...found };
    if (test === 'exact') {
      throw new RangeError('this table is too large for an exact p; use --monte-carlo N --seed S');
    }
  }
  const sampling = typeof test === 'object' ? test : FALLBACK;
  const sampled = monteCarloTable({ table, ...sampling });
  return { method: 'monte-carlo', ...NO_STATISTIC, ...pOf(sampled), ...found };
}

const NO_STATISTIC = { statistic: null, df: null } as const;

function pOf(result: { readonly p: number; readonly logP: number }): { p: number; logP: number } {
  return { p: result.p, logP: result.logP };
}

function optionsOf(input: WeighInput): Parameters<typeof binsByMargins>[2] {
  return { ordered: input.ordered, categoriesJudged: MOST_COLUMNS, pooling: input.pooling };
}
