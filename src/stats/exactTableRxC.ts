import { compose } from './compose.js';
import { exactTable } from './exactTable.js';
import type { ExactResult } from './exactTable.js';
import { logGamma } from './logGamma.js';
import { addLog, emptyLogSum, logOfSum } from './logSum.js';
import type { LogSum } from './logSum.js';
import { requireInteger } from './preconditions.js';
import { requireIntegerTable } from './requireIntegerTable.js';
import { sum } from './sum.js';
import { makeTableBounds } from './tableBounds.js';
import type { TableBounds } from './tableBounds.js';

/** Tables whose probabilities differ by less than this, relatively, count as equally likely. */
const TIE = 1e-7;
/** Partial tables with logs this close are followed as one. */
const MERGE = 1e-12;

/** Ways to have filled the columns so far: log weight of one, and how many have it. */
interface PartialTable {
  readonly log: number;
  times: number;
}

/** Rows that still have `rows` events to place, ascending; which row is which does not matter. */
interface TableNode {
  readonly rows: readonly number[];
  readonly bounds: TableBounds;
  readonly partials: Map<number, PartialTable>;
}

interface Walk {
  readonly logFactorial: Float64Array;
  readonly limit: number;
  readonly maxWork: number;
  readonly counted: LogSum;
  work: number;
}

/**
 * Exact conditional test of an r x c table with both margins fixed.
 *
 * Null: rows and columns are independent. p is the probability, given the margins, of all tables
 * no more probable than the one observed (Freeman & Halton 1951, from memory), with a relative
 * tolerance of 1e-7 for equal ones. Columns are filled one after another, the smallest first, in
 * a network whose nodes are the events left in the rows; partial tables that reach a node with
 * one weight are followed as one, and cut off as soon as all, or none, of their completions
 * count (Mehta & Patel 1983, idea, from memory; the bounds are our own, see `tableBounds`). The
 * last two columns are done in one stride. Two rows or columns are left to `exactTable`.
 *
 * In: whole counts; maxWork, the most steps allowed (a million take half a second to two
 * seconds and up to 200 MB). Out: p in (0, 1] with its natural log, good to 11 digits
 * (test/published/exact.py), or `tooLarge`. Empty rows and columns count for nothing; with fewer
 * than two left p is 1. Refuses other shapes and cells with RangeError. Valid only without
 * overdispersion.
 */
export function exactTableRxC(input: {
  readonly table: readonly (readonly number[])[];
  readonly maxWork: number;
}): ExactResult {
  const { table, maxWork } = input;
  requireIntegerTable(table);
  requireInteger('maxWork', maxWork, 0, Number.MAX_SAFE_INTEGER);
  const filled = arrange(table);
  const rows = (filled[0] ?? []).map((_, i) => sum(filled.map((column) => column[i] ?? 0)));
  if (rows.length < 2) return { p: 1, logP: 0 };
  if (rows.length === 2) return exactTable({ table: transpose(filled), maxWork });
  const events = sum(rows);
  if (events >= maxWork) return { tooLarge: true, work: events + 1 };
  const logFactorial = Float64Array.from({ length: events + 1 }, (_, n) => logGamma(n + 1));
  const lf = (n: number): number => logFactorial[n] ?? NaN;
  const columns = filled.map(sum);
  const observed = sum(filled.map((column) => lf(sum(column)) - sum(column.map(lf))));
  const limit = observed + Math.log1p(TIE);
  const walk: Walk = { logFactorial, limit, maxWork, counted: emptyLogSum(), work: events + 1 };
  if (!follow(walk, rows, columns)) return { tooLarge: true, work: walk.work };
  const logP = Math.min(0, logOfSum(walk.counted) - (lf(events) - sum(rows.map(lf))));
  return { p: Math.exp(logP), logP };
}

/** The columns of the table, or its rows where those are more: filled ones, least total first. */
function arrange(table: readonly (readonly number[])[]): number[][] {
  const hasEvents = (cells: readonly number[]): boolean => sum(cells) > 0;
  const rows = transpose(transpose(table).filter(hasEvents)).filter(hasEvents);
  const longer = rows.length <= (rows[0] ?? []).length ? transpose(rows) : rows;
  return longer.sort((a, b) => sum(a) - sum(b));
}

function transpose(table: readonly (readonly number[])[]): number[][] {
  return (table[0] ?? []).map((_, k) => table.map((row) => row[k] ?? 0));
}

/** Adds up what counts; false when the work became too large. */
function follow(walk: Walk, rows: readonly number[], columns: readonly number[]): boolean {
  const start = [...rows].sort((a, b) => a - b);
  const first = makeTableBounds(columns, walk.logFactorial)(start);
  const partials = new Map([[0, { log: 0, times: 1 }]]);
  let layer = [{ rows: start, bounds: first, partials }] as readonly TableNode[];
  for (let k = 0; k < columns.length - 2; k += 1) {
    const next = new Map<string, TableNode>();
    const boundsOf = makeTableBounds(columns.slice(k + 1), walk.logFactorial);
    for (const node of layer) {
      if (!spreadOut(walk, node, columns[k] ?? 0, { next, boundsOf })) return false;
    }
    layer = [...next.values()];
  }
  return layer.every((node) => node.partials.size === 0 || close(walk, node, columns));
}

/** Fills one column in every way and hands each partial table on, or counts or drops it. */
function spreadOut(
  walk: Walk,
  node: TableNode,
  column: number,
  to: { next: Map<string, TableNode>; boundsOf: (rows: readonly number[]) => TableBounds },
): boolean {
  const { logFactorial } = walk;
  const logColumn = logFactorial[column] ?? 0;
  const cell = (_: number, x: number): number => logFactorial[x] ?? 0;
  return compose(node.rows, column, cell, (filled, logs) => {
    const rows = node.rows.map((left, i) => left - (filled[i] ?? 0)).sort((a, b) => a - b);
    const key = rows.join();
    let child = to.next.get(key);
    if (child === undefined) {
      child = { rows, bounds: to.boundsOf(rows), partials: new Map() };
      to.next.set(key, child);
    }
    walk.work += 1 + node.partials.size;
    for (const partial of node.partials.values()) {
      handOn(walk, child, { log: partial.log + logColumn - logs, times: partial.times });
    }
    return walk.work <= walk.maxWork;
  });
}

function handOn(walk: Walk, child: TableNode, partial: PartialTable): void {
  const { most, least, whole } = child.bounds;
  if (partial.log + most <= walk.limit) {
    addLog(walk.counted, partial.log + Math.log(partial.times) + whole);
  } else if (partial.log + least <= walk.limit) {
    const key = Math.round(partial.log / MERGE);
    const known = child.partials.get(key);
    if (known === undefined) child.partials.set(key, partial);
    else known.times += partial.times;
  }
}

/** The last two columns: all their completions sorted by weight, then cut for each partial. */
function close(walk: Walk, node: TableNode, columns: readonly number[]): boolean {
  const { logFactorial } = walk;
  const [one = 0, two = 0] = columns.slice(-2);
  const logColumns = (logFactorial[one] ?? 0) + (logFactorial[two] ?? 0);
  const cell = (i: number, x: number): number =>
    (logFactorial[x] ?? 0) + (logFactorial[(node.rows[i] ?? 0) - x] ?? 0);
  const weights: number[] = [];
  const complete = compose(node.rows, one, cell, (_, logs) => {
    walk.work += 1;
    weights.push(logColumns - logs);
    return walk.work <= walk.maxWork;
  });
  walk.work += node.partials.size;
  if (!complete || walk.work > walk.maxWork) return false;
  const sorted = Float64Array.from(weights).sort();
  const total = emptyLogSum();
  const running = sorted.map((log) => {
    addLog(total, log);
    return logOfSum(total);
  });
  for (const { log, times } of node.partials.values()) {
    const count = countUpTo(sorted, walk.limit - log);
    if (count > 0) addLog(walk.counted, log + Math.log(times) + (running[count - 1] ?? 0));
  }
  return true;
}

/** How many of the sorted values are at most `limit`. */
function countUpTo(sorted: Float64Array, limit: number): number {
  let [low, high] = [0, sorted.length];
  while (low < high) {
    const middle = Math.floor((low + high) / 2);
    if ((sorted[middle] ?? 0) <= limit) low = middle + 1;
    else high = middle;
  }
  return low;
}
