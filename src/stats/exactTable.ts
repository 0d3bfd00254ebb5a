import { logChoose } from './logChoose.js';
import { requireInteger, requireLength } from './preconditions.js';
import { requireIntegerTable } from './requireIntegerTable.js';
import { sum } from './sum.js';

/** Tables whose probabilities differ by less than this, relatively, count as equally likely. */
const TIE = 1e-7;
/** Partial tables with logs this close are followed as one. */
const MERGE = 1e-12;
/** Keeps exp() and a sum of a million of them inside a double. */
const MAX_EXPONENT = 600;

export type ExactResult =
  | { readonly p: number; readonly logP: number }
  | {
      readonly tooLarge: true;
      /** Steps known to be needed when it gave up: more than was allowed. */
      readonly work: number;
    };

/** One column still to be filled, and what its completions can do. */
interface Stage {
  /** log choose(column, x) for x in the smaller row. */
  readonly ways: readonly number[];
  /** Greatest and least log weight of filling this and the later columns with r events. */
  readonly longest: readonly number[];
  readonly shortest: readonly number[];
  /** log of the summed weight of all completions with r events. */
  readonly whole: readonly number[];
  /** Events in this and the later columns. */
  readonly capacity: number;
}

/**
 * Exact conditional test of a 2 x K table with both margins fixed.
 *
 * Null: the rows share one set of shares. p is the probability, given the margins, of all tables
 * no more probable than the one observed (Freeman & Halton 1951, from memory; for 2 x 2 Fisher's
 * two-sided test), with a relative tolerance of 1e-7 for equal ones. Columns are filled one
 * after another; partial tables with the same remainder and the same weight are followed as one,
 * and cut off as soon as all, or none, of their completions count (Mehta & Patel 1983, idea,
 * from memory).
 *
 * In: two rows of whole counts; maxWork, the most steps allowed (a million
 * take one to two seconds and some 300 MB).
 * Out: p in (0, 1] with its natural log, good to 12 digits, or `tooLarge`. Without events, p is 1.
 * Refuses other shapes and cells with RangeError. Valid only without overdispersion.
 */
export function exactTable(input: {
  readonly table: readonly (readonly number[])[];
  readonly maxWork: number;
}): ExactResult {
  const { table, maxWork } = input;
  requireIntegerTable(table);
  requireLength('table', table, 2);
  requireInteger('maxWork', maxWork, 0, Number.MAX_SAFE_INTEGER);
  const { small, columns, rowTotal } = arrange(table);
  const work = columns.reduce((w, c) => w + (rowTotal + 1) * (Math.min(c, rowTotal) + 1), 0);
  if (work > maxWork) return { tooLarge: true, work };
  const stages = makeStages(columns, rowTotal);
  const observed = columns.reduce((logs, c, j) => logs + logChoose(c, small[j] ?? 0), 0);
  const counted = follow(stages, { rowTotal, limit: observed + Math.log1p(TIE), work, maxWork });
  if ('tooLarge' in counted) return counted;
  const logP = Math.min(0, counted.logWeight - logChoose(sum(columns), rowTotal));
  return { p: Math.exp(logP), logP };
}

/** The row with fewer events, and the column totals, empty columns left out, largest first. */
function arrange(table: readonly (readonly number[])[]): {
  small: number[];
  columns: number[];
  rowTotal: number;
} {
  const [first = [], second = []] = table;
  const row = sum(first) <= sum(second) ? first : second;
  const cells = first
    .map((x, k) => ({ x: row[k] ?? 0, c: x + (second[k] ?? 0) }))
    .filter((cell) => cell.c > 0)
    .sort((a, b) => b.c - a.c);
  return { small: cells.map((t) => t.x), columns: cells.map((t) => t.c), rowTotal: sum(row) };
}

/** From the last column back to the first: best and worst completion for every remainder. */
function makeStages(columns: readonly number[], rowTotal: number): Stage[] {
  const stages: Stage[] = [];
  let longest: readonly number[] = [0];
  let shortest: readonly number[] = [0];
  let capacity = 0;
  for (const column of [...columns].reverse()) {
    capacity += column;
    const ways = Array.from({ length: Math.min(column, rowTotal) + 1 }, (_, x) =>
      logChoose(column, x),
    );
    const size = Math.min(capacity, rowTotal) + 1;
    const [most, least] = [new Array<number>(size), new Array<number>(size)];
    for (let r = 0; r < size; r += 1) {
      most[r] = best(ways, longest, r, Math.max);
      least[r] = best(ways, shortest, r, Math.min);
    }
    [longest, shortest] = [most, least];
    const room = capacity;
    const whole = Array.from({ length: size }, (_, r) => logChoose(room, r));
    stages.push({ ways, longest, shortest, whole, capacity });
  }
  return stages.reverse();
}

function best(
  ways: readonly number[],
  next: readonly number[],
  r: number,
  choose: (a: number, b: number) => number,
): number {
  let found: number | undefined;
  for (let x = Math.max(0, r - next.length + 1); x <= Math.min(r, ways.length - 1); x += 1) {
    const value = (ways[x] ?? 0) + (next[r - x] ?? 0);
    found = found === undefined ? value : choose(found, value);
  }
  return found ?? 0;
}

/** A way to have filled the columns so far, taken `times` over: log of one, and how many. */
interface Partial {
  readonly remainder: number;
  readonly log: number;
  times: number;
}

interface Walk {
  readonly rowTotal: number;
  readonly limit: number;
  readonly work: number;
  readonly maxWork: number;
}

/** log of the summed weight of all tables whose log weight is at most `limit`. */
function follow(
  stages: readonly Stage[],
  walk: Walk,
): { logWeight: number } | { tooLarge: true; work: number } {
  let { work } = walk;
  const found: LogSum = { scale: walk.limit, sum: 0 };
  let open: Partial[] = [{ remainder: walk.rowTotal, log: 0, times: 1 }];
  for (const [j, stage] of stages.entries()) {
    const next: Map<number, Partial>[] = [];
    for (const partial of open) {
      const { remainder, log, times } = partial;
      if (log + (stage.shortest[remainder] ?? 0) > walk.limit) continue;
      if (log + (stage.longest[remainder] ?? 0) <= walk.limit) {
        const all = log + (stage.whole[remainder] ?? 0) + Math.log(times);
        addLog(found, all);
        continue;
      }
      work += spreadOut(partial, stage, stages[j + 1]?.capacity ?? 0, next);
      if (work > walk.maxWork) return { tooLarge: true, work };
    }
    open = next.flatMap((partials) => [...partials.values()]);
  }
  for (const { log, times } of open) {
    if (log <= walk.limit) addLog(found, log + Math.log(times));
  }
  return { logWeight: found.scale + Math.log(found.sum) };
}

/** sum x exp(scale): many logarithms added up without rounding each time. */
interface LogSum {
  scale: number;
  sum: number;
}

function addLog(total: LogSum, log: number): void {
  if (log <= total.scale + MAX_EXPONENT) {
    total.sum += Math.exp(log - total.scale);
    return;
  }
  total.sum = total.sum * Math.exp(total.scale - log) + 1;
  total.scale = log;
}

/** Fills one column in every way that leaves room for the rest; gives the number of ways. */
function spreadOut(
  partial: Partial,
  stage: Stage,
  roomAfter: number,
  next: Map<number, Partial>[],
): number {
  const from = Math.max(0, partial.remainder - roomAfter);
  const to = Math.min(partial.remainder, stage.ways.length - 1);
  for (let x = from; x <= to; x += 1) {
    const remainder = partial.remainder - x;
    const log = partial.log + (stage.ways[x] ?? 0);
    const partials = (next[remainder] ??= new Map<number, Partial>());
    const key = Math.round(log / MERGE);
    const known = partials.get(key);
    if (known === undefined) partials.set(key, { remainder, log, times: partial.times });
    else known.times += partial.times;
  }
  return to - from + 1;
}
